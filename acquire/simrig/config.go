package simrig

import (
	"errors"
	"fmt"
	"math"

	"tautramp/acquire/mill"
)

// Why a profile or a drive is refused, beside ErrConfig.
var (
	ErrNotRehearsable = errors.New("this tensioner cannot be rehearsed") // no rehearsal table
	ErrOverLimit      = errors.New("the drive goes past the tensioner's setting limit")
	// ErrNoEnd is found while a drive runs: a hand that loses as much as it gains.
	ErrNoEnd = errors.New("the drive does not reach its end")
)

// Config is one rehearsal: what is pretended, what the operator does, and the
// boards that measure it. Only Profile must be given.
type Config struct {
	Profile   *mill.Profile
	Tensioner string // "" means the only one
	Band      string // "" means the only one
	Seed      uint64 // of all noise and arbitrary offsets

	Law        Law
	Seals      Seals
	Oil        Oil
	Screw      Screw
	Chain      Chain
	Heat       Heat
	Vary       Vary
	AreaFactor float64 // true A* / geometry's; 0 means 1

	MoreF0N float64 // friction on top of the rehearsal table's: constant, N
	MoreMu  float64 // and proportional to the load

	SectionFactor float64 // true net section of the band / profile's; 0 means 1
	ModulusFactor float64 // true modulus of the band / profile's; 0 means 1

	SlackM     float64 // travel between the wheel's stop and the taut band; 0 means 3 mm
	SlackTimeS float64 // s that the pump takes over it; 0 means 8
	Stretch    Stretch
	Drive      Drive

	Pressure       Sensor // default: 50 a second, 0.05 psi counts, 1 psi of noise, to 1,500 psi
	Torque         Sensor // set by torque. Default: 50 a second, 0.01 N m counts, 0.05 N m of noise, +-1,000 N m
	Turns          Sensor // all with a screw. Default: 50 a second, 0.0001 turn counts, 0.0002 turn of noise
	Spring         Sensor // set by spring length. Default: 50 a second, 0.01 mm counts, 0.005 mm of noise
	Indicator      Sensor // default: 10 a second, 0.00005 in counts, 0.1 um of noise, +-0.5 in
	Temperature    Sensor // default: 1 a second, 0.1 degC counts
	Thermometer    bool   // fit the temperature sensor of the band, on the first board
	RigThermometer bool   // and that of the measuring bar after it
	Second         Second // fit a second indicator, on the last board

	Boards   []BoardSpec // one: all sensors; two: pressure on the first, indicator on the second. nil means one
	Load     int         // above 0: lines a second of each board, spread over its sensors
	StrangeS float64     // s between lines of record types that version 1 has not; 0 means 7, negative none
	Presses  []Press
}

// Second is a second indicator on the band.
type Second string

// Where a second indicator may sit. The first is on face A of span 1.
const (
	NoSecond   Second = ""
	SecondFace Second = "face" // on face B at the same place
	SecondSpan Second = "span" // on span 2
)

// BoardSpec is one board.
type BoardSpec struct {
	TickHz      uint32  // 0 means 1,000,000
	TickPPM     float64 // by how much its clock runs fast, parts per million
	StartTick   uint32  // tick at power-on; 0 means an arbitrary one by the seed
	Boots       uint32  // boots before the first
	NoBootID    bool    // no memory to count boots in
	ResetOnOpen bool    // boots again each time its port is opened after the first
	QueueBytes  int     // bytes that may wait for the line; 0 means 262,144
}

// Press is one press of a push button.
type Press struct {
	Board int     // index
	ID    byte    // '1' to '9'; 0 means '1'
	AtS   float64 // s after the start of the drive
	HoldS float64 // s until it is let go; 0 means 0.2
}

// rehearsal is a configuration with everything filled in.
type rehearsal struct {
	Config           // filled in
	given     Config // as it came
	tensioner mill.Tensioner
	band      mill.Band
	start     wheel // without what pushes it
	screw     screw
	oil       oil
	heat      heat
	gauges    [2]gauge
	driver    driver // at the start of its drive
	varies    []variation
	truth     Truth
}

// resolve fills in what was left to default, and refuses what cannot be.
func resolve(c Config) (rehearsal, error) {
	r := rehearsal{Config: c, given: c}
	for _, step := range []func() error{r.find, r.mechanics, r.operator, r.push, r.vary, r.layout} {
		if err := step(); err != nil {
			return rehearsal{}, err
		}
	}
	return r, nil
}

// operator fills in the drive.
func (r *rehearsal) operator() error {
	if !r.byOil() {
		return r.turned()
	}
	d, limit := &r.Drive, r.tensioner.SettingLimit.SI
	d.TopPa = orElse(d.TopPa, r.defaultTopPa(limit))
	d.ExercisePa = min(d.TopPa, orElse(d.ExercisePa, r.defaultExercisePa()))
	d.LowPa = orElse(d.LowPa, max(0, 0.6*r.truth.LiftFallingPa()))
	d.RatePaS = orElse(d.RatePaS, d.TopPa/107.5)
	if limit > 0 && d.TopPa > limit {
		return fmt.Errorf("%w: top %.0f kPa, limit of %s %.0f kPa", ErrOverLimit, d.TopPa/1e3, r.tensioner.Name, limit/1e3)
	}
	if !(d.LowPa >= 0) || !(d.TopPa > d.LowPa) || !(d.ExercisePa > d.LowPa) || !(d.RatePaS > 0) || math.IsInf(d.TopPa, 0) {
		return fmt.Errorf("%w: a drive from %.0f to %.0f kPa at %.1f kPa/s", ErrConfig, d.LowPa/1e3, d.TopPa/1e3, d.RatePaS/1e3)
	}
	var err error
	r.driver, err = newDriver(*d, course{low: d.LowPa, top: d.TopPa, exercise: d.ExercisePa, rate: d.RatePaS, sags: true, near: 1})
	return err
}

// defaultExercisePa is the setting for half of the band's target, or halfway
// up where no target is given.
func (r *rehearsal) defaultExercisePa() float64 {
	if r.band.Target.SI <= 0 {
		return (r.truth.LiftRisingPa() + r.Drive.TopPa) / 2
	}
	return r.truth.RisingPa(r.band.Target.SI / 2)
}

// defaultTopPa is well past the band's target, to the nearest 10 psi, and
// clear of the limit by more than the noise.
func (r *rehearsal) defaultTopPa(limit float64) float64 {
	const tenPsi = 68947.57293168361 // Pa
	if r.band.Target.SI <= 0 {
		return 0.9 * limit
	}
	top := math.Round(r.truth.RisingPa(1.22*r.band.Target.SI)/tenPsi) * tenPsi
	if limit > 0 {
		top = min(top, 0.95*limit)
	}
	return top
}

// layout fills in boards and sensors.
func (r *rehearsal) layout() error {
	if len(r.Boards) == 0 {
		r.Boards = []BoardSpec{{}}
	}
	if len(r.Boards) > 2 {
		return fmt.Errorf("%w: %d boards; one or two", ErrConfig, len(r.Boards))
	}
	r.Boards = append([]BoardSpec(nil), r.Boards...)
	for i := range r.Boards {
		if err := r.Boards[i].fill(r.Seed, i); err != nil {
			return err
		}
	}
	for i, p := range r.Presses {
		if p.Board < 0 || p.Board >= len(r.Boards) || p.ID != 0 && (p.ID < '1' || p.ID > '9') {
			return fmt.Errorf("%w: press %d is of button %q on board %d", ErrConfig, i, p.ID, p.Board)
		}
	}
	r.StrangeS = orNone(r.StrangeS, 7)
	return r.sensors()
}

func (s *BoardSpec) fill(seed uint64, index int) error {
	if s.TickHz == 0 {
		s.TickHz = 1_000_000
	}
	if s.TickHz < 1000 || s.TickHz > 1_000_000 || math.Abs(s.TickPPM) > 1e5 {
		return fmt.Errorf("%w: board %d ticks at %d Hz %+g ppm; 1,000 to 1,000,000 Hz", ErrConfig, index, s.TickHz, s.TickPPM)
	}
	if s.StartTick == 0 {
		s.StartTick = newRand(seed, streamTick, index).Uint32()
	}
	if s.QueueBytes <= 0 {
		s.QueueBytes = 1 << 18
	}
	return nil
}
