/* The device side of the wire, version 1 (protocol/SPEC.md), for a board with
 * little memory: no malloc, no division, no floating point, no library, nothing
 * of a board.
 *
 * Write down what the board is (taut_sheet) and how to reach it (taut_config),
 * call taut_start once, then go round one loop: taut_hear for each byte that has
 * come in, taut_take for each sample, taut_look for each button, taut_poll.
 * taut_sensor.h tells when a sample is due and what to make of it. Nothing may be
 * called from an interrupt; nothing waits.
 *
 * Ticks are 32 bits and wrap; all that is asked of them holds across the wrap. */
#ifndef TAUT_H
#define TAUT_H

#include <stdint.h>

#include "taut_flash.h"

/* Bytes of the longest line (SPEC 2.3), and of the longest one that is no here or
 * chan: for so many there must be room before a line is begun. It is sent whole or
 * not at all. */
#define TAUT_LINE 120
#define TAUT_SHORT 42

/* Bytes of the longest command before its LF (SPEC 2.4). */
#define TAUT_COMMAND 31

/* What the board says of itself, in flash, to be written by the two macros below.
 * Numbers in them are plain digits, with a minus or none: they go into the text as
 * they stand in the source. A text that is too long does not compile. */
struct taut_channel {
	int32_t lo, hi;
	uint32_t per, least;
	char text[108];
	char end; /* 0 */
};

/* A channel's declaration (SPEC 5.2).
 *   letter  "a" for the first channel, "b" for the second, and on
 *   what    quantity, unit and scale: "pressure [psi] 1e-1"
 *   lo, hi  range in counts, -9999999 to 9999999, lo below hi
 *   per     ticks from sample to sample, 1 to 9999999
 *   least   shortest period that pace may set; 0: the sensor sends in its own time,
 *           and pace is refused
 *   more    further keys in the order of SPEC 5.2, each led by a space, or "" */
#define TAUT_CHANNEL(letter, what, lo, hi, per, least, more) \
	{ lo, hi, per, (least) ? (least) : TAUT_OWN_TIME, \
	  "chan " letter " " what " lo=" TAUT_DIGITS(lo) " hi=" TAUT_DIGITS(hi) " per=" TAUT_MARK_PER more, 0 }

#define TAUT_OWN_TIME 0xffffffff

struct taut_sheet {
	uint32_t hz, beat;
	uint8_t channels;
	const struct taut_channel *channel; /* in flash */
	char text[80];
	char end; /* 0 */
};

/* The board itself (SPEC 5.1).
 *   channel   array of taut_channel in flash
 *   channels  how many, 0 to 26
 *   model, serial  names (SPEC 3.3), such as "two-port", "0007"
 *   hz        ticks a second, 1 to 1000000
 * A beat goes out a little more often than once a second, so that it is on time
 * although a loop takes a while. */
#define TAUT_SHEET(channel, channels, model, serial, hz) \
	{ hz, hz - (hz >> 6), channels, channel, \
	  "here 1 " model " " serial " hz=" TAUT_DIGITS(hz) " ch=" TAUT_DIGITS(channels) \
	  " up=" TAUT_MARK_NOW " state=" TAUT_MARK_STATE " why=" TAUT_MARK_CAUSE, 0 }

#define TAUT_DIGITS(n) TAUT_DIGITS_OF(n)
#define TAUT_DIGITS_OF(n) #n

/* Where the core puts something into a text. */
#define TAUT_MARK_NOW "\001"
#define TAUT_MARK_STATE "\002"
#define TAUT_MARK_CAUSE "\003" /* and the boot id, if there is one */
#define TAUT_MARK_PER "\004"

/* Why the board has booted (SPEC 5.1). TAUT_ASKED is the core's own. */
enum taut_cause { TAUT_UNKNOWN, TAUT_ASKED, TAUT_POWER, TAUT_RESET, TAUT_BROWN, TAUT_WATCHDOG };

/* One sample. The ring is made of these; other numbered lines wait there too. */
struct taut_sample {
	uint32_t tick; /* the instant of the sample itself */
	int32_t count; /* not read with 'x' and 'f' */
	char name;     /* of the channel: 'a' for the first */
	char what;     /* its status (SPEC 5.3): 'g', 'l', 'h', 'x' or 'f' */
};

/* One button; all zero at first, and the core's. */
struct taut_button {
	struct taut_sample edge;
	uint8_t down, looks;
};

/* How the core reaches the board, and the memory that it is lent. */
struct taut_config {
	const struct taut_sheet *sheet; /* in flash */
	uint32_t *per;                  /* one for each channel: its period now */
	struct taut_sample *ring;       /* of the lines that wait while the way out is full */
	uint8_t ring_mask;              /* how many, less one: 3, 7, 15, ... 127 */

	void *board; /* handed to each of these four */
	/* The tick now. */
	uint32_t (*now)(void *board);
	/* How many bytes send would take at this moment, 255 for all above. The way
	 * out must hold TAUT_LINE bytes, or nothing is ever sent. */
	uint8_t (*room)(void *board);
	/* Takes one byte. Not called more often than room has said. */
	void (*send)(void *board, char byte);
	/* Raises the boot counter in non-volatile memory and returns it. Called once,
	 * by taut_start. 0: there is no such memory (SPEC 4.8). */
	uint32_t (*boot)(void *board);
};

/* One device. config is the caller's to fill in; all else must be zero at first, as
 * static memory is, and is the core's. */
struct taut {
	struct taut_config config;
	struct taut_sample beat; /* the last one */
	uint32_t now;     /* tick at the last poll */
	uint32_t boot;
	uint32_t dropped; /* numbered lines */
	uint32_t refused; /* bytes */
	uint32_t heard;   /* tick of the last command's LF */
	uint16_t seq;     /* of the oldest line that waits */
	uint16_t crc;     /* of the line so far */
	uint8_t first, waiting; /* in the ring */
	uint8_t running;
	uint8_t describing; /* 1 for here, 2 for the first channel, ..., or 0 */
	uint8_t cause;
	uint8_t answer;   /* that is owed, or 0 */
	uint8_t command_n, verb_n;
	char command[TAUT_COMMAND + 1];
};

/* Boots. With running set the board does not wait for a host: it is a logger
 * (SPEC 10). */
void taut_start(struct taut *t, enum taut_cause cause, uint8_t running);

/* Takes one byte from the host that came in at tick. Returns 0, and has not
 * taken it, while the answer to the command before is not out: offer it again
 * after taut_poll. */
uint8_t taut_hear(struct taut *t, char byte, uint32_t tick);

/* Counts n bytes from the host that were lost on the board. They are part of
 * commands that get no answer. A line of which some is lost must not be heard as a
 * whole one, nor spoil the next: after what was heard of it hear a 0 in place of the
 * first byte lost, and its LF, and count only the others. */
void taut_lost(struct taut *t, uint8_t n);

/* 1 while samples are wanted. */
uint8_t taut_running(const struct taut *t);

/* Lets a sample go out, if samples are wanted. In one channel ticks must rise
 * (SPEC 4.3). */
void taut_take(struct taut *t, const struct taut_sample *sample);

/* Looks at a button ('1' to '9'), 1 while it is pushed, bouncing as it may. To be
 * called once a millisecond: so many looks alike make an edge. */
#define TAUT_LOOKS 16
void taut_look(struct taut *t, struct taut_button *button, char name, uint8_t pushed);

/* Notes the time, beats, sends what there is room for. To be called a thousand
 * times a second or more often. */
void taut_poll(struct taut *t);

#endif
