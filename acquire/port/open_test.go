package port_test

import (
	"context"
	"errors"
	"io"
	"net"
	"os"
	"path/filepath"
	"strings"
	"testing"
	"testing/iotest"

	"tautramp/acquire/port"
)

func TestOpenRefusesByClass(t *testing.T) {
	dir := t.TempDir()
	text := filepath.Join(dir, "card.txt")
	if err := os.WriteFile(text, []byte("line\n"), 0o600); err != nil {
		t.Fatal(err)
	}
	refused, err := net.Listen("tcp", "127.0.0.1:0")
	if err != nil {
		t.Fatal(err)
	}
	if err := refused.Close(); err != nil { // nobody listens there any more
		t.Fatal(err)
	}
	for _, c := range []struct {
		name  string
		port  string
		class error
		says  string
	}{
		{"empty", "", port.ErrBadName, "tautramp ports"},
		{"blank", "  ", port.ErrBadName, "tautramp ports"},
		{"zero byte", "/dev/tty\x00A", port.ErrBadName, "tautramp ports"},
		{"unknown scheme", "http://board:80", port.ErrBadName, "tcp://host:port"},
		{"tcp without port", "tcp://board", port.ErrBadName, "tcp://host:port"},
		{"tcp without host", "tcp://:4000", port.ErrBadName, "tcp://host:port"},
		{"tcp without slashes", "tcp:board:4000", port.ErrBadName, "tcp://host:port"},
		{"tcp port out of range", "tcp://127.0.0.1:99999", port.ErrBadName, "tcp://host:port"},
		{"tcp nobody listens", "tcp://" + refused.Addr().String(), port.ErrNotFound, "nobody answers at " + refused.Addr().String()},
		{"replay without path", "file:", port.ErrBadName, "file:"},
		{"replay of nothing", "file:" + filepath.Join(dir, "none.txt"), port.ErrNotFound, "no such file"},
		{"replay of a folder", "file:" + dir, port.ErrBadName, "not a file"},
	} {
		t.Run(c.name, func(t *testing.T) { wantRefused(t, c.port, c.class, c.says) })
	}
}

// wantRefused demands the class and a next step in the text.
func wantRefused(t *testing.T, name string, class error, says string) {
	t.Helper()
	p, err := port.Open(t.Context(), name, port.Options{})
	if p != nil {
		t.Fatalf("opened %q as %T", name, p)
	}
	if !errors.Is(err, class) {
		t.Errorf("got %v; want an error that is %q", err, class)
	}
	if err != nil && strings.Contains(err.Error(), port.ErrNotFound.Error()) && !strings.HasPrefix(name, "/dev/") {
		t.Errorf("got %q; want no talk of ports", err)
	}
	if err != nil && !strings.Contains(err.Error(), says) {
		t.Errorf("got %q; want it to say %q", err, says)
	}
}

func TestOpenEndsWithItsContext(t *testing.T) {
	over, cancel := context.WithCancel(t.Context())
	cancel()
	for _, name := range []string{"tcp://127.0.0.1:9", "/dev/ttyACM0"} {
		if _, err := port.Open(over, name, port.Options{}); !errors.Is(err, context.Canceled) {
			t.Errorf("%s: got %v", name, err)
		}
	}
}

func TestReplayReadsToTheEndAndSwallowsCommands(t *testing.T) {
	const lines = "first\nsecond\nlast without a line end"
	path := filepath.Join(t.TempDir(), "card.txt")
	if err := os.WriteFile(path, []byte(lines), 0o600); err != nil {
		t.Fatal(err)
	}
	p, err := port.Open(t.Context(), "file:"+path, port.Options{})
	if err != nil {
		t.Fatal(err)
	}
	got, err := io.ReadAll(iotest.OneByteReader(p))
	if err != nil || string(got) != lines {
		t.Errorf("read %q, %v", got, err)
	}
	if n, err := p.Read(make([]byte, 4)); n != 0 || !errors.Is(err, io.EOF) {
		t.Errorf("read past the end gave %d, %v", n, err)
	}
	if n, err := p.Write([]byte("who\nrun\n")); n != 8 || err != nil {
		t.Errorf("write gave %d, %v", n, err)
	}
	if err := errors.Join(p.Close(), p.Close()); err != nil {
		t.Errorf("closing twice: %v", err)
	}
	if _, err := p.Read(make([]byte, 4)); !errors.Is(err, port.ErrClosed) {
		t.Errorf("read after close: %v", err)
	}
	if _, err := p.Write([]byte("x")); !errors.Is(err, port.ErrClosed) {
		t.Errorf("write after close: %v", err)
	}
}
