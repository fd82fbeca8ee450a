#include "taut_inside.h"

const struct taut_channel *taut_channel_at(const struct taut *t, uint8_t index)
{
	return (const struct taut_channel *)taut_pointer_at(&t->config.sheet->channel) + index;
}

void taut_count(uint32_t *counter)
{
	if (*counter != 0xffffffff)
		++*counter;
}

void taut_next(struct taut *t)
{
	t->seq++;
	t->waiting--;
	t->first = (uint8_t)(t->first + 1) & t->config.ring_mask;
}

/* Lets a line wait for its turn. When there is no place the oldest is dropped
 * (SPEC 4.5): what comes late is worth less than what is new, and the numbers in
 * the ring stay in one run. */
static void wait_in_ring(struct taut *t, const struct taut_sample *line)
{
	uint8_t at;

	if (t->waiting > t->config.ring_mask) {
		taut_next(t);
		taut_count(&t->dropped);
	}
	at = (uint8_t)(t->first + t->waiting++) & t->config.ring_mask;
	t->config.ring[at] = *line;
}

uint8_t taut_running(const struct taut *t)
{
	return t->running;
}

void taut_take(struct taut *t, const struct taut_sample *sample)
{
	if (t->running)
		wait_in_ring(t, sample);
}

/* The tick of an edge is that of the first look from which the contact has kept
 * still (SPEC 4.3). */
void taut_look(struct taut *t, struct taut_button *button, char name, uint8_t pushed)
{
	if (pushed == button->down) {
		button->looks = 0;
		return;
	}
	if (!button->looks)
		button->edge.tick = t->now;
	if (++button->looks == TAUT_LOOKS) {
		button->looks = 0;
		button->down = pushed;
		button->edge.name = name;
		button->edge.what = (char)(TAUT_UP - pushed);
		wait_in_ring(t, &button->edge);
	}
}

void taut_poll(struct taut *t)
{
	t->now = t->config.now(t->config.board);
	if (t->now - t->beat.tick >= taut_long_at(&t->config.sheet->beat)) {
		t->beat.tick = t->now;
		taut_take(t, &t->beat);
	}
	while (taut_send(t))
		;
}

void taut_start(struct taut *t, enum taut_cause cause, uint8_t running)
{
	uint8_t i;

	t->running = running;
	if (t->config.boot)
		t->boot = t->config.boot(t->config.board);
	for (i = 0; i < taut_byte_at(&t->config.sheet->channels); i++)
		t->config.per[i] = taut_long_at(&taut_channel_at(t, i)->per);
	taut_describe(t, (uint8_t)(TAUT_WORD_UNKNOWN + cause));
	taut_put(t, '\n'); /* ends what came before the boot (SPEC 2.9) */
}
