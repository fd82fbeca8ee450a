package station

import (
	"fmt"
	"strings"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/acquire/recording"
	"tautramp/analyze/gauge"
	"tautramp/protocol"
)

// roles is which channel is what. A nil source has no channel.
type roles struct {
	reference, tested, temperature *pairing.Source
	spec                           map[pairing.Source]pairing.Channel
}

// quantityOf is what a channel must measure for the plan.
func quantityOf(p gauge.Plan) (protocol.Quantity, error) {
	switch p.Dim() {
	case mill.DimPressure:
		return protocol.Pressure, nil
	case mill.DimLength:
		return protocol.Extension, nil
	case mill.DimTorque:
		return protocol.Torque, nil
	case mill.DimAngle:
		return protocol.Angle, nil
	case mill.DimForce:
		return protocol.Force, nil
	}
	return "", fmt.Errorf("%w: the plan's points have no quantity", ErrNoChannel)
}

// assign finds the channels among those declared.
func assign(p gauge.Plan, bench recording.Bench, profile *mill.Profile, declared []pairing.Channel) (roles, error) {
	r := roles{spec: map[pairing.Source]pairing.Channel{}}
	quantity, err := quantityOf(p)
	if err != nil {
		return r, err
	}
	var fit []pairing.Channel
	for _, c := range declared {
		r.spec[sourceOf(c)] = c
		switch c.Spec.Quantity {
		case quantity:
			fit = append(fit, c)
		case protocol.Temperature:
			if r.temperature == nil {
				r.temperature = pointTo(c)
			}
		}
	}
	switch {
	case len(fit) == 0:
		return r, fmt.Errorf("%w: none measures %s", ErrNoChannel, quantity)
	case p.ReferenceStreams() && p.IndicatedStreams():
		return r, r.both(fit, bench, profile)
	case p.ReferenceStreams():
		r.reference, err = only(fit, serialOf(profile, bench.Reference), "the reference? Write its serial number in mill.toml as its board declares it")
		return r, err
	case bench.Channel != "":
		if r.tested = named(fit, bench.Channel); r.tested == nil {
			return r, notThere(bench.Channel, fit)
		}
	default:
		r.tested, err = only(fit, serialOf(profile, bench.Tested), "the tested instrument? Name its board and channel, or write its serial number in mill.toml as its board declares it")
		return r, err
	}
	return r, nil
}

// both tells the two apart: by the channel named, or by serial numbers.
func (r *roles) both(fit []pairing.Channel, bench recording.Bench, profile *mill.Profile) error {
	if len(fit) < 2 {
		return fmt.Errorf("%w: the tested instrument and the reference are both read, and only %s measures that", ErrNoChannel, nameOf(fit[0]))
	}
	if bench.Channel != "" {
		if r.tested = named(fit, bench.Channel); r.tested == nil {
			return notThere(bench.Channel, fit)
		}
	} else {
		r.tested = bySerial(fit, serialOf(profile, bench.Tested))
	}
	var others []pairing.Channel
	for _, c := range fit {
		if r.tested == nil || sourceOf(c) != *r.tested {
			others = append(others, c)
		}
	}
	r.reference = bySerial(others, serialOf(profile, bench.Reference))
	switch {
	case r.tested != nil && r.reference == nil && len(others) == 1:
		r.reference = pointTo(others[0])
	case r.tested == nil && r.reference != nil && len(fit) == 2:
		for _, c := range fit {
			if sourceOf(c) != *r.reference {
				r.tested = pointTo(c)
			}
		}
	}
	if r.tested == nil || r.reference == nil {
		return fmt.Errorf("%w: which of %s is the tested instrument? name its board and channel, or write in mill.toml the serial numbers that the boards declare", ErrNoChannel, namesOf(fit))
	}
	return nil
}

func notThere(name string, fit []pairing.Channel) error {
	return fmt.Errorf("%w: there is no channel %s of that quantity; there are %s", ErrNoChannel, name, namesOf(fit))
}

func sourceOf(c pairing.Channel) pairing.Source {
	return pairing.Source{Device: c.Device, Channel: c.Spec.ID}
}

func pointTo(c pairing.Channel) *pairing.Source { s := sourceOf(c); return &s }

func nameOf(c pairing.Channel) string { return fmt.Sprintf("%d%c", c.Device+1, c.Spec.ID) }

func namesOf(list []pairing.Channel) string {
	var names []string
	for _, c := range list {
		names = append(names, nameOf(c))
	}
	return strings.Join(names, ", ")
}

func named(list []pairing.Channel, name string) *pairing.Source {
	for _, c := range list {
		if nameOf(c) == name {
			return pointTo(c)
		}
	}
	return nil
}

func bySerial(list []pairing.Channel, serial string) *pairing.Source {
	for _, c := range list {
		if serial != "" && c.Spec.Serial == serial {
			return pointTo(c)
		}
	}
	return nil
}

// only is the channel of that serial number, or else the only one there is.
func only(list []pairing.Channel, serial, which string) (*pairing.Source, error) {
	if found := bySerial(list, serial); found != nil {
		return found, nil
	}
	if len(list) > 1 {
		return nil, fmt.Errorf("%w: which of %s is %s", ErrNoChannel, namesOf(list), which)
	}
	return pointTo(list[0]), nil
}

// instrument is the one of that name in the profile.
func instrument(p *mill.Profile, name string) mill.Instrument {
	if p != nil {
		for _, i := range p.Instruments {
			if i.Name == name {
				return i
			}
		}
	}
	return mill.Instrument{Name: name}
}

func serialOf(p *mill.Profile, name string) string { return instrument(p, name).Serial }

// Fits looks at what the boards declare, before they are started; its error
// wraps ErrNoChannel. Which channel is which is seen later.
func Fits(p gauge.Plan) func([]protocol.Chan) error {
	return func(declared []protocol.Chan) error {
		quantity, err := quantityOf(p)
		if err != nil {
			return err
		}
		n, wanted := 0, 1
		for _, c := range declared {
			if c.Quantity == quantity {
				n++
			}
		}
		if p.ReferenceStreams() && p.IndicatedStreams() {
			wanted = 2
		}
		if n < wanted {
			return fmt.Errorf("%w: %d measure %s, the plan needs %d", ErrNoChannel, n, quantity, wanted)
		}
		return nil
	}
}
