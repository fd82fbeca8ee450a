package report

import (
	"bytes"
	"encoding/json"

	"tautramp/analyze/estimate"
)

// object is a JSON object whose members keep the order they are written in.
type object []member

type member struct {
	name  string
	value any
}

// MarshalJSON writes the members in order.
func (o object) MarshalJSON() ([]byte, error) {
	var b bytes.Buffer
	out := json.NewEncoder(&b) // its line ends are space, which JSON allows
	out.SetEscapeHTML(false)
	b.WriteByte('{')
	for i, m := range o {
		if i > 0 {
			b.WriteByte(',')
		}
		if err := out.Encode(m.name); err != nil {
			return nil, err
		}
		b.WriteByte(':')
		if err := out.Encode(m.value); err != nil {
			return nil, err
		}
	}
	b.WriteByte('}')
	return b.Bytes(), nil
}

// number is a JSON number, or null where x is not finite.
func number(x float64) any {
	if !finite(x) {
		return nil
	}
	return x
}

// given is a number that is never zero or below when it is known.
func given(x float64) any {
	if x <= 0 {
		return nil
	}
	return number(x)
}

// estimateJSON is an estimate as an object, SI, or {"unknown": why}. Infinite
// degrees of freedom and ends of intervals that do not exist are null.
func estimateJSON(e estimate.Estimate) object {
	if why := unknownWhy(e); why != "" {
		return object{{"unknown", why}}
	}
	if !finite(e.Random) || !finite(e.System) {
		return object{{"unknown", "the computation gave no finite uncertainty"}}
	}
	low, high := e.Interval95()
	randomLow, randomHigh := e.RandomInterval95()
	return object{
		{"value", e.Value}, {"random_std", e.Random}, {"system_std", e.System}, {"dof", number(e.DoF)},
		{"interval95_low", number(low)}, {"interval95_high", number(high)},
		{"random95_half", number((randomHigh - randomLow) / 2)}, {"method", clean(e.Method, textLength)},
	}
}

// inSetting is an object with one member that is named by the dimension of the
// setting: setting_pa, setting_n_m, setting_rad or setting_m.
func (s setBy) inSetting(value any) object { return object{{"setting_" + s.member, value}} }
