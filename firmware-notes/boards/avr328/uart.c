#include <avr/interrupt.h>
#include <avr/io.h>
#include <util/atomic.h>

#include "board.h"

#if BAUD == 115200
#define DIVISOR 16 /* 117647: 2.1 % fast, within what a receiver takes */
#elif BAUD == 500000
#define DIVISOR 3 /* exact */
#else
#error "BAUD is 115200 or 500000"
#endif

#define IN_SIZE 64 /* a power of two */

static volatile char in[IN_SIZE], out[256];
static volatile uint8_t in_head, in_tail, out_head, out_tail; /* head: where the next goes */
static uint8_t spoilt; /* 1: the line that is coming in has lost a byte */
static volatile uint16_t lost;
static volatile uint32_t line_tick;

void uart_start(void)
{
	UCSR0A = _BV(U2X0);
	UBRR0 = DIVISOR;
	UCSR0C = _BV(UCSZ01) | _BV(UCSZ00);
	UCSR0B = _BV(RXEN0) | _BV(TXEN0) | _BV(RXCIE0);
}

static void put(char byte)
{
	in[in_head++ & (IN_SIZE - 1)] = byte;
}

static uint8_t between_lines(void)
{
	return in[(uint8_t)(in_head - 1) & (IN_SIZE - 1)] == '\n';
}

/* Of a line that has lost a byte no more is taken up to its LF. What the ring has of
 * it gets a byte that no command has in place of the first lost one, and its LF: so
 * the core refuses it and counts it. All else is counted here. */
static void lose_one(void)
{
	if (spoilt || between_lines())
		lost++;
	else
		put('\0');
	spoilt = 1;
}

/* The error bits belong to the byte that is read after them; both must be read, or
 * the interrupt comes again at once. An overrun has lost one byte or more, before this
 * one; the part does not say how many, so one is counted. A line that has been begun
 * keeps two places, for what lose_one puts and for its LF. */
ISR(USART_RX_vect)
{
	uint8_t errors = UCSR0A;
	char byte = (char)UDR0;
	uint8_t room = (uint8_t)(IN_SIZE - (uint8_t)(in_head - in_tail));

	if (errors & _BV(DOR0))
		lose_one();
	if (byte != '\n') {
		if (spoilt || room < 3)
			lose_one();
		else
			put(byte);
		return;
	}
	if (spoilt && between_lines()) {
		lost++;
	} else if (room) { /* there is, but for an empty line, which does not count */
		put('\n');
		line_tick = clock_now_locked();
	}
	spoilt = 0;
}

ISR(USART_UDRE_vect)
{
	if (out_head == out_tail)
		UCSR0B &= (uint8_t)~_BV(UDRIE0);
	else
		UDR0 = (uint8_t)out[out_tail++];
}

uint8_t uart_room(void)
{
	return (uint8_t)(255 - (uint8_t)(out_head - out_tail));
}

void uart_send(char byte)
{
	out[out_head] = byte;
	out_head++;
	ATOMIC_BLOCK(ATOMIC_RESTORESTATE)
		UCSR0B |= _BV(UDRIE0);
}

uint8_t uart_waiting(void)
{
	return (uint8_t)(in_head - in_tail);
}

char uart_peek(void)
{
	return in[in_tail & (IN_SIZE - 1)];
}

void uart_drop(void)
{
	in_tail++;
}

uint32_t uart_line_tick(void)
{
	uint32_t tick;

	ATOMIC_BLOCK(ATOMIC_RESTORESTATE)
		tick = line_tick;
	return tick;
}

uint8_t uart_lost(void)
{
	uint8_t n;

	ATOMIC_BLOCK(ATOMIC_RESTORESTATE) {
		n = (uint8_t)(lost < 255 ? lost : 255);
		lost = (uint16_t)(lost - n);
	}
	return n;
}
