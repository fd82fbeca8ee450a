/* Sensor front ends: what the converter and the pins see. */
#include <simavr/avr_adc.h>
#include <simavr/avr_ioport.h>

#include "harness.h"

enum { SUPPLY_MV = 5000 };

double front_random(struct harness *h)
{
	h->random ^= h->random << 13;
	h->random ^= h->random >> 7;
	h->random ^= h->random << 17;
	return (double)(h->random >> 11) / 9007199254740992.0;
}

/* Noise of unit variance: twelve even ones added up come near enough to normal. */
static double noise(struct harness *h)
{
	double sum = -6;
	int i;

	for (i = 0; i < 12; i++)
		sum += front_random(h);
	return sum;
}

void front_volt(struct harness *h, const struct record *r)
{
	h->volt_cycle = r->cycle;
	h->volt_uv = r->value;
	h->slope_uv_s = r->slope;
}

static double microvolts(struct harness *h)
{
	return (double)h->volt_uv + (double)h->slope_uv_s * (double)(harness_cycle(h) - h->volt_cycle) / CLOCK_HZ;
}

/* Called at each conversion. The part gives round(1024 V / supply) within 0 to 1023
 * (its data sheet); the simulator takes whole millivolts and gives floor(1023 mV /
 * supply). So it is given the least millivolts that make it say what the part would. */
static void on_conversion(struct avr_irq_t *irq, uint32_t value, void *param)
{
	struct harness *h = param;
	double code = (microvolts(h) + h->dither_uv * noise(h)) * 1024 / (1000.0 * SUPPLY_MV) + 0.5;
	uint32_t whole = code < 0 ? 0 : code > 1023 ? 1023 : (uint32_t)code;

	(void)irq;
	(void)value;
	h->conversions++;
	avr_raise_irq(h->adc, (whole * SUPPLY_MV + 1022) / 1023);
}

/* With the pull-ups on, the simulator sets an input back to 1 whenever the firmware
 * writes the port, unless it has been told that it is driven from outside. */
static void drive(struct harness *h)
{
	avr_ioport_external_t outside = { .name = 'D', .mask = DRIVEN_PINS, .value = h->levels };

	avr_ioctl(h->avr, AVR_IOCTL_IOPORT_SET_EXTERNAL('D'), &outside);
}

void front_pins(struct harness *h, uint8_t levels)
{
	uint8_t i, changed = (levels ^ h->levels) & DRIVEN_PINS;

	h->levels = levels;
	drive(h);
	for (i = 0; i < 8; i++)
		if (changed >> i & 1) {
			h->edges++;
			avr_raise_irq(h->pin[i], levels >> i & 1);
		}
}

void front_boot(struct harness *h)
{
	uint8_t i;

	drive(h);
	for (i = 0; i < 8; i++)
		if (DRIVEN_PINS >> i & 1) {
			avr_raise_irq(h->pin[i], !(h->levels >> i & 1)); /* one that is as before is not passed on */
			avr_raise_irq(h->pin[i], h->levels >> i & 1);
		}
}

void front_attach(struct harness *h)
{
	int i;

	h->avr->vcc = h->avr->avcc = h->avr->aref = SUPPLY_MV;
	h->adc = avr_io_getirq(h->avr, AVR_IOCTL_ADC_GETIRQ, ADC_IRQ_ADC0);
	for (i = 0; i < 8; i++)
		h->pin[i] = avr_io_getirq(h->avr, AVR_IOCTL_IOPORT_GETIRQ('D'), i);
	avr_irq_register_notify(avr_io_getirq(h->avr, AVR_IOCTL_ADC_GETIRQ, ADC_IRQ_OUT_TRIGGER), on_conversion, h);
	h->levels = DRIVEN_PINS; /* all high: nothing pushes, nothing clocks */
}
