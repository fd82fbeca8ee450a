#include "taut_inside.h"

static const char words[] TAUT_FLASH =
	"val \0btn \0beat \0down\0up\0"
	"rest\0run\0who\0pace\0echo\0did\0wont\0"
	"fields\0channel\0period\0"
	"unknown\0asked\0power\0reset\0brown\0watchdog\0"
	" boot=";

/* Powers of ten, by subtraction: a division costs five times as much. */
const uint32_t taut_powers[] TAUT_FLASH = { 1000000, 100000, 10000, 1000, 100, 10, 1, 0 };

const char *taut_word(uint8_t word)
{
	const char *at = words;

	while (word)
		if (!taut_char_at(at++))
			word--;
	return at;
}

void taut_put(struct taut *t, char c)
{
	t->config.send(t->config.board, c);
	t->crc = taut_check(t->crc, c);
}

static void space(struct taut *t)
{
	taut_put(t, ' ');
}

static void say(struct taut *t, uint8_t word)
{
	const char *at = taut_word(word);
	char c;

	while ((c = taut_char_at(at++)) != 0)
		taut_put(t, c);
}

char taut_digit(uint8_t low)
{
	low &= 15;
	if (low > 9)
		low = (uint8_t)(low + 'a' - '0' - 10);
	return (char)(low + '0');
}

static void hex_byte(struct taut *t, uint8_t value)
{
	taut_put(t, taut_digit((uint8_t)(value >> 4)));
	taut_put(t, taut_digit(value));
}

static void hex_word(struct taut *t, uint16_t value)
{
	hex_byte(t, (uint8_t)(value >> 8));
	hex_byte(t, (uint8_t)value);
}

static void hex_long(struct taut *t, const uint32_t *value)
{
	hex_word(t, (uint16_t)(*value >> 16));
	hex_word(t, (uint16_t)*value);
}

/* At most 7 digits (SPEC 3.1). */
static void decimal(struct taut *t, int32_t count)
{
	uint32_t value = (uint32_t)count, power;
	const uint32_t *next = taut_powers;
	char least = '1'; /* digit that is put: no leading zero */

	if (count < 0) {
		taut_put(t, '-');
		value = 0 - value;
	}
	while ((power = taut_long_at(next++)) != 0) {
		char digit = '0';

		while (value >= power) {
			value -= power;
			digit++;
			least = '0';
		}
		if (digit >= least || power == 1)
			taut_put(t, digit);
	}
}

static void end(struct taut *t)
{
	uint16_t crc = t->crc;

	taut_put(t, ';');
	hex_word(t, crc);
	taut_put(t, '\n');
}

/* Sends one of the board's texts, marks filled in. */
static void text(struct taut *t, const char *at)
{
	char c;

	while ((c = taut_char_at(at++)) != 0) {
		switch (c) {
		case TAUT_M_NOW:
			hex_long(t, &t->now);
			break;
		case TAUT_M_STATE:
			say(t, (uint8_t)(TAUT_WORD_REST + t->running));
			break;
		case TAUT_M_CAUSE:
			say(t, t->cause);
			if (t->config.boot) {
				say(t, TAUT_WORD_BOOT);
				hex_long(t, &t->boot);
			}
			break;
		case TAUT_M_PER:
			decimal(t, (int32_t)t->config.per[t->describing - 2]);
			break;
		default:
			taut_put(t, c);
		}
	}
}

void taut_describe(struct taut *t, uint8_t cause)
{
	t->cause = cause;
	t->describing = 1;
}

static void describe(struct taut *t)
{
	text(t, t->describing == 1 ? t->config.sheet->text : taut_channel_at(t, (uint8_t)(t->describing - 2))->text);
	if (t->describing++ > taut_byte_at(&t->config.sheet->channels))
		t->describing = 0;
}

static void part(struct taut *t, const char *at, uint8_t n)
{
	while (n--)
		taut_put(t, *at++);
}

static void reply(struct taut *t)
{
	const char *verb = t->command, *token = verb + t->verb_n;
	uint8_t answer = t->answer;

	say(t, answer < TAUT_WORD_WONT ? answer : TAUT_WORD_WONT);
	part(t, token, 3); /* the space before it too */
	space(t);
	if (answer == TAUT_WORD_ECHO)
		hex_long(t, &t->heard);
	else
		part(t, verb, t->verb_n);
	if (answer > TAUT_WORD_WONT) {
		space(t);
		say(t, answer);
	}
	t->answer = 0;
}

/* The oldest line that waits. */
static void numbered(struct taut *t)
{
	const struct taut_sample *line = t->config.ring + t->first;
	char what = line->what;

	if (what == TAUT_BEAT) {
		say(t, TAUT_WORD_BEAT);
	} else {
		say(t, what <= TAUT_UP ? TAUT_WORD_BTN : TAUT_WORD_VAL);
		taut_put(t, line->name);
		space(t);
	}
	hex_word(t, t->seq);
	space(t);
	hex_long(t, &line->tick);
	space(t);
	if (what == TAUT_BEAT) {
		hex_long(t, &t->dropped);
		space(t);
		hex_long(t, &t->refused);
	} else if (what <= TAUT_UP) {
		say(t, (uint8_t)(TAUT_WORD_DOWN - TAUT_DOWN + what));
	} else {
		taut_put(t, what);
		if (what >= 'g' && what <= 'l') { /* good, high, low */
			space(t);
			decimal(t, line->count);
		}
	}
	taut_next(t);
}

/* The description comes before all else. While samples are taken an answer goes
 * before them; at rest what waits goes first (SPEC 7.6). */
uint8_t taut_send(struct taut *t)
{
	uint8_t need = t->describing ? TAUT_LINE : TAUT_SHORT;

	if (t->config.room(t->config.board) < need)
		return 0;
	t->crc = TAUT_CRC;
	if (t->describing)
		describe(t);
	else if (t->answer && (t->running || !t->waiting))
		reply(t);
	else if (t->waiting)
		numbered(t);
	else
		return 0;
	end(t);
	return 1;
}
