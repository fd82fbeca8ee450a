package acquire

import (
	"context"
	"errors"
	"io"
	"net"
	"slices"
	"strings"
	"testing"
	"testing/synctest"
	"time"

	"tautramp/acquire/recording"
	"tautramp/protocol"
)

func TestPortThatHangsWhileItOpensIsGivenUp(t *testing.T) {
	for name, test := range map[string]struct {
		from int // the opening that hangs; after a loss those before it fail
		want error
		text string
	}{
		"at first":             {1, ErrNoAnswer, "its port did not open within 20.0 s"},
		"after a loss":         {2, ErrGaveUp, "not running for 20.0 s: its port does not open; what"},
		"a while after a loss": {8, ErrGaveUp, "not running for 20.0 s: its port does not open; what"},
	} {
		t.Run(name, func(t *testing.T) {
			synctest.Test(t, func(t *testing.T) {
				b := oneBoard()
				b.atTime = map[time.Duration]func(*life){3 * time.Second: unplug}
				r := newRig(t, b)
				n, dial := 0, b.dial
				r.cfg.Devices[0].Dial = func(ctx context.Context) (io.ReadWriteCloser, error) {
					if n++; n >= test.from {
						<-ctx.Done()
						return nil, ctx.Err()
					}
					if n > 1 {
						return nil, errNoSuchPort
					}
					return dial(ctx)
				}
				begun := time.Now()
				if _, err := r.run(); !errors.Is(err, test.want) || !strings.Contains(err.Error(), test.text) {
					t.Errorf("error %v, want %v with %q", err, test.want, test.text)
				}
				if took := time.Since(begun); took > 23500*time.Millisecond {
					t.Errorf("given up after %v", took)
				}
			})
		})
	}
}

// odd is a connection whose Read or Write is not as it should be.
type odd struct {
	net.Conn
	write func([]byte) (int, error)
	read  func([]byte) (int, error)
}

func (o odd) Write(p []byte) (int, error) {
	if o.write != nil {
		return o.write(p)
	}
	return o.Conn.Write(p)
}

func (o odd) Read(p []byte) (int, error) {
	if o.read != nil {
		return o.read(p)
	}
	return o.Conn.Read(p)
}

func TestOddPortsAreLostPorts(t *testing.T) {
	for name, test := range map[string]struct {
		broken odd
		why    string
	}{
		"write fails":           {odd{write: func([]byte) (int, error) { return 0, errNoSuchPort }}, "write to it: no such port"},
		"write is short":        {odd{write: func(p []byte) (int, error) { return len(p) - 1, nil }}, "write to it: short write"},
		"read returns nothing":  {odd{read: func([]byte) (int, error) { return 0, nil }}, "read from it: multiple Read calls return no data or error"},
		"read ends":             {odd{read: func([]byte) (int, error) { return 0, io.EOF }}, "read from it: EOF"},
		"read ends with a byte": {odd{read: func(p []byte) (int, error) { p[0] = '\n'; return 1, io.EOF }}, "read from it: EOF"},
	} {
		t.Run(name, func(t *testing.T) {
			synctest.Test(t, func(t *testing.T) {
				b := oneBoard()
				r := newRig(t, b)
				dial := b.dial
				r.cfg.Devices[0].Dial = func(ctx context.Context) (io.ReadWriteCloser, error) {
					rwc, err := dial(ctx)
					if b.dials == 1 {
						broken := test.broken
						broken.Conn = rwc.(net.Conn)
						return broken, err
					}
					return rwc, err
				}
				r.end = 10 * time.Second
				entries, err := r.run()
				if err != nil {
					t.Fatal(err)
				}
				if lost := texts(entries, recording.LostPort); !slices.Equal(lost, []string{test.why}) || b.dials != 2 || b.count(protocol.Run) != 1 {
					t.Errorf("lost %q, opened %d times, started %d times; want %q, 2 and 1", lost, b.dials, b.count(protocol.Run), test.why)
				}
			})
		})
	}
}

// What the reader has when the connection is dropped is recorded, up to half a
// line.
func TestWhatWasReadBeforeTheDropIsKept(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		r := newRig(t, oneBoard())
		s := newSession(t.Context(), r.cfg, newGate(1, measures(protocol.Pressure, protocol.Extension)))
		defer s.waitTicks()
		host, far := net.Pipe()
		l := newLink(s, 0)
		l.conn = connect(host, r.cfg.Clock)
		go far.Write([]byte("last words\nand a"))
		synctest.Wait() // the reader has them, and nobody takes them
		l.drop()
		close(s.items)
		var got []string
		for it := range s.items {
			got = append(got, string(it.entry.Wire))
		}
		if !slices.Equal(got, []string{"last words", "and a"}) {
			t.Errorf("kept %q", got)
		}
	})
}
