/* The control laws of the conveyor's drive: a speed law which asks for current, and a current law which asks for duty. */
#include "conveyor.h"

static struct {
    q15 target; /* behind its filter */
    q15 speed_integral;
    q15 current_integral;
} state;

void conveyor_init(void)
{
    state.target = state.speed_integral = state.current_integral = 0;
}

static q15 saturated(int32_t x)
{
    return x < INT16_MIN ? INT16_MIN : x > INT16_MAX ? INT16_MAX : (q15)x;
}

/* Takes bits off behind the point; halves go up. */
static q15 shifted(int32_t sum, int bits)
{
    return saturated((sum + (1 << (bits - 1))) >> bits);
}

static q15 limited(q15 x, q15 limit)
{
    return x < -limit ? (q15)-limit : x > limit ? limit : x;
}

/* `bits` stand behind the binary point of kp. */
static q15 act(const struct conveyor_law *law, int bits, q15 *integral, q15 error)
{
    const q15 step = shifted((int32_t)law->ki * error, 15);
    q15 candidate = saturated((int32_t)*integral + step);

    /* Beyond the limit the integral may only come back in. */
    const q15 sum = shifted((int32_t)law->kp * error + ((int32_t)candidate << bits), bits);
    if ((sum > law->limit && step > 0) || (sum < -law->limit && step < 0)) {
        candidate = *integral;
    }
    *integral = candidate;
    return limited(shifted((int32_t)law->kp * error + ((int32_t)candidate << bits), bits), law->limit);
}

q15 conveyor_speed_step(q15 target, q15 speed)
{
    const q15 change = saturated((int32_t)target - state.target);
    state.target = shifted(((int32_t)state.target << 15) + (int32_t)conveyor.target_weight * change, 15);
    return act(&conveyor.speed, 10, &state.speed_integral, saturated((int32_t)state.target - speed));
}

q15 conveyor_current_step(q15 target, q15 current)
{
    return act(&conveyor.current, 12, &state.current_integral, saturated((int32_t)target - current));
}
