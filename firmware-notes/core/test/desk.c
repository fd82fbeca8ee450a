/* A board on a desk: the core compiled for this machine, with a clock, a line and
 * a card that the other end of the pipe turns by hand. One order a line on standard
 * input; each is answered by one line of what the board has sent meanwhile, in hex.
 *
 *   here TEXT                     the sheet's text; {now} {state} {cause} are marks
 *   chan LO HI PER LEAST TEXT     one more channel; {per} is a mark
 *   boot CAUSE RUNNING            a new device, by number of enum taut_cause
 *   id N                          the boot counter's next reading; without it there is none
 *   tick N                        the clock now
 *   room N                        bytes that the line takes from now on, 255: no end
 *   set seq|dropped|refused N     a counter of the device, to meet a vector
 *   hear HEX                      bytes from the host
 *   lost N                        bytes from the host that the board has lost
 *   take NAME STATUS TICK COUNT   a sample
 *   look NAME PUSHED              a look at a button
 *   due NAME                      prints 1 when the sensor's sample is due, else 0
 *   read NAME TICK COUNT          a reading of a sensor; absent, fault: NAME TICK
 *   poll                          once round the board's loop
 *   pass TICKS STEP               polls after every STEP ticks for so long
 *   card FIRST END                from now on the line is a card (see card.h)
 *   stuck 0|1                     the card does not write
 *   flush TICKS                   taut_log_flush
 *   dump                          prints the card's blocks instead, in hex
 */
#include <stdio.h>
#include <stdlib.h>
#include <string.h>

#include "../taut_log.h"
#include "../taut_sensor.h"

#define CHANNELS 26
#define BLOCKS 64

struct desk {
	struct taut device;
	struct taut_channel channel[CHANNELS];
	struct taut_sheet sheet;
	struct taut_sample ring[4];
	struct taut_button button[9];
	struct taut_sensor sensor[CHANNELS];
	uint32_t per[CHANNELS];
	uint32_t tick, id;
	int has_id, room, logging, stuck;
	struct taut_log log;
	char card[BLOCKS][TAUT_BLOCK];
	char sent[1 << 20];
	size_t sent_n;
};

static uint32_t now(void *board)
{
	return ((struct desk *)board)->tick;
}

static uint8_t room(void *board)
{
	struct desk *d = board;

	return d->logging ? taut_log_room(&d->log) : (uint8_t)d->room;
}

static void send(void *board, char byte)
{
	struct desk *d = board;

	if (d->logging) {
		taut_log_send(&d->log, byte);
		return;
	}
	if (d->room == 0 || d->sent_n == sizeof d->sent)
		abort(); /* more than there was room for */
	if (d->room < 255)
		d->room--;
	d->sent[d->sent_n++] = byte;
}

static uint32_t boot(void *board)
{
	return ((struct desk *)board)->id;
}

static uint8_t written(void *card, uint32_t block)
{
	struct desk *d = card;

	return d->card[block][0] != 0 && d->card[block][0] != (char)0xff;
}

static uint8_t write_block(void *card, uint32_t block, const char *bytes)
{
	struct desk *d = card;

	if (d->stuck)
		return 0;
	if (block >= d->log.end || written(card, block))
		abort(); /* beyond the card, or a second time */
	memcpy(d->card[block], bytes, TAUT_BLOCK);
	return 1;
}

/* Copies a text with its marks put in. */
static void marked(char *to, size_t size, const char *text)
{
	static const char *const marks[] = { "{now}", "{state}", "{cause}", "{per}" };
	size_t n = 0, i;

	while (*text && *text != '\n') {
		for (i = 0; i < 4; i++)
			if (!strncmp(text, marks[i], strlen(marks[i])))
				break;
		if (n == size)
			abort();
		to[n++] = (char)(i < 4 ? (int)i + 1 : *text);
		text += i < 4 ? strlen(marks[i]) : 1;
	}
	memset(to + n, 0, size - n);
}

static void hear(struct desk *d, const char *hex)
{
	for (; hex[0] > ' ' && hex[1] > ' '; hex += 2) {
		char digits[3] = { hex[0], hex[1], 0 };
		char byte = (char)strtol(digits, NULL, 16);
		int tries = 0;

		while (!taut_hear(&d->device, byte, d->tick)) {
			taut_poll(&d->device);
			if (++tries == 100)
				return; /* the board's own buffer would overflow */
		}
	}
}

static void start(struct desk *d, int cause, int running)
{
	static const struct taut blank;
	static const struct taut_sensor no_sensor;
	int i;

	d->device = blank;
	memset(d->button, 0, sizeof d->button);
	d->sheet.hz = d->sheet.hz ? d->sheet.hz : 1000000;
	d->sheet.beat = d->sheet.hz - (d->sheet.hz >> 6);
	d->sheet.channel = d->channel;
	d->device.config.sheet = &d->sheet;
	d->device.config.per = d->per;
	d->device.config.ring = d->ring;
	d->device.config.ring_mask = 3;
	d->device.config.board = d;
	d->device.config.now = now;
	d->device.config.room = room;
	d->device.config.send = send;
	d->device.config.boot = d->has_id ? boot : NULL;
	for (i = 0; i < CHANNELS; i++) {
		d->sensor[i] = no_sensor;
		d->sensor[i].name = (char)('a' + i);
	}
	taut_start(&d->device, (enum taut_cause)cause, (uint8_t)running);
}

static void pass(struct desk *d, uint32_t ticks, uint32_t step)
{
	uint32_t gone;

	for (gone = 0; gone < ticks; gone += step) {
		d->tick += step;
		taut_poll(&d->device);
	}
}

static int set_up(struct desk *d, const char *word, const char *rest)
{
	long long a = 0, b = 0;
	char key[8] = "";

	if (!strcmp(word, "here")) {
		marked(d->sheet.text, sizeof d->sheet.text, rest);
	} else if (!strcmp(word, "chan")) {
		struct taut_channel *c = &d->channel[d->sheet.channels++];
		long lo, hi, per, least;
		int n;

		if (sscanf(rest, "%ld %ld %ld %ld %n", &lo, &hi, &per, &least, &n) != 4)
			abort();
		c->lo = (int32_t)lo;
		c->hi = (int32_t)hi;
		c->per = (uint32_t)per;
		c->least = least ? (uint32_t)least : TAUT_OWN_TIME;
		marked(c->text, sizeof c->text, rest + n);
	} else if (!strcmp(word, "set")) {
		sscanf(rest, "%7s %lld", key, &a);
		if (!strcmp(key, "seq"))
			d->device.seq = (uint16_t)a;
		else if (!strcmp(key, "hz"))
			d->sheet.hz = (uint32_t)a;
		else
			*(!strcmp(key, "dropped") ? &d->device.dropped : &d->device.refused) = (uint32_t)a;
	} else if (!strcmp(word, "id")) {
		d->has_id = sscanf(rest, "%lld", &a) == 1;
		d->id = (uint32_t)a;
	} else if (!strcmp(word, "card")) {
		sscanf(rest, "%lld %lld", &a, &b);
		d->logging = 1;
		d->log.card = d;
		d->log.written = written;
		d->log.write = write_block;
		printf("%d", taut_log_open(&d->log, (uint32_t)a, (uint32_t)b));
	} else {
		return 0;
	}
	return 1;
}

static void order(struct desk *d, const char *word, const char *rest)
{
	long long a = 0, b = 0, count = 0;
	char name = 'a', what = 'g';
	struct taut_sample sample;
	size_t i, k;

	if (set_up(d, word, rest))
		return;
	if (!strcmp(word, "take")) {
		sscanf(rest, "%c %c %lld %lld", &name, &what, &a, &count);
		sample.tick = (uint32_t)a;
		sample.count = (int32_t)count;
		sample.name = name;
		sample.what = what;
		taut_take(&d->device, &sample);
		return;
	}
	if (*rest >= 'a' || !strcmp(word, "look"))
		sscanf(rest, "%c %lld %lld", &name, &a, &count);
	else
		sscanf(rest, "%lld %lld", &a, &b);
	if (!strcmp(word, "boot"))
		start(d, (int)a, (int)b);
	else if (!strcmp(word, "tick"))
		d->tick = (uint32_t)a;
	else if (!strcmp(word, "room"))
		d->room = (int)a;
	else if (!strcmp(word, "hear"))
		hear(d, rest);
	else if (!strcmp(word, "lost"))
		taut_lost(&d->device, (uint8_t)a);
	else if (!strcmp(word, "look"))
		taut_look(&d->device, &d->button[name - '1'], name, (uint8_t)a);
	else if (!strcmp(word, "due"))
		printf("%d", taut_due(&d->device, &d->sensor[name - 'a']));
	else if (!strcmp(word, "read"))
		taut_reading(&d->device, &d->sensor[name - 'a'], (uint32_t)a, (int32_t)count);
	else if (!strcmp(word, "absent"))
		taut_absent(&d->device, &d->sensor[name - 'a'], (uint32_t)a);
	else if (!strcmp(word, "fault"))
		taut_fault(&d->device, &d->sensor[name - 'a'], (uint32_t)a);
	else if (!strcmp(word, "poll"))
		taut_poll(&d->device);
	else if (!strcmp(word, "pass"))
		pass(d, (uint32_t)a, (uint32_t)b);
	else if (!strcmp(word, "stuck"))
		d->stuck = (int)a;
	else if (!strcmp(word, "flush"))
		taut_log_flush(&d->log, d->tick, (uint32_t)a);
	else if (!strcmp(word, "dump"))
		for (i = 0; i < BLOCKS; i++)
			for (k = 0; k < TAUT_BLOCK; k++)
				printf("%02x", (unsigned char)d->card[i][k]);
	else
		abort();
}

int main(void)
{
	static struct desk d;
	static char line[65536];
	char word[16];
	size_t i;
	int n;

	d.room = 255;
	while (fgets(line, sizeof line, stdin)) {
		if (sscanf(line, "%15s %n", word, &n) != 1)
			abort();
		order(&d, word, line + n);
		for (i = 0; i < d.sent_n; i++)
			printf("%02x", (unsigned char)d.sent[i]);
		d.sent_n = 0;
		printf("\n");
		fflush(stdout);
	}
	return 0;
}
