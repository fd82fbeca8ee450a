#include <avr/interrupt.h>
#include <avr/io.h>
#include <avr/sleep.h>
#include <avr/wdt.h>

#include "board.h"

/* 1: logs without a host from the boot on, to a recorder on the serial line. */
#ifndef RUNNING
#define RUNNING 0
#endif
#ifndef SERIAL
#define SERIAL "0001"
#endif

/* A sum of 64 readings is 65536 V / supply. 0.5 V is count 6554, and a count is
 * 1500 psi / (0.8 x 65536). Below 0.25 V the wire is broken, above 4.75 V shorted. */
#define BROKEN 3277
#define SHORTED 62259
static const struct taut_channel channels[2] TAUT_FLASH = {
	TAUT_CHANNEL("a", "pressure [psi] 2861023e-8", 5855, 58982, 20000, 8000, " zero=6554"),
	TAUT_CHANNEL("b", "extension mm 1e-3", -25000, 25000, INDICATOR_PER, INDICATOR_LEAST, INDICATOR_KEYS),
};
static const struct taut_sheet sheet TAUT_FLASH = TAUT_SHEET(channels, 2, "avr-two", SERIAL, 1000000);

static uint32_t now(void *board)
{
	(void)board;
	return clock_now();
}

static uint8_t room(void *board)
{
	(void)board;
	return uart_room();
}

static void send(void *board, char byte)
{
	(void)board;
	uart_send(byte);
}

static uint32_t boot(void *board)
{
	(void)board;
	return boots_raise();
}

static uint32_t periods[2];
static struct taut_sample ring[8];
static struct taut device = { .config = { &sheet, periods, ring, 7, 0, now, room, send, boot } };
static struct taut_sensor pressure = { .name = 'a' }, indicator = { .name = 'b' };
static struct taut_button foot;

/* The cause must be read, and the watchdog stopped, before anything else. A
 * bootloader may have cleared it: then it is unknown. */
static uint8_t reset_flags __attribute__((section(".noinit")));
void read_reset_flags(void) __attribute__((naked, used, section(".init3")));
void read_reset_flags(void)
{
	reset_flags = MCUSR;
	MCUSR = 0;
	wdt_disable();
}

static enum taut_cause cause(void)
{
	if (reset_flags & _BV(WDRF))
		return TAUT_WATCHDOG;
	if (reset_flags & _BV(PORF)) /* a supply that rises slowly sets BORF as well */
		return TAUT_POWER;
	if (reset_flags & _BV(BORF))
		return TAUT_BROWN;
	if (reset_flags & _BV(EXTRF))
		return TAUT_RESET;
	return TAUT_UNKNOWN;
}

/* Only what waits now: in a flood there is always more, and the loop must go on. */
static void hear_host(void)
{
	uint8_t n = uart_waiting();

	taut_lost(&device, uart_lost());
	while (n-- && taut_hear(&device, uart_peek(), uart_line_tick()))
		uart_drop();
}

static void read_pressure(void)
{
	uint16_t sum;
	uint32_t tick;

	if (pressure_done(&sum, &tick)) {
		if (sum < BROKEN || sum > SHORTED)
			taut_fault(&device, &pressure, tick);
		else
			taut_reading(&device, &pressure, tick, (int32_t)sum);
	}
	if (taut_due(&device, &pressure))
		pressure_begin();
}

static uint8_t work(void)
{
	return clock_waiting() || uart_waiting() || pressure_waiting() || indicator_waiting();
}

/* Sleeps until there is work. Most interrupts (a byte has gone out, one reading of
 * the 64 is done) make none. One that comes after the look still wakes: the
 * instruction after sei is carried out before it. */
static void nap(void)
{
	cli();
	while (!work()) {
		sleep_enable();
		sei();
		sleep_cpu();
		sleep_disable();
		cli();
	}
	sei();
}

int main(void)
{
	PORTD = _BV(PD0) | _BV(PD4); /* pull-ups: the host may be unplugged */
	PRR = _BV(PRTWI) | _BV(PRTIM2) | _BV(PRSPI);
	ACSR = _BV(ACD);
	SMCR = 0; /* idle: timers, converter and serial line go on */
	clock_start();
	uart_start();
	pressure_start();
	indicator_start();
	sei();
	taut_start(&device, cause(), RUNNING);
	wdt_enable(WDTO_1S);
	for (;;) {
		wdt_reset();
		hear_host();
		if (clock_millisecond())
			taut_look(&device, &foot, '1', !(PIND & _BV(PD4)));
		read_pressure();
		indicator_poll(&device, &indicator);
		taut_poll(&device);
		nap();
	}
}
