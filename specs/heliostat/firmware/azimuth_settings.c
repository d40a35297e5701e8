/* The numbers that a commissioning engineer changes. */
#include "azimuth.h"

#ifdef REGRESSED
#define KI 3.4f /* a slip of the decimal point, as it may come with a pull request */
#else
#define KI 0.34f
#endif

const struct azimuth_settings azimuth = {
    .gains = {
        .kp = 2.7f,
        .ki = KI,
        .kd = 1.2f,
        .rate_corner = 20.0f,
    },
    .period_us = 2000,
};

/* 22 Hz, designed for 500 samples a second; multiply by 2^-14. */
const int16_t azimuth_notch[5] = {14903, -28283, 14497, -28401, 13133};
