// Package mill is the profile of a mill: its tensioners, bands, measuring rig,
// instruments and limits, read from mill.toml, with every quantity in SI and
// in the unit it was entered in. Start with Parse.
//
// Deliberately absent: files (callers pass bytes) and anything measured.
package mill

// Profile is one mill.toml.
type Profile struct {
	Mill        Mill         `toml:"mill"`
	Tensioners  []Tensioner  `toml:"tensioner"`
	Bands       []Band       `toml:"band"`
	Rig         Rig          `toml:"rig"`
	Instruments []Instrument `toml:"instrument"`
}

// Mill is whose tensioners these are.
type Mill struct {
	Name       string `toml:"name"`
	ServicedBy string `toml:"serviced_by"`
}

// SetBy is the quantity that a tensioner is set by.
type SetBy string

// What a tensioner may be set by.
const (
	SetByPressure SetBy = "pressure"
	SetByTorque   SetBy = "torque"
	SetByTurns    SetBy = "turns"
	SetBySpring   SetBy = "spring"
)

// Hold says what happens to the oil once the tensioner is set.
type Hold string

// How a set tensioner holds. The zero value is not stated.
const (
	HoldMaintained Hold = "maintained" // the pressure is kept up while the mill runs
	HoldLocked     Hold = "locked"     // a valve locks the oil in
)

// Tensioner is one strain system of one mill.
type Tensioner struct {
	Name         string     `toml:"name"`
	SetBy        SetBy      `toml:"set_by"`
	SettingLimit Setting    `toml:"setting_limit"` // mandatory; the maker's, or lower
	Cylinders    int        `toml:"cylinders"`     // N, pressure-set
	Bore         Length     `toml:"bore"`          // of one cylinder
	TravelRatio  float64    `toml:"travel_ratio"`  // R = cylinder travel / wheel travel; 0 means 1
	LiftedWeight Force      `toml:"lifted_weight"` // W; optional
	Hold         Hold       `toml:"hold"`          // optional
	Rehearsal    *Rehearsal `toml:"rehearsal"`     // what the simulated rig pretends; never read by the analysis
}

// Rehearsal is the hidden truth of a simulated tensioner.
type Rehearsal struct {
	FrictionConstant     Force   `toml:"friction_constant"`     // F0
	FrictionProportional float64 `toml:"friction_proportional"` // mu
	Weight               Force   `toml:"weight"`                // W
	BandLoop             Length  `toml:"band_loop"`             // length of the band
}

// Band is one band section.
type Band struct {
	Name       string   `toml:"name"`
	Thickness  Length   `toml:"thickness"`
	NetWidth   Length   `toml:"net_width"`           // back to gullet bottom
	GrossWidth Length   `toml:"gross_width"`         // back to tooth tip; optional, a check on NetWidth
	Target     Pressure `toml:"target"`              // band stress wanted; the user's or the maker's
	Modulus    Pressure `toml:"modulus"`             // Young's modulus E
	ModulusStd float64  `toml:"modulus_uncertainty"` // relative standard uncertainty; 0 means 0.01
}

// Rig is the extensometer on the band.
type Rig struct {
	GaugeLength    Length `toml:"gauge_length"`
	GaugeLengthStd Length `toml:"gauge_length_uncertainty"` // standard; 0 means 0.25 % of GaugeLength
	Material       string `toml:"material"`                 // of the bar; text for the report
	Faces          int    `toml:"faces"`                    // faces measured, 1 or 2; 0 means 1
}

// Instrument is one sensor or gauge as certified.
type Instrument struct {
	Name     string  `toml:"name"`
	Serial   string  `toml:"serial"`
	Measures string  `toml:"measures"` // "setting" or "extension"
	Limit    Setting `toml:"limit"`    // largest error by its certificate or class; standard uncertainty = limit / sqrt 3
	Due      string  `toml:"due"`      // next check, YYYY-MM-DD
}
