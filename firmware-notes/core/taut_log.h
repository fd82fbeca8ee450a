/* A logger: the same lines, written to a card block by block, without a host and
 * without a file system (SPEC 10). Its room and send go into the core's config in
 * the place of a serial line's:
 *
 *     static uint8_t room(void *board) { return taut_log_room(&log); }
 *     static void send(void *board, char byte) { taut_log_send(&log, byte); }
 *
 * taut_start is called with running set. The lines stand one after the other from
 * the first block on. A block that is not full when it is written is filled up
 * with LF: empty lines, which every reader passes over. Each block is written once,
 * so that a loss of power cannot spoil one that was good.
 *
 * A card must be wiped before its first use: the end of the log is found by the
 * first block that begins with 00 or ff. What was read off a card, block by block,
 * becomes a text file by leaving out those two bytes:
 *
 *     tr -d '\000\377' < CARD > visit.txt */
#ifndef TAUT_LOG_H
#define TAUT_LOG_H

#include "taut.h"

#define TAUT_BLOCK 512

struct taut_log {
	void *card; /* handed to both */
	/* Reads a block's first byte. 1: neither 00 nor ff, so it is written. */
	uint8_t (*written)(void *card, uint32_t block);
	/* Writes a block of TAUT_BLOCK bytes. Returns 0 when it has not: it will be
	 * asked again, and lines are dropped whole meanwhile. */
	uint8_t (*write)(void *card, uint32_t block, const char *bytes);

	/* Not the caller's: */
	uint32_t next, end; /* the block to be written next; the one after the last */
	uint32_t begun;     /* tick of the first byte in bytes */
	uint16_t fill;
	char bytes[TAUT_BLOCK + TAUT_LINE];
};

/* Finds the end of what is written between block first and the one before end.
 * Returns 0 when the card is full. */
uint8_t taut_log_open(struct taut_log *log, uint32_t first, uint32_t end);

uint8_t taut_log_room(struct taut_log *log);
void taut_log_send(struct taut_log *log, char byte);

/* Writes what is there when it has waited for ticks: a loss of power costs no more.
 * To be called outside taut_poll, so that the last line is whole. */
void taut_log_flush(struct taut_log *log, uint32_t now, uint32_t ticks);

#endif
