package sim

import (
	"io"
	"math/rand/v2"
	"sync"
	"time"
)

// Wire is what befalls bytes on their way.
type Wire struct {
	// ToHost gets each chunk that the board has sent, and returns what goes on.
	// It is called from one goroutine. nil passes all.
	ToHost func([]byte) []byte
	Delay  time.Duration // of each byte to the host, real time
}

// Cable carries bytes between a board's line and a host's end that is plugged
// in. While none is, what the board sends is lost.
type Cable struct {
	line io.ReadWriter
	wire Wire

	mu   sync.Mutex
	host io.ReadWriteCloser // nil: none
	wait sync.WaitGroup
	lost int64
}

// NewCable starts to carry. It ends when the line does.
func NewCable(line io.ReadWriter, w Wire) *Cable {
	c := &Cable{line: line, wire: w}
	chunks := make(chan chunk, 4096)
	c.wait.Go(func() { c.receive(chunks) })
	c.wait.Go(func() { c.deliver(chunks) })
	return c
}

type chunk struct {
	bytes []byte
	at    time.Time
}

func (c *Cable) receive(to chan<- chunk) {
	defer close(to)
	buf := make([]byte, 4096)
	for {
		n, err := c.line.Read(buf)
		if n > 0 {
			bytes := append([]byte(nil), buf[:n]...)
			if c.wire.ToHost != nil {
				bytes = c.wire.ToHost(bytes)
			}
			to <- chunk{bytes, time.Now()}
		}
		if err != nil {
			return // the board is gone
		}
	}
}

func (c *Cable) deliver(from <-chan chunk) {
	for piece := range from {
		if c.wire.Delay > 0 {
			time.Sleep(time.Until(piece.at.Add(c.wire.Delay)))
		}
		c.mu.Lock()
		host := c.host
		c.mu.Unlock()
		n := 0
		if host != nil {
			n, _ = host.Write(piece.bytes) // what an end that is gone does not take is lost, and counted
		}
		c.mu.Lock()
		c.lost += int64(len(piece.bytes) - n)
		c.mu.Unlock()
	}
}

// Plug joins a host's end, in the place of the one before; the cable closes it.
func (c *Cable) Plug(host io.ReadWriteCloser) {
	c.swap(host)
	if host == nil {
		return
	}
	c.wait.Go(func() {
		io.Copy(c.line, host) // ends with either side; then nothing is left to be told
	})
}

func (c *Cable) swap(host io.ReadWriteCloser) {
	c.mu.Lock()
	before := c.host
	c.host = host
	c.mu.Unlock()
	if before != nil {
		before.Close() // a test's own end
	}
}

// Unplug takes the host's end off and closes it.
func (c *Cable) Unplug() { c.swap(nil) }

// Lost tells how many bytes nobody took.
func (c *Cable) Lost() int64 {
	c.mu.Lock()
	defer c.mu.Unlock()
	return c.lost
}

// Close takes the host's end off and waits for the cable's end; the line must
// have ended.
func (c *Cable) Close() {
	c.Unplug()
	c.wait.Wait()
}

// Spoiler returns a Wire.ToHost that flips one bit, or loses one byte, of about
// one byte in every so many.
func Spoiler(seed uint64, every int) func([]byte) []byte {
	rng := rand.New(rand.NewPCG(seed, 11))
	return func(bytes []byte) []byte {
		out := bytes[:0]
		for _, b := range bytes {
			switch rng.IntN(2 * every) {
			case 0:
				b ^= 1 << rng.IntN(8)
			case 1:
				continue
			}
			out = append(out, b)
		}
		return out
	}
}
