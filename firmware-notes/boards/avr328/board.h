/* The parts of this board, for main.c. All but the interrupts run from its loop.
 *
 * ATmega328P at 16 MHz, 5 V. Pins:
 *   PD0, PD1  serial line to the host
 *   PC0       pressure: ratiometric, 0.5 to 4.5 V for 0 to 1500 psi, from the same 5 V
 *             that AVCC has
 *   PD2, PD3  indicator: clock and data, or the two tracks A and B of a scale
 *   PD4       foot switch to ground
 * No output pin is ever written after the start. */
#ifndef BOARD_H
#define BOARD_H

#include <stdint.h>

#include "../../core/taut_sensor.h"

/* clock.c: microseconds since boot, 32 bits, from 16 bits of timer 1 */
void clock_start(void);
uint32_t clock_now(void);
uint32_t clock_now_locked(void); /* in an interrupt, or with them off */
uint8_t clock_millisecond(void); /* 1 once in each */
uint8_t clock_waiting(void);     /* 1: a new one has begun */

/* uart.c: the serial line, BAUD, with a ring each way */
void uart_start(void);
uint8_t uart_room(void);
void uart_send(char byte);
uint8_t uart_waiting(void);      /* bytes that have come in */
char uart_peek(void);            /* the oldest of them */
void uart_drop(void);            /* done with it */
uint32_t uart_line_tick(void);   /* at which the last LF came in */
uint8_t uart_lost(void);         /* bytes lost and not told yet; the rest of more than 255 next time */

/* boots.c: the boot counter, in EEPROM */
uint32_t boots_raise(void);

/* pressure.c: the converter, 64 readings added up */
void pressure_start(void);
void pressure_begin(void);       /* the next sum */
/* 1 when a sum is done: 0 to 65472, and the tick in the middle of it. Once. */
uint8_t pressure_done(uint16_t *sum, uint32_t *tick);

uint8_t pressure_waiting(void);  /* 1: a sum is there to be taken */

/* indicator_clocked.c or indicator_quadrature.c */
#ifdef QUADRATURE
#define INDICATOR_PER 20000
#define INDICATOR_LEAST 2000
#define INDICATOR_KEYS " shows=truncated"
#else
#define INDICATOR_PER 100000
#define INDICATOR_LEAST 0
#define INDICATOR_KEYS " shows=rounded"
#endif
void indicator_start(void);
void indicator_poll(struct taut *t, struct taut_sensor *sensor); /* takes its samples */
uint8_t indicator_waiting(void); /* 1: a reading is there to be taken */

#endif
