/* An indicator that sends its display by itself in bursts of 24 bits: a clock line
 * and a data line, data good at the rising edge of the clock as it arrives here. The
 * least bit comes first; bits 0 to 19 are the size of the reading in 0.001 mm, bit
 * 20 is its sign, bit 23 is set when the display stands on inches. Displays differ:
 * look at both lines with an oscilloscope first. */
#include <avr/interrupt.h>
#include <avr/io.h>
#include <util/atomic.h>

#include "board.h"

#define BITS 24
#define PAUSE 5000u /* ticks without a clock edge that end a burst */

static volatile uint32_t shifted, began, edge;
static volatile uint8_t bits;
static volatile uint32_t whole, whole_tick;
static volatile uint8_t ready;

void indicator_start(void)
{
	/* Rising edges of both; the one of PD3 is not used, but left at its "low level" it
	 * keeps a simulator busy. */
	EICRA = _BV(ISC01) | _BV(ISC00) | _BV(ISC11) | _BV(ISC10);
	EIMSK = _BV(INT0);
}

ISR(INT0_vect)
{
	uint32_t now = clock_now_locked();

	if (now - edge > PAUSE || bits == BITS) {
		bits = 0;
		shifted = 0;
		began = now;
	}
	edge = now;
	shifted >>= 1;
	if (PIND & _BV(PD3))
		shifted |= 0x800000;
	if (++bits == BITS) {
		whole = shifted;
		whole_tick = began;
		ready = 1;
	}
}

uint8_t indicator_waiting(void)
{
	return ready;
}

void indicator_poll(struct taut *t, struct taut_sensor *sensor)
{
	uint32_t burst = 0, tick = 0;
	uint8_t taken;

	ATOMIC_BLOCK(ATOMIC_RESTORESTATE) {
		taken = ready;
		ready = 0;
		burst = whole;
		tick = whole_tick;
	}
	if (taken) {
		int32_t count = (int32_t)(burst & 0xfffff);

		if (burst & 0x100000)
			count = -count;
		if (burst & 0x800000) /* inches: not what the channel declares */
			taut_fault(t, sensor, tick);
		else
			taut_reading(t, sensor, tick, count);
	}
	if (taut_due(t, sensor))
		taut_absent(t, sensor, clock_now());
}
