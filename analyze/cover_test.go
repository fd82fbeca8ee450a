package analyze

import (
	"fmt"
	"math"
	"math/rand/v2"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/analyze/estimate"
)

// coverCase is one kind of visit to one kind of tensioner, for which the
// intervals are held against what is true.
type coverCase struct {
	name   string
	sticky bool // T-1 before its slide was cleaned; else after
	shape  shape
	countM float64
	alike  bool // noise that remembers for 2 s
}

func coverCases() []coverCase {
	const fine, coarse, metric = 0.00005 * inch, 0.0005 * inch, 0.01e-3
	return []coverCase{
		{"healthy, smooth, 0.00005 in", false, smooth, fine, false},
		{"sticky, smooth, 0.00005 in", true, smooth, fine, false},
		{"sticky, strokes, 0.00005 in", true, pumped, fine, false},
		{"healthy, strokes, 0.00005 in, slow noise", false, pumped, fine, true},
		{"sticky, staircase, 0.00005 in", true, stairs, fine, false},
		{"healthy, staircase, 0.00005 in, slow noise", false, stairs, fine, true},
		{"sticky, smooth, 0.0005 in", true, smooth, coarse, false},
		{"healthy, smooth, 0.0005 in, slow noise", false, smooth, coarse, true},
		{"sticky, strokes, 0.0005 in", true, pumped, coarse, false},
		{"sticky, staircase, 0.01 mm, slow noise", true, stairs, metric, true},
		{"healthy, smooth, 0.01 mm", false, smooth, metric, false},
		{"sticky, strokes, 0.01 mm, slow noise", true, pumped, metric, true},
	}
}

// coverProfile is the example mill with an indicator that suits the case: its
// limit of error is 3 um, or one count where that is more.
func coverProfile(c coverCase) (*mill.Profile, error) {
	p, err := mill.Parse(mill.Example())
	if err != nil {
		return nil, err
	}
	for i := range p.Instruments {
		if p.Instruments[i].Measures == mill.MeasuresExtension {
			p.Instruments[i].Limit.SI = c.limitM()
		}
	}
	return p, nil
}

func (c coverCase) limitM() float64 { return math.Max(3e-6, c.countM) }

// drawnFor is a bench whose systematic errors come from its own budget, as the
// analysis reads it in the profile.
func drawnFor(c coverCase, seed uint64) *bench {
	b := newBench(seed)
	r := b.rng
	either := func(limit float64) float64 { return limit * (2*r.Float64() - 1) }
	if !c.sticky {
		b.f0N, b.mu = 60*lbf, 0.02
	}
	b.f0N *= 1 + 0.1*r.NormFloat64()
	b.mu *= 1 + 0.1*r.NormFloat64()
	b.modulusPa *= 1 + 0.01*r.NormFloat64()
	b.gaugeM *= 1 + 0.0025*r.NormFloat64()
	b.netM2 *= 1 + 0.01*r.NormFloat64()
	b.countM = c.countM
	b.codeScatter = 0.1
	b.noiseM = 2e-8 // less than any count by far: a display that dithers knows its zero better than it claims
	b.indicatorErr = drawnWithin(r, c.limitM())
	b.reversalM = either(c.limitM() * 2 / 3)
	b.gaugeErr = drawnWithin(r, 3.75*psi)
	b.zeroM += either(b.countM)
	// What the mounting does to a loaded band: curl, warmth, and a bar aslant.
	b.tautM = either(assumedCurl*b.gaugeM) + either(assumedWarmthK*expansionPerK*b.gaugeM)
	b.gaugeM *= 1 - either((1+poisson)*assumedTilt*assumedTilt)
	b.timeStdS = 0.02
	b.lateS = pathStepS * math.Round(b.timeStdS*r.NormFloat64()/pathStepS)
	b.wander = 0.03
	if c.alike {
		b.memoryS = 2
	}
	b.settingHz, b.extensionHz = 10, 5
	if c.shape == pumped {
		b.settingHz, b.extensionHz = 50, 10
	}
	b.plan.Ramps = 4
	return b
}

// scene is one drawn rig, its four ramps, and the next one that their intervals
// promise.
type scene struct {
	b     *bench
	set   *pairing.Set
	nextN float64 // F0 of the last ramp
}

func (c coverCase) scene(seed uint64) scene {
	b := drawnFor(c, seed)
	h := coverPath(c.shape, b.rng)
	return scene{b, b.measure(h), b.f0N * (1 + b.wander*b.rng.NormFloat64())}
}

// coverPath is a visit of an exercise cycle and four ramps.
func coverPath(s shape, r *rand.Rand) *path {
	h := &path{}
	h.add(0)
	h.hold(3)
	for i := range 5 {
		h.begins = append(h.begins, len(h.p))
		high := (890 + 10*r.Float64()) * psi
		if i == 0 {
			high = 480 * psi
		}
		low := 0.0
		switch s {
		case pumped:
			h.strokes(high, 20*psi, 0.01+0.02*r.Float64())
			h.hold(2)
			h.releases(low, 30*psi, 0.01)
		case stairs:
			h.stairs(high, 8, 16*psi, 4)
			h.stairs(low, 8, 16*psi, 4)
		default:
			h.to(high, 16*psi)
			h.hold(2)
			h.to(low, 16*psi)
		}
		h.hold(3)
	}
	return h
}

// ofFirst is the figures that are judged, from the first n ramps alone, their lines
// being those of the whole visit.
func (r *Result) ofFirst(n int) *Result {
	w, out := *r.work, *r
	out.work, w.res = &w, &out
	w.ramps, w.fitted = w.ramps[:n], w.fitted[:n]
	out.Widths = nil
	w.captured(&out.Rising)
	w.captured(&out.Falling)
	w.sources = w.benchFrom(w.systematics())
	w.branch(&out.Rising)
	w.branch(&out.Falling)
	w.friction()
	w.widths()
	w.aim()
	return &out
}

// figures of which the intervals are judged, in the order of the table.
func coverFigures() []string {
	return []string{
		"rising, curve", "rising, next setting", "rising, true stress",
		"falling, curve", "falling, next setting", "falling, true stress",
		"rising slope", "falling slope", "zero", "mu", "F0", "half-width",
	}
}

// zeroM is the true stretch at no wheel pull by the convention that was used: of
// the slack band, or of the loaded one with its curl and warmth.
func (s scene) zeroM(r *Result) float64 {
	if r.work.zeroFrom == slackLift {
		return s.b.zeroM + s.b.tautM
	}
	return s.b.zeroM
}

// judge sets each figure against its own truth.
func (s scene) judge(r *Result, take func(figure string, e estimate.Estimate, truth float64)) {
	b, target := s.b, r.Setup.TargetPa
	for _, d := range []Direction{Rising, Falling} {
		at := r.AtRising
		if d == Falling {
			at = r.AtFalling
		}
		// What the indicator has to show, without its own error, by the constants
		// that the analysis was told.
		stretchM := target * r.Setup.GaugeM.Value / r.Setup.ModulusPa.Value
		asSeenPa := (stretchM + s.zeroM(r) - b.zeroM - b.tautM) * b.modulusPa / b.gaugeM
		take(string(d)+", curve", at.SettingSI, b.gaugeTrue(b.settingAt(d, asSeenPa)))
		next := *b
		next.f0N = s.nextN
		take(string(d)+", next setting", at.NextSI, b.gaugeShows(next.settingAt(d, asSeenPa), b.noiseSI*b.rng.NormFloat64()))
		take(string(d)+", true stress", at.StressPa, next.stressAt(d, at.TrueSI.Value+b.noiseSI*b.rng.NormFloat64()))
	}
	take("rising slope", r.Rising.Slope, b.slope(Rising))
	take("falling slope", r.Falling.Slope, b.slope(Falling))
	zero := estimate.Unknown("no cycle")
	for _, c := range r.Cycles {
		if c.Role == Ramp {
			zero = c.Zero
			break
		}
	}
	take("zero", zero, s.zeroM(r))
	take("mu", r.Friction.Mu, b.mu)
	take("F0", r.Friction.F0N, b.f0N)
	take("half-width", r.Working.HalfSI, b.halfAt(r.Working.RisingSI))
}

func (b *bench) slope(d Direction) float64 {
	return (b.stressAt(d, 700*psi) - b.stressAt(d, 600*psi)) / (100 * psi)
}

// cell is one figure of one case with so many ramps.
type cellKey struct {
	kase   int
	ramps  int
	figure string
}

func (k cellKey) String() string {
	return fmt.Sprintf("%s, %d ramps, %s", coverCases()[k.kase].name, k.ramps, k.figure)
}

// coverRig analyses one rig's first two, three and four ramps.
func coverRig(c coverCase, p *mill.Profile, seed uint64, take func(ramps int, figure string, e estimate.Estimate, truth float64)) error {
	s := c.scene(seed)
	whole, err := Analyze(Input{Profile: p, Tensioner: "T-1", Band: "QW-6", Set: s.set})
	if err != nil {
		return fmt.Errorf("%s, seed %d: %w", c.name, seed, err)
	}
	if len(whole.work.ramps) < 4 {
		return fmt.Errorf("%s, seed %d: %d ramps fitted: %v", c.name, seed, len(whole.work.ramps), whole.Warnings)
	}
	for n := 2; n <= 4; n++ {
		s.judge(whole.ofFirst(n), func(figure string, e estimate.Estimate, truth float64) { take(n, figure, e, truth) })
	}
	return nil
}
