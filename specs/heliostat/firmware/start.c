/* Vector table and start-up, as little as a Cortex-M4F needs to run the drive task from its timer. */
#include <stdint.h>

#include "azimuth.h"

extern uint32_t stack_top, data_load, data_start, data_end, bss_start, bss_end;

/* Written by the encoder's receive interrupt, and read by the bridge driver. */
volatile float azimuth_target, azimuth_encoder, azimuth_duty;

void reset(void)
{
    const uint32_t *from = &data_load;
    for (uint32_t *to = &data_start; to < &data_end;) *to++ = *from++;
    for (uint32_t *to = &bss_start; to < &bss_end;) *to++ = 0;
    *(volatile uint32_t *)0xE000ED88u |= 0xFu << 20; /* floating-point unit on */
    azimuth_init();
    for (;;) __asm volatile("wfi");
}

void timer(void)
{
    azimuth_duty = azimuth_step(azimuth_target, azimuth_encoder);
}

__attribute__((section(".vectors"), used)) static void (*const vectors[16 + 1])(void) = {
    (void (*)(void))&stack_top, reset, [16] = timer,
};
