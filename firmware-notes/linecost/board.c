/* Runs on the simulated board: makes each line between two marks, then hands
 * its bytes out. The harness watches the three general purpose registers. */
#include <avr/io.h>
#include <avr/interrupt.h>
#include <avr/sleep.h>

#include "cases.h"
#include "wire_val.h"

#define ROW(name, channel, status, seq, tick, count) { channel, status, seq, tick, count },

static char line[WIRE_VAL_MAX];

int main(void)
{
	static const struct wire_val cases[] = { CASES(ROW) };
	uint8_t i, k, n;

	GPIOR0 = 1; /* marks with nothing between them: the cost of the marks */
	GPIOR0 = 0;
	for (i = 0; i < sizeof cases / sizeof *cases; i++) {
		GPIOR0 = 1;
		n = wire_val_line(line, &cases[i]);
		GPIOR0 = 0;
		for (k = 0; k < n; k++)
			GPIOR1 = (uint8_t)line[k];
		GPIOR2 = 1; /* this case is done */
	}
	GPIOR0 = 1;
	wire_check(line, 30); /* the longest body */
	GPIOR0 = 0;
	cli();
	sleep_mode(); /* asleep with interrupts off: the end */
	return 0;
}
