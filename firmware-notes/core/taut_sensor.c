#include "taut_sensor.h"

static const struct taut_channel *declared(const struct taut *t, const struct taut_sensor *sensor)
{
	return (const struct taut_channel *)taut_pointer_at(&t->config.sheet->channel) + (sensor->name - 'a');
}

static uint8_t in_own_time(const struct taut *t, const struct taut_sensor *sensor)
{
	return taut_long_at(&declared(t, sensor)->least) == TAUT_OWN_TIME;
}

/* Ticks until the next sample is due. */
static uint32_t span(const struct taut *t, const struct taut_sensor *sensor)
{
	uint32_t per = t->config.per[sensor->name - 'a'];
	uint32_t second = taut_long_at(&t->config.sheet->hz);

	if (in_own_time(t, sensor) && !sensor->missing)
		return per + second;
	return sensor->missing && per < second ? second : per;
}

uint8_t taut_due(struct taut *t, struct taut_sensor *sensor)
{
	uint32_t now = t->config.now(t->config.board);
	uint32_t wait = span(t, sensor), age;

	if (!sensor->begun) {
		sensor->begun = 1;
		sensor->last = now;
	}
	age = now - sensor->last;
	if (age < wait)
		return 0;
	/* In step, but where a whole period has been missed: no catching up. */
	sensor->last = age - wait < wait ? sensor->last + wait : now;
	return taut_running(t);
}

static void take(struct taut *t, struct taut_sensor *sensor, struct taut_sample *sample)
{
	if (!taut_running(t)) {
		sensor->sent = 0;
		return;
	}
	if (sensor->sent && sample->tick - sensor->tick - 1 >= 0x7fffffff)
		return;
	sensor->sent = 1;
	sensor->tick = sample->tick;
	sample->name = sensor->name;
	taut_take(t, sample);
}

void taut_reading(struct taut *t, struct taut_sensor *sensor, uint32_t tick, int32_t count)
{
	const struct taut_channel *channel = declared(t, sensor);
	struct taut_sample sample;
	int32_t lo = (int32_t)taut_long_at(&channel->lo), hi = (int32_t)taut_long_at(&channel->hi);

	sample.tick = tick;
	sample.count = count;
	sample.what = 'g';
	if (count <= lo) {
		sample.count = lo;
		sample.what = 'l';
	} else if (count >= hi) {
		sample.count = hi;
		sample.what = 'h';
	}
	sensor->missing = 0;
	sensor->begun = 1;
	if (in_own_time(t, sensor))
		sensor->last = tick;
	take(t, sensor, &sample);
}

static void none(struct taut *t, struct taut_sensor *sensor, uint32_t tick, char what)
{
	struct taut_sample sample;

	sample.tick = tick;
	sample.count = 0;
	sample.what = what;
	sensor->missing = 1;
	take(t, sensor, &sample);
}

void taut_absent(struct taut *t, struct taut_sensor *sensor, uint32_t tick)
{
	none(t, sensor, tick, 'x');
}

void taut_fault(struct taut *t, struct taut_sensor *sensor, uint32_t tick)
{
	none(t, sensor, tick, 'f');
}
