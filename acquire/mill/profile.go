// Package mill is the profile of a mill: its tensioners, bands, measuring rig,
// instruments and limits, read from mill.toml, with every quantity in SI and
// in the unit it was entered in. Start with Parse.
//
// Deliberately absent: files (callers pass bytes) and anything measured.
package mill

// Profile is one mill.toml. A field's key in the file is its name in lower case
// with underscores, unless its comment names another.
type Profile struct {
	Mill        Mill
	Tensioners  []Tensioner // [[tensioner]]
	Bands       []Band      // [[band]]
	Rig         Rig
	Instruments []Instrument // [[instrument]]
	GaugeLimits []GaugeLimit // [[gauge_limit]]

	OwnThresholds map[ThresholdKey]float64 // [thresholds]: limits of the findings that this mill sets itself
}

// Mill is whose tensioners these are.
type Mill struct {
	Name       string
	ServicedBy string
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

// Tensioner is what pulls one band mill's wheels apart.
type Tensioner struct {
	Name         string
	SetBy        SetBy
	SettingLimit Setting     // mandatory; the maker's, or lower
	Cylinders    int         // N, pressure-set
	Bore         Length      // of one cylinder
	TravelRatio  float64     // R = cylinder, screw or spring travel / wheel travel; 0 means 1
	LiftedWeight Force       // W; optional
	Hold         Hold        // optional
	OffLoadDrag  Pressure    // setting that just moves the cylinders with nothing on them, by the maker's test; optional
	OilVolume    Volume      // shut in behind the locking valve, in cylinders and hose; optional
	Screw        *Screw      // [tensioner.screw]; optional
	Turns        *TurnsChain // [tensioner.turns]; optional
	Spring       *Spring     // [tensioner.spring]; optional
	Note         string      // for the report
	Dial         *DialFace   // [tensioner.dial]: the mill's own dial, that cards are read on; optional
	Rehearsal    *Rehearsal  // what the simulated rig pretends; never read by the analysis
}

// DialFace is what a mill's own dial shows: its numbers are what people set by.
type DialFace struct {
	Name       string
	Unit       string  // "psi", "bar", "kgf/cm2" and the like, or "divisions": a bare scale
	Graduation float64 // from mark to mark, in its unit
}

// Rehearsal is the hidden truth of a simulated tensioner. Band and target
// come from the profile.
type Rehearsal struct {
	FrictionConstant     Force   // F0
	FrictionProportional float64 // mu
	Weight               Force   // W
	BandLoop             Length  // length of the band

	FrictionThread float64   // of the screw's thread, coefficient; set by torque
	FrictionCollar float64   // of its collar, coefficient
	RestTorque     Torque    // T0 of the screw
	Play           Angle     // turns lost at each reversal
	GiveStiffness  Stiffness // of frame and tyres together; 0 means they do not give
	SpringRate     Stiffness // of one spring; 0 means no springs
	SpringFree     Length
	SpringBind     Length // 0 means that they never touch
}

// Band is one band section.
type Band struct {
	Name       string
	Thickness  Length
	NetWidth   Length   // back to gullet bottom
	GrossWidth Length   // back to tooth tip; optional, a check on NetWidth
	Target     Pressure // band stress wanted; the user's or the maker's
	Modulus    Pressure // Young's modulus E
	ModulusStd float64  // modulus_uncertainty: relative, standard; 0 means 0.01
	Loop       Length   // all the way round; optional
	Note       string   // for the report
}

// Rig is the extensometer on the band.
type Rig struct {
	GaugeLength    Length
	GaugeLengthStd Length // gauge_length_uncertainty: standard; 0 means 0.25 % of GaugeLength
	Material       string // of the bar; text for the report
	Faces          int    // faces measured, 1 or 2; 0 means 1
	WarmthLimit    Warmth // temperature_difference: by which band and bar may drift apart between zero and target; not given means 1 degF
	Misalignment   Angle  // of the bar against the band, at most; not given means 2 deg
	Curl           Length // stretch that a curl of the band may feign on one face; not given means 15 millionths of GaugeLength
	Note           string // place and face on the band, for the report
}

// GaugeLimit is a limit of error for bench tests that the user wrote down: his
// own, or one that replaces a built-in one of the same name.
type GaugeLimit struct {
	Name            string
	Error           Setting    // largest error, absolute
	ErrorShare      [3]float64 // error_percent / 100, of the span: lower quarter, middle half, upper quarter
	Hysteresis      Setting    // largest difference between falling and rising; optional
	HysteresisShare float64    // hysteresis_percent / 100, of the span; optional
	Repeatability   Setting    // largest spread of like readings; optional
	Source          string     // where it was read
}
