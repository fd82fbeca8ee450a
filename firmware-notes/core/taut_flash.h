/* Constants that stay in program memory. Some processors need a load of their
 * own to read it; the others read it like any memory. */
#ifndef TAUT_FLASH_H
#define TAUT_FLASH_H

#include <stdint.h>

#if defined(__AVR__)

#include <avr/pgmspace.h>
#define TAUT_FLASH PROGMEM
#define taut_char_at(p) ((char)pgm_read_byte(p))
#define taut_byte_at(p) ((uint8_t)pgm_read_byte(p))
#define taut_long_at(p) ((uint32_t)pgm_read_dword(p))
#define taut_pointer_at(p) ((const void *)pgm_read_word(p))

#else

#define TAUT_FLASH
#define taut_char_at(p) (*(p))
#define taut_byte_at(p) (*(p))
#define taut_long_at(p) ((uint32_t)*(p))
#define taut_pointer_at(p) ((const void *)*(p))

#endif
#endif
