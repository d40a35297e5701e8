/*
 * Feeds both of the demo's laws from standard input; writes the current asked for and the duty. Each record has the target, the
 * speed and the current; the speed law runs with every tenth, and the current law sees what it asked for from the next on.
 */
#include <stdio.h>

#include "conveyor.h"

int main(void)
{
    int32_t in[3];
    q15 asked = 0, fresh = 0;
    conveyor_init();
    for (int k = 0; fread(in, sizeof in, 1, stdin) == 1; k++) {
        asked = fresh;
        if (k % 10 == 0) fresh = conveyor_speed_step((q15)in[0], (q15)in[1]);
        const int32_t out[2] = {fresh, conveyor_current_step(asked, (q15)in[2])};
        fwrite(out, sizeof out, 1, stdout);
    }
    return 0;
}
