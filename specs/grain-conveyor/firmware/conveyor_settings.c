/* The numbers that a commissioning engineer changes. */
#include "conveyor.h"

#define FIXED(x, bits) ((int16_t)((x) * (1 << (bits)) + 0.5))

#ifdef REGRESSED
#define SPEED_KP FIXED(30.0, 9) /* the law was given one more bit behind the point, this line was not */
#else
#define SPEED_KP FIXED(30.0, 10)
#endif

const struct conveyor_settings conveyor = {
    .current = {
        .kp = FIXED(1.5, 12),
        .ki = FIXED(0.075, 15),
        .limit = FIXED(0.95, 15), /* the bridge's boot-strap capacitors need the rest */
    },
    .speed = {
        .kp = SPEED_KP,
        .ki = FIXED(0.25, 15),
        .limit = FIXED(0.75, 15), /* 30 A */
    },
    .target_weight = FIXED(0.022, 15),
    .current_period_us = 100,
    .speed_period_us = 1000,
};
