/* Azimuth axis of the demo heliostat: what the drive task needs to know. */
#ifndef AZIMUTH_H
#define AZIMUTH_H

#include <stdint.h>

/* Gains of the position law. The duty they give is a share of the full drive, -1 to 1. */
struct azimuth_gains {
    float kp;          /* duty for a radian */
    float ki;          /* duty for a radian and second */
    float kd;          /* duty for a radian a second */
    float rate_corner; /* corner of the filter on the rate, Hz */
};

struct azimuth_settings {
    struct azimuth_gains gains;
    uint32_t period_us; /* of the timer that calls azimuth_step */
};

extern const struct azimuth_settings azimuth;

/* Notch against the torsion of the post: b0 b1 b2 a1 a2, two bits before the point and fourteen behind it. */
extern const int16_t azimuth_notch[5];

void azimuth_init(void);

/* One sampling instant: target and encoder angle in rad, returns the duty. */
float azimuth_step(float target, float encoder);

#endif
