/*
 * Sums of float32 products. The first argument numbers the expression; rows of three floats come in by standard input, and one
 * float a row goes out. Compiled twice: as written with -ffp-contract=fast, and with -DWRITTEN_OUT as the rule of float32_fused
 * says, each fused operation a call of fmaf.
 */
#include <math.h>
#include <stdio.h>
#include <stdlib.h>

#ifdef WRITTEN_OUT
#define AS(written, rule) (rule)
#else
#define AS(written, rule) (written)
#endif

/* A filter and a law with proportional, integral and derivative action; gains are read as firmware reads them from memory. */
static volatile const float taps[5] = {0.9f, -1.2f, 0.7f, -1.3f, 0.6f};
static volatile const float gains[5] = {2.7f, 3.4f, 0.05f, 125.6f, 0.001f};

static float law(float x)
{
    static float x1, x2, y1, y2, last, integral, derivative;
    const float b0 = taps[0], b1 = taps[1], b2 = taps[2], a1 = taps[3], a2 = taps[4];
    const float kp = gains[0], ki = gains[1], kd = gains[2], corner = gains[3], period = gains[4];
    const float y = AS(b0 * x + b1 * x1 + b2 * x2 - a1 * y1 - a2 * y2,
                       fmaf(-a2, y2, fmaf(-a1, y1, fmaf(b2, x2, fmaf(b0, x, b1 * x1)))));
    x2 = x1, x1 = x, y2 = y1, y1 = y;
    integral = AS(integral + (ki * period) * y, fmaf(ki * period, y, integral));
    derivative = AS((derivative + (kd * corner) * (y - last)) / (1.0f + corner * period),
                    fmaf(kd * corner, y - last, derivative) / fmaf(corner, period, 1.0f));
    last = y;
    return AS((kp * y + integral) + derivative, fmaf(kp, y, integral) + derivative);
}

static float expression(int which, float x, float y, float z)
{
    switch (which) {
    case 0: return fmaf(x, y, z);
    case 1: return AS(x * y + z, fmaf(x, y, z));
    case 2: return AS(z + x * y, fmaf(x, y, z));
    case 3: return AS(x * y - z, fmaf(x, y, -z));
    case 4: return AS(z - x * y, fmaf(-x, y, z));
    case 5: return AS(x * y + y * z, fmaf(x, y, y * z));
    case 6: return AS(x * y - y * z, fmaf(x, y, -(y * z)));
    case 7: return AS(x * y + y * z + z * x, fmaf(z, x, fmaf(x, y, y * z)));
    case 8: return AS(x - y + z * x - z * y, fmaf(-z, y, fmaf(z, x, x - y)));
    case 9: return AS((x + y) * z - x, fmaf(x + y, z, -x));
    case 10: return AS(x * y * z + x, fmaf(x * y, z, x));
    case 11: return AS(-(x * y) + z, fmaf(-x, y, z));
    case 12: return AS(x + (y - x * z) * y, fmaf(fmaf(-x, z, y), y, x));
    default: return law(x);
    }
}

int main(int count, char **arguments)
{
    float row[3];
    if (count != 2) return 2;
    const int which = atoi(arguments[1]);
    while (fread(row, sizeof row, 1, stdin) == 1) {
        const float out = expression(which, row[0], row[1], row[2]);
        fwrite(&out, sizeof out, 1, stdout);
    }
    return 0;
}
