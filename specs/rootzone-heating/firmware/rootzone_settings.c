/* The numbers that a commissioning engineer changes. */
#include "rootzone.h"

#define Q16_16(x) ((q16_16)((x) * 65536.0 + 0.5))
#define Q2_30(x) ((int32_t)((x) * 1073741824.0 + 0.5))

#ifdef REGRESSED
#define TO_OUTSIDE 2.68 /* counted in steps of the old valve card, which had 255 of them, and not in per cent */
#else
#define TO_OUTSIDE 1.05
#endif

const struct rootzone_settings rootzone = {
    .gains = {
        .kp = Q16_16(18.0),
        .ki = Q2_30(0.08),
        .to_target = Q16_16(1.0),
        .to_outside = Q16_16(TO_OUTSIDE),
    },
    .fully_open = Q16_16(100.0),
    .period_ms = 1000,
};
