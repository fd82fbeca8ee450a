/* What stands between a sensor and the core: when its next sample is due, which
 * readings lie outside its range, what to say while it is missing. A board may do
 * without and call taut_take itself. */
#ifndef TAUT_SENSOR_H
#define TAUT_SENSOR_H

#include "taut.h"

/* One for each channel. name is the caller's to fill in; all else zero at first, and
 * not the caller's. */
struct taut_sensor {
	char name;         /* of the channel: 'a' for the first */
	uint8_t begun;
	uint8_t missing;
	uint8_t sent;
	uint32_t last;     /* tick at which the last sample was due, or came by itself */
	uint32_t tick;     /* of the last sample that was sent */
};

/* 1 when it is time for the next sample, then not before its period has passed;
 * while the sensor is missing not before a second has passed (SPEC 6.5). Of a sensor
 * that sends in its own time: 1 when it has been silent for a second and a period;
 * then say taut_absent. Call it all the time, at rest as well. */
uint8_t taut_due(struct taut *t, struct taut_sensor *sensor);

/* A reading, taken at tick. At or outside the range it goes out as such, held at
 * the limit (SPEC 6.5). A tick that is not past that of the sample before goes
 * nowhere (SPEC 4.3). */
void taut_reading(struct taut *t, struct taut_sensor *sensor, uint32_t tick, int32_t count);

/* No reading: there is no sensor, or no answer from it; or it reports a fault. */
void taut_absent(struct taut *t, struct taut_sensor *sensor, uint32_t tick);
void taut_fault(struct taut *t, struct taut_sensor *sensor, uint32_t tick);

#endif
