/* The control law of one bench: proportional and integral action on a feed-forward of target and outside temperature. */
#include "rootzone.h"

static q16_16 integral;

void rootzone_init(void)
{
    integral = 0;
}

static q16_16 saturated(int64_t x)
{
    return x < INT32_MIN ? INT32_MIN : x > INT32_MAX ? INT32_MAX : (q16_16)x;
}

/* A sum with this many bits behind the point, rounded to sixteen; halves go up. */
static q16_16 rounded(int64_t sum, int bits)
{
    return saturated((sum + ((int64_t)1 << (bits - 17))) >> (bits - 16));
}

static q16_16 limited(q16_16 x, q16_16 low, q16_16 high)
{
    return x < low ? low : x > high ? high : x;
}

q16_16 rootzone_step(q16_16 target, q16_16 bed, q16_16 outside)
{
    const struct rootzone_gains *g = &rootzone.gains;
    const q16_16 error = saturated((int64_t)target - bed);
    const q16_16 forward = rounded((int64_t)g->to_target * target - (int64_t)g->to_outside * outside, 32);

    /* The integral never asks for more than the valve can still give beside the feed-forward. */
    const q16_16 least = saturated(-(int64_t)forward);
    const q16_16 most = saturated((int64_t)rootzone.fully_open - forward);
    integral = rounded(((int64_t)integral << 30) + (int64_t)g->ki * error, 46);
    integral = limited(integral, least, most);

    const int64_t trim = ((int64_t)forward + integral) << 16;
    return limited(rounded((int64_t)g->kp * error + trim, 32), 0, rootzone.fully_open);
}
