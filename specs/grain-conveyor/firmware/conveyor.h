/* Drive of the demo grain conveyor: what its two control tasks need to know. */
#ifndef CONVEYOR_H
#define CONVEYOR_H

#include <stdint.h>

/* A share of full scale, from -1 to just below 1: of 40 A, of 400 rad/s, or of the bridge's voltage. */
typedef int16_t q15;

/* Proportional and integral action; the period of the task is folded into ki. */
struct conveyor_law {
    int16_t kp; /* its binary point is the task's own */
    q15 ki;     /* each sample */
    q15 limit;  /* of the output, both ways */
};

struct conveyor_settings {
    struct conveyor_law current; /* kp: multiply by 2^-12 */
    struct conveyor_law speed;   /* kp: multiply by 2^-10 */
    q15 target_weight;           /* share of the way to a new target in each sample */
    uint16_t current_period_us;
    uint16_t speed_period_us;
};

extern const struct conveyor_settings conveyor;

void conveyor_init(void);

/* Speed task: target and speed as shares of 400 rad/s, returns the current to ask for as a share of 40 A. */
q15 conveyor_speed_step(q15 target, q15 speed);

/* Current task: both currents as shares of 40 A, returns the duty of the bridge. */
q15 conveyor_current_step(q15 target, q15 current);

#endif
