/* Runs an image for the ATmega328P on a simulated one at 16 MHz.
 *
 * usage: avr-harness [-s SPEED] [-d MICROVOLTS] [-r SEED] IMAGE.elf
 *   -s  how much faster than real time; 0, as when left out: as fast as it goes
 *   -d  noise on the voltage at PC0, standard deviation in microvolts; 4000 when left
 *       out, about one step of the converter
 *   -r  seed of that noise
 *
 * File descriptor 3 is a socket that is the serial line; 4 is the stimulus
 * (harness.h). SIGTERM, an "end" or the far end of the line gone ends it. Then one
 * line of figures goes to standard error, after what the simulator has printed. */
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <time.h>
#include <unistd.h>

#include <simavr/sim_elf.h>

#include "harness.h"

enum { SLICE = CLOCK_HZ / 1000 };

static volatile sig_atomic_t quit;

static void on_signal(int signal)
{
	(void)signal;
	quit = 1;
}

uint64_t harness_cycle(struct harness *h)
{
	if (h->avr->cycle < h->last) /* booted by its own watchdog */
		h->base += h->last;
	h->last = h->avr->cycle;
	return h->base + h->avr->cycle;
}

/* The simulator would wait in real time while the board sleeps; here the clock only
 * jumps to the next event. */
static void sleep_at_once(avr_t *avr, avr_cycle_count_t cycles)
{
	(void)avr;
	(void)cycles;
}

static avr_cycle_count_t on_time(avr_t *avr, avr_cycle_count_t when, void *param);

/* Asks to be called when the next record is due. */
static void arm(struct harness *h)
{
	struct record *r = stimulus_first(h);
	uint64_t now = harness_cycle(h);

	avr_cycle_timer_cancel(h->avr, on_time, h);
	if (r)
		avr_cycle_timer_register(h->avr, r->cycle > now ? r->cycle - now : 1, on_time, h);
}

static void boot(struct harness *h, int by_reset_line)
{
	uint64_t now = harness_cycle(h);

	avr_reset(h->avr);
	h->last = h->avr->cycle;
	h->base = now - h->last;
	if (by_reset_line) {
		avr_regbit_set(h->avr, h->avr->reset_flags.extrf);
	} else {
		int at;

		/* Memory that has lost its supply holds anything. */
		for (at = h->avr->ioend + 1; at <= h->avr->ramend; at++)
			h->avr->data[at] = (uint8_t)(256 * front_random(h));
		avr_regbit_set(h->avr, h->avr->reset_flags.porf);
	}
	h->boots++;
	serial_boot(h);
	front_boot(h);
	arm(h);
}

/* Carries out what is due by now, but a boot: that is done outside of the simulator's
 * own call. */
static avr_cycle_count_t on_time(avr_t *avr, avr_cycle_count_t when, void *param)
{
	struct harness *h = param;
	uint64_t now = h->base + when;
	struct record *r;

	(void)avr;
	while ((r = stimulus_first(h)) && r->cycle <= now && r->kind != BOOT && r->kind != END) {
		if (r->kind == VOLT)
			front_volt(h, r);
		else if (r->kind == PINS)
			front_pins(h, (uint8_t)r->value);
		else if (r->kind == HOST)
			serial_give(h, r->bytes, r->bytes_n);
		stimulus_done(h);
	}
	return r && r->kind != BOOT && r->kind != END ? r->cycle - h->base : 0;
}

/* Runs to a cycle, or to a boot on the way. Returns 0 when the board has died. */
static int run_to(struct harness *h, uint64_t cycle)
{
	struct record *r;

	while (harness_cycle(h) < cycle && !quit) {
		int state = avr_run(h->avr);

		if (state == cpu_Done || state == cpu_Crashed) {
			fprintf(stderr, "the board has stopped at %llu us\n", (unsigned long long)(harness_cycle(h) / CYCLES_PER_US));
			return 0;
		}
	}
	while ((r = stimulus_first(h)) && (r->kind == BOOT || r->kind == END) && r->cycle <= harness_cycle(h)) {
		if (r->kind == END)
			h->ended = 1;
		stimulus_done(h);
		if (r->kind == BOOT)
			boot(h, (int)r->value);
	}
	return 1;
}

static double seconds(void)
{
	struct timespec t;

	clock_gettime(CLOCK_MONOTONIC, &t);
	return (double)t.tv_sec + 1e-9 * (double)t.tv_nsec;
}

/* Waits until the board's time is due. Returns by how many seconds it is late. */
static double keep_pace(struct harness *h, double speed, double began)
{
	double ahead = (double)harness_cycle(h) / CLOCK_HZ / speed - (seconds() - began);
	struct timespec t;

	if (ahead <= 0)
		return -ahead;
	t.tv_sec = (time_t)ahead;
	t.tv_nsec = (long)((ahead - (double)t.tv_sec) * 1e9);
	nanosleep(&t, NULL);
	return 0;
}

static int simulate(struct harness *h, double speed)
{
	double began, late = 0, latest = 0;
	uint64_t slice = 0;
	int good = stimulus_ahead(h, 0); /* time begins once it is told what is at 0 */

	began = seconds();
	boot(h, 0);
	while (good && !quit && !h->ended && !h->hung_up) {
		slice += SLICE;
		good = stimulus_ahead(h, slice);
		arm(h);
		good = good && run_to(h, slice);
		serial_turn(h);
		if (speed > 0)
			late = keep_pace(h, speed, began);
		latest = late > latest ? late : latest;
	}
	serial_turn(h);
	fprintf(stderr, "simulated=%.3f wall=%.3f latest=%.3f boots=%d conversions=%lu edges=%lu sent=%lu received=%lu waited=%lu\n",
	        (double)harness_cycle(h) / CLOCK_HZ, seconds() - began, latest, h->boots, h->conversions, h->edges, h->sent, h->received,
	        h->waited);
	return good;
}

static avr_t *load(const char *path)
{
	static elf_firmware_t firmware;
	avr_t *avr;

	if (elf_read_firmware(path, &firmware)) {
		fprintf(stderr, "cannot read %s\n", path);
		return NULL;
	}
	avr = avr_make_mcu_by_name("atmega328p");
	if (!avr)
		return NULL;
	avr_init(avr);
	avr->log = LOG_WARNING;
	avr_load_firmware(avr, &firmware);
	avr->frequency = CLOCK_HZ;
	avr->sleep = sleep_at_once;
	return avr;
}

int main(int argc, char **argv)
{
	static struct harness h;
	struct sigaction action;
	double speed = 0;
	int option;

	h.dither_uv = 4000;
	h.random = 1;
	while ((option = getopt(argc, argv, "s:d:r:")) > 0) {
		if (option == 's')
			speed = atof(optarg);
		else if (option == 'd')
			h.dither_uv = atof(optarg);
		else if (option == 'r')
			h.random = strtoull(optarg, NULL, 10) * 2 + 1;
		else
			return 2;
	}
	if (optind + 1 != argc || dup2(2, 1) < 0) { /* the simulator prints while it loads */
		fprintf(stderr, "usage: avr-harness [-s SPEED] [-d MICROVOLTS] [-r SEED] IMAGE.elf\n");
		return 2;
	}
	memset(&action, 0, sizeof action);
	action.sa_handler = on_signal; /* without SA_RESTART: a read that waits is broken off */
	sigaction(SIGTERM, &action, NULL);
	sigaction(SIGINT, &action, NULL);
	action.sa_handler = SIG_IGN;
	sigaction(SIGPIPE, &action, NULL);
	h.quit = &quit;
	h.avr = load(argv[optind]);
	if (!h.avr)
		return 2;
	front_attach(&h);
	serial_attach(&h);
	return !simulate(&h, speed);
}
