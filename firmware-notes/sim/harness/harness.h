/* What the harness's files share. One simulated board, from power-on to the end. */
#ifndef HARNESS_H
#define HARNESS_H

#include <signal.h>
#include <stdint.h>

#include <simavr/sim_avr.h>

enum { LINE_FD = 3, STIMULUS_FD = 4 };
enum { CYCLES_PER_US = 16, CLOCK_HZ = 16000000 };

/* PD2, PD3: the indicator's clock and data, or its two tracks; PD4: the foot switch. */
enum { DRIVEN_PINS = 0x1c };

/* One record of the stimulus. Its forms, one to a line, times in microseconds since
 * the first power-on, never falling:
 *
 *   volt US UV SLOPE  from US on the voltage at PC0 is UV microvolts, and rises by
 *                     SLOPE microvolts a second
 *   pins US LEVELS    pins of port D as two hex digits; from US on
 *   host US HEX       bytes from the host, at the speed of the line, from US on
 *   boot US CAUSE     the board boots: power or reset
 *   end US            the simulation ends
 *
 * When the stream ends, all stays as it is. */
enum kind { NOTHING, VOLT, PINS, HOST, BOOT, END };

struct record {
	enum kind kind;
	uint64_t cycle; /* since the first power-on */
	int64_t value, slope;
	uint8_t bytes[64];
	int bytes_n;
};

enum { QUEUE = 4096, BACKLOG = 1 << 16 };

struct harness {
	avr_t *avr;
	uint64_t base;         /* cycles before the last boot; the simulator starts at 0 again */
	uint64_t last;         /* what its counter was when it was looked at last */
	volatile sig_atomic_t *quit;

	/* stimulus.c */
	struct record queue[QUEUE];
	unsigned head, tail;
	char text[8192];
	int text_at, text_n, text_over;

	/* front.c */
	uint64_t volt_cycle; /* of the last volt record */
	int64_t volt_uv, slope_uv_s;
	double dither_uv;
	uint64_t random;
	uint8_t levels;
	avr_irq_t *adc;
	avr_irq_t *pin[8];
	unsigned long conversions, edges;

	/* serial.c */
	avr_irq_t *to_board;
	int xon;
	uint8_t in[BACKLOG];
	unsigned in_at, in_n;
	uint8_t out[4096];
	unsigned out_n;
	unsigned long sent, received, waited; /* waited: most cycles between a byte and its interrupt */
	uint64_t byte_in;                     /* when that which waits came in, or 0 */
	int hung_up;

	int boots, ended;
};

/* Cycles since the first power-on. */
uint64_t harness_cycle(struct harness *h);

/* stimulus.c */

/* Reads until a record later than cycle is in the queue, or the stream has ended. It
 * waits for the other end. Returns 0 on a record that cannot be read. */
int stimulus_ahead(struct harness *h, uint64_t cycle);
struct record *stimulus_first(struct harness *h); /* NULL: none is waiting */
void stimulus_done(struct harness *h);            /* with the first */
int stimulus_full(const struct harness *h);

/* front.c: converter and pins */
void front_attach(struct harness *h);
void front_boot(struct harness *h);               /* after each boot of the simulator */
void front_volt(struct harness *h, const struct record *r);
void front_pins(struct harness *h, uint8_t levels);
double front_random(struct harness *h);           /* evenly between 0 and 1 */

/* serial.c: the line */
void serial_attach(struct harness *h);
void serial_boot(struct harness *h);
void serial_give(struct harness *h, const uint8_t *bytes, int n);
void serial_turn(struct harness *h);              /* both ways, without waiting to read */

#endif
