/* In the place of sensors: records on the second serial line, each ended by LF.
 *
 *   a 7240     the pressure sensor has a new reading, in counts of channel a
 *   b -131     the display of the indicator sends a reading, in counts of channel b
 *   a x, a f   no answer from the sensor, a fault; b the same
 *   1 d, 1 u   the foot switch goes down, up
 *
 * A reading's instant is that of its record's first byte. Anything else is passed
 * over to the next LF. */
#include "board.h"

#define LONGEST 16

static struct said said[2]; /* NOTHING: taken */
static uint8_t pushed;
static char record[LONGEST];
static uint8_t length;
static uint32_t began;

/* Reads a count of 1 to 7 digits up to the end of the record. */
static uint8_t number(const char *at, const char *end, int32_t *count)
{
	int negative = at != end && *at == '-';
	int32_t value = 0;

	at += negative;
	if (end - at < 1 || end - at > 7)
		return 0;
	for (; at != end; at++) {
		if (*at < '0' || *at > '9')
			return 0;
		value = 10 * value + (*at - '0');
	}
	*count = negative ? -value : value;
	return 1;
}

static void take_record(void)
{
	const char *end = record + length;
	struct said new = { NOTHING, began, 0 };

	if (length < 3 || record[1] != ' ')
		return;
	if (record[0] == '1') {
		if (record[2] == 'd' || record[2] == 'u')
			pushed = record[2] == 'd';
		return;
	}
	if (record[0] != 'a' && record[0] != 'b')
		return;
	if (length == 3 && record[2] == 'x')
		new.what = NO_ANSWER;
	else if (length == 3 && record[2] == 'f')
		new.what = FAULT;
	else if (number(record + 2, end, &new.count))
		new.what = READING;
	if (new.what != NOTHING)
		said[record[0] - 'a'] = new;
}

/* Takes one record, so that none is passed over between two looks. */
void stimulus_poll(void)
{
	while (uart_waiting(STIMULUS)) {
		uint32_t tick;
		char byte = uart_peek(STIMULUS, &tick);

		uart_drop(STIMULUS);
		if (byte == '\n') {
			take_record();
			length = 0;
			return;
		}
		if (!length)
			began = tick;
		if (length < LONGEST)
			record[length++] = byte;
	}
}

struct said stimulus_take(char name)
{
	struct said taken = said[name - 'a'];

	said[name - 'a'].what = NOTHING;
	return taken;
}

uint8_t stimulus_pushed(void)
{
	return pushed;
}
