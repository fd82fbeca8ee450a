#include <errno.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

#include "harness.h"

struct record *stimulus_first(struct harness *h)
{
	return h->head == h->tail ? NULL : &h->queue[h->tail % QUEUE];
}

void stimulus_done(struct harness *h)
{
	h->tail++;
}

int stimulus_full(const struct harness *h)
{
	return h->head - h->tail == QUEUE;
}

static int hex_bytes(struct record *r, const char *hex)
{
	unsigned byte;

	for (r->bytes_n = 0; sscanf(hex, "%2x", &byte) == 1; hex += 2) {
		if (r->bytes_n == sizeof r->bytes || !hex[1])
			return 0;
		r->bytes[r->bytes_n++] = (uint8_t)byte;
	}
	return r->bytes_n > 0;
}

static int parse(const char *line, struct record *r)
{
	char word[8], rest[160] = "", more[24] = "";
	unsigned long long us;
	char *end = rest;

	if (sscanf(line, "%7s %llu %159s %23s", word, &us, rest, more) < 2)
		return 0;
	r->cycle = us * CYCLES_PER_US;
	if (!strcmp(word, "volt")) {
		r->kind = VOLT;
		r->value = strtoll(rest, NULL, 10);
		r->slope = strtoll(more, &end, 10);
		return end != more && !*end;
	}
	if (!strcmp(word, "pins")) {
		r->kind = PINS;
		r->value = strtoll(rest, &end, 16);
	} else if (!strcmp(word, "host")) {
		r->kind = HOST;
		return hex_bytes(r, rest);
	} else if (!strcmp(word, "boot")) {
		r->kind = BOOT;
		r->value = !strcmp(rest, "reset");
		return r->value || !strcmp(rest, "power");
	} else if (!strcmp(word, "end")) {
		r->kind = END;
		return 1;
	}
	return end != rest && !*end;
}

/* The next line, its LF taken off, or NULL: the stream has ended. */
static const char *next_line(struct harness *h)
{
	for (;;) {
		char *start = h->text + h->text_at;
		char *lf = memchr(start, '\n', (size_t)(h->text_n - h->text_at));
		ssize_t n;

		if (lf) {
			*lf = 0;
			h->text_at = (int)(lf + 1 - h->text);
			return start;
		}
		h->text_n -= h->text_at;
		memmove(h->text, start, (size_t)h->text_n);
		h->text_at = 0;
		if (h->text_n == sizeof h->text)
			return "";
		n = read(STIMULUS_FD, h->text + h->text_n, sizeof h->text - (size_t)h->text_n);
		if (n < 0 && errno == EINTR && !*h->quit)
			continue;
		if (n <= 0)
			return NULL;
		h->text_n += (int)n;
	}
}

int stimulus_ahead(struct harness *h, uint64_t cycle)
{
	while (!h->text_over && !stimulus_full(h)) {
		struct record *r = &h->queue[h->head % QUEUE];
		const char *line;

		if (h->head != h->tail && h->queue[(h->head - 1) % QUEUE].cycle > cycle)
			return 1;
		line = next_line(h);
		if (!line) {
			h->text_over = 1;
			break;
		}
		if (!parse(line, r)) {
			fprintf(stderr, "stimulus: cannot read \"%.60s\"\n", line);
			return 0;
		}
		if (h->head != h->tail && r->cycle < h->queue[(h->head - 1) % QUEUE].cycle) {
			fprintf(stderr, "stimulus: \"%.60s\" comes too late\n", line);
			return 0;
		}
		h->head++;
	}
	return 1;
}
