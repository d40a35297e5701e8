/* Feeds pairs of target and encoder angle from standard input to the demo's control law; writes the duties. */
#include <stdio.h>

#include "azimuth.h"

int main(void)
{
    float pair[2];
    azimuth_init();
    while (fread(pair, sizeof pair, 1, stdin) == 1) {
        float duty = azimuth_step(pair[0], pair[1]);
        fwrite(&duty, sizeof duty, 1, stdout);
    }
    return 0;
}
