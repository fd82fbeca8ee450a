package port

import (
	"context"
	"errors"
	"fmt"
	"io"
	"path/filepath"
	"strings"
)

// Dialer gives a function that opens the port of that name, and after a loss the
// same board again, also where a USB board has come back under another name. It
// notes which board it is (USB vendor, product and serial number) once, by
// listing the ports before the first opening; it lists them again only when the
// name is not there any more, once for each call. For other ports than USB it is
// Open. Calls must not overlap. Errors are Open's.
func Dialer(name string, o Options) func(ctx context.Context) (io.ReadWriteCloser, error) {
	return newDialer(name, o, List, Open).dial
}

// dialer is one board and how to open it. The two functions are passed in for
// the tests.
type dialer struct {
	name string
	o    Options
	list func() ([]Info, error)
	open func(context.Context, string, Options) (io.ReadWriteCloser, error)

	tried  bool
	opened bool // once at least
	board  Info // Vendor "": not known, or no USB board
}

func newDialer(name string, o Options, list func() ([]Info, error), open func(context.Context, string, Options) (io.ReadWriteCloser, error)) *dialer {
	return &dialer{name: name, o: o, list: list, open: open}
}

func (d *dialer) dial(ctx context.Context) (io.ReadWriteCloser, error) {
	if !d.tried {
		d.tried = true
		d.note()
	}
	p, err := d.open(ctx, d.name, d.o)
	if err == nil {
		d.opened = true
		return p, nil
	}
	if !d.opened || d.board.Vendor == "" || !errors.Is(err, ErrNotFound) {
		return nil, err
	}
	return d.elsewhere(ctx, err)
}

// note looks up which board it is. Where that cannot be told, the name is all
// there is.
func (d *dialer) note() {
	if !mayBeUSB(d.name) {
		return
	}
	all, err := d.list()
	if err != nil {
		return
	}
	path := realPath(d.name)
	for _, i := range all {
		if realPath(i.Path) == path {
			d.board = i
		}
	}
}

// elsewhere opens the board under the name that it has now.
func (d *dialer) elsewhere(ctx context.Context, missing error) (io.ReadWriteCloser, error) {
	all, err := d.list()
	if err != nil {
		return nil, fmt.Errorf("%w; and listing the ports: %w", missing, err)
	}
	at, err := find(all, d.board)
	if err != nil {
		return nil, fmt.Errorf("%w; %w", missing, err)
	}
	return d.open(ctx, at, d.o)
}

// mayBeUSB is false for what is certainly not: other schemes, pseudo-terminals,
// and the built-in ports of Linux, which a listing would open.
func mayBeUSB(name string) bool {
	if strings.HasPrefix(name, "/dev/pts/") || strings.HasPrefix(name, "/dev/ttyS") || strings.HasPrefix(name, "/dev/ttys") {
		return false
	}
	return !strings.HasPrefix(name, "tcp:") && !strings.HasPrefix(name, "file:")
}

// realPath follows links such as those that name a board by its serial number.
func realPath(name string) string {
	if path, err := filepath.EvalSymlinks(name); err == nil {
		return path
	}
	return name
}
