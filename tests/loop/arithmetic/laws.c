/*
 * Fixed-point laws as firmware writes them. The first argument names the law; rows of 32-bit numbers come in by standard
 * input, and one number a row goes out. The numbers of the laws stand in fixed_laws.test.ts too.
 */
#include <stdint.h>
#include <stdio.h>
#include <string.h>

static int32_t saturate(int64_t x, int64_t low, int64_t high)
{
    return (int32_t)(x < low ? low : x > high ? high : x);
}

static int16_t saturate16(int64_t x) { return (int16_t)saturate(x, INT16_MIN, INT16_MAX); }
static int32_t saturate32(int64_t x) { return saturate(x, INT32_MIN, INT32_MAX); }

/* Q15: proportional and integral action, products rounded to nearest, the integral held outside the range. */
static int32_t q15_pi(const int32_t *in)
{
    static int16_t integral;
    const int16_t kp = 29491, ki = 1311, low = -26214, high = 26214;
    const int16_t error = saturate16(in[0] - in[1]);
    const int16_t p = saturate16((kp * error + 0x4000) >> 15);
    const int16_t step = saturate16((ki * error + 0x4000) >> 15);
    int16_t next = saturate16(integral + step);
    const int16_t sum = saturate16(p + next);
    if ((sum > high && step > 0) || (sum < low && step < 0)) next = integral;
    integral = next;
    return saturate(saturate16(p + integral), low, high);
}

/* Q16.16: the same with sums of 64 bits, rounded half to even; the integral is bounded. */
static int64_t half_even(int64_t x, int shift)
{
    const int64_t floor = x >> shift, rest = x - floor * ((int64_t)1 << shift), half = (int64_t)1 << (shift - 1);
    return floor + (rest > half || (rest == half && (floor & 1)));
}

static int32_t q16_pi(const int32_t *in)
{
    static int32_t integral;
    const int32_t kp = 163840, ki = 3277, low = -50 * 65536, high = 100 * 65536;
    const int32_t error = saturate32((int64_t)in[0] - in[1]);
    integral = saturate32(half_even((int64_t)integral * 65536 + (int64_t)ki * error, 16));
    integral = saturate(integral, low, high);
    return saturate(saturate32(half_even((int64_t)kp * error + (int64_t)integral * 65536, 16)), low, high);
}

/* A section with Q2.14 coefficients on Q15 signals: a 32-bit sum that wraps, and so does its upper half. */
static int32_t q15_section(const int32_t *in)
{
    static int16_t x1, x2, y1, y2;
    const int16_t x = (int16_t)in[0];
    uint32_t sum = (uint32_t)(14903 * x);
    sum += (uint32_t)(-28283 * x1);
    sum += (uint32_t)(14497 * x2);
    sum -= (uint32_t)(-28401 * y1);
    sum -= (uint32_t)(13133 * y2);
    const int16_t y = (int16_t)((int32_t)sum >> 14);
    x2 = x1, x1 = x, y2 = y1, y1 = y;
    return y;
}

/*
 * The same on Q31 signals with Q2.30 coefficients: a 64-bit sum, half added, saturated at 32 bits. The samples keep the sum
 * itself inside 64 bits.
 */
static int32_t q31_section(const int32_t *in)
{
    static int32_t x1, x2, y1, y2;
    const int32_t x = in[0];
    uint64_t sum = (uint64_t)((int64_t)976690481 * x);
    sum += (uint64_t)((int64_t)-1853554688 * x1);
    sum += (uint64_t)((int64_t)950075393 * x2);
    sum -= (uint64_t)((int64_t)-1861287937 * y1);
    sum -= (uint64_t)((int64_t)860684289 * y2);
    const int32_t y = saturate32(((int64_t)sum + ((int64_t)1 << 29)) >> 30);
    x2 = x1, x1 = x, y2 = y1, y1 = y;
    return y;
}

/* The same, but the sum and its upper part wrap. */
static int32_t q31_wrapped(const int32_t *in)
{
    static int32_t x1, y1;
    const int32_t x = in[0];
    uint64_t sum = (uint64_t)((int64_t)2147483647 * x);
    sum += (uint64_t)((int64_t)2000000011 * x1);
    sum -= (uint64_t)((int64_t)-1999999973 * y1);
    sum -= (uint64_t)((int64_t)-2147483648 * x);
    const int32_t y = (int32_t)((int64_t)sum >> 28);
    x1 = x, y1 = y;
    return y;
}

static int32_t wrapped(int64_t x) { return (int32_t)(uint32_t)x; }

/* int32: every operation wraps; a quotient is cut toward zero. */
static int32_t int32_mix(const int32_t *in)
{
    const int32_t a = in[0], b = in[1], c = in[2];
    const int32_t product = wrapped((int64_t)a * b);
    const int32_t sum = wrapped((int64_t)wrapped((int64_t)product + c) - wrapped((int64_t)7 * a));
    return wrapped((int64_t)sum - wrapped((int64_t)wrapped((int64_t)a + b) / c));
}

/* Q8.8: products cut toward zero by a division, sums cut by saturation. */
static int32_t q8_toward_zero(const int32_t *in)
{
    const int16_t product = saturate16((int64_t)in[0] * in[1] / 256);
    const int16_t quotient = saturate16((int64_t)in[0] * 256 / in[2]);
    return saturate16(saturate16((int64_t)product + quotient) - saturate16((int64_t)in[0] * 3 / 4));
}

int main(int count, char **arguments)
{
    static const struct { const char *name; int columns; int32_t (*law)(const int32_t *); } laws[] = {
        {"q15_pi", 2, q15_pi},           {"q16_pi", 2, q16_pi},           {"q15_section", 1, q15_section},
        {"q31_section", 1, q31_section}, {"q31_wrapped", 1, q31_wrapped}, {"int32_mix", 3, int32_mix},
        {"q8_toward_zero", 3, q8_toward_zero},
    };
    for (unsigned i = 0; count == 2 && i < sizeof laws / sizeof *laws; i++) {
        if (strcmp(laws[i].name, arguments[1]) != 0) continue;
        int32_t row[3];
        while (fread(row, sizeof *row, laws[i].columns, stdin) == (size_t)laws[i].columns) {
            const int32_t out = laws[i].law(row);
            fwrite(&out, sizeof out, 1, stdout);
        }
        return 0;
    }
    return 2;
}
