#include <avr/interrupt.h>
#include <avr/io.h>
#include <util/atomic.h>

#include "board.h"

/* The tick at boot; another one brings the wrap near. */
#ifndef START_TICK
#define START_TICK 0
#endif

#define TURN 32768u /* ticks in one turn of timer 1: it counts halves */

static volatile uint32_t turned = START_TICK;
static volatile uint8_t millisecond;

ISR(TIMER1_OVF_vect)
{
	turned += TURN;
}

/* Wakes the processor, so that nothing is looked at less than 1000 times a second. */
ISR(TIMER0_COMPA_vect)
{
	millisecond = 1;
}

void clock_start(void)
{
	TCCR1B = _BV(CS11); /* 2 MHz */
	TIMSK1 = _BV(TOIE1);
	TCCR0A = _BV(WGM01);
	OCR0A = 249;
	TCCR0B = _BV(CS01) | _BV(CS00); /* 250 kHz, to 1 kHz */
	TIMSK0 = _BV(OCIE0A);
}

uint32_t clock_now_locked(void)
{
	uint16_t half = TCNT1;
	uint32_t tick = turned;

	if ((TIFR1 & _BV(TOV1)) && half < 0x8000) /* has turned, and nobody has noticed */
		tick += TURN;
	return tick + (half >> 1);
}

uint32_t clock_now(void)
{
	uint32_t tick;

	ATOMIC_BLOCK(ATOMIC_RESTORESTATE)
		tick = clock_now_locked();
	return tick;
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
