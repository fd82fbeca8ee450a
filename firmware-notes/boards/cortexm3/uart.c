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
	uint8_t head, tail, gap;
};

static struct in_ring in[2];
static char out[OUT_SIZE];
static uint32_t out_head, out_tail;
static uint8_t lost;

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

static uint8_t room_in(const struct in_ring *ring)
{
	return (uint8_t)(IN_SIZE - (uint8_t)(ring->head - ring->tail));
}

/* An LF takes the place of the first of the bytes that are lost in a row, so that
 * half a command does not spoil the next one. */
static void lose_one(int n)
{
	if (!in[n].gap)
		in[n].gap = 1;
	else if (n == HOST && lost != 255)
		lost++;
}

static void put_in(struct in_ring *ring, char byte)
{
	ring->byte[ring->head % IN_SIZE] = byte;
	ring->tick[ring->head % IN_SIZE] = clock_now();
	ring->head++;
}

static void byte_in(int n)
{
	struct in_ring *ring = &in[n];

	LINE(n)->interrupt = IN_DONE;
	while (LINE(n)->state & IN_FULL) {
		char byte;

		if (LINE(n)->state & IN_OVERRUN) {
			LINE(n)->state = IN_OVERRUN;
			lose_one(n);
		}
		byte = (char)LINE(n)->data;
		if (ring->gap && room_in(ring) >= 2) {
			put_in(ring, '\n');
			ring->gap = 0;
		}
		if (ring->gap || !room_in(ring))
			lose_one(n);
		else
			put_in(ring, byte);
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
	n = lost;
	lost = 0;
	interrupts_on();
	return n;
}
