/* What the core's own files share. Not for the board. */
#ifndef TAUT_INSIDE_H
#define TAUT_INSIDE_H

#include "taut.h"

/* The words of the wire; the order is that of the list in taut_line.c. Causes
 * stand in the order of enum taut_cause. An answer that is owed is told by a word:
 * did, echo, or the reason of a refusal. */
enum taut_word {
	TAUT_WORD_VAL, TAUT_WORD_BTN, TAUT_WORD_BEAT, TAUT_WORD_DOWN, TAUT_WORD_UP,
	TAUT_WORD_REST, TAUT_WORD_RUN, TAUT_WORD_WHO, TAUT_WORD_PACE, TAUT_WORD_ECHO,
	TAUT_WORD_DID, TAUT_WORD_WONT,
	TAUT_WORD_FIELDS, TAUT_WORD_CHANNEL, TAUT_WORD_PERIOD, TAUT_WORD_UNKNOWN, TAUT_WORD_ASKED,
	TAUT_WORD_BOOT = TAUT_WORD_UNKNOWN + TAUT_WATCHDOG + 1
};

/* The marks in the board's texts, as numbers. */
enum taut_mark { TAUT_M_NOW = 1, TAUT_M_STATE, TAUT_M_CAUSE, TAUT_M_PER };

/* What the lines that are no samples have in the place of a status. */
enum taut_what { TAUT_BEAT, TAUT_DOWN, TAUT_UP };

/* taut.c */

const struct taut_channel *taut_channel_at(const struct taut *t, uint8_t index);
void taut_count(uint32_t *counter); /* one more, held at ffffffff (SPEC 5.5) */
void taut_next(struct taut *t);     /* done with the oldest line; its number is used up */

/* Goes on with the check of SPEC 2.6; it begins with TAUT_CRC. A byte at a time, in
 * steps of eight bits; the four bits that feed back twice are folded in first. */
#define TAUT_CRC 0xffffu
static inline uint16_t taut_check(uint16_t crc, char c)
{
	uint8_t x = (uint8_t)((uint8_t)(crc >> 8) ^ (uint8_t)c), high;

	x = (uint8_t)(x ^ (x >> 4));
	high = (uint8_t)((uint8_t)crc ^ (uint8_t)(x << 4) ^ (x >> 3));
	return (uint16_t)(high << 8 | (uint8_t)(x ^ (uint8_t)(x << 5)));
}

/* taut_line.c: what is sent */

/* Sends the next line that there is room for. Returns 0 when there is none. */
uint8_t taut_send(struct taut *t);

/* Begins to describe the board: here, then its channels. */
void taut_describe(struct taut *t, uint8_t cause);

void taut_put(struct taut *t, char c);
char taut_digit(uint8_t low);        /* lower-case hex, of the low four bits */
const char *taut_word(uint8_t word); /* where it begins, in flash */
extern const uint32_t taut_powers[]; /* of ten, from 1000000 down to 1, then 0, in flash */

#endif
