package simrig

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"

	"tautramp/acquire/mill"
)

// FaultKind names a cause that can be planted.
type FaultKind string

// The causes. What Size means stands in Faults.
const (
	ProportionalFriction FaultKind = "proportional friction"
	ConstantFriction     FaultKind = "constant friction"
	SealDrag             FaultKind = "seal drag"
	StickSlip            FaultKind = "stick-slip"
	SlackToe             FaultKind = "slack toe"
	EndStop              FaultKind = "end stop"
	AirInOil             FaultKind = "air in oil"
	LeakDown             FaultKind = "leak-down"
	GaugeLeak            FaultKind = "gauge-side leak"
	PumpSideGauge        FaultKind = "transducer on the pump side"
	MountCreep           FaultKind = "mount creep"
	MountSlip            FaultKind = "mount slip"
	GaugeZero            FaultKind = "gauge zero offset"
	GaugeSpan            FaultKind = "gauge span error"
	StickyGauge          FaultKind = "sticky gauge"
	BentGauge            FaultKind = "nonlinear gauge"
	BandWarming          FaultKind = "band warming"
	RigWarming           FaultKind = "rig warming"
	OilWarming           FaultKind = "oil warming"
	WheelDrag            FaultKind = "wheel drag"
	TyreCreep            FaultKind = "tyre creep"
	WrongSection         FaultKind = "wrong section"
	WrongArea            FaultKind = "wrong area"
	ChannelLag           FaultKind = "channel lag"
	Saturation           FaultKind = "sensor saturation"
	FaceCurl             FaultKind = "curl on one face"
	DryScrew             FaultKind = "dry screw"
	DryCollar            FaultKind = "dry collar"
	ScrewBreakaway       FaultKind = "screw breaks loose hard"
	StackFriction        FaultKind = "dry spring stack"
	ScrewPlay            FaultKind = "play in the screw's drive"
	CoilBind             FaultKind = "coil bind"
	TyreCompression      FaultKind = "tyre compression"
	TooFewCycles         FaultKind = "too few cycles"
	TooFast              FaultKind = "ramp too fast"
	TooRagged            FaultKind = "ramp too ragged"
)

// Fault is a cause planted at a severity.
type Fault struct {
	Kind FaultKind
	Size float64 // in the unit that Faults gives
	AtS  float64 // s into the drive, for what happens once; 0 means on the way up of the middle cycle
}

// FaultRow is what Size of a kind means.
type FaultRow struct {
	Kind     FaultKind
	Unit     string  // SI; "" is a plain number
	Means    string  // what it is the size of
	From, To float64 // sizes that are met in mills (judgement): from hardly seen to beyond doubt
	plant    func(*Config, Fault, job) error
}

// job is what a fault is measured by: the healthy rig.
type job struct {
	*rehearsal
	pullN   float64 // of both spans at the band's target
	pushN   float64 // of the tensioner there
	stiffNM float64 // of the band
}

// Draw is a fault of the kind at a size within what is met, evenly on a
// logarithm where the sizes are of one sign.
func (r FaultRow) Draw(rng *rand.Rand) Fault {
	if r.From > 0 {
		return Fault{Kind: r.Kind, Size: r.From * math.Pow(r.To/r.From, rng.Float64())}
	}
	return Fault{Kind: r.Kind, Size: within(rng, r.From, r.To)}
}

// Plant puts a fault on top of what a configuration already has, so that
// several can be planted one after the other. The profile stays as it is. Its
// errors are New's, ErrConfig for a kind that this tensioner cannot have, and
// ErrNoEnd.
func Plant(c *Config, f Fault) error {
	for _, row := range Faults() {
		if row.Kind != f.Kind {
			continue
		}
		r, err := New(*c)
		if err != nil {
			return err
		}
		j := job{rehearsal: &r.conf, stiffNM: r.conf.start.bandNM}
		j.pullN = r.conf.truth.PullN(r.conf.workStressPa())
		j.pushN = (j.pullN+r.conf.truth.WeightN)*(1+r.conf.truth.Mu) + r.conf.truth.F0N
		return row.plant(c, f, j)
	}
	return fmt.Errorf("%w: no fault %q", ErrConfig, f.Kind)
}

// workStressPa is the band's target, or what the top of the drive gives where
// there is none.
func (r *rehearsal) workStressPa() float64 {
	if r.band.Target.SI > 0 {
		return r.band.Target.SI
	}
	t := r.truth
	return max(0, (r.Drive.TopPa*t.AreaM2-t.F0N)/(1+t.Mu)-t.WeightN) / (2 * t.NetAreaM2)
}

// add makes a row whose planting cannot fail.
func add(plant func(*Config, Fault, job)) func(*Config, Fault, job) error {
	return func(c *Config, f Fault, j job) error {
		plant(c, f, j)
		return nil
	}
}

// oilOnly is add for what only a tensioner set by pressure has.
func oilOnly(plant func(*Config, Fault, job)) func(*Config, Fault, job) error {
	return func(c *Config, f Fault, j job) error {
		if !j.byOil() {
			return fmt.Errorf("%w: %s needs a tensioner set by pressure", ErrConfig, f.Kind)
		}
		plant(c, f, j)
		return nil
	}
}

// screwOnly is add for what only a tensioner with a screw has.
func screwOnly(plant func(*Config, Fault, job)) func(*Config, Fault, job) error {
	return func(c *Config, f Fault, j job) error {
		if j.byOil() {
			return fmt.Errorf("%w: %s needs a tensioner with a screw", ErrConfig, f.Kind)
		}
		plant(c, f, j)
		return nil
	}
}

// gauge is the sensor of the setting.
func (c *Config) gauge(by mill.SetBy) *Sensor {
	switch by {
	case mill.SetByTorque:
		return &c.Torque
	case mill.SetByTurns:
		return &c.Turns
	case mill.SetBySpring:
		return &c.Spring
	}
	return &c.Pressure
}

// Faults lists what can be planted.
func Faults() []FaultRow {
	return slices.Concat(frictionFaults(), oilFaults(), screwFaults(), measuringFaults(), otherFaults())
}

func frictionFaults() []FaultRow {
	return []FaultRow{
		{ProportionalFriction, "", "friction coefficient added to that of pins and slide", 0.01, 0.12,
			add(func(c *Config, f Fault, _ job) { c.MoreMu += f.Size })},
		{ConstantFriction, "N", "friction of the slide added, whatever the load", 150, 3000,
			add(func(c *Config, f Fault, _ job) { c.MoreF0N += f.Size })},
		{SealDrag, "", "drag of the seals at the working push, part of it: half constant, half with the pressure, more after a rest", 0.02, 0.12,
			oilOnly(func(c *Config, f Fault, j job) {
				c.Seals.ConstantN += f.Size / 2 * j.pushN
				c.Seals.Part += f.Size / 2
				c.Seals.RestRatio = 1.3
			})},
		{StickSlip, "", "friction of the slide lost when the wheel breaks loose, part of the working wheel pull; on hoses that give", 0.02, 0.1, plantStickSlip},
		{EndStop, "", "where the wheel meets its stop, part of the travel to the top of the drive", 0.6, 0.95,
			add(func(c *Config, f Fault, j job) {
				c.Chain.EndM = f.Size * j.topTravelM()
			})},
	}
}

func plantStickSlip(c *Config, f Fault, j job) error {
	level := j.truth.F0N + j.truth.Mu*(j.pullN+j.truth.WeightN)
	if !(level > 0) {
		return fmt.Errorf("%w: a slide without friction cannot stick and slip", ErrConfig)
	}
	c.Oil.Give = max(c.Oil.Give, 3)
	c.Law.RestRatio = orElse(c.Law.RestRatio, 1) + f.Size*j.pullN/level
	c.Law.PreslidingM, c.Law.RenewM, c.Law.RestS = 3e-7, 2e-6, 0.3
	return nil
}

// topTravelM is the wheel's travel at the top of the drive.
func (j job) topTravelM() float64 {
	t := j.truth
	if !j.byOil() {
		return 1.22 * j.pullN * t.Screw.GiveMN
	}
	return ((j.Drive.TopPa*t.AreaM2*(1-t.SealPart)-t.F0N)/(1+t.Mu) - t.WeightN) / j.stiffNM
}

func screwFaults() []FaultRow {
	return []FaultRow{
		{DryScrew, "", "friction coefficient added to that of the thread", 0.03, 0.2,
			screwOnly(func(c *Config, f Fault, _ job) { c.Screw.MoreThread += f.Size })},
		{DryCollar, "", "friction coefficient added to that of the collar", 0.02, 0.15,
			screwOnly(func(c *Config, f Fault, _ job) { c.Screw.MoreCollar += f.Size })},
		{ScrewBreakaway, "", "torque of thread and collar after a rest over that of turning, less 1", 0.15, 0.8,
			screwOnly(func(c *Config, f Fault, _ job) { c.Screw.RestRatio = orElse(c.Screw.RestRatio, 1) + f.Size })},
		{StackFriction, "", "friction within the stack of disc springs, part of its force", 0.02, 0.12,
			screwOnly(func(c *Config, f Fault, _ job) { c.Screw.StackMu += f.Size })},
		{ScrewPlay, "rad", "free turn of the hand added", 0.1, 2,
			screwOnly(func(c *Config, f Fault, _ job) { c.Screw.MorePlay += f.Size })},
		{CoilBind, "", "squeeze at which the springs are solid, part of that at 1.22 times the band's target", 0.5, 0.95,
			screwOnly(func(c *Config, f Fault, _ job) { c.Screw.BindPart = f.Size })},
		{TyreCompression, "m", "travel that the tyres take before they are hard", 2e-4, 3e-3,
			screwOnly(func(c *Config, f Fault, j job) { c.Chain.ToeM, c.Chain.ToeN = c.Chain.ToeM+f.Size, 0.4*j.pullN })},
	}
}

func oilFaults() []FaultRow {
	return []FaultRow{
		{AirInOil, "m3", "air in the oil at the pressure of the open air", 2e-5, 3e-4,
			oilOnly(func(c *Config, f Fault, _ job) { c.Oil.AirM3 += f.Size })},
		{LeakDown, "1/s", "part of the pressure lost each second while friction holds the wheel", 1e-4, 3e-3,
			oilOnly(func(c *Config, f Fault, _ job) { c.Oil.LeakPerS += f.Size })},
		{GaugeLeak, "1/s", "part of the reading lost each second between a shut check valve and the transducer", 1e-4, 2e-3,
			oilOnly(func(c *Config, f Fault, _ job) { c.Oil.CheckTee, c.Oil.TeePerS = true, c.Oil.TeePerS+f.Size })},
		{PumpSideGauge, "1/s", "the same, of a pump that lets the oil back at once between strokes", 0.1, 2,
			oilOnly(func(c *Config, f Fault, _ job) { c.Oil.CheckTee, c.Oil.TeePerS = true, c.Oil.TeePerS+f.Size })},
		{OilWarming, "K/s", "warming of the oil", 1e-3, 1e-2,
			oilOnly(func(c *Config, f Fault, _ job) { c.Oil.WarmingKS += f.Size })},
		{Saturation, "", "most that the transducer shows, part of the top of the drive; nothing tells it", 0.6, 0.98,
			func(c *Config, f Fault, j job) error {
				top := orElse(j.Drive.TopPa, j.Drive.TopSI)
				if j.tensioner.SetBy == mill.SetBySpring {
					return fmt.Errorf("%w: %s of a spring's scale", ErrConfig, f.Kind)
				}
				c.gauge(j.tensioner.SetBy).ClipSI = f.Size * top
				return nil
			}},
	}
}

func measuringFaults() []FaultRow {
	return []FaultRow{
		{SlackToe, "Pa", "band stress at which most of the stretch is held back: a band that seats late", 4e6, 15e6,
			add(func(c *Config, f Fault, j job) {
				// As much is held back as leaves the stretch rising: strain < stress / (e E).
				c.Stretch.SeatingPa = f.Size
				c.Stretch.SeatingStrain = 0.9 * f.Size / (math.E * j.truth.ModulusPa)
			})},
		{MountCreep, "m/s", "steady drift of the mount", 1e-9, 1e-7,
			add(func(c *Config, f Fault, _ job) { c.Stretch.DriftMS += f.Size })},
		{MountSlip, "m", "sudden step of the mount", 4e-6, 5e-5,
			func(c *Config, f Fault, j job) (err error) {
				c.Stretch.SlipM += f.Size
				if c.Stretch.SlipAtS = f.AtS; f.AtS == 0 {
					c.Stretch.SlipAtS, err = j.midRiseS()
				}
				return err
			}},
		{GaugeZero, "Pa", "what the setting's gauge shows of nothing; N m, rad or m where it is no pressure", 5e3, 1e5,
			add(func(c *Config, f Fault, j job) { c.gauge(j.tensioner.SetBy).OffsetSI += f.Size })},
		{GaugeSpan, "", "error of the setting's span, part of it", 0.005, 0.05,
			add(func(c *Config, f Fault, j job) {
				g := c.gauge(j.tensioner.SetBy)
				g.Span = orElse(g.Span, 1) * (1 + f.Size)
			})},
		{StickyGauge, "Pa", "by which a pointer must be off before it moves; SI of the setting", 5e3, 1e5,
			add(func(c *Config, f Fault, j job) { c.gauge(j.tensioner.SetBy).StickSI += f.Size })},
		{BentGauge, "Pa", "most by which the gauge strays from straight, at the middle of its range; SI of the setting", 1e4, 2e5,
			add(func(c *Config, f Fault, j job) { c.gauge(j.tensioner.SetBy).BowSI += f.Size })},
		{BandWarming, "K/s", "warming of the band beyond the bar and the frame", 3e-4, 5e-3,
			add(func(c *Config, f Fault, _ job) { c.Heat.BandKS += f.Size })},
		{RigWarming, "K/s", "warming of an aluminium bar, and of the band with it", 3e-4, 5e-3,
			add(func(c *Config, f Fault, _ job) { c.Heat.RigKS, c.Heat.RigPerK = c.Heat.RigKS+f.Size, 23e-6 })},
		{FaceCurl, "m", "false extension of the face measured once the curl is pulled out", 1e-5, 1e-3,
			add(func(c *Config, f Fault, _ job) { c.Stretch.CurlM += f.Size })},
		{ChannelLag, "s", "by which the extension comes late", 0.1, 1,
			add(func(c *Config, f Fault, _ job) { c.Indicator.DelayS += f.Size })},
	}
}

func otherFaults() []FaultRow {
	return []FaultRow{
		{WheelDrag, "", "difference of the two spans, part of their mean, under a brake that does not let the wheel turn; fits a second indicator on span 2", 0.02, 0.3,
			add(func(c *Config, f Fault, _ job) {
				c.Chain.Lopsided, c.Chain.BrakeN, c.Second = c.Chain.Lopsided+f.Size, 1e6, SecondSpan
			})},
		{TyreCreep, "", "what the tyres give late, part of the band's own stretch at any pull", 0.01, 0.15,
			add(func(c *Config, f Fault, j job) { c.Chain.TyreCreepMN += f.Size / j.stiffNM })},
		{WrongSection, "", "true net section of the band over the profile's, less 1", -0.2, 0.2,
			add(func(c *Config, f Fault, _ job) { c.SectionFactor = orElse(c.SectionFactor, 1) * (1 + f.Size) })},
		{WrongArea, "", "true area of the cylinders over the profile's, less 1", -0.2, 0.2,
			oilOnly(func(c *Config, f Fault, _ job) { c.AreaFactor = orElse(c.AreaFactor, 1) * (1 + f.Size) })},
		{TooFewCycles, "", "ramps made, beside no exercise", 1, 2,
			add(func(c *Config, f Fault, _ job) { c.Drive.Exercise, c.Drive.Ramps = -1, int(f.Size) })},
		{TooRagged, "", "swing of the rate on the way up, part of it", 0.8, 4,
			add(func(c *Config, f Fault, _ job) { c.Drive.Shape, c.Drive.Ragged = Smooth, f.Size })},
		{TooFast, "", "times the rate", 3, 20,
			add(func(c *Config, f Fault, j job) {
				c.Drive.RatePaS, c.Drive.TurnRadS = j.Drive.RatePaS*f.Size, j.Drive.TurnRadS*f.Size
			})},
	}
}

// midRiseS is well up the rise of the middle cycle.
func (j job) midRiseS() (float64, error) {
	w := newWorld(*j.rehearsal)
	w.start(0)
	middle := (cycles(j.Drive.Exercise, 1) + cycles(j.Drive.Ramps, 3)) / 2
	from, to := math.NaN(), math.NaN()
	for !w.drive.over() && w.drive.cycleNow() <= middle {
		if err := j.inTime(w.now().t); err != nil {
			return 0, err
		}
		w.advance(w.now().t + 0.2)
		if w.drive.cycleNow() == middle && w.drive.rising() {
			to = w.now().t
			if math.IsNaN(from) {
				from = to
			}
		}
	}
	return from + 0.6*(to-from), nil
}
