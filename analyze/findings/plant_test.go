package findings_test

import (
	"fmt"
	"math"
	"math/rand/v2"
	"slices"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/acquire/simrig"
	"tautramp/acquire/simrig/rigtest"
	"tautramp/analyze"
	"tautramp/analyze/findings"
)

// The streams of random numbers. Detectors, limits and the curve of certainty
// were tuned on the first only; the committed table is made from the second.
const (
	tuningStream = 0x7041
	tableStream  = 0x7ab1e
)

// subject is one simulated rig with what is known of it beforehand.
type subject struct {
	c       simrig.Config
	truth   simrig.Truth
	workPa  float64 // setting at the target, SI, as one that rises with the load
	workM   float64 // stretch there
	countM  float64
	seconds float64 // how long the visit takes, about
	rng     *rand.Rand
}

// draw makes up a healthy mill set by pressure.
func draw(seed, stream uint64) (*subject, error) { return drawSetBy(seed, stream, mill.SetByPressure) }

// drawSetBy makes up a healthy mill. The sensors are read
// less often than in life: it costs a third of the time and changes no physics.
func drawSetBy(seed, stream uint64, by mill.SetBy) (*subject, error) {
	rng := rand.New(rand.NewPCG(seed, stream))
	c, err := simrig.DrawSetBy(rng, by)
	if err != nil {
		return nil, err
	}
	c.Thermometer = true
	for _, of := range []*simrig.Sensor{&c.Pressure, &c.Torque, &c.Turns, &c.Spring} {
		of.PerSecond = 16
	}
	if c.Indicator.PerSecond = 4; c.Drive.Shape == simrig.Strokes { // a hand presses for half a second
		c.Indicator.PerSecond = 8
		if by == mill.SetByTurns {
			c.Indicator.PerSecond, c.Turns.PerSecond = 12, 25
		}
	}
	rig, err := simrig.New(c)
	if err != nil {
		return nil, err
	}
	if by != mill.SetByPressure { // as slow as the pressure of the others
		band, _ := c.Profile.FindBand(c.Band)
		c.Drive.TurnRadS = rig.Truth().TurnRad(1.22*band.Target.SI, true) / (150 + 150*rng.Float64())
	}
	s := &subject{c: c, truth: rig.Truth(), rng: rng}
	band, _ := c.Profile.FindBand(c.Band)
	s.workPa = rig.Tensioner().Rising(s.truth.Setting(band.Target.SI, true))
	s.workM = s.truth.ExtensionM(band.Target.SI)
	s.countM = 0.00005 * 0.0254
	if c.Indicator.Count.Exponent == -4 {
		s.countM *= 10
	}
	ramp := 1.22 * s.workPa / c.Drive.RatePaS
	s.seconds = 3.5*(2*ramp+c.Drive.HoldTopS+c.Drive.HoldLowS) + 3.5*c.SlackTimeS
	return s, nil
}

// look runs a rig and looks at what it recorded.
func look(c simrig.Config) (*findings.Report, error) {
	set, _, err := rigtest.Set(c)
	if err != nil {
		return nil, err
	}
	return lookAt(c.Profile, set), nil
}

func lookAt(p *mill.Profile, set *pairing.Set) *findings.Report {
	r, err := analyze.Analyze(analyze.Input{Profile: p, Set: set})
	if err != nil {
		r = nil
	}
	return findings.Look(findings.Input{Profile: p, Result: r, Set: set})
}

// planting says how a cause is planted at a severity: the size at which its
// feature shows so much.
type planting struct {
	name    string     // "": as the kind
	by      mill.SetBy // "": pressure
	kind    simrig.FaultKind
	cause   findings.Key
	feature findings.FeatureKey
	limit   mill.ThresholdKey
	// grouped is for a recording that lacks what would tell the cause from others of
	// its declared group; fine only, for one that lacks it where the count is coarse.
	grouped, fine bool
	// least that the feature must show on a rig whose own doubt is known beforehand:
	// its limit and three standard uncertainties; nil: the usual doubts tell.
	least func(s *subject) float64
	// size of the fault for its feature to be x beyond what a healthy rig shows.
	size   func(s *subject, x float64) float64
	fewest float64                        // smallest and
	most   float64                        // largest size that is planted: what is beyond is met in no mill
	also   func(s *subject, size float64) // the rest of it: a bench record, a longer hold
	fits   func(s *subject) bool          // where it can be planted; nil: on any rig
}

func (p planting) title() string {
	if p.name != "" {
		return p.name
	}
	return string(p.kind)
}

func (p planting) setBy() mill.SetBy {
	if p.by != "" {
		return p.by
	}
	return mill.SetByPressure
}

func plantings() []planting {
	return slices.Concat(frictionPlantings(), oilPlantings(), rigPlantings(), screwPlantings())
}

func asIs(_ *subject, x float64) float64 { return x }

func ofSetting(s *subject, x float64) float64 { return x * s.workPa }

func frictionPlantings() []planting {
	slide := planting{kind: simrig.ConstantFriction, cause: findings.Slide, feature: "half_width_constant", limit: mill.FrictionConstant, grouped: true,
		size: func(s *subject, x float64) float64 { return x * s.truth.AreaM2 * s.workPa }, most: 2e4}
	seal := planting{kind: simrig.SealDrag, cause: findings.Seal, feature: "half_width", limit: mill.FrictionWide, grouped: true, size: asIs, most: 0.2}
	offSlide, offSeal := slide, seal
	offSlide.name, offSlide.grouped, offSlide.also = "constant friction, off-load test", false, func(s *subject, _ float64) { s.offLoad(0.2 * s.truth.F0N) }
	offSeal.name, offSeal.grouped, offSeal.also = "seal drag, off-load test", false, func(s *subject, size float64) { s.offLoad(0.2*s.truth.F0N + size/2*s.truth.AreaM2*s.workPa) }
	return []planting{
		{kind: simrig.ProportionalFriction, cause: findings.Pins, feature: "half_width_proportional", limit: mill.FrictionProportional, size: asIs, most: 0.16},
		slide, offSlide, seal, offSeal,
		{kind: simrig.StickSlip, cause: findings.StickSlip, feature: "third_jump", limit: mill.JumpSize,
			size: func(s *subject, x float64) float64 { return (x + s.countM/s.workM) / 0.35 }, most: 0.2},
		{kind: simrig.SlackToe, cause: findings.Toe, feature: "toe_end", limit: mill.ToeReach, grouped: true, size: toeSize, most: 1.5e7},
		{kind: simrig.EndStop, cause: findings.EndStop, feature: "top_span", limit: mill.StopSpan, least: stopSpan,
			size: stopSize, fewest: 0.6, most: 1},
	}
}

func stopSize(_ *subject, x float64) float64 { return 1 - 0.8*x }

func oilPlantings() []planting {
	leak := planting{kind: simrig.LeakDown, cause: findings.Leak, feature: "hold_setting_loss", limit: mill.HoldLoss, grouped: true, size: perSecond, most: 0.005}
	gauge := planting{kind: simrig.GaugeLeak, cause: findings.GaugeLeak, feature: "hold_setting_loss", limit: mill.HoldLoss, grouped: true, size: perSecond, most: 0.004}
	longLeak, longGauge := leak, gauge
	longLeak.name, longLeak.grouped, longLeak.fine, longLeak.also = "leak-down, held for long", false, true, (*subject).holdFor
	longGauge.name, longGauge.grouped, longGauge.fine, longGauge.also = "gauge-side leak, held for long", false, true, (*subject).holdFor
	return []planting{
		{kind: simrig.AirInOil, cause: findings.Air, feature: "low_strokes", limit: mill.AirSoftness, least: softness, size: airSize, most: 1e-3,
			// A drive that loses more to a sag than a stroke gains never reaches its top.
			fits: func(s *subject) bool { return s.c.Drive.Shape != simrig.Strokes || s.c.Drive.SagPart < 0.006 }},
		leak, longLeak, gauge, longGauge,
		{kind: simrig.PumpSideGauge, cause: findings.PumpSide, feature: "stroke_fall", limit: mill.StrokeLoss,
			size: func(s *subject, x float64) float64 { return 0.04 * x / 1.2 }, most: 2},
		{kind: simrig.OilWarming, cause: findings.Warmth, feature: "hold_setting_rise", limit: mill.HoldRise,
			size: func(s *subject, x float64) float64 { return x / 0.7 }, most: 0.1},
		{kind: simrig.Saturation, cause: findings.Saturation, feature: "flat_top", limit: mill.FlatTop, size: stopSize, most: 1},
	}
}

func rigPlantings() []planting {
	span := planting{kind: simrig.GaugeSpan, cause: findings.GaugeSpan, feature: "area_off", limit: mill.AreaOff, grouped: true, size: asIs, most: 0.4}
	section := planting{kind: simrig.WrongSection, cause: findings.Section, feature: "area_off", limit: mill.AreaOff, grouped: true, size: asIs, most: 0.4}
	benchedSpan, benchedSection := span, section
	benchedSpan.name, benchedSpan.grouped, benchedSpan.also = "gauge span error, bench test", false, func(s *subject, size float64) {
		off := func(share float64) float64 { return -size / (1 + size) * share * benchSpanPa }
		s.bench(off, off)
	}
	benchedSection.name, benchedSection.grouped, benchedSection.also = "wrong section, bench test", false, func(s *subject, _ float64) {
		none := func(float64) float64 { return 0 }
		s.bench(none, none)
	}
	return []planting{
		{kind: simrig.MountCreep, cause: findings.MountCreep, feature: "stretch_creep", limit: mill.MountCreep, size: perSecond, most: 1e-6},
		{kind: simrig.MountSlip, cause: findings.MountSlip, feature: "stretch_step", limit: mill.MountSlip,
			size: func(s *subject, x float64) float64 { return math.Max(x*s.workM, 7*s.countM) }, most: 1.2e-4},
		{kind: simrig.GaugeZero, cause: findings.GaugeZero, feature: "weight_off", limit: mill.WeightOff, grouped: true, size: ofSetting, most: 1e6},
		span, benchedSpan,
		{kind: simrig.StickyGauge, cause: findings.Gauge, feature: "gauge_sticks", limit: mill.GaugeSticky,
			size: func(s *subject, x float64) float64 { return x * benchSpanPa / 2 }, most: 3e5, also: benchSticky},
		{kind: simrig.BentGauge, cause: findings.Gauge, feature: "gauge_curve", limit: mill.GaugeCurve,
			size: func(s *subject, x float64) float64 { return x * benchSpanPa / 0.6 }, most: 5e5, also: benchBent},
		{kind: simrig.BandWarming, cause: findings.Warmth, feature: "warmth_shift", limit: mill.WarmthShift, size: warmSize, most: 0.02},
		{kind: simrig.RigWarming, cause: findings.Warmth, feature: "warmth_shift", limit: mill.WarmthShift, size: warmSize, most: 0.02},
		{kind: simrig.WheelDrag, cause: findings.Drag, feature: "spans_differ", limit: mill.SpanDiffer, size: asIs, most: 0.5},
		{kind: simrig.TyreCreep, cause: findings.Tyre, feature: "hold_setting_loss", limit: mill.HoldLoss, grouped: true,
			size: func(s *subject, x float64) float64 { return x / 0.025 }, most: 0.6},
		section, benchedSection,
		{kind: simrig.WrongArea, cause: findings.Section, feature: "area_off", limit: mill.AreaOff, grouped: true, size: asIs, most: 0.4},
		{kind: simrig.ChannelLag, cause: findings.Lag, feature: "lag_width", limit: mill.LagWidth,
			size: func(s *subject, x float64) float64 { return x * s.workPa / s.c.Drive.RatePaS }, most: 3},
		{kind: simrig.TooFewCycles, cause: findings.FewRamps, feature: "ramps",
			size: func(s *subject, x float64) float64 { return float64(1 + s.rng.IntN(2)) }, most: 2},
		{kind: simrig.TooFast, cause: findings.Fast, feature: "rate", limit: mill.FastRamp,
			size: func(s *subject, x float64) float64 { return x * 1.22 * s.workPa / s.c.Drive.RatePaS }, most: 20},
		{kind: simrig.TooRagged, cause: findings.Ragged, feature: "largest_fall", limit: mill.RaggedRamp, size: raggedSize, most: 25},
	}
}

// screwPlantings are on tensioners set by torque, turns and spring length: what
// differs there from those set by pressure.
func screwPlantings() []planting {
	return []planting{
		{name: "torque: dry screw", by: mill.SetByTorque, kind: simrig.DryScrew, cause: findings.Screw, feature: "screw_efficiency",
			least: dryLeast, size: drySize(func(t *simrig.Truth, mu float64) { t.Screw.ThreadMu += mu }), most: 0.2},
		{name: "torque: dry collar", by: mill.SetByTorque, kind: simrig.DryCollar, cause: findings.Screw, feature: "screw_efficiency",
			least: dryLeast, size: drySize(func(t *simrig.Truth, mu float64) { t.Screw.CollarMu += mu }), most: 0.15},
		{name: "turns: play", by: mill.SetByTurns, kind: simrig.ScrewPlay, cause: findings.Play, feature: "turn_lost_idle", limit: mill.PlayWidth, size: ofSetting, most: 12},
		{name: "turns: coil bind", by: mill.SetByTurns, kind: simrig.CoilBind, cause: findings.CoilBind, feature: "springs_solid", limit: mill.StopSpan, size: stopSize, fewest: 0.5, most: 1},
		{name: "turns: tyre compression", by: mill.SetByTurns, kind: simrig.TyreCompression, cause: findings.Tyre, feature: "toe_end", limit: mill.ToeReach, grouped: true,
			size: tyreSize, most: 3e-3},
		{name: "turns: end stop", by: mill.SetByTurns, kind: simrig.EndStop, cause: findings.EndStop, feature: "top_span", limit: mill.StopSpan, least: stopSpan, size: stopSize, fewest: 0.6, most: 1},
		{name: "spring: coil bind", by: mill.SetBySpring, kind: simrig.CoilBind, cause: findings.CoilBind, feature: "springs_solid", limit: mill.StopSpan, size: stopSize, fewest: 0.5, most: 1},
		{name: "spring: constant friction", by: mill.SetBySpring, kind: simrig.ConstantFriction, cause: findings.Slide, feature: "half_width_constant", limit: mill.FrictionConstant,
			size: func(s *subject, x float64) float64 { return x * s.truth.PullN(targetPa(s)) }, most: 2e4},
		{name: "spring: mount slip", by: mill.SetBySpring, kind: simrig.MountSlip, cause: findings.MountSlip, feature: "stretch_step", limit: mill.MountSlip,
			size: func(s *subject, x float64) float64 { return math.Max(x*s.workM, 7*s.countM) }, most: 1.2e-4},
	}
}

// tyreSize is the travel that the tyres take for a hundredth of the whole way, and
// what the display hides, to be left of it at x of the target, of which the line
// through the upper part takes half: all but 1/e of it is taken at 0.4 of the pull.
func tyreSize(s *subject, x float64) float64 {
	if x > 0.7 { // no straight part would be left
		return 0
	}
	way := s.truth.PullN(targetPa(s)) * (s.truth.Screw.GiveMN + 1/s.truth.Screw.SpringNM)
	return 2 * math.Max(0.01, 2*s.countM/s.workM) * way * math.Exp(x/0.4)
}

// dryLeast is the torque beyond the expected one, as a share, at the limit of the
// efficiency and three standard uncertainties.
func dryLeast(*subject) float64 {
	limit, _ := (*mill.Profile)(nil).Threshold(mill.ScrewLow)
	return 1/(limit-3*dryDoubt) - 1
}

// dryDoubt is the usual standard uncertainty of the efficiency.
const dryDoubt = 0.04

// drySize is the friction added that takes x more torque for the target.
func drySize(dry func(*simrig.Truth, float64)) func(*subject, float64) float64 {
	return func(s *subject, x float64) float64 {
		torque := func(mu float64) float64 {
			t := s.truth
			dry(&t, mu)
			return t.TorqueNM(targetPa(s), true)
		}
		low, high := 0.0, 1.0
		for range 50 {
			if mid := (low + high) / 2; torque(mid) < (1+x)*torque(0) {
				low = mid
			} else {
				high = mid
			}
		}
		return low
	}
}

// raggedSize is the swing of the rate that takes the setting back by x times what
// friction locks, or by x times a twentieth of the setting: two swings of 2.3 and
// 3.7 s, half of the swing each.
func raggedSize(s *subject, x float64) float64 {
	fall := x * math.Max(0.05, 2*s.truth.F0N/s.truth.AreaM2/s.workPa+2*s.truth.Mu) * s.workPa
	return (fall/s.c.Drive.RatePaS + 1.2) * 2 * math.Pi / (2.3 + 3.7)
}

func warmSize(s *subject, x float64) float64 {
	return x * s.workM / (11.5e-6 * s.truth.GaugeM * s.seconds)
}

// profile is a copy of the rig's, to be changed.
func (s *subject) profile() *mill.Profile {
	p := *s.c.Profile
	p.Tensioners = slices.Clone(p.Tensioners)
	p.Instruments = slices.Clone(p.Instruments)
	s.c.Profile = &p
	return &p
}

// offLoad notes an off-load test of the cylinders that found a drag, good to 10 %.
func (s *subject) offLoad(dragN float64) {
	drag := dragN / s.truth.AreaM2 * (1 + 0.1*s.rng.NormFloat64())
	s.profile().Tensioners[0].OffLoadDrag = mill.Pressure(setting(drag))
}

// holdFor holds until a leak of a size has taken twice what friction locks, and
// for ten minutes at most.
func (s *subject) holdFor(size float64) {
	lock := 2 * (s.truth.F0N/s.truth.AreaM2/s.workPa + s.truth.Mu)
	s.c.Drive.HoldTopS = math.Max(60, math.Min(600, 4*lock/size))
	s.c.Pressure.PerSecond, s.c.Indicator.PerSecond = 8, s.c.Indicator.PerSecond/2
}

func targetPa(s *subject) float64 {
	band, _ := s.c.Profile.FindBand(s.c.Band)
	return band.Target.SI
}

// toeSize is the stress held back for the readings to leave the line up to x of
// the target, and by more than the display hides.
func toeSize(s *subject, x float64) float64 {
	return math.Max(x*targetPa(s)/2.8, 5*s.countM*s.truth.ModulusPa/s.truth.GaugeM)
}

func perSecond(_ *subject, x float64) float64 { return x / 60 }

// airSize is the air that takes x - 1 times as long to squeeze, from rest to the
// slack lift, as the ramp's pace would.
func airSize(s *subject, x float64) float64 {
	const atmospherePa = 101325
	rest, lift := 0.6*s.truth.LiftFallingPa(), s.truth.LiftRisingPa()
	squeezed := atmospherePa * (1/(rest+atmospherePa) - 1/(lift+atmospherePa))
	flow := s.truth.AreaM2 * s.c.SlackM / s.c.SlackTimeS
	return x * (lift - rest) / s.c.Drive.RatePaS * flow / squeezed
}

// benchSpanPa is the span of the gauges that are bench-tested.
const benchSpanPa = 1500 * psi

const psi = 6894.757293168361 // Pa

// bench puts a bench test of the gauge into a copy of the profile: eleven points,
// each with an error of the test's own.
func (s *subject) bench(rising, falling func(share float64) float64) {
	const u = 0.0005 * benchSpanPa // standard
	p := s.profile()
	in := func(si float64) mill.Setting { return setting(si) }
	for i := range p.Instruments {
		if p.Instruments[i].Measures != mill.MeasuresSetting {
			continue
		}
		b := &mill.Bench{Verdict: "fail"}
		worst := 0.0
		for k := range 11 {
			share := float64(k) / 10
			up, down := rising(share)+u*s.rng.NormFloat64(), falling(share)+u*s.rng.NormFloat64()
			worst = math.Max(worst, math.Abs(down-up))
			b.Points = append(b.Points, mill.BenchPoint{At: in(share * benchSpanPa), Rising: in(up), Falling: in(down), Uncertainty: in(2 * u)})
		}
		b.Hysteresis = in(worst)
		p.Instruments[i].Bench = b
		p.Instruments[i].High = in(benchSpanPa)
	}
}

func setting(pa float64) mill.Setting {
	return mill.Setting{Quantity: mill.Quantity{SI: pa, Unit: mill.SI.Unit(mill.RolePressure), Entered: fmt.Sprintf("%.6g Pa", pa)}}
}

func benchSticky(s *subject, size float64) {
	s.bench(func(float64) float64 { return size }, func(float64) float64 { return -size })
}

func benchBent(s *subject, size float64) {
	bow := func(share float64) float64 { return -size * 4 * share * (1 - share) }
	s.bench(bow, bow)
}
