#include <avr/eeprom.h>

#include "board.h"

/* Two places, written in turn, so that a loss of power while one is written leaves
 * the other. A fresh memory is all ones and counts as neither. */
struct place {
	uint32_t boots;
	uint32_t inverted;
};

static struct place places[2] EEMEM;

uint32_t boots_raise(void)
{
	struct place place;
	uint32_t boots = 0;
	uint8_t i, newest = 1;

	for (i = 0; i < 2; i++) {
		eeprom_read_block(&place, &places[i], sizeof place);
		if (place.boots == ~place.inverted && place.boots >= boots) {
			boots = place.boots;
			newest = i;
		}
	}
	place.boots = boots + 1;
	place.inverted = ~place.boots;
	eeprom_update_block(&place, &places[1 - newest], sizeof place);
	return place.boots;
}
