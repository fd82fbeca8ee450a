#include "taut_log.h"

/* Blocks that must be free for a log to begin: a description of 26 channels. */
#define LEAST 8

uint8_t taut_log_open(struct taut_log *log, uint32_t first, uint32_t end)
{
	uint32_t low = first, high = end; /* all below low are written, none from high on */

	while (low != high) {
		uint32_t middle = low + ((high - low) >> 1);

		if (log->written(log->card, middle))
			low = middle + 1;
		else
			high = middle;
	}
	log->next = low;
	log->end = end;
	log->fill = 0;
	return end - low >= LEAST;
}

static uint8_t write_block(struct taut_log *log)
{
	uint16_t i;

	if (!log->write(log->card, log->next, log->bytes))
		return 0;
	log->next++;
	log->fill = (uint16_t)(log->fill - TAUT_BLOCK);
	for (i = 0; i < log->fill; i++)
		log->bytes[i] = log->bytes[i + TAUT_BLOCK];
	return 1;
}

/* A line that is begun ends on the card: one whole line of room beyond this
 * block, or in it when it is the last. */
uint8_t taut_log_room(struct taut_log *log)
{
	if (log->next == log->end)
		return 0;
	if (log->fill >= TAUT_BLOCK && !write_block(log))
		return 0;
	if (log->next == log->end)
		return 0;
	if (log->next + 1 == log->end && log->fill > TAUT_BLOCK - TAUT_LINE)
		return 0;
	return 255;
}

void taut_log_send(struct taut_log *log, char byte)
{
	if (log->fill < sizeof log->bytes)
		log->bytes[log->fill++] = byte;
}

void taut_log_flush(struct taut_log *log, uint32_t now, uint32_t ticks)
{
	if (log->fill && now - log->begun < ticks)
		return;
	log->begun = now;
	if (!log->fill || log->next == log->end)
		return;
	while (log->fill < TAUT_BLOCK)
		log->bytes[log->fill++] = '\n';
	write_block(log);
}
