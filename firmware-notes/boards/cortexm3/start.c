/* What runs before main: the vectors, and memory as C expects it. */
#include <stddef.h>

#include "board.h"

extern uint32_t data_source[], data_start[], data_end[], bss_start[], bss_end[], stack_top[];

int main(void);
void reset(void);
void millisecond_interrupt(void);
void host_in_interrupt(void);
void host_out_interrupt(void);
void stimulus_in_interrupt(void);
void *memcpy(void *to, const void *from, size_t n);
void *memset(void *to, int value, size_t n);

void reset(void)
{
	const uint32_t *from = data_source;
	uint32_t *to;

	for (to = data_start; to != data_end; to++)
		*to = *from++;
	for (to = bss_start; to != bss_end; to++)
		*to = 0;
	main();
	for (;;)
		;
}

/* Nothing here may fault: a watchdog would boot a real board. */
static void stop(void)
{
	for (;;)
		;
}

union vector {
	void (*handler)(void);
	uint32_t *stack;
};

__attribute__((section(".vectors"), used)) static const union vector vectors[16 + 32] = {
	[0] = { .stack = stack_top },
	[1] = { .handler = reset },
	[2 ... 14] = { .handler = stop },
	[15] = { .handler = millisecond_interrupt },
	[16] = { .handler = host_in_interrupt },
	[17] = { .handler = host_out_interrupt },
	[18] = { .handler = stimulus_in_interrupt },
	[19 ... 47] = { .handler = stop },
};

void interrupts_off(void)
{
	__asm volatile("cpsid i" ::: "memory");
}

void interrupts_on(void)
{
	__asm volatile("cpsie i" ::: "memory");
}

void interrupt_enable(uint32_t number)
{
	REGISTER(0xE000E100) = 1u << number;
}

/* The compiler asks for these two. */
void *memcpy(void *to, const void *from, size_t n)
{
	char *t = to;
	const char *f = from;

	while (n--)
		*t++ = *f++;
	return to;
}

void *memset(void *to, int value, size_t n)
{
	char *t = to;

	while (n--)
		*t++ = (char)value;
	return to;
}
