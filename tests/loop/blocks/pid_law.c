/*
 * Proportional, integral and derivative laws in single precision, as firmware would have them, in every form and with every
 * rule against windup. Reads rows of measurement, target, manual value and hand switch from standard input; writes the
 * outputs of one law after the other.
 */
#include <stdio.h>
#include <stdlib.h>

enum form { PARALLEL, STANDARD, INTERACTING };
enum windup { NONE, HOLD, BOUND, PULL_BACK };
enum rule { BACKWARD, FORWARD, TRAPEZOID };

struct law {
    enum form form;
    enum windup windup;
    enum rule rule;
    int per_sample, filtered, weighted, bumpless;
};

struct memory {
    float integral, derivative, derivative_input, integral_input;
    int started;
};

struct row {
    float measurement, target, manual, hand;
};

static const float period = 0.01f, corner = 25.0f, kp = 1.3f, low = -1.0f, high = 0.8f;
static const float weight = 0.6f, derivative_weight = 0.0f, first_output = 0.25f;

static float limited(float x)
{
    return x < low ? low : x > high ? high : x;
}

static float derivative(const struct law *law, const struct memory *m, float gain, float change)
{
    float turn, drive;
    if (!law->filtered)
        return law->per_sample ? gain * change : gain * (change / period);
    turn = corner * period;
    drive = gain * (law->per_sample ? turn : corner);
    switch (law->rule) {
    case BACKWARD:
        return (m->derivative + drive * change) / (1.0f + turn);
    case FORWARD:
        return (1.0f - turn) * m->derivative + drive * change;
    default:
        return ((2.0f - turn) * m->derivative + (2.0f * drive) * change) / (2.0f + turn);
    }
}

static float total(const struct law *law, float p, float i, float d)
{
    return law->form == INTERACTING ? p + i : (p + i) + d;
}

static float bringing(const struct law *law, float output, float p, float d)
{
    return law->form == INTERACTING ? output - p : (output - p) - d;
}

static float law_step(const struct law *law, struct memory *m, const struct row *in)
{
    const float ki = law->per_sample ? 0.02f : 2.1f, kd = law->per_sample ? 1.5f : 0.02f;
    const float ti = law->per_sample ? 40.0f : 0.37f, td = law->per_sample ? 1.75f : 0.015f;
    const float back_time = law->per_sample ? 25.0f : 0.21f;
    const float y = in->measurement;
    const float e = in->target - y;
    const float e_p = law->weighted ? weight * in->target - y : e;
    const float e_d = law->weighted ? derivative_weight * in->target - y : e;
    const int first = law->bumpless && !m->started;
    const float change = e_d - (first ? e_d : m->derivative_input);
    const float gain = law->form == PARALLEL ? kd : law->form == STANDARD ? kp * td : td;
    const float d = derivative(law, m, gain, change);
    const float taken = law->form == INTERACTING ? e + d : e;
    const float p = kp * (law->form == INTERACTING ? e_p + d : e_p);
    const float taken_last = first ? taken : m->integral_input;
    float share, step, candidate, sum, i, s, u;

    if (law->form == PARALLEL)
        share = law->per_sample ? ki : ki * period;
    else
        share = law->per_sample ? kp / ti : (kp * period) / ti;
    step = law->rule == BACKWARD  ? share * taken
           : law->rule == FORWARD ? share * taken_last
                                  : share * ((taken + taken_last) * 0.5f);
    candidate = m->integral + step;
    i = candidate;
    if (law->windup == BOUND)
        i = limited(candidate);
    if (law->windup == HOLD) {
        sum = total(law, p, candidate, d);
        if ((sum > high && step > 0.0f) || (sum < low && step < 0.0f))
            i = m->integral;
    }
    if (law->bumpless && in->hand != 0.0f)
        i = bringing(law, in->manual, p, d);
    if (first)
        i = bringing(law, first_output, p, d);
    s = total(law, p, i, d);
    u = limited(s);
    if (law->windup == PULL_BACK) {
        if (law->per_sample)
            i += (u - s) / back_time;
        else
            i += (period / back_time) * (u - s);
    }
    m->integral = i;
    m->derivative = d;
    m->derivative_input = e_d;
    m->integral_input = taken;
    m->started = 1;
    return u;
}

int main(void)
{
    enum { most = 100000 };
    struct row *rows = malloc(most * sizeof *rows);
    float *outputs = malloc(most * sizeof *outputs);
    size_t count = fread(rows, sizeof *rows, most, stdin);
    for (int form = PARALLEL; form <= INTERACTING; form++)
        for (int windup = NONE; windup <= PULL_BACK; windup++)
            for (int rule = BACKWARD; rule <= TRAPEZOID; rule++)
                for (int variant = 0; variant < 4; variant++) {
                    const struct law law = {
                        form, windup, rule, variant >= 2, variant % 2 == 0, variant == 1 || variant == 2, variant == 3,
                    };
                    struct memory memory = {0};
                    for (size_t k = 0; k < count; k++)
                        outputs[k] = law_step(&law, &memory, &rows[k]);
                    fwrite(outputs, sizeof *outputs, count, stdout);
                }
    return 0;
}
