package acquire

import (
	"fmt"
	"slices"
	"sync"

	"tautramp/protocol"
)

// gate keeps the first "run" back until every device has said who it is, so
// that no device records a ramp that another one misses. It opens once.
type gate struct {
	open chan struct{}

	mu      sync.Mutex
	present [][]protocol.Chan // by device; nil: not identified, or lost again
	opened  bool
	fits    func([]protocol.Chan) error
}

func newGate(devices int, fits func([]protocol.Chan) error) *gate {
	return &gate{open: make(chan struct{}), present: make([][]protocol.Chan, devices), fits: fits}
}

// measures wants a channel of each quantity.
func measures(want ...protocol.Quantity) func([]protocol.Chan) error {
	return func(all []protocol.Chan) error {
		for _, q := range want {
			if slices.ContainsFunc(all, func(c protocol.Chan) bool { return c.Quantity == q }) {
				continue
			}
			what := string(q)
			if q == protocol.Extension {
				what = "the stretch (extension)"
			}
			return fmt.Errorf("%w: no channel measures %s; the boards declare %s", ErrNotOurs, what, namesOf(all))
		}
		return nil
	}
}

// arrive says that a device is identified. The one that completes the set
// checks that together they measure what is needed.
func (g *gate) arrive(device int, channels []protocol.Chan) error {
	g.mu.Lock()
	defer g.mu.Unlock()
	if g.opened {
		return nil
	}
	g.present[device] = append([]protocol.Chan{}, channels...)
	for _, p := range g.present {
		if p == nil {
			return nil
		}
	}
	if err := g.fits(slices.Concat(g.present...)); err != nil {
		return err
	}
	g.opened = true
	close(g.open)
	return nil
}

// passed reports whether the gate is open.
func (g *gate) passed() bool {
	select {
	case <-g.open:
		return true
	default:
		return false
	}
}

// leave says that a device is lost before the gate has opened.
func (g *gate) leave(device int) {
	g.mu.Lock()
	defer g.mu.Unlock()
	g.present[device] = nil
}

func namesOf(channels []protocol.Chan) string {
	if len(channels) == 0 {
		return "none"
	}
	text := ""
	for i, c := range channels {
		if i > 0 {
			text += ", "
		}
		text += string(c.Quantity)
	}
	return text
}
