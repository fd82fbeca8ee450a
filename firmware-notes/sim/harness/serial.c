/* The serial line, on an inherited socket. What the board sends is never lost here:
 * a reader that stops holds the simulation up, and can be as late as it likes. */
#include <errno.h>
#include <poll.h>
#include <string.h>
#include <sys/socket.h>
#include <unistd.h>

#include <simavr/avr_uart.h>

#include "harness.h"

enum { RX_VECTOR = 18 };

static void flush(struct harness *h)
{
	unsigned at = 0;

	while (at < h->out_n && !*h->quit) {
		ssize_t n = write(LINE_FD, h->out + at, h->out_n - at);

		if (n > 0) {
			at += (unsigned)n;
		} else if (errno != EINTR) {
			h->hung_up = 1;
			break;
		}
	}
	h->out_n = 0;
}

static void on_byte(struct avr_irq_t *irq, uint32_t value, void *param)
{
	struct harness *h = param;

	(void)irq;
	h->sent++;
	h->out[h->out_n++] = (uint8_t)value;
	if (h->out_n == sizeof h->out)
		flush(h);
}

/* Bytes that the simulated receiver has no place for would be lost in the simulator,
 * not on the line: they wait until it says that it takes more. Its receiver holds more
 * than the part's two: that it would overrun shows only in how long a byte waits. */
static void on_xon(struct avr_irq_t *irq, uint32_t value, void *param)
{
	struct harness *h = param;

	(void)irq;
	(void)value;
	h->xon = 1;
	while (h->xon && h->in_at < h->in_n) {
		h->received++;
		avr_raise_irq(h->to_board, h->in[h->in_at++]);
	}
	if (h->in_at == h->in_n)
		h->in_at = h->in_n = 0;
}

static void on_xoff(struct avr_irq_t *irq, uint32_t value, void *param)
{
	(void)irq;
	(void)value;
	((struct harness *)param)->xon = 0;
}

/* Called with 1 when a byte has come in, with 0 when its interrupt begins. */
static void on_pending(struct avr_irq_t *irq, uint32_t value, void *param)
{
	struct harness *h = param;
	uint64_t now = harness_cycle(h);

	(void)irq;
	if (!value && h->byte_in && now - h->byte_in > h->waited)
		h->waited = (unsigned long)(now - h->byte_in);
	if (!value)
		h->byte_in = 0;
	else if (!h->byte_in)
		h->byte_in = now;
}

void serial_give(struct harness *h, const uint8_t *bytes, int n)
{
	if (h->in_n + (unsigned)n > sizeof h->in) {
		memmove(h->in, h->in + h->in_at, h->in_n - h->in_at);
		h->in_n -= h->in_at;
		h->in_at = 0;
	}
	while (n-- && h->in_n < sizeof h->in)
		h->in[h->in_n++] = *bytes++;
	if (h->xon)
		on_xon(NULL, 0, h);
}

void serial_turn(struct harness *h)
{
	uint8_t bytes[256];
	ssize_t n;

	flush(h);
	if (h->in_n - h->in_at > sizeof h->in / 2)
		return;
	n = recv(LINE_FD, bytes, sizeof bytes, MSG_DONTWAIT);
	if (n > 0)
		serial_give(h, bytes, (int)n);
	else if (n == 0)
		h->hung_up = 1;
}

void serial_boot(struct harness *h)
{
	uint32_t flags = 0;

	avr_ioctl(h->avr, AVR_IOCTL_UART_GET_FLAGS('0'), &flags);
	flags &= ~(uint32_t)(AVR_UART_FLAG_STDIO | AVR_UART_FLAG_POLL_SLEEP);
	avr_ioctl(h->avr, AVR_IOCTL_UART_SET_FLAGS('0'), &flags);
	h->xon = 0;
	h->byte_in = 0;
}

void serial_attach(struct harness *h)
{
	static const struct {
		int irq;
		avr_irq_notify_t call;
	} calls[] = { { UART_IRQ_OUTPUT, on_byte }, { UART_IRQ_OUT_XON, on_xon }, { UART_IRQ_OUT_XOFF, on_xoff } };
	avr_irq_t *received = avr_get_interrupt_irq(h->avr, RX_VECTOR);
	unsigned i;

	h->to_board = avr_io_getirq(h->avr, AVR_IOCTL_UART_GETIRQ('0'), UART_IRQ_INPUT);
	for (i = 0; i < sizeof calls / sizeof *calls; i++)
		avr_irq_register_notify(avr_io_getirq(h->avr, AVR_IOCTL_UART_GETIRQ('0'), calls[i].irq), calls[i].call, h);
	avr_irq_register_notify(received + AVR_INT_IRQ_PENDING, on_pending, h);
}
