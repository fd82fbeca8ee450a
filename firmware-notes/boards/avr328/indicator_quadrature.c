/* A scale with two tracks, 0.001 mm from edge to edge. It counts from where it
 * stands at boot. Both tracks changing at once is an edge that was missed: the
 * position is not known any more, and every sample is a fault until the board has
 * been at rest. */
#include <avr/interrupt.h>
#include <avr/io.h>
#include <util/atomic.h>

#include "board.h"

#define MISSED 2

static volatile int32_t position;
static volatile uint8_t tracks, missed;

void indicator_start(void)
{
	/* Not used, but left at their "low level" they keep a simulator busy. */
	EICRA = _BV(ISC01) | _BV(ISC00) | _BV(ISC11) | _BV(ISC10);
	tracks = (PIND >> PD2) & 3;
	PCMSK2 = _BV(PCINT18) | _BV(PCINT19);
	PCICR = _BV(PCIE2);
}

/* By the tracks before and now, A the low bit: A leads outward. */
ISR(PCINT2_vect)
{
	static const int8_t steps[16] = {
		0, 1, -1, MISSED,
		-1, 0, MISSED, 1,
		1, MISSED, 0, -1,
		MISSED, -1, 1, 0,
	};
	uint8_t now = (PIND >> PD2) & 3;
	int8_t step = steps[tracks << 2 | now];

	tracks = now;
	if (step == MISSED)
		missed = 1;
	else
		position += step;
}

uint8_t indicator_waiting(void)
{
	return 0;
}

void indicator_poll(struct taut *t, struct taut_sensor *sensor)
{
	uint32_t tick = 0;
	int32_t count = 0;

	if (!taut_running(t))
		missed = 0;
	if (!taut_due(t, sensor))
		return;
	ATOMIC_BLOCK(ATOMIC_RESTORESTATE) {
		tick = clock_now_locked();
		count = position;
	}
	if (missed)
		taut_fault(t, sensor, tick);
	else
		taut_reading(t, sensor, tick, count);
}
