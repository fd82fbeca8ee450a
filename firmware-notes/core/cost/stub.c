/* In the core's place: functions that do nothing, two bytes each. */
#include "../taut.h"

void taut_start(struct taut *t, enum taut_cause cause, uint8_t running)
{
	(void)t, (void)cause, (void)running;
}

uint8_t taut_hear(struct taut *t, char byte, uint32_t tick)
{
	(void)t, (void)byte, (void)tick;
	return 0;
}

void taut_lost(struct taut *t, uint8_t n)
{
	(void)t, (void)n;
}

uint8_t taut_running(const struct taut *t)
{
	(void)t;
	return 0;
}

void taut_take(struct taut *t, const struct taut_sample *sample)
{
	(void)t, (void)sample;
}

void taut_look(struct taut *t, struct taut_button *button, char name, uint8_t pushed)
{
	(void)t, (void)button, (void)name, (void)pushed;
}

void taut_poll(struct taut *t)
{
	(void)t;
}
