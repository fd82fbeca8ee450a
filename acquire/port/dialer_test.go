package port

import (
	"context"
	"errors"
	"io"
	"net"
	"slices"
	"testing"
)

// bench is a machine with ports that come and go.
type bench struct {
	ports  []Info
	lists  int
	opened []string
}

func (b *bench) list() ([]Info, error) { b.lists++; return b.ports, nil }

func (b *bench) open(_ context.Context, name string, _ Options) (io.ReadWriteCloser, error) {
	if !slices.ContainsFunc(b.ports, func(i Info) bool { return i.Path == name }) {
		return nil, &absentError{"no " + name, nil}
	}
	b.opened = append(b.opened, name)
	p, _ := net.Pipe()
	return p, nil
}

func (b *bench) dialer(name string) *dialer { return newDialer(name, Options{}, b.list, b.open) }

func TestBoardIsFoundAgainUnderAnotherName(t *testing.T) {
	ours := Info{Path: "/dev/ttyACM0", Vendor: "1A2B", Model: "0001", Serial: "77"}
	other := Info{Path: "/dev/ttyACM9", Vendor: "1A2B", Model: "0001", Serial: "78"}
	b := &bench{ports: []Info{ours, other}}
	d := b.dialer(ours.Path)
	for range 3 { // lost and there again under its own name: nothing is listed
		if _, err := d.dial(t.Context()); err != nil {
			t.Fatal(err)
		}
	}
	if b.lists != 1 {
		t.Errorf("listed %d times, want once", b.lists)
	}
	b.ports = []Info{other}
	if _, err := d.dial(t.Context()); !errors.Is(err, ErrNotFound) || b.lists != 2 {
		t.Errorf("away: %v, listed %d times", err, b.lists)
	}
	moved := ours
	moved.Path = "/dev/ttyACM1"
	b.ports = []Info{other, moved}
	if _, err := d.dial(t.Context()); err != nil || b.lists != 3 || b.opened[len(b.opened)-1] != moved.Path {
		t.Errorf("moved: %v, listed %d times, opened %q", err, b.lists, b.opened)
	}
	b.ports = []Info{other, ours}
	if _, err := d.dial(t.Context()); err != nil || b.opened[len(b.opened)-1] != ours.Path {
		t.Errorf("back: %v, opened %q", err, b.opened)
	}
}

func TestTwoBoardsAlikeAreNotGuessedAt(t *testing.T) {
	ours := Info{Path: "COM3", Vendor: "1A2B", Model: "0001"}
	b := &bench{ports: []Info{ours}}
	d := b.dialer(ours.Path)
	if _, err := d.dial(t.Context()); err != nil {
		t.Fatal(err)
	}
	b.ports = []Info{{Path: "COM4", Vendor: "1A2B", Model: "0001"}, {Path: "COM5", Vendor: "1A2B", Model: "0001"}}
	if _, err := d.dial(t.Context()); !errors.Is(err, ErrNotFound) || !errors.Is(err, ErrBadName) || len(b.opened) != 1 {
		t.Errorf("%v, opened %q", err, b.opened)
	}
}

func TestNothingIsListedForOtherPortsThanUSB(t *testing.T) {
	for _, name := range []string{"tcp://127.0.0.1:4000", "file:card.txt", "/dev/pts/3", "/dev/ttyS0", "/dev/ttys003"} {
		b := &bench{ports: []Info{{Path: name}}}
		d := b.dialer(name)
		if _, err := d.dial(t.Context()); err != nil || b.lists != 0 {
			t.Errorf("%s: %v, listed %d times", name, err, b.lists)
		}
		b.ports = nil
		if _, err := d.dial(t.Context()); !errors.Is(err, ErrNotFound) || b.lists != 0 {
			t.Errorf("%s away: %v, listed %d times", name, err, b.lists)
		}
	}
}

func TestFirstOpeningIsNeverOfAnotherName(t *testing.T) {
	b := &bench{ports: []Info{{Path: "/dev/ttyACM1", Vendor: "1A2B", Model: "0001", Serial: "77"}}}
	if _, err := b.dialer("/dev/ttyACM0").dial(t.Context()); !errors.Is(err, ErrNotFound) || b.lists != 1 || len(b.opened) != 0 {
		t.Errorf("%v, listed %d times, opened %q", err, b.lists, b.opened)
	}
}

func TestDialerOpensAsOpenDoes(t *testing.T) {
	if _, err := Dialer("tcp://nowhere", Options{})(t.Context()); !errors.Is(err, ErrBadName) {
		t.Errorf("%v", err)
	}
}
