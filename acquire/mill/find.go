package mill

import (
	"errors"
	"fmt"
	"math"
	"strings"
	"time"
)

// ErrUnknownName is a name that the profile has not, or none where it has
// several.
var ErrUnknownName = errors.New("unknown name")

// What an instrument measures.
const (
	MeasuresSetting   = "setting"
	MeasuresExtension = "extension"
	MeasuresReference = "reference" // what others are compared with on the bench; no figure of a mill rests on it
)

// FindTensioner finds a tensioner by its name; "" is the only one. The error is
// an ErrUnknownName.
func (p *Profile) FindTensioner(name string) (Tensioner, error) {
	return find(p.Tensioners, "tensioner", name, func(t Tensioner) string { return t.Name })
}

// FindBand finds a band by its name; "" is the only one. The error is an
// ErrUnknownName.
func (p *Profile) FindBand(name string) (Band, error) {
	return find(p.Bands, "band", name, func(b Band) string { return b.Name })
}

func find[T any](list []T, what, name string, nameOf func(T) string) (T, error) {
	names := make([]string, len(list))
	for i, e := range list {
		names[i] = nameOf(e)
		if names[i] == name || name == "" && len(list) == 1 {
			return e, nil
		}
	}
	var none T
	known := strings.Join(names, ", ")
	if name == "" {
		return none, fmt.Errorf("%w: the profile has %d of kind %s; name one of: %s", ErrUnknownName, len(list), what, known)
	}
	return none, fmt.Errorf("%w: no %s %q in the profile; known: %s", ErrUnknownName, what, name, known)
}

// FindInstrument is the instrument that measures a setting or the extension in
// the dimension: the one of that serial number, or else the one with the
// largest limit, so that a wrong guess errs to the cautious side.
func (p *Profile) FindInstrument(measures string, d Dim, serial string) (Instrument, bool) {
	var best Instrument
	ok := false
	for _, i := range p.Instruments {
		if i.Measures != measures || i.Limit.Given() && i.Limit.Unit.Dim != d {
			continue
		}
		if serial != "" && i.Serial == serial {
			return i, true
		}
		if !ok || i.Limit.SI > best.Limit.SI {
			best, ok = i, true
		}
	}
	return best, ok
}

// OverdueOn tells whether the instrument's check was due before the day. An
// instrument without a due day is not overdue; Cautions says that it has none.
func (i Instrument) OverdueOn(day time.Time) bool {
	return i.Due != "" && i.Due < day.Format(time.DateOnly)
}

// SettingDim is the dimension that the tensioner is set in.
func (t Tensioner) SettingDim() Dim {
	switch t.SetBy {
	case SetByTorque:
		return DimTorque
	case SetByTurns:
		return DimAngle
	case SetBySpring:
		return DimLength
	}
	return DimPressure
}

// SettingRole is the role of the tensioner's setting.
func (t Tensioner) SettingRole() Role {
	switch t.SetBy {
	case SetByTorque:
		return RoleTorque
	case SetByTurns:
		return RoleTurns
	case SetBySpring:
		return RoleSpring
	}
	return RolePressure
}

// GeometryAreaM2 is N A_c R in m2: the wheel pull in newtons, friction and
// weight left out, for each pascal of oil pressure. It is 0 when the tensioner
// is not set by pressure or its cylinders are not given.
func (t Tensioner) GeometryAreaM2() float64 {
	if t.SetBy != SetByPressure {
		return 0
	}
	return float64(t.Cylinders) * math.Pi / 4 * t.Bore.SI * t.Bore.SI * t.Ratio()
}

// NetAreaM2 is thickness times net width in m2: the steel of one span that
// carries the pull. Teeth carry almost nothing.
func (b Band) NetAreaM2() float64 { return b.Thickness.SI * b.NetWidth.SI }
