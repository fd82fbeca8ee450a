#include "wire_val.h"

/* CRC-16/CCITT-FALSE, a whole byte at a time: the four bits that feed back
 * twice are folded in by x ^= x >> 4. */
uint16_t wire_check(const char *at, uint8_t n)
{
	uint16_t crc = 0xffff;

	while (n--) {
		uint8_t x = (uint8_t)(crc >> 8) ^ (uint8_t)*at++;
		x ^= x >> 4;
		crc = (uint16_t)(crc << 8) ^ (uint16_t)((uint16_t)x << 12)
		    ^ (uint16_t)((uint16_t)x << 5) ^ x;
	}
	return crc;
}

static char *hex_byte(char *out, uint8_t b)
{
	uint8_t high = b >> 4, low = b & 15;

	*out++ = (char)(high < 10 ? '0' + high : 'a' - 10 + high);
	*out++ = (char)(low < 10 ? '0' + low : 'a' - 10 + low);
	return out;
}

static char *hex_word(char *out, uint16_t w)
{
	return hex_byte(hex_byte(out, (uint8_t)(w >> 8)), (uint8_t)w);
}

/* Puts the digit of one power, unless it would lead; takes it off the value. */
static char *digit32(char *out, char *first, uint32_t *value, uint32_t power)
{
	char digit = '0';

	while (*value >= power) {
		*value -= power;
		digit++;
	}
	if (digit != '0' || out != first)
		*out++ = digit;
	return out;
}

static char *digit16(char *out, char *first, uint16_t *value, uint16_t power)
{
	char digit = '0';

	while (*value >= power) {
		*value -= power;
		digit++;
	}
	if (digit != '0' || out != first)
		*out++ = digit;
	return out;
}

/* A decimal of at most 7 digits (SPEC 3.1). Below 10,000 sixteen bits do. */
static char *decimal(char *out, int32_t count)
{
	uint32_t wide = (uint32_t)count;
	uint16_t rest;
	char *first;

	if (count < 0) {
		*out++ = '-';
		wide = -wide;
	}
	first = out;
	out = digit32(out, first, &wide, 1000000);
	out = digit32(out, first, &wide, 100000);
	out = digit32(out, first, &wide, 10000);
	rest = (uint16_t)wide;
	out = digit16(out, first, &rest, 1000);
	out = digit16(out, first, &rest, 100);
	out = digit16(out, first, &rest, 10);
	*out++ = (char)('0' + rest);
	return out;
}

uint8_t wire_val_line(char *out, const struct wire_val *v)
{
	char *p = out;
	uint8_t counted = v->status == 'g' || v->status == 'l' || v->status == 'h';

	if (counted && (v->count > 9999999 || v->count < -9999999))
		return 0;
	*p++ = 'v';
	*p++ = 'a';
	*p++ = 'l';
	*p++ = ' ';
	*p++ = v->channel;
	*p++ = ' ';
	p = hex_word(p, v->seq);
	*p++ = ' ';
	p = hex_word(p, (uint16_t)(v->tick >> 16));
	p = hex_word(p, (uint16_t)v->tick);
	*p++ = ' ';
	*p++ = v->status;
	if (counted) {
		*p++ = ' ';
		p = decimal(p, v->count);
	}
	{
		uint16_t check = wire_check(out, (uint8_t)(p - out));
		*p++ = ';';
		p = hex_word(p, check);
	}
	*p++ = '\n';
	return (uint8_t)(p - out);
}
