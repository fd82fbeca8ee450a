#include "board.h"

/* The tick at boot; another one brings the wrap near. */
#ifndef START_TICK
#define START_TICK 0
#endif

/* The first half of the dual timer: counts down from ffffffff and goes on. */
#define TIMER_LOAD REGISTER(0x40002000)
#define TIMER_VALUE REGISTER(0x40002004)
#define TIMER_CONTROL REGISTER(0x40002008)

#define SYSTICK_CONTROL REGISTER(0xE000E010)
#define SYSTICK_LOAD REGISTER(0xE000E014)
#define SYSTICK_VALUE REGISTER(0xE000E018)

#define COUNTS_PER_TICK (CLOCK_HZ / 1000000u)

static uint32_t ticks, counted; /* up to this value of the timer */
static volatile uint8_t millisecond;

void millisecond_interrupt(void);

void clock_start(void)
{
	TIMER_LOAD = 0xffffffff;
	TIMER_CONTROL = 0xc2; /* on, starts again by itself, 32 bits */
	counted = TIMER_VALUE;
	ticks = START_TICK;
	SYSTICK_LOAD = CLOCK_HZ / 1000 - 1;
	SYSTICK_VALUE = 0;
	SYSTICK_CONTROL = 7;
}

/* It only wakes the processor. Counting its interrupts would be no clock: under
 * load some are lost. */
void millisecond_interrupt(void)
{
	millisecond = 1;
}

uint32_t clock_now(void)
{
	uint32_t masked, now, more;

	__asm volatile("mrs %0, primask" : "=r"(masked));
	interrupts_off();
	more = (counted - TIMER_VALUE) / COUNTS_PER_TICK;
	counted -= more * COUNTS_PER_TICK;
	ticks += more;
	now = ticks;
	if (!masked)
		interrupts_on();
	return now;
}

uint8_t clock_waiting(void)
{
	return millisecond;
}

uint8_t clock_millisecond(void)
{
	uint8_t passed = millisecond;

	millisecond = 0;
	return passed;
}
