/* Feeds triples of target, bed and outside temperature from standard input to the demo's law; writes the openings. */
#include <stdio.h>

#include "rootzone.h"

int main(void)
{
    q16_16 in[3];
    rootzone_init();
    while (fread(in, sizeof in, 1, stdin) == 1) {
        const q16_16 opening = rootzone_step(in[0], in[1], in[2]);
        fwrite(&opening, sizeof opening, 1, stdout);
    }
    return 0;
}
