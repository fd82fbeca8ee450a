#include "board.h"

#ifndef RUNNING
#define RUNNING 0 /* 1: logs without a host from the boot on */
#endif
#ifndef SERIAL
#define SERIAL "0002"
#endif

static const struct taut_channel channels[2] TAUT_FLASH = {
	TAUT_CHANNEL("a", "pressure [psi] 5e-2", -400, 30000, 20000, 1000, ""),
	TAUT_CHANNEL("b", "extension mm 1e-3", -25000, 25000, 100000, 0, " shows=rounded"),
};
static const struct taut_sheet sheet TAUT_FLASH = TAUT_SHEET(channels, 2, "m3-two", SERIAL, 1000000);

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

/* This board has no memory that outlives a loss of power, so no boot counter: its
 * host knows a boot by a here that it did not ask for (SPEC 4.8). */
static uint32_t periods[2];
static struct taut_sample ring[32];
static struct taut device = { .config = { &sheet, periods, ring, 31, 0, now, room, send, 0 } };
static struct taut_sensor pressure = { .name = 'a' }, indicator = { .name = 'b' };
static struct taut_button foot;

/* Only what waits now: in a flood there is always more, and the loop must go on. */
static void hear_host(void)
{
	uint8_t n = uart_waiting(HOST);
	uint32_t tick;

	taut_lost(&device, uart_lost());
	while (n--) {
		char byte = uart_peek(HOST, &tick);

		if (!taut_hear(&device, byte, tick))
			break;
		uart_drop(HOST);
	}
}

static void pass_on(struct taut_sensor *sensor, const struct said *said)
{
	if (said->what == READING)
		taut_reading(&device, sensor, said->tick, said->count);
	else if (said->what == NO_ANSWER)
		taut_absent(&device, sensor, said->tick);
	else if (said->what == FAULT)
		taut_fault(&device, sensor, said->tick);
}

/* Ticks after which a sensor that is asked has given no answer. */
#define PATIENCE 250000u

/* The pressure sensor is asked when its sample is due. What it says is told once, and
 * not when it is old. */
static void ask_pressure(void)
{
	static struct said newest;
	static uint32_t asked;
	static uint8_t asking;
	struct said said = stimulus_take('a');

	if (said.what != NOTHING)
		newest = said;
	else if (clock_now() - newest.tick > PATIENCE)
		newest.what = NOTHING;
	if (taut_due(&device, &pressure) && !asking) {
		asking = 1;
		asked = clock_now();
	}
	if (asking && newest.what != NOTHING) {
		pass_on(&pressure, &newest);
		newest.what = NOTHING;
		asking = 0;
	} else if (asking && clock_now() - asked > PATIENCE) {
		taut_absent(&device, &pressure, clock_now());
		asking = 0;
	}
}

/* The indicator sends in its own time. */
static void listen_to_indicator(void)
{
	struct said said = stimulus_take('b');

	pass_on(&indicator, &said);
	if (taut_due(&device, &indicator))
		taut_absent(&device, &indicator, clock_now());
}

/* Sleeps until there is work. With interrupts off one still wakes it; it is served
 * when they are on again. */
static void nap(void)
{
	interrupts_off();
	if (!clock_waiting() && !uart_waiting(HOST) && !uart_waiting(STIMULUS))
		__asm volatile("wfi");
	interrupts_on();
}

int main(void)
{
	clock_start();
	uart_start();
	interrupts_on();
	taut_start(&device, TAUT_UNKNOWN, RUNNING); /* this board cannot tell the cause */
	for (;;) {
		hear_host();
		if (clock_millisecond())
			taut_look(&device, &foot, '1', stimulus_pushed());
		stimulus_poll();
		ask_pressure();
		listen_to_indicator();
		taut_poll(&device);
		nap();
	}
}
