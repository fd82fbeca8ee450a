#include "board.h"

struct registers {
	volatile uint32_t data, state, control, interrupt, divisor;
};

#define LINE(n) ((struct registers *)(0x40004000 + 0x1000 * (n)))

enum { OUT_FULL = 1, IN_FULL = 2, IN_OVERRUN = 8 };             /* state */
enum { OUT_ON = 1, IN_ON = 2, OUT_INTERRUPT = 4, IN_INTERRUPT = 8 }; /* control */
enum { OUT_DONE = 1, IN_DONE = 2 };                             /* interrupt */

/* Powers of two; the host's line waits for answers, so it needs little. */
#define IN_SIZE 128
#define OUT_SIZE 1024

struct in_ring {
	char byte[IN_SIZE];
	uint32_t tick[IN_SIZE];
	uint32_t lost;   /* bytes, and not told yet */
	uint8_t head, tail;
	uint8_t spoilt;  /* 1: the line that is coming in has lost a byte */
};

static struct in_ring in[2];
static char out[OUT_SIZE];
static uint32_t out_head, out_tail;

void host_in_interrupt(void);
void host_out_interrupt(void);
void stimulus_in_interrupt(void);

void uart_start(void)
{
	int n;

	for (n = 0; n < 2; n++)
		LINE(n)->divisor = CLOCK_HZ / 115200;
	LINE(HOST)->control = OUT_ON | IN_ON | OUT_INTERRUPT | IN_INTERRUPT;
	LINE(STIMULUS)->control = IN_ON | IN_INTERRUPT;
	interrupt_enable(0);
	interrupt_enable(1);
	interrupt_enable(2);
}

static void put_in(struct in_ring *ring, char byte)
{
	ring->byte[ring->head % IN_SIZE] = byte;
	ring->tick[ring->head % IN_SIZE] = clock_now();
	ring->head++;
}

static int between_lines(const struct in_ring *ring)
{
	return ring->byte[(uint8_t)(ring->head - 1) % IN_SIZE] == '\n';
}

/* Of a line that has lost a byte no more is taken up to its LF. What the ring has of
 * it gets a byte that no command has in place of the first lost one, and its LF: so
 * the core refuses it and counts it. All else is counted here. */
static void lose_one(struct in_ring *ring)
{
	if (ring->spoilt || between_lines(ring))
		ring->lost++;
	else
		put_in(ring, '\0');
	ring->spoilt = 1;
}

/* A line that has been begun keeps two places, for what lose_one puts and for its LF. */
static void take_in(struct in_ring *ring, char byte)
{
	uint8_t room = (uint8_t)(IN_SIZE - (uint8_t)(ring->head - ring->tail));

	if (byte != '\n') {
		if (ring->spoilt || room < 3)
			lose_one(ring);
		else
			put_in(ring, byte);
		return;
	}
	if (ring->spoilt && between_lines(ring))
		ring->lost++;
	else if (room) /* there is, but for an empty line, which does not count */
		put_in(ring, '\n');
	ring->spoilt = 0;
}

/* An overrun has lost one byte or more; how many the part does not say, so one is
 * counted. */
static void byte_in(int n)
{
	LINE(n)->interrupt = IN_DONE;
	while (LINE(n)->state & IN_FULL) {
		if (LINE(n)->state & IN_OVERRUN) {
			LINE(n)->state = IN_OVERRUN;
			lose_one(&in[n]);
		}
		take_in(&in[n], (char)LINE(n)->data);
	}
}

void host_in_interrupt(void)
{
	byte_in(HOST);
}

void stimulus_in_interrupt(void)
{
	byte_in(STIMULUS);
}

static void push_out(void)
{
	while (out_head != out_tail && !(LINE(HOST)->state & OUT_FULL))
		LINE(HOST)->data = (uint8_t)out[out_tail++ % OUT_SIZE];
}

void host_out_interrupt(void)
{
	LINE(HOST)->interrupt = OUT_DONE;
	push_out();
}

uint8_t uart_room(void)
{
	uint32_t room;

	interrupts_off();
	push_out();
	room = OUT_SIZE - (out_head - out_tail);
	interrupts_on();
	return (uint8_t)(room > 255 ? 255 : room);
}

void uart_send(char byte)
{
	interrupts_off();
	out[out_head++ % OUT_SIZE] = byte;
	push_out();
	interrupts_on();
}

uint8_t uart_waiting(int line)
{
	volatile const struct in_ring *ring = &in[line];

	return (uint8_t)(ring->head - ring->tail);
}

char uart_peek(int line, uint32_t *tick)
{
	const struct in_ring *ring = &in[line];

	*tick = ring->tick[ring->tail % IN_SIZE];
	return ring->byte[ring->tail % IN_SIZE];
}

void uart_drop(int line)
{
	interrupts_off();
	in[line].tail++;
	interrupts_on();
}

uint8_t uart_lost(void)
{
	uint8_t n;

	interrupts_off();
	n = (uint8_t)(in[HOST].lost < 255 ? in[HOST].lost : 255);
	in[HOST].lost -= n;
	interrupts_on();
	return n;
}
