/* The smallest board: what the core costs is what this image grows by when the
 * core takes the place of stub.c. All its RAM is the core's: one device, two
 * channels, four waiting lines, one button.
 *
 * It sends one sample after the other and marks each by GPIOR0, for meter.c. */
#include <avr/interrupt.h>
#include <avr/io.h>
#include <avr/sleep.h>

#include "../taut.h"

static const struct taut_channel channels[2] TAUT_FLASH = {
	TAUT_CHANNEL("a", "pressure [psi] 1e-1", -9999999, 9999999, 10000, 1000, ""),
	TAUT_CHANNEL("b", "extension [in_i] 5e-5", -9999999, 9999999, 100000, 0, ""),
};
static const struct taut_sheet sheet TAUT_FLASH = TAUT_SHEET(channels, 2, "probe", "1", 1000000);

static uint32_t now(void *board)
{
	(void)board;
	return 0xffffffff - GPIOR2; /* all digits are letters */
}

static uint8_t room(void *board)
{
	(void)board;
	return 255;
}

static void send(void *board, char byte)
{
	(void)board;
	GPIOR1 = (uint8_t)byte;
}

static uint32_t boot(void *board)
{
	(void)board;
	return GPIOR2;
}

static uint32_t periods[2];
static struct taut_sample ring[4];
static struct taut_button button;
static struct taut device = { .config = { &sheet, periods, ring, 3, 0, now, room, send, boot } };

static void sample(int32_t count)
{
	struct taut_sample s = { .tick = 0xfffffff0, .count = count, .name = 'z', .what = 'g' };

	GPIOR0 = 1;
	taut_take(&device, &s);
	taut_poll(&device);
	GPIOR0 = 0;
}

int main(void)
{
	GPIOR0 = 1; /* marks with nothing between them */
	GPIOR0 = 0;
	taut_start(&device, TAUT_POWER, 1);
	taut_poll(&device);
	taut_look(&device, &button, '1', GPIOR2);
	taut_lost(&device, GPIOR2);
	if (taut_running(&device))
		taut_hear(&device, 'x', 0);
	sample(0);
	sample(7240);
	sample(-9999999);
	sample(-8999999);
	cli();
	sleep_mode(); /* asleep with interrupts off: the end */
	return 0;
}
