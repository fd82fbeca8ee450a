package analyze

import (
	"math"
	"math/rand/v2"
	"slices"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/protocol"
)

const (
	psi  = 6894.757293168361 // Pa, from the definitions of inch, pound and g0
	lbf  = 4.4482216152605   // N, exact
	inch = 0.0254            // m, exact
)

// bench is a quasi-static tensioner with its measuring rig: friction holds the
// load anywhere between the two branches of the force balance
// p A* = S(1 +/- mu) +/- F0, S = F + W, F = 2 sigma A_b.
type bench struct {
	f0N, mu, weightN, areaM2 float64
	netM2, modulusPa, gaugeM float64
	zeroM                    float64 // indicated with a slack band
	slackOffM                float64 // added while it is slack: a zero that lies
	toePa                    float64 // stress held back while the band seats, at most
	stopPa, beyond           float64 // above this stress, where it is not 0, the band takes this share of what it would
	slipS, slipM             float64 // the mount slips by so much at a time; none where slipM is 0
	jumpN                    float64 // by which friction is larger at rest: the load jumps once the setting has overcome it
	lateS                    float64 // by which the extension is shown late, a whole number of pathStepS
	countM, noiseM           float64
	countSI, noiseSI         float64
	settingHz, extensionHz   float64
	settingErrSI             [2]float64 // of the transducer at nothing and at 900 psi, straight between
	extensionErrM            [2]float64 // of the indicator with the band taut, at no load and at 10 ksi
	reversalM                float64    // by which it reads more while the extension falls
	wander                   float64    // relative standard deviation of F0 from cycle to cycle
	loadN                    float64    // S now; starts at nothing
	falling                  bool       // it last fell
	shows                    protocol.Shows
	plan                     pairing.Plan
	rng                      *rand.Rand
}

// newBench is T-1 with QW-6.
func newBench(seed uint64) *bench {
	return &bench{
		f0N: 210 * lbf, mu: 0.045, weightN: 820 * lbf,
		areaM2: 2 * math.Pi / 4 * 2.5 * 2.5 * inch * inch,
		netM2:  0.058 * 5.25 * inch * inch, modulusPa: 29e6 * psi, gaugeM: 20 * inch,
		zeroM: 3.1e-4, toePa: 55 * psi,
		countM: 0.00005 * inch, noiseM: 1e-7, countSI: 0.05 * psi, noiseSI: 1 * psi,
		settingHz: 50, extensionHz: 10, shows: protocol.ShowsRounded,
		plan: pairing.Plan{Exercise: 1, Ramps: 3},
		rng:  rand.New(rand.NewPCG(seed, 0x7a)),
	}
}

// settle lets the load follow the pressure as far as friction allows, and
// returns the extension as it truly is.
func (b *bench) settle(pPa float64) float64 {
	q, was := pPa*b.areaM2, b.loadN
	low, high := (q-b.f0N)/(1+b.mu), (q+b.f0N)/(1-b.mu)
	if b.loadN < low-b.jumpN || b.loadN > high+b.jumpN || b.jumpN == 0 {
		b.loadN = math.Min(math.Max(b.loadN, low), high)
	}
	stress := math.Max(0, b.loadN-b.weightN) / (2 * b.netM2)
	if stress == 0 {
		return b.zeroM + b.slackOffM
	}
	if b.stopPa > 0 && stress > b.stopPa {
		stress = b.stopPa + b.beyond*(stress-b.stopPa)
	}
	u := stress / (400 * psi)
	e := b.zeroM + b.gaugeM/b.modulusPa*(stress-b.toePa*u*math.Exp(1-u)) + between(b.extensionErrM, stress/(10000*psi))
	if b.loadN < was {
		b.falling = true
	} else if b.loadN > was {
		b.falling = false
	}
	if b.falling {
		return e + b.reversalM/2
	}
	return e - b.reversalM/2
}

func between(ends [2]float64, share float64) float64 { return ends[0] + (ends[1]-ends[0])*share }

func round(v, count float64) float64 {
	if count == 0 {
		return v
	}
	return math.Round(v/count) * count
}

// path is a setting over time, Pa.
type path struct {
	t, p   []float64
	begins []int // where cycles begin
}

const pathStepS = 0.02

func (h *path) now() float64 {
	if len(h.p) == 0 {
		return 0
	}
	return h.p[len(h.p)-1]
}

func (h *path) add(p float64) {
	h.t, h.p = append(h.t, float64(len(h.t))*pathStepS), append(h.p, p)
}

func (h *path) hold(s float64) {
	for range int(s / pathStepS) {
		h.add(h.now())
	}
}

func (h *path) to(p, perS float64) {
	for math.Abs(p-h.now()) > perS*pathStepS {
		h.add(h.now() + math.Copysign(perS*pathStepS, p-h.now()))
	}
	h.add(p)
}

// strokes is a hand pump: each stroke of 0.6 s is followed by 1.4 s in which
// the pressure sags by a share of itself.
func (h *path) strokes(p, perStroke, sag float64) {
	for peak := h.now(); peak < p; {
		peak = math.Min(p, peak+perStroke)
		h.to(peak, (peak-h.now())/0.6+1)
		for i := range 70 {
			h.add(peak * (1 - sag*(1-math.Exp(-float64(i)/17.5))))
		}
	}
	h.to(p, perStroke)
}

func (h *path) stairs(p float64, steps int, perS, holdS float64) {
	from := h.now()
	for i := 1; i <= steps; i++ {
		h.to(from+(p-from)*float64(i)/float64(steps), perS)
		h.hold(holdS)
	}
}

// shape is how the pressure is brought up to the top; it comes down smoothly,
// or in steps.
type shape string

const (
	smooth shape = "smooth"
	pumped shape = "strokes with 1 % sag"
	stairs shape = "stairs"
)

// cycles is a whole visit from low to top, psi; the first only to half.
func cycles(s shape, n int, low, top float64) *path {
	h := &path{}
	h.add(low * psi)
	h.hold(5)
	for i := range n {
		h.begins = append(h.begins, len(h.p))
		high := top
		if i == 0 && n > 1 {
			high = low + 0.6*(top-low)
		}
		switch s {
		case pumped:
			h.strokes(high*psi, 16*psi, 0.01)
		case stairs:
			h.stairs(high*psi, 8, 8*psi, 6)
		default:
			h.to(high*psi, 8*psi)
		}
		h.hold(5)
		if s == stairs {
			h.stairs(low*psi, 8, 8*psi, 6)
		} else {
			h.to(low*psi, 8*psi)
		}
		h.hold(5)
	}
	return h
}

// rated is a visit of smooth ramps, psi/s each, one cycle of each rate; the
// first for exercise.
func rated(low, top, restS float64, rates ...float64) *path {
	h := &path{}
	h.add(low * psi)
	h.hold(5)
	for _, rate := range rates {
		h.begins = append(h.begins, len(h.p))
		h.to(top*psi, rate*psi)
		h.hold(restS)
		h.to(low*psi, rate*psi)
		h.hold(5)
	}
	return h
}

// measure runs a path through the bench and pairs what it shows.
func (b *bench) measure(h *path) *pairing.Set {
	truth := make([]float64, len(h.p))
	f0N := b.f0N
	for i, p := range h.p {
		if slices.Contains(h.begins, i) {
			b.f0N = f0N * (1 + b.wander*b.rng.NormFloat64())
		}
		truth[i] = b.settle(p)
		if b.slipM != 0 && h.t[i] >= b.slipS {
			truth[i] += b.slipM
		}
	}
	b.f0N = f0N
	set := &pairing.Set{
		Setting:   pairing.Channel{CountSI: b.countSI, Spec: protocol.Chan{Quantity: protocol.Pressure}},
		Extension: pairing.Channel{CountSI: b.countM, Spec: protocol.Chan{Quantity: protocol.Extension, Shows: b.shows}},
		Plan:      b.plan,
	}
	each := max(1, int(1/(b.settingHz*pathStepS)))
	for i := 0; i < len(h.p); i += each {
		v := round(h.p[i]+between(b.settingErrSI, h.p[i]/(900*psi))+b.noiseSI*b.rng.NormFloat64(), b.countSI)
		set.Setting.Readings = append(set.Setting.Readings, pairing.Reading{T: h.t[i], Value: v, Status: protocol.Good})
	}
	slow := int(1 / (b.extensionHz * pathStepS))
	for i := slow / 2; i < len(h.p); i += slow {
		k := i / each
		if k+1 >= len(set.Setting.Readings) {
			break
		}
		lo, hi := set.Setting.Readings[k], set.Setting.Readings[k+1]
		p := lo.Value + (hi.Value-lo.Value)*(h.t[i]-lo.T)/(hi.T-lo.T)
		e := b.shown(truth[max(0, i-int(math.Round(b.lateS/pathStepS)))] + b.noiseM*b.rng.NormFloat64())
		set.Pairs = append(set.Pairs, pairing.Pair{T: h.t[i], Setting: p, Extension: e, SettingStd: 1e-4 * 8 * psi})
	}
	return set
}

// shown is what the display makes of an extension, as it is paired: half a count
// is added to what a truncating one shows, unless that is 0 (SPEC 6.4).
func (b *bench) shown(e float64) float64 {
	if b.shows != protocol.ShowsTruncated {
		return round(e, b.countM)
	}
	n := math.Trunc(e / b.countM)
	if n != 0 {
		n += math.Copysign(0.5, n)
	}
	return n * b.countM
}

// settingAt is the true setting of a band stress.
func (b *bench) settingAt(d Direction, stressPa float64) float64 {
	s, sign := 2*stressPa*b.netM2+b.weightN, 1.0
	if d == Falling {
		sign = -1
	}
	return (s*(1+sign*b.mu) + sign*b.f0N) / b.areaM2
}

// stressAt is the true band stress at a setting, the band taut.
func (b *bench) stressAt(d Direction, settingPa float64) float64 {
	q, sign := settingPa*b.areaM2, 1.0
	if d == Falling {
		sign = -1
	}
	return ((q-sign*b.f0N)/(1+sign*b.mu) - b.weightN) / (2 * b.netM2)
}

// settingPerM is by how much the setting rises for a metre of stretch.
func (b *bench) settingPerM() float64 {
	return 2 * b.netM2 * (1 + b.mu) / b.areaM2 * b.modulusPa / b.gaugeM
}

// halfAt is half of what the setting truly differs at the stretch of a rising
// setting.
func (b *bench) halfAt(risingPa float64) float64 {
	return (risingPa - b.settingAt(Falling, b.stressAt(Rising, risingPa))) / 2
}

// profile is the example mill.
func profile(t testing.TB) *mill.Profile {
	t.Helper()
	p, err := mill.Parse(mill.Example())
	if err != nil {
		t.Fatal(err)
	}
	return p
}

func analyzed(t testing.TB, set *pairing.Set) *Result {
	t.Helper()
	r, err := Analyze(Input{Profile: profile(t), Tensioner: "T-1", Band: "QW-6", Set: set})
	if err != nil {
		t.Fatal(err)
	}
	return r
}
