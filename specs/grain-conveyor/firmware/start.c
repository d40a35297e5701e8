/* Vector table and start-up, as little as a Cortex-M4 needs to run both tasks from their timers. */
#include <stdint.h>

#include "conveyor.h"

extern uint32_t stack_top, data_load, data_start, data_end, bss_start, bss_end;

/* Written by the converters' interrupts, and read by the bridge driver. */
volatile q15 conveyor_target, conveyor_speed, conveyor_current, conveyor_duty;

static volatile q15 current_target;

void reset(void)
{
    const uint32_t *from = &data_load;
    for (uint32_t *to = &data_start; to < &data_end;) *to++ = *from++;
    for (uint32_t *to = &bss_start; to < &bss_end;) *to++ = 0;
    conveyor_init();
    for (;;) __asm volatile("wfi");
}

void speed_timer(void)
{
    current_target = conveyor_speed_step(conveyor_target, conveyor_speed);
}

void current_timer(void)
{
    conveyor_duty = conveyor_current_step(current_target, conveyor_current);
}

__attribute__((section(".vectors"), used)) static void (*const vectors[16 + 2])(void) = {
    (void (*)(void))&stack_top, reset, [16] = speed_timer, [17] = current_timer,
};
