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
    default: return AS(x + (y - x * z) * y, fmaf(fmaf(-x, z, y), y, x));
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
