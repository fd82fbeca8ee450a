/* Runs board.elf on a simulated ATmega328P and prints, separated by tabs, each
 * case's name, cycles, bytes of stack, and its line in hex. Output of the
 * simulator itself goes to standard error. */
#include <stdint.h>
#include <stdio.h>
#include <stdlib.h>
#include <unistd.h>

#include <simavr/sim_avr.h>
#include <simavr/sim_elf.h>

#include "cases.h"

enum { GPIOR0 = 0x3e, GPIOR1 = 0x4a, GPIOR2 = 0x4b };

#define NAME(name, channel, status, seq, tick, count) name,

static const char *const names[] = { CASES(NAME) };

struct watch {
	FILE *out;
	avr_cycle_count_t start, marks, last;
	uint16_t sp_start, sp_low;
	int running, runs, done;
	char hex[256];
	size_t used;
};

static uint16_t stack_pointer(avr_t *avr)
{
	return (uint16_t)(avr->data[R_SPL] | avr->data[R_SPH] << 8);
}

static void on_mark(avr_t *avr, avr_io_addr_t addr, uint8_t v, void *param)
{
	struct watch *w = param;

	avr->data[addr] = v;
	if (v) {
		w->running = 1;
		w->start = avr->cycle;
		w->sp_start = w->sp_low = stack_pointer(avr);
		return;
	}
	w->running = 0;
	w->last = avr->cycle - w->start;
	if (w->runs++ == 0)
		w->marks = w->last;
}

static void on_byte(avr_t *avr, avr_io_addr_t addr, uint8_t v, void *param)
{
	struct watch *w = param;

	avr->data[addr] = v;
	if (w->used + 3 < sizeof w->hex)
		w->used += (size_t)sprintf(w->hex + w->used, "%02x", v);
}

static void print(struct watch *w, const char *name)
{
	fprintf(w->out, "%s\t%lu\t%u\t%s\n", name, (unsigned long)(w->last - w->marks),
	        (unsigned)(w->sp_start - w->sp_low), w->hex);
	w->used = 0;
	w->hex[0] = 0;
}

static void on_case(avr_t *avr, avr_io_addr_t addr, uint8_t v, void *param)
{
	struct watch *w = param;

	avr->data[addr] = v;
	if (w->done < (int)(sizeof names / sizeof *names))
		print(w, names[w->done++]);
}

int main(int argc, char **argv)
{
	static struct watch w;
	static elf_firmware_t firmware;
	avr_t *avr;
	int state = cpu_Running;

	/* The simulator prints to standard output while loading. */
	w.out = fdopen(dup(1), "w");
	if (!w.out || dup2(2, 1) < 0 || argc != 2 || elf_read_firmware(argv[1], &firmware)) {
		fprintf(stderr, "usage: harness board.elf\n");
		return 2;
	}
	avr = avr_make_mcu_by_name("atmega328p");
	if (!avr)
		return 2;
	avr_init(avr);
	avr->log = LOG_WARNING;
	avr_load_firmware(avr, &firmware);
	avr->frequency = 16000000;
	avr_register_io_write(avr, GPIOR0, on_mark, &w);
	avr_register_io_write(avr, GPIOR1, on_byte, &w);
	avr_register_io_write(avr, GPIOR2, on_case, &w);
	while (state != cpu_Done && state != cpu_Crashed && avr->cycle < 16000000) {
		state = avr_run(avr);
		if (w.running && stack_pointer(avr) < w.sp_low)
			w.sp_low = stack_pointer(avr);
	}
	print(&w, "check of 30 bytes");
	fclose(w.out);
	return state == cpu_Crashed || w.done != (int)(sizeof names / sizeof *names);
}
