/* Vector table and start-up, as little as a Cortex-M0+ needs to run the bench task from its timer. */
#include <stdint.h>

#include "rootzone.h"

extern uint32_t stack_top, data_load, data_start, data_end, bss_start, bss_end;

/* Written by the probes' receive interrupt, and read by the valve driver. */
volatile q16_16 rootzone_target, rootzone_bed, rootzone_outside, rootzone_valve;

void reset(void)
{
    const uint32_t *from = &data_load;
    for (uint32_t *to = &data_start; to < &data_end;) *to++ = *from++;
    for (uint32_t *to = &bss_start; to < &bss_end;) *to++ = 0;
    rootzone_init();
    for (;;) __asm volatile("wfi");
}

void timer(void)
{
    rootzone_valve = rootzone_step(rootzone_target, rootzone_bed, rootzone_outside);
}

__attribute__((section(".vectors"), used)) static void (*const vectors[16 + 1])(void) = {
    (void (*)(void))&stack_top, reset, [16] = timer,
};
