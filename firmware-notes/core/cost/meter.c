/* Runs probe.c on a simulated AVR and prints the cycles between its marks, one
 * sample a line, with the line itself. usage: meter probe.elf */
#include <simavr/sim_avr.h>
#include <simavr/sim_elf.h>
#include <simavr/sim_io.h>

#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <unistd.h>

enum { GPIOR0 = 0x3e, GPIOR1 = 0x4a };

struct meter {
	avr_cycle_count_t from, marks;
	int samples;
	char line[256];
	size_t n;
	FILE *out;
};

static void mark(avr_t *avr, avr_io_addr_t addr, uint8_t value, void *param)
{
	struct meter *m = param;
	avr_cycle_count_t took = avr->cycle - m->from;

	avr->data[addr] = value;
	if (value) {
		m->from = avr->cycle;
		m->n = 0;
	} else if (!m->marks) {
		m->marks = took;
	} else {
		fprintf(m->out, "%llu %.*s", (unsigned long long)(took - m->marks), (int)m->n, m->line);
		m->samples++;
	}
}

static void byte_out(avr_t *avr, avr_io_addr_t addr, uint8_t value, void *param)
{
	struct meter *m = param;

	avr->data[addr] = value;
	if (m->n < sizeof m->line)
		m->line[m->n++] = (char)value;
}

int main(int argc, char **argv)
{
	struct meter m;
	elf_firmware_t firmware;
	avr_t *avr;
	int state = cpu_Running;

	memset(&m, 0, sizeof m);
	memset(&firmware, 0, sizeof firmware);
	m.out = fdopen(dup(1), "w"); /* simavr talks on standard output */
	if (argc != 2 || !m.out || !freopen("/dev/null", "w", stdout))
		return 2;
	if (elf_read_firmware(argv[1], &firmware))
		return 2;
	avr = avr_make_mcu_by_name("atmega328p");
	if (!avr)
		return 2;
	avr_init(avr);
	firmware.frequency = 16000000;
	avr_load_firmware(avr, &firmware);
	avr_register_io_write(avr, GPIOR0, mark, &m);
	avr_register_io_write(avr, GPIOR1, byte_out, &m);
	while (state != cpu_Done && state != cpu_Crashed && avr->cycle < 16000000)
		state = avr_run(avr);
	fclose(m.out);
	return state == cpu_Done && m.samples ? 0 : 1;
}
