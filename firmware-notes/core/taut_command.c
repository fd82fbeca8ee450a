#include "taut_inside.h"

void taut_lost(struct taut *t, uint8_t n)
{
	while (n--)
		taut_count(&t->refused);
}

/* Checks the frame of n bytes (SPEC 2.1, 2.5, 2.6). */
static uint8_t framed(struct taut *t, uint8_t n)
{
	const char *at = t->command;
	uint16_t crc = TAUT_CRC;
	char c;

	t->command[n] = ';'; /* ends the search */
	while ((c = *at++) != ';') {
		if (c < ' ' || c > '~')
			return 0;
		crc = taut_check(crc, c);
	}
	if ((uint8_t)(at - t->command + 4) != n)
		return 0;
	for (n = 4; n; n--) {
		if (*at++ != taut_digit((uint8_t)(crc >> 12)))
			return 0;
		crc = (uint16_t)(crc << 4);
	}
	return 1;
}

static uint8_t is_hex(char c)
{
	if (c >= 'a')
		return c <= 'f';
	return (uint8_t)(c - '0') < 10;
}

/* 1 when the body starts with a word and a token (SPEC 7.3). */
static uint8_t worded(struct taut *t)
{
	const char *at = t->command;

	while (*at >= 'a' && *at <= 'z')
		at++;
	t->verb_n = (uint8_t)(at - t->command);
	if (t->verb_n < 2 || t->verb_n > 8 || *at != ' ')
		return 0;
	if (!is_hex(at[1]) || !is_hex(at[2]))
		return 0;
	if (at[3] != ' ' && at[3] != ';')
		return 0;
	return 1;
}

/* The word of the verb that the first n bytes are; a higher one if they are none. */
static uint8_t verb(const struct taut *t, uint8_t n)
{
	const char *flash = taut_word(TAUT_WORD_REST);
	uint8_t word;

	for (word = TAUT_WORD_REST; word <= TAUT_WORD_ECHO; word++) {
		uint8_t i = 0, same = n;
		char c;

		while ((c = taut_char_at(flash++)) != 0)
			if (t->command[i++] != c)
				same = 0;
		if (same == i)
			break;
	}
	return word;
}

/* Reads " a 20000;" and sets the channel's period. */
static uint8_t pace(struct taut *t, const char *at)
{
	uint8_t index = (uint8_t)(at[1] - 'a');
	const uint32_t *power = taut_powers + 7;
	const char *first = at + 3, *end = first;
	uint32_t per = 0;

	if (*at != ' ' || index > 25 || at[2] != ' ' || *first == '0')
		return TAUT_WORD_FIELDS;
	while (*end >= '0' && *end <= '9')
		end++;
	if (*end != ';' || (uint8_t)(end - first - 1) > 6)
		return TAUT_WORD_FIELDS;
	while (end != first) {
		char digit = *--end;
		uint32_t weight = taut_long_at(--power);

		while (digit-- > '0')
			per += weight;
	}
	if (index >= taut_byte_at(&t->config.sheet->channels))
		return TAUT_WORD_CHANNEL;
	if (per < taut_long_at(&taut_channel_at(t, index)->least))
		return TAUT_WORD_PERIOD;
	t->config.per[index] = per;
	return TAUT_WORD_DID;
}

/* Carries out a command. Returns the answer. */
static uint8_t obey(struct taut *t)
{
	const char *at = t->command + t->verb_n + 3;
	uint8_t word = verb(t, t->verb_n);

	if (word > TAUT_WORD_ECHO)
		return TAUT_WORD_UNKNOWN;
	if (word == TAUT_WORD_PACE)
		return pace(t, at);
	if (*at != ';')
		return TAUT_WORD_FIELDS;
	if (word == TAUT_WORD_ECHO)
		return TAUT_WORD_ECHO;
	if (word == TAUT_WORD_WHO)
		taut_describe(t, TAUT_WORD_ASKED);
	else
		t->running = (uint8_t)(word - TAUT_WORD_REST);
	return TAUT_WORD_DID;
}

/* Takes the line that has ended. Returns how many of its bytes are refused. */
static uint8_t line_in(struct taut *t)
{
	uint8_t n = t->command_n;

	if (n && t->command[n - 1] == '\r')
		n--;
	if (!n)
		return 0;
	if (verb(t, n) == TAUT_WORD_WHO)
		taut_describe(t, TAUT_WORD_ASKED);
	else if (framed(t, n) && worded(t))
		t->answer = obey(t);
	else
		return (uint8_t)(t->command_n + 1);
	return 0;
}

uint8_t taut_hear(struct taut *t, char byte, uint32_t tick)
{
	uint8_t lost = 1;

	if (t->answer || t->describing)
		return 0;
	if (t->command_n <= TAUT_COMMAND) {
		if (byte == '\n') {
			t->heard = tick;
			lost = line_in(t);
		} else if (t->command_n < TAUT_COMMAND) {
			t->command[t->command_n++] = byte;
			return 1;
		} else {
			lost = ++t->command_n; /* too long, from here to the LF */
		}
	}
	if (byte == '\n')
		t->command_n = 0;
	taut_lost(t, lost);
	return 1;
}
