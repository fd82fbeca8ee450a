/* The parts of this board, for main.c. It is the mps2-an385 as QEMU makes it: a
 * Cortex-M3 at 25 MHz without sensors. What they would have said comes in on the
 * second serial line (stimulus.c). */
#ifndef BOARD_H
#define BOARD_H

#include <stdint.h>

#include "../../core/taut_sensor.h"

#define CLOCK_HZ 25000000u

/* A device register. */
#define REGISTER(address) (*(volatile uint32_t *)(address))

void interrupts_off(void);
void interrupts_on(void);
void interrupt_enable(uint32_t number); /* of the board's own */

/* clock.c: microseconds since boot, 32 bits, from a free-running timer */
void clock_start(void);
uint32_t clock_now(void);        /* also in an interrupt; at least once in 171 s */
uint8_t clock_millisecond(void); /* 1 once in each */
uint8_t clock_waiting(void);     /* 1: a new one has begun */

/* uart.c: the two serial lines, 115200 baud, with a ring each way */
enum { HOST, STIMULUS };
void uart_start(void);
uint8_t uart_room(void);               /* to the host */
void uart_send(char byte);             /* to the host */
uint8_t uart_waiting(int line);        /* bytes that have come in */
char uart_peek(int line, uint32_t *tick); /* the oldest, and when it came in */
void uart_drop(int line);              /* done with it */
uint8_t uart_lost(void);               /* bytes of the host lost and not told yet; the rest of more than 255 next time */

/* stimulus.c: what the sensors last said */
enum { NOTHING, READING, NO_ANSWER, FAULT };
struct said {
	uint8_t what;
	uint32_t tick;
	int32_t count;
};
void stimulus_poll(void);
struct said stimulus_take(char name); /* 'a' or 'b'; each reading once */
uint8_t stimulus_pushed(void);        /* the foot switch */

#endif
