package port

import (
	"context"
	"errors"
	"fmt"
	"io"
	"net"
	"os"
	"strings"
	"time"
)

// openTCP dials "tcp://host:port".
func openTCP(ctx context.Context, name string, o Options) (io.ReadWriteCloser, error) {
	address, ok := strings.CutPrefix(name, "tcp://")
	host, service, err := net.SplitHostPort(address)
	if !ok || err != nil || host == "" || service == "" {
		return nil, fmt.Errorf("%w: %q; write tcp://host:port", ErrBadName, name)
	}
	d := net.Dialer{
		Timeout: o.DialTimeout,
		// A bridge that loses its power says nothing: ask it.
		KeepAliveConfig: net.KeepAliveConfig{Enable: true, Idle: 5 * time.Second, Interval: 2 * time.Second, Count: 3},
	}
	c, err := d.DialContext(ctx, "tcp", address)
	if err != nil {
		return nil, dialError(ctx, name, err)
	}
	return Wrap(c, name, o), nil
}

func dialError(ctx context.Context, name string, err error) error {
	if ctx.Err() != nil {
		return fmt.Errorf("opening %s: %w", name, ctx.Err())
	}
	var port *net.ParseError
	var address *net.AddrError
	if errors.As(err, &port) || errors.As(err, &address) {
		return fmt.Errorf("%w: %q (%w); write tcp://host:port", ErrBadName, name, err)
	}
	hint := "is the board or its bridge running, and is the port number right?"
	if os.IsTimeout(err) {
		hint = "check the cable and the address"
	}
	return &absentError{fmt.Sprintf("opening %s: nobody answers at %s (%v); %s", name, strings.TrimPrefix(name, "tcp://"), err, hint), err}
}
