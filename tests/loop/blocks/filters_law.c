/*
 * Filters, feedback and switching as firmware would have them, in single precision and in Q1.15. The first argument names the
 * law; samples come from standard input, as float or as int32_t, and its outputs go to standard output in the same type.
 */
#include <stdint.h>
#include <stdio.h>
#include <string.h>

static const double period = 0.001;
static const float b0 = 0.21f, b1 = -0.31f, b2 = 0.17f, a1 = -1.5f, a2 = 0.7f;

static float direct_2(float x)
{
    static float w1, w2;
    const float w = x - a1 * w1 - a2 * w2;
    const float y = b0 * w + b1 * w1 + b2 * w2;
    w2 = w1, w1 = w;
    return y;
}

static float transposed_2(float x)
{
    static float s1, s2;
    const float y = b0 * x + s1;
    s1 = b1 * x - a1 * y + s2;
    s2 = b2 * x - a2 * y;
    return y;
}

/* The same filter with its feedback stored negated. */
static float negated(float x)
{
    static float x1, x2, y1, y2;
    const float n1 = 1.5f, n2 = -0.7f;
    const float y = b0 * x + b1 * x1 + b2 * x2 + n1 * y1 + n2 * y2;
    x2 = x1, x1 = x, y2 = y1, y1 = y;
    return y;
}

static float third_order(float x)
{
    static float x1, x2, x3, y1, y2, y3;
    const float lead = 1.6f;
    const float c1 = (float)((double)0.3f / lead), c2 = (float)((double)-0.7f / lead);
    const float d1 = (float)((double)-2.1f / lead), d2 = (float)((double)1.1f / lead), d3 = (float)((double)-0.2f / lead);
    const float y = c1 * x2 + c2 * x3 - d1 * y1 - d2 * y2 - d3 * y3;
    x3 = x2, x2 = x1, x1 = x, y3 = y2, y2 = y1, y1 = y;
    return y;
}

static float weight(float x)
{
    static float y;
    return y = y + 0.3f * (x - y);
}

static float trapezoid(float x)
{
    static float x1, y;
    const float c = (float)(period / (0.007 + period * 0.5));
    y = y + c * ((x + x1) * 0.5f - y);
    x1 = x;
    return y;
}

static float lead_lag(float x)
{
    static float w;
    const double ratio = 0.003 / 0.011;
    const float v = 1.7f * x, c = (float)(period / (0.011 + period));
    w = w + c * (v - w);
    return (float)ratio * v + (float)(1 - ratio) * w;
}

static float feed_forward(float x)
{
    static float v1;
    const float v = 1.7f * x, k = (float)(0.003 / period);
    const float y = v + k * (v - v1);
    v1 = v;
    return y;
}

static float mean_of_5(float x)
{
    static float x1, x2, x3, x4;
    const float y = (x + x1 + x2 + x3 + x4) / 5.0f;
    x4 = x3, x3 = x2, x2 = x1, x1 = x;
    return y;
}

static float mean_of_4(float x)
{
    static float x1, x2, x3;
    const float y = (x + x1 + x2 + x3) / 4.0f;
    x3 = x2, x2 = x1, x1 = x;
    return y;
}

static const float at_11 = 1.0f, at_12 = 0.1f, at_21 = -0.2f, at_22 = 0.9f, in_1 = 0.02f, in_2 = 0.3f;
static const float out_1 = 1.0f, out_2 = 0.4f, gain_1 = 0.35f, gain_2 = 0.15f, fed_1 = 0.8f, fed_2 = 0.6f;

static float observed_now(float y)
{
    static float p1, p2;
    const float e = y - out_1 * p1 - out_2 * p2;
    const float s1 = p1 + gain_1 * e, s2 = p2 + gain_2 * e;
    const float u = -(fed_1 * s1 + fed_2 * s2);
    p1 = at_11 * s1 + at_12 * s2 + in_1 * u;
    p2 = at_21 * s1 + at_22 * s2 + in_2 * u;
    return u;
}

static float observed_late(float y)
{
    static float p1 = 0.5f, p2 = -0.25f;
    const float e = y - out_1 * p1 - out_2 * p2;
    const float u = -(fed_1 * p1 + fed_2 * p2);
    const float n1 = at_11 * p1 + at_12 * p2 + in_1 * u + gain_1 * e;
    const float n2 = at_21 * p1 + at_22 * p2 + in_2 * u + gain_2 * e;
    p1 = n1, p2 = n2;
    return u;
}

static float table(float x)
{
    static const float points[] = {-0.8f, -0.3f, 0.1f, 0.9f}, values[] = {2.0f, 0.3f, 1.1f, -1.0f};
    int k = 0;
    if (x < points[0])
        x = points[0];
    if (x > points[3])
        x = points[3];
    while (k < 2 && !(x < points[k + 1]))
        k++;
    return values[k] + ((values[k + 1] - values[k]) * (x - points[k])) /
                           (float)((double)points[k + 1] - (double)points[k]);
}

static float switched(float x)
{
    static int started, last_law;
    static float last_output, offset;
    const int law = x > 0.4f ? 1 : 0;
    const float chosen = law ? 0.5f - x : 2.0f * x;
    offset = started && law != last_law ? last_output - chosen : (float)(0.02 / (0.02 + period)) * offset;
    started = 1, last_law = law, last_output = chosen + offset;
    return last_output;
}

static float slew(float x)
{
    static float y;
    const float most = 60.0f * (float)period, low = y - most, high = y + most;
    y = x < low ? low : x > high ? high : x;
    return y;
}

static int32_t saturated(int64_t x)
{
    return (int32_t)(x < -32768 ? -32768 : x > 32767 ? 32767 : x);
}

static int32_t q15_transposed(int32_t x)
{
    static int32_t s1, s2;
    const int32_t y = saturated((3441 * (int64_t)x + ((int64_t)s1 << 14)) >> 14);
    s1 = saturated((-5079 * (int64_t)x - -24576 * (int64_t)y + ((int64_t)s2 << 14)) >> 14);
    s2 = saturated((2785 * (int64_t)x - 11469 * (int64_t)y) >> 14);
    return y;
}

static int32_t q15_mean(int32_t x)
{
    static int32_t x1, x2, x3;
    const int32_t y = (x + x1 + x2 + x3) >> 2;
    x3 = x2, x2 = x1, x1 = x;
    return y;
}

static int32_t q15_weight(int32_t x)
{
    static int32_t y;
    return y = saturated((((int64_t)y << 15) + 8192 * (int64_t)saturated((int64_t)x - y)) >> 15);
}

static int32_t q15_table(int32_t x)
{
    static const int32_t points[] = {-16384, 0, 8192, 24576}, values[] = {8192, 16384, -8192, 4096};
    int k = 0;
    if (x < points[0])
        x = points[0];
    if (x > points[3])
        x = points[3];
    while (k < 2 && !(x < points[k + 1]))
        k++;
    const int32_t rise = saturated((saturated(values[k + 1] - values[k]) * (int64_t)(x - points[k])) >> 15);
    return saturated((int64_t)values[k] + saturated(((int64_t)rise * 32768) / (points[k + 1] - points[k])));
}

#define LAW(name) {#name, name, 0}
#define FIXED(name) {#name, 0, name}

int main(int count, char **arguments)
{
    static const struct { const char *name; float (*real)(float); int32_t (*fixed)(int32_t); } laws[] = {
        LAW(direct_2), LAW(transposed_2), LAW(negated), LAW(third_order), LAW(weight), LAW(trapezoid),
        LAW(lead_lag), LAW(feed_forward), LAW(mean_of_5), LAW(mean_of_4), LAW(observed_now), LAW(observed_late),
        LAW(table), LAW(switched), LAW(slew), FIXED(q15_transposed), FIXED(q15_mean), FIXED(q15_weight), FIXED(q15_table),
    };
    for (unsigned i = 0; count == 2 && i < sizeof laws / sizeof *laws; i++) {
        if (strcmp(laws[i].name, arguments[1]) != 0)
            continue;
        union { float real; int32_t fixed; } sample;
        while (fread(&sample, sizeof sample, 1, stdin) == 1) {
            if (laws[i].real)
                sample.real = laws[i].real(sample.real);
            else
                sample.fixed = laws[i].fixed(sample.fixed);
            fwrite(&sample, sizeof sample, 1, stdout);
        }
        return 0;
    }
    return 2;
}
