package port_test

import (
	"net"
	"testing"

	"tautramp/acquire/port"
	"tautramp/acquire/port/porttest"
)

func TestContractOnPseudoTerminal(t *testing.T) {
	porttest.Check(t, func(t *testing.T, o port.Options) porttest.Ends {
		pair := newPair(t)
		host, err := port.Open(t.Context(), pair.Path, o)
		if err != nil {
			t.Fatal(err)
		}
		return porttest.Ends{Host: host, Board: pair, Unplug: pair.Unplug}
	})
}

func TestContractOnTCP(t *testing.T) {
	porttest.Check(t, func(t *testing.T, o port.Options) porttest.Ends {
		listener, err := net.Listen("tcp", "127.0.0.1:0")
		if err != nil {
			t.Fatal(err)
		}
		host, err := port.Open(t.Context(), "tcp://"+listener.Addr().String(), o)
		if err != nil {
			t.Fatal(err)
		}
		board, err := listener.Accept()
		if err != nil {
			t.Fatal(err)
		}
		if err := listener.Close(); err != nil {
			t.Fatal(err)
		}
		return porttest.Ends{Host: host, Board: once{board}, Unplug: board.Close}
	})
}

func TestContractInMemory(t *testing.T) {
	porttest.Check(t, func(_ *testing.T, o port.Options) porttest.Ends {
		near, far := net.Pipe()
		return porttest.Ends{Host: port.Wrap(near, "memory", o), Board: far, Unplug: far.Close}
	})
}

// once is a connection that may be closed after it was unplugged.
type once struct{ net.Conn }

func (o once) Close() error { _ = o.Conn.Close(); return nil }

// newPair makes a pseudo-terminal that ends with the test.
func newPair(t *testing.T) *port.Pair {
	t.Helper()
	pair, err := port.NewPair()
	if err != nil {
		t.Skipf("no pseudo-terminal on this system: %v", err)
	}
	t.Cleanup(func() {
		if err := pair.Close(); err != nil {
			t.Error(err)
		}
	})
	return pair
}
