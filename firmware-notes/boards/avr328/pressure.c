#include <avr/interrupt.h>
#include <avr/io.h>
#include <util/atomic.h>

#include "board.h"

/* 64 readings of 10 bits, 6.8 ms: the sum is in 65536ths of the supply. Noise of a
 * count or more, which every real line has, makes the sum finer than one reading. */
#define READINGS 64

static volatile uint16_t sum;
static volatile uint8_t left;
static volatile uint8_t done;
static volatile uint32_t first, last;

void pressure_start(void)
{
	DIDR0 = _BV(ADC0D);
	ADMUX = _BV(REFS0); /* AVCC, PC0 */
	ADCSRA = _BV(ADEN) | _BV(ADIE) | _BV(ADPS2) | _BV(ADPS1) | _BV(ADPS0); /* 125 kHz */
}

void pressure_begin(void)
{
	if (left)
		return;
	sum = 0;
	done = 0;
	left = READINGS;
	first = clock_now();
	ADCSRA |= _BV(ADSC);
}

ISR(ADC_vect)
{
	sum += ADC;
	if (--left) {
		ADCSRA |= _BV(ADSC);
	} else {
		last = clock_now_locked();
		done = 1;
	}
}

uint8_t pressure_done(uint16_t *total, uint32_t *tick)
{
	if (!done)
		return 0;
	done = 0;
	*total = sum;
	*tick = first + ((last - first) >> 1);
	return 1;
}

uint8_t pressure_waiting(void)
{
	return done;
}
