/* The control law of the azimuth axis. */
#include "azimuth.h"

static const float two_pi = 6.2831853f;

static struct {
    float notch_in[2];  /* last inputs of the notch, newest first */
    float notch_out[2]; /* last outputs */
    float last;         /* shaped error at the last instant */
    float integral;
    float derivative;
    float period;       /* s */
} state;

void azimuth_init(void)
{
    state.notch_in[0] = state.notch_in[1] = 0.0f;
    state.notch_out[0] = state.notch_out[1] = 0.0f;
    state.last = state.integral = state.derivative = 0.0f;
    state.period = (float)((double)azimuth.period_us * 1e-6);
}

static float tap(int index)
{
    return (float)azimuth_notch[index] * (1.0f / 16384.0f);
}

static float notch(float x)
{
    float y = tap(0) * x + tap(1) * state.notch_in[0] + tap(2) * state.notch_in[1];
    y = y - tap(3) * state.notch_out[0];
    y = y - tap(4) * state.notch_out[1];
    state.notch_in[1] = state.notch_in[0];
    state.notch_in[0] = x;
    state.notch_out[1] = state.notch_out[0];
    state.notch_out[0] = y;
    return y;
}

static float limited(float x)
{
    return x < -1.0f ? -1.0f : x > 1.0f ? 1.0f : x;
}

float azimuth_step(float target, float encoder)
{
    const struct azimuth_gains *g = &azimuth.gains;
    const float error = notch(target - encoder);
    const float corner = two_pi * g->rate_corner;
    const float step = (g->ki * state.period) * error;
    float integral = state.integral + step;

    state.derivative = (state.derivative + (g->kd * corner) * (error - state.last)) / (1.0f + corner * state.period);
    state.last = error;

    /* Outside the range the integral may only come back in. */
    const float sum = (g->kp * error + integral) + state.derivative;
    if ((sum > 1.0f && step > 0.0f) || (sum < -1.0f && step < 0.0f)) {
        integral = state.integral;
    }
    state.integral = integral;
    return limited((g->kp * error + integral) + state.derivative);
}
