/* One val line of the wire, version 1 (protocol/SPEC.md 5.3): the line that a
 * device sends most often. No malloc, no division, no floating point, no table. */
#ifndef WIRE_VAL_H
#define WIRE_VAL_H

#include <stdint.h>

/* Bytes of the longest val line, LF included:
 * val a ffff ffffffff g -9999999;ffff */
#define WIRE_VAL_MAX 36

struct wire_val {
	char channel;   /* 'a' to 'z' */
	char status;    /* 'g', 'l', 'h' with a count; 'x', 'f' without */
	uint16_t seq;
	uint32_t tick;
	int32_t count;  /* -9999999 to 9999999; not looked at without */
};

/* Writes the whole line to out, which holds WIRE_VAL_MAX bytes, and returns its
 * length. Not ended by NUL. Returns 0, and writes no line, for a count out of
 * its bounds. */
uint8_t wire_val_line(char *out, const struct wire_val *v);

/* The check of n bytes (SPEC 2.6). */
uint16_t wire_check(const char *at, uint8_t n);

#endif
