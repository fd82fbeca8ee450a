package findings_test

import (
	"fmt"
	"math"
	"math/rand/v2"

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
	workPa  float64 // setting at the target
	workM   float64 // stretch there
	countM  float64
	seconds float64 // how long the visit takes, about
	rng     *rand.Rand
}

// draw makes up a healthy mill. The sensors are read less often than in life: it
// costs a third of the time and changes no physics.
func draw(seed, stream uint64) (*subject, error) {
	rng := rand.New(rand.NewPCG(seed, stream))
	c, err := simrig.Draw(rng)
	if err != nil {
		return nil, err
	}
	c.Thermometer = true
	c.Pressure.PerSecond, c.Indicator.PerSecond = 16, 4
	rig, err := simrig.New(c)
	if err != nil {
		return nil, err
	}
	s := &subject{c: c, truth: rig.Truth(), rng: rng}
	band, _ := c.Profile.FindBand(c.Band)
	s.workPa = s.truth.RisingPa(band.Target.SI)
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
	kind    simrig.FaultKind
	cause   findings.Key
	feature findings.FeatureKey
	limit   mill.ThresholdKey
	// size of the fault for its feature to be x beyond what a healthy rig shows.
	size func(s *subject, x float64) float64
	most float64                        // largest size that is planted: what is beyond is met in no mill
	also func(s *subject, size float64) // the rest of it: a bench record
	// where it can be planted; nil: on any rig. A drive that loses more to a sag
	// than a stroke gains never reaches its top.
	fits func(s *subject) bool
}

func plantings() []planting {
	share := func(_ *subject, x float64) float64 { return x }
	return []planting{
		{kind: simrig.ProportionalFriction, cause: findings.Pins, feature: "half_width_proportional", limit: mill.FrictionProportional, size: share, most: 0.16},
		{kind: simrig.ConstantFriction, cause: findings.Slide, feature: "half_width_constant", limit: mill.FrictionConstant,
			size: func(s *subject, x float64) float64 { return x * s.truth.AreaM2 * s.workPa }, most: 2e4},
		{kind: simrig.SealDrag, cause: findings.Seal, feature: "half_width", limit: mill.FrictionWide, size: share, most: 0.2},
		{kind: simrig.StickSlip, cause: findings.StickSlip, feature: "third_jump", limit: mill.JumpSize,
			size: func(s *subject, x float64) float64 { return (x + s.countM/s.workM) / 0.35 }, most: 0.12},
		{kind: simrig.SlackToe, cause: findings.Toe, feature: "toe_end", limit: mill.ToeReach,
			size: toeSize, most: 2e7},
		{kind: simrig.EndStop, cause: findings.EndStop, feature: "top_span", limit: mill.StopSpan,
			size: func(s *subject, x float64) float64 { return 1 - 0.8*x }, most: 1},
		{kind: simrig.AirInOil, cause: findings.Air, feature: "low_strokes", limit: mill.AirSoftness, size: airSize, most: 3e-4,
			fits: func(s *subject) bool { return s.c.Drive.Shape != simrig.Strokes || s.c.Drive.SagPart < 0.006 }},
		{kind: simrig.LeakDown, cause: findings.Leak, feature: "hold_setting_loss", limit: mill.HoldLoss, size: perSecond, most: 0.005},
		{kind: simrig.GaugeLeak, cause: findings.GaugeLeak, feature: "hold_setting_loss", limit: mill.HoldLoss, size: perSecond, most: 0.004},
		{kind: simrig.PumpSideGauge, cause: findings.PumpSide, feature: "stroke_fall", limit: mill.StrokeLoss,
			size: func(s *subject, x float64) float64 { return 0.04 * x / 1.2 }, most: 2},
		{kind: simrig.OilWarming, cause: findings.Warmth, feature: "hold_setting_rise", limit: mill.HoldRise,
			size: func(s *subject, x float64) float64 { return x / 0.7 }, most: 0.1},
		{kind: simrig.Saturation, cause: findings.Saturation, feature: "flat_top", limit: mill.FlatTop,
			size: func(s *subject, x float64) float64 { return 1 - 0.8*x }, most: 1},
		{kind: simrig.MountCreep, cause: findings.MountCreep, feature: "stretch_creep", limit: mill.MountCreep, size: perSecond, most: 1e-6},
		{kind: simrig.MountSlip, cause: findings.MountSlip, feature: "stretch_step", limit: mill.MountSlip,
			size: func(s *subject, x float64) float64 { return math.Max(x*s.workM, 7*s.countM) }, most: 1.2e-4},
		{kind: simrig.GaugeZero, cause: findings.GaugeZero, feature: "weight_off", limit: mill.WeightOff,
			size: func(s *subject, x float64) float64 { return x * s.workPa }, most: 1e6},
		{kind: simrig.GaugeSpan, cause: findings.GaugeSpan, feature: "area_off", limit: mill.AreaOff, size: share, most: 0.4},
		{kind: simrig.StickyGauge, cause: findings.Gauge, feature: "gauge_sticks", limit: mill.GaugeSticky,
			size: func(s *subject, x float64) float64 { return x * benchSpanPa / 2 }, most: 3e5, also: benchSticky},
		{kind: simrig.BentGauge, cause: findings.Gauge, feature: "gauge_curve", limit: mill.GaugeCurve,
			size: func(s *subject, x float64) float64 { return x * benchSpanPa / 0.6 }, most: 5e5, also: benchBent},
		{kind: simrig.BandWarming, cause: findings.Warmth, feature: "warmth_shift", limit: mill.WarmthShift,
			size: func(s *subject, x float64) float64 { return x * s.workM / (11.5e-6 * s.truth.GaugeM * s.seconds) }, most: 0.02},
		{kind: simrig.RigWarming, cause: findings.Warmth, feature: "warmth_shift", limit: mill.WarmthShift,
			size: func(s *subject, x float64) float64 { return x * s.workM / (11.5e-6 * s.truth.GaugeM * s.seconds) }, most: 0.02},
		{kind: simrig.WheelDrag, cause: findings.Drag, feature: "spans_differ", limit: mill.SpanDiffer, size: share, most: 0.5},
		{kind: simrig.TyreCreep, cause: findings.Tyre, feature: "hold_setting_loss", limit: mill.HoldLoss,
			size: func(s *subject, x float64) float64 { return x / 0.025 }, most: 0.6},
		{kind: simrig.WrongSection, cause: findings.Section, feature: "area_off", limit: mill.AreaOff, size: share, most: 0.4},
		{kind: simrig.WrongArea, cause: findings.Section, feature: "area_off", limit: mill.AreaOff, size: share, most: 0.4},
		{kind: simrig.ChannelLag, cause: findings.Lag, feature: "lag_width", limit: mill.LagWidth,
			size: func(s *subject, x float64) float64 { return x * s.workPa / s.c.Drive.RatePaS }, most: 3},
		{kind: simrig.TooFewCycles, cause: findings.FewRamps, feature: "ramps",
			size: func(s *subject, x float64) float64 { return float64(1 + s.rng.IntN(2)) }, most: 2},
		{kind: simrig.TooFast, cause: findings.Fast, feature: "rate", limit: mill.FastRamp,
			size: func(s *subject, x float64) float64 { return x * 1.22 * s.workPa / s.c.Drive.RatePaS }, most: 20},
	}
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
	p := *s.c.Profile
	p.Instruments = append([]mill.Instrument(nil), p.Instruments...)
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
	s.c.Profile = &p
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

// noticeable is the least that a cause's feature must show: its limit, and three
// standard uncertainties beyond it.
func noticeable(p planting, u doubts, s *subject) float64 {
	limit, _ := (*mill.Profile)(nil).Threshold(p.limit)
	if p.limit == "" {
		return 1
	}
	return limit + 3*u.of(p.feature, s)
}

// doubts is the usual standard uncertainty of each feature on healthy rigs, by
// how finely the indicator counts.
type doubts map[bool]map[findings.FeatureKey]float64

func (u doubts) of(k findings.FeatureKey, s *subject) float64 { return u[s.coarse()][k] }

func (s *subject) coarse() bool { return s.countM > 5e-6 }

// plant puts a cause on a rig at so many times the noticeable severity. ok is
// false where that is beyond what is met in mills.
func (p planting) plant(s *subject, u doubts, times float64) (ok bool, err error) {
	size := p.size(s, times*noticeable(p, u, s))
	if p.fits != nil && !p.fits(s) {
		return false, nil
	}
	if !(size > 0) || size > p.most {
		return false, nil
	}
	if p.kind == simrig.WrongSection && s.rng.IntN(2) == 0 || p.kind == simrig.WrongArea && s.rng.IntN(2) == 0 {
		size = -size / (1 + size)
	}
	if p.also != nil {
		p.also(s, size)
	}
	return true, simrig.Plant(&s.c, simrig.Fault{Kind: p.kind, Size: size})
}

// usualDoubts is as a pilot run of 24 healthy rigs found it, on seeds of their
// own: go test ./analyze/findings -run Confusion -pilot -only none.
func usualDoubts() doubts {
	return doubts{
		false: {
			"area_off":                 0.018,
			"first_ramp":               0.001,
			"flat_top":                 0.0027,
			"gauge_curve":              0.0005,
			"gauge_sticks":             0.0007,
			"half_width":               0.0041,
			"half_width_constant":      0.0041,
			"half_width_proportional":  0.00043,
			"hold_reversals":           0.02,
			"hold_setting_loss":        0.00025,
			"hold_setting_rise":        0.00025,
			"hold_stretch_loss":        0.003,
			"lag":                      0.23,
			"lag_width":                0.0024,
			"low_strokes":              0.65,
			"reversal_beyond_friction": 0.0012,
			"spans_differ":             0.02,
			"stretch_creep":            4e-09,
			"stretch_step":             0.0022,
			"stretch_step_alone":       0.68,
			"stretch_step_counts":      0.24,
			"stroke_fall":              0.2,
			"stroke_fall_rate":         0.0001,
			"third_jump":               0.0022,
			"third_jump_noise":         1,
			"toe_end":                  0.012,
			"top_slope":                0.29,
			"top_span":                 0.021,
			"upper_over_lower_slope":   0.0068,
			"warmth_link":              0.16,
			"warmth_per_degree":        0.049,
			"warmth_shift":             0.0006,
			"weight_off":               0.014,
		},
		true: {
			"area_off":                 0.019,
			"first_ramp":               0.0032,
			"flat_top":                 0.025,
			"gauge_curve":              0.0005,
			"gauge_sticks":             0.0007,
			"half_width":               0.0038,
			"half_width_constant":      0.0038,
			"half_width_proportional":  0.00066,
			"hold_reversals":           0.023,
			"hold_setting_loss":        0.00022,
			"hold_setting_rise":        0.00022,
			"hold_stretch_loss":        0.031,
			"lag":                      2.4,
			"lag_width":                0.019,
			"low_strokes":              0.3,
			"reversal_beyond_friction": 0.0013,
			"spans_differ":             0.02,
			"stretch_creep":            7.9e-08,
			"stretch_step":             0.02,
			"stretch_step_alone":       0.56,
			"stretch_step_counts":      0.24,
			"stroke_fall":              0.2,
			"stroke_fall_rate":         0.0001,
			"third_jump":               0.02,
			"third_jump_noise":         1,
			"toe_end":                  0.012,
			"top_span":                 0.024,
			"upper_over_lower_slope":   0.088,
			"warmth_link":              0.15,
			"warmth_per_degree":        0.84,
			"warmth_shift":             0.011,
			"weight_off":               0.039,
		},
	}
}
