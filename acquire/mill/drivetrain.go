package mill

import "math"

// Screw is the screw that loads a tensioner, with the collar or bearing that it
// turns on. The frictions are what is expected of it; they judge a measured
// figure and never make one.
type Screw struct {
	Diameter       Length  // outside the thread
	Lead           Length  // travel for one turn
	PitchDiameter  Length  // d_m; not given: Diameter less half the Lead, a trapezoidal thread of one start
	FlankAngle     Angle   // between one flank and the plane across the screw; not given: 15 degrees
	CollarRadius   Length  // mean radius of the collar or thrust bearing; not given: it has none to speak of
	RestTorque     Torque  // T0, that it takes without a load; optional
	ThreadFriction float64 // expected coefficient; 0 means not given
	CollarFriction float64 // expected coefficient; 0 means none, or a rolling bearing
}

// TurnsChain is what lies between the turns of a screw or hand wheel and the
// stretch of the band.
type TurnsChain struct {
	Lead           Length    // travel for one turn; not given: the screw's
	FrameStiffness Stiffness // wheel pull for the give of the frame; optional
	TyreStiffness  Stiffness // wheel pull for the give of the tyres; optional
	BandLoop       Length    // band_loop: all the way round
}

// UnderLoad says which way a spring's length goes as its load rises.
type UnderLoad string

// The two kinds of spring.
const (
	Shorter UnderLoad = "shorter" // pressed together
	Longer  UnderLoad = "longer"  // drawn apart
)

// Spring is the spring between the screw and the wheel.
type Spring struct {
	UnderLoad  UnderLoad
	Rate       Stiffness // of one spring, or of one stack of disc springs; optional
	FreeLength Length    // without a load
	BindLength Length    // bind_length: coils or discs touch; optional
	Parallel   int       // springs side by side; 0 means 1
}

// Rising turns a setting as the mill shows it into one that rises with the load,
// and such a one back into what the mill shows. It is the one place that knows
// of settings that fall as the load rises: the length of a spring that is
// pressed together, of which the rest of the program sees how much shorter it
// is than without a load. Every other setting is itself.
func (t Tensioner) Rising(settingSI float64) float64 {
	if t.FallsWithLoad() {
		return t.Spring.FreeLength.SI - settingSI
	}
	return settingSI
}

// FallsWithLoad tells whether the mill shows less as the load rises.
func (t Tensioner) FallsWithLoad() bool {
	return t.SetBy == SetBySpring && t.Spring != nil && t.Spring.UnderLoad == Shorter
}

// FreeSI is the setting of springs without a load, as one that rises with it.
func (t Tensioner) FreeSI() float64 {
	if t.SetBy == SetBySpring && t.Spring != nil {
		return t.Rising(t.Spring.FreeLength.SI)
	}
	return 0
}

// LimitSI is the setting limit as a setting that rises with the load.
func (t Tensioner) LimitSI() float64 { return t.Rising(t.SettingLimit.SI) }

// Ratio is travel at the cylinder, screw or spring for travel of the wheel.
func (t Tensioner) Ratio() float64 {
	if t.TravelRatio == 0 {
		return 1
	}
	return t.TravelRatio
}

// WheelTravelM is the travel of the wheel in m for one turn, were nothing to
// give; 0 when no lead is given.
func (t Tensioner) WheelTravelM() float64 {
	switch {
	case t.Turns != nil && t.Turns.Lead.Given():
		return t.Turns.Lead.SI / t.Ratio()
	case t.Screw != nil:
		return t.Screw.Lead.SI / t.Ratio()
	}
	return 0
}

// WheelRate is the pull at the wheel in N for its travel in m with the springs
// alone giving way; 0 when their rate is not given.
func (t Tensioner) WheelRate() float64 {
	if t.Spring == nil {
		return 0
	}
	return t.Spring.Rate.SI * float64(max(t.Spring.Parallel, 1)) * t.Ratio() * t.Ratio()
}

// PitchDiameterM is d_m in m: as given, or for a trapezoidal thread of one start
// d - P/2 (ISO 2904; from memory).
func (s Screw) PitchDiameterM() float64 {
	if s.PitchDiameter.Given() {
		return s.PitchDiameter.SI
	}
	return s.Diameter.SI - s.Lead.SI/2
}

// FlankRad is the flank angle in rad: as given, or that of a 30 degree
// trapezoidal thread.
func (s Screw) FlankRad() float64 {
	if s.FlankAngle.Given() {
		return s.FlankAngle.SI
	}
	return 15 * math.Pi / 180
}

// readDrivetrain takes the tables of what lies between the setting and the wheel.
func (t *table) readDrivetrain(s *Tensioner) {
	if e, ok := t.one("screw"); ok {
		s.Screw = readScrew(e)
	}
	if e, ok := t.one("turns"); ok {
		s.Turns = readTurns(e)
	}
	if e, ok := t.one("spring"); ok {
		s.Spring = readSpring(e)
	}
	if s.SetBy == SetByPressure {
		for _, key := range []string{"screw", "turns", "spring"} {
			if t.has(key) {
				t.faults.add(t.at(key), `take the table out, or write set_by = "torque", "turns" or "spring"`,
					"belongs to a tensioner with a screw or a spring, this one is set by pressure")
			}
		}
	}
	if s.Turns != nil && !s.Turns.Lead.Given() && s.Screw == nil {
		t.faults.add(t.at("turns"), `write lead = "5 mm", or the table [tensioner.screw] with its lead`, "how far does one turn move the screw?")
	}
	if s.FallsWithLoad() && s.Spring.FreeLength.Given() && s.SettingLimit.Given() && s.SettingLimit.SI >= s.Spring.FreeLength.SI {
		t.faults.add(t.at("setting_limit"), "write the shortest length that the spring may be drawn to",
			"%s is not less than the free length %s of a spring that gets shorter under load", s.SettingLimit, s.Spring.FreeLength)
	}
}

func readScrew(t *table) *Screw {
	defer t.rest()
	s := &Screw{
		Diameter:       Length{t.needQuantity("diameter", "measure it outside the thread", DimLength)},
		Lead:           Length{t.needQuantity("lead", "write how far one full turn moves the screw", DimLength)},
		PitchDiameter:  Length{t.quantity("pitch_diameter", DimLength)},
		FlankAngle:     Angle{t.orZero("flank_angle", DimAngle)},
		CollarRadius:   Length{t.orZero("collar_radius", DimLength)},
		RestTorque:     Torque{t.orZero("rest_torque", DimTorque)},
		ThreadFriction: t.number("thread_friction", 0, 0.9),
		CollarFriction: t.number("collar_friction", 0, 0.9),
	}
	const steepest = 45 * math.Pi / 180
	switch d, lead := s.Diameter.SI, s.Lead.SI; {
	case d == 0 || lead == 0: // told already
	case s.PitchDiameter.SI >= d:
		t.faults.add(t.at("pitch_diameter"), "it is measured halfway down the flanks", "%s is not less than the diameter %s", s.PitchDiameter, s.Diameter)
	case lead > 2*d:
		t.faults.add(t.at("lead"), "check that the units are not mixed up", "%s is more than twice the diameter %s", s.Lead, s.Diameter)
	case !s.PitchDiameter.Given() && s.PitchDiameterM() <= d/2:
		t.faults.add(t.at("lead"), "a thread of several starts needs its pitch_diameter too", "%s is too much for one thread on %s", s.Lead, s.Diameter)
	}
	if s.FlankAngle.SI > steepest {
		t.faults.add(t.at("flank_angle"), "it is half the angle between two flanks: 15 deg for a trapezoidal thread, 0 deg for a square one", "%s is too steep", s.FlankAngle)
	}
	return s
}

func readTurns(t *table) *TurnsChain {
	defer t.rest()
	return &TurnsChain{
		Lead:           Length{t.quantity("lead", DimLength)},
		FrameStiffness: Stiffness{t.quantity("frame_stiffness", DimStiffness)},
		TyreStiffness:  Stiffness{t.quantity("tyre_stiffness", DimStiffness)},
		BandLoop:       Length{t.quantity("band_loop", DimLength)},
	}
}

func readSpring(t *table) *Spring {
	defer t.rest()
	s := &Spring{
		UnderLoad:  oneOf(t, "under_load", Shorter, Longer),
		Rate:       Stiffness{t.quantity("rate", DimStiffness)},
		FreeLength: Length{t.needQuantity("free_length", "measure it, or read it off the scale, with the wheel let down", DimLength)},
		BindLength: Length{t.quantity("bind_length", DimLength)},
		Parallel:   t.whole("parallel", 1, 100),
	}
	if !t.has("under_load") {
		t.faults.add(t.at("under_load"), `write "shorter" for a spring that is pressed together, "longer" for one that is drawn apart`, missing)
	}
	if s.BindLength.Given() && s.FreeLength.Given() && s.BindLength.SI >= s.FreeLength.SI {
		t.faults.add(t.at("bind_length"), "it is the length at which coils or discs touch", "%s is not less than the free length %s", s.BindLength, s.FreeLength)
	}
	return s
}
