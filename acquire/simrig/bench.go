package simrig

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"

	"tautramp/protocol"
)

// BenchConfig is a bench on which an instrument is tested against a reference,
// and the operator at it. SI units: Pa, or m where Length is set.
type BenchConfig struct {
	Length   bool // a length indicator on a micrometer, which nothing reads; else pressure, with a reference that is read
	BothRead bool // pressure: the tested instrument is read too; else it is a dial that only the operator sees
	Seed     uint64

	LowSI, HighSI float64
	Points        []float64 // rising
	Down          bool
	Tapped        []bool // each series, with tapping or without; nil means one without
	Repeats, Runs int    // 0 means 1
	Exercise      int    // cycles before the first series of a run

	Way      BenchWay
	WarmUpS  float64
	SettleS  float64 // s that the operator holds before a press
	WindowS  float64
	TopHoldS float64

	Gauge     BenchGauge
	ReadSI    float64 // standard deviation of bringing a pointer to its mark; 0 means 0.02 % of the range, negative none
	LeakS     float64 // part of the pressure lost a second while it is held; 0 means 2e-6, negative none
	Slips     []Slip  // the operator's mistakes, one at every second point of the first rise
	Alone     Alone
	Reference Sensor // defaults: 20 a second, noise 0.005 % of the range
	Tested    Sensor // defaults: 20 a second (length: 10), noise 0.01 % of the range
	Boards    []BoardSpec
}

// BenchWay is how points are marked.
type BenchWay string

// The ways. The zero value is by press.
const (
	BenchPresses  BenchWay = "press"
	BenchPlateaus BenchWay = "plateau"
	BenchSweeps   BenchWay = "sweep"
)

// Slip is a mistake of the operator, who then does it as told.
type Slip string

// The slips.
const (
	SlipEarly Slip = "early" // presses before it has settled
	SlipLate  Slip = "late"  // presses when on the way to the next mark already
	SlipTwice Slip = "twice" // presses twice
	SlipSide  Slip = "side"  // comes to the mark from the wrong side
	SlipUndo  Slip = "undo"  // takes a good press back, and presses again
)

// Slips lists the slips.
func Slips() []Slip { return []Slip{SlipEarly, SlipLate, SlipTwice, SlipSide, SlipUndo} }

// Alone is what the operator does while the board is not connected.
type Alone string

// What the operator does. The zero value: holds everything as it is, and
// presses once more at the mark when the board is connected again.
const (
	AloneHolds    Alone = "holds"
	AloneLetsDown Alone = "lets down" // lets all of it out, and begins the series again
)

// BenchPress is what was true when the switch was pressed, for tests.
type BenchPress struct {
	TrueSI, ShownSI float64
}

// bench is the bench at work.
type bench struct {
	BenchConfig
	hand   hand
	gauge  benchGauge
	rng    *rand.Rand
	linked func() bool

	begun   bool
	t       float64 // s, of the last step
	trueSI  float64
	pressed bool
	presses []BenchPress
}

const benchStepS = 0.01

// NewBench builds a bench at rest. The error is ErrConfig.
func NewBench(c BenchConfig) (*Rig, error) {
	if err := c.fill(); err != nil {
		return nil, err
	}
	b := &bench{BenchConfig: c, gauge: newBenchGauge(c.Gauge, c.HighSI-c.LowSI), rng: newRand(c.Seed, streamBench, 0), trueSI: c.restSI()}
	b.hand = newHand(b)
	b.gauge.settle(b.trueSI)
	r := &Rig{conf: rehearsal{Config: Config{Seed: c.Seed, Boards: c.Boards}}, done: make(chan struct{}), bench: b}
	for i := range c.Boards {
		board, err := newBoard(r, i)
		if err != nil {
			return nil, err
		}
		r.boards = append(r.boards, board)
	}
	b.linked = func() bool {
		return !slices.ContainsFunc(r.boards, func(b *Board) bool { return !b.plugged })
	}
	return r, nil
}

func (c *BenchConfig) fill() error {
	span := c.HighSI - c.LowSI
	if !(span > 0) || math.IsInf(span, 0) || len(c.Points) < 2 || !slices.IsSorted(c.Points) {
		return fmt.Errorf("%w: a bench from %g to %g with %d points", ErrConfig, c.LowSI, c.HighSI, len(c.Points))
	}
	if len(c.Tapped) == 0 {
		c.Tapped = []bool{false}
	}
	c.Repeats, c.Runs = max(1, c.Repeats), max(1, c.Runs)
	c.ReadSI = orNone(c.ReadSI, 2e-4*span)
	c.LeakS = orNone(c.LeakS, 2e-6)
	for _, s := range c.Slips {
		if !slices.Contains(Slips(), s) {
			return fmt.Errorf("%w: no slip is called %q; known: %v", ErrConfig, s, Slips())
		}
	}
	if len(c.Boards) == 0 {
		c.Boards = []BoardSpec{{}}
	}
	if len(c.Boards) > 2 {
		return fmt.Errorf("%w: %d boards; one or two", ErrConfig, len(c.Boards))
	}
	c.Boards = slices.Clone(c.Boards)
	for i := range c.Boards {
		if err := c.Boards[i].fill(c.Seed, i); err != nil {
			return err
		}
	}
	c.sensors(span)
	return nil
}

// restSI is the true value with nothing on the instrument.
func (c *BenchConfig) restSI() float64 {
	if c.Length {
		return c.LowSI
	}
	return 0
}

// sensors fills in what the sensors are by default.
func (c *BenchConfig) sensors(span float64) {
	low, high := c.LowSI-0.2*span, c.HighSI+0.2*span
	c.Reference.fill(Sensor{Count: Count{"[psi]", 1, -2}, PerSecond: 20, LowSI: low, HighSI: high, NoiseSI: 5e-5 * span})
	tested := Sensor{Count: Count{"[psi]", 2, -2}, PerSecond: 20, LowSI: low, HighSI: high, NoiseSI: 1e-4 * span}
	if c.Length {
		tested.Count, tested.PerSecond = Count{"mm", 1, -3}, 10
	}
	c.Tested.fill(tested)
}

// channels makes the channels of one board, in the order of their letters.
func (b *bench) channels(board int) ([]*channel, error) {
	var list []*channel
	last := len(b.Boards) - 1
	add := func(index int, q protocol.Quantity, s Sensor, value func(view) float64) {
		c := &channel{Sensor: s, value: value, rng: newRand(b.Seed, streamNoise, 16+index)}
		c.spec = protocol.Chan{ID: byte('a' + len(list)), Quantity: q, Unit: s.Count.Unit,
			Mantissa: s.Count.Mantissa, Exponent: s.Count.Exponent, Res: 1}
		c.prepare(b.Seed, index)
		list = append(list, c)
	}
	quantity := protocol.Pressure
	if b.Length {
		quantity = protocol.Extension
	}
	if board == 0 && !b.Length {
		add(0, quantity, b.Reference, func(v view) float64 { return v.referenceSI })
	}
	if board == last && (b.Length || b.BothRead) {
		add(1, quantity, b.Tested, func(v view) float64 { return v.testedSI })
	}
	if board == 0 {
		s := Sensor{}
		s.fill(Sensor{Count: Count{"Cel", 1, -1}, PerSecond: 1, LowSI: iceK - 40, HighSI: iceK + 85, NoiseSI: 0.03})
		add(2, protocol.Temperature, s, func(v view) float64 { return iceK + 21 })
	}
	for _, c := range list {
		c.builtPeriod = uint32(math.Round(float64(b.Boards[board].TickHz) / c.PerSecond))
		c.spec.Period = c.builtPeriod
		if _, err := protocol.Append(nil, c.spec); err != nil {
			return nil, fmt.Errorf("%w: the sensor for %s: %w", ErrConfig, c.spec.Quantity, err)
		}
	}
	return list, nil
}

// begin lets the operator begin, once.
func (b *bench) begin(s float64) bool {
	if b.begun {
		return false
	}
	b.begun, b.t = true, s
	return true
}

// advance steps until time s is reached or just passed.
func (b *bench) advance(s float64) {
	if !b.begun {
		b.t = max(b.t, s)
		return
	}
	for b.t < s {
		rate := b.hand.step(b, benchStepS)
		if !b.Length && rate == 0 {
			rate = -b.LeakS * b.trueSI
		}
		b.trueSI += rate * benchStepS
		b.gauge.step(b.trueSI, b.hand.tapping(), benchStepS)
		b.t += benchStepS
	}
}

func (b *bench) at(s float64) view {
	return view{t: s, driveS: -1, referenceSI: b.trueSI, testedSI: b.gauge.shown()}
}

// steersBy is what the operator looks at while going to a mark.
func (b *bench) steersBy() float64 {
	if b.Length || b.BothRead {
		return b.trueSI
	}
	return b.gauge.shown()
}

// press and release move the switch.
func (b *bench) press() {
	b.pressed = true
	b.presses = append(b.presses, BenchPress{TrueSI: b.trueSI, ShownSI: b.gauge.shown()})
}

func (b *bench) release() { b.pressed = false }

// BenchPresses is what was true at each press so far, for tests; nil for a rig
// that is no bench.
func (r *Rig) BenchPresses() []BenchPress {
	r.mu.Lock()
	defer r.mu.Unlock()
	if r.bench == nil {
		return nil
	}
	return slices.Clone(r.bench.presses)
}

// switchS is how often a board looks at the switch.
const switchS = 0.02

// watchSwitch sends the edges of a foot switch.
func (b *Board) watchSwitch(startS float64, pressed func(atS float64) bool) {
	down := false
	b.switchOn = pressed
	b.presses = append(b.presses, &task{startS, func(v view) float64 {
		if now := pressed(v.t); now != down {
			down = now
			b.numbered(protocol.Button{ID: '1', Seq: b.number(), Tick: b.tickAt(v.t), Down: down})
		}
		return v.t + switchS
	}})
}
