/* Root-zone heating of the demo glasshouse: what the bench task needs to know. */
#ifndef ROOTZONE_H
#define ROOTZONE_H

#include <stdint.h>

/* Sixteen bits before the binary point and sixteen behind it: temperatures in K, the valve in per cent. */
typedef int32_t q16_16;

struct rootzone_gains {
    q16_16 kp;         /* per cent of the valve for a kelvin */
    int32_t ki;        /* per cent for a kelvin, each second; multiply by 2^-30 */
    q16_16 to_target;  /* feed-forward: per cent for a kelvin of the target */
    q16_16 to_outside; /* feed-forward: per cent for a kelvin that it is warmer outside */
};

struct rootzone_settings {
    struct rootzone_gains gains;
    q16_16 fully_open;   /* the valve's upper end, per cent */
    uint16_t period_ms;  /* of the timer that calls rootzone_step; ki counts on 1000 */
};

extern const struct rootzone_settings rootzone;

void rootzone_init(void);

/* One sampling instant: temperatures above that of the cool header in K, returns the valve's opening in per cent. */
q16_16 rootzone_step(q16_16 target, q16_16 bed, q16_16 outside);

#endif
