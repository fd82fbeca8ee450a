package mill

// readGaugeLimit takes one [[gauge_limit]].
func readGaugeLimit(t *table) GaugeLimit {
	defer t.rest()
	dims := []Dim{DimPressure, DimLength, DimTorque, DimAngle, DimForce}
	l := GaugeLimit{
		Name:            t.need("name", "write what it is called, such as \"own 0.5 %\" or the name of the class that it replaces"),
		Error:           Setting{t.quantity("error", dims...)},
		ErrorShare:      t.percents("error_percent"),
		Hysteresis:      Setting{t.quantity("hysteresis", dims...)},
		HysteresisShare: t.number("hysteresis_percent", 0, mostPercent) / 100,
		Repeatability:   Setting{t.quantity("repeatability", dims...)},
		Source:          t.need("source", "write where the limit was read, such as the standard with its year and table"),
	}
	if t.has("error") == t.has("error_percent") {
		t.faults.add(t.at("error"), "write error, such as \"3 psi\", or error_percent, such as 1.6, and not both", "one limit of error is wanted")
	}
	return l
}

// mostPercent is beyond any class of instrument.
const mostPercent = 50

// percents takes one share of the span for the whole scale, or three: for its
// lower quarter, middle half and upper quarter.
func (t *table) percents(key string) (shares [3]float64) {
	list, isList := t.values[key].([]any)
	if !isList {
		v := t.number(key, 0, mostPercent) / 100
		return [3]float64{v, v, v}
	}
	t.take(key)
	if len(list) != len(shares) {
		t.faults.add(t.at(key), "write one number, or three: lower quarter, middle half, upper quarter", "%d numbers", len(list))
		return shares
	}
	for i, v := range list {
		one := &table{faults: t.faults, path: t.path, values: map[string]any{key: v}}
		shares[i] = one.number(key, 0, mostPercent) / 100
	}
	return shares
}
