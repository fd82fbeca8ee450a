package visit

import (
	"math"
	"math/rand/v2"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/acquire/recording"
	"tautramp/protocol"
)

const (
	psiPa = 6894.757293168361
	inM   = 0.0254
	lbfN  = 4.4482216152605
)

func header(t testing.TB) recording.Header {
	t.Helper()
	p, err := mill.Parse(mill.Example())
	if err != nil {
		t.Fatal(err)
	}
	return recording.Header{Source: recording.Live, ClockFactor: 1, Devices: []string{"port"}, Tensioner: "T-1", Band: "QW-6",
		Plan: recording.Plan{Exercise: 1, Ramps: 3}, Profile: mill.Example(), Parsed: p}
}

// pretend is a tensioner as this test knows it: T-1 with QW-6, whose wheel
// follows the oil within the friction, p A* = S(1 +/- mu) +/- F0, as a play.
type pretend struct {
	f0N, mu, weightN float64
	toeM             float64 // extension held back while the band seats
	countM, noiseM   float64 // of the indicator
	noisePa          float64
	frozenAbovePa    float64 // the extension stays where it is once the setting is above this; 0 never
	gain             float64 // factor on the extension; 0 means 1
	zeroM            float64

	loadN   float64
	frozenM float64
	frozen  bool
	rng     *rand.Rand
}

const (
	areaM2 = 9.817477042468104 * inM * inM // two cylinders of 2.5 in
	netM2  = 0.3045 * inM * inM
	gaugeM = 20 * inM
	youngs = 29e6 * psiPa
)

func t1(seed uint64) *pretend {
	return &pretend{f0N: 210 * lbfN, mu: 0.045, weightN: 820 * lbfN, countM: 0.00005 * inM, noiseM: 1e-7,
		noisePa: psiPa, zeroM: 3e-4, rng: rand.New(rand.NewPCG(seed, 3))}
}

// extension is what the indicator shows at a true pressure.
func (r *pretend) extension(pa float64) float64 {
	q := pa * areaM2
	r.loadN = min(max(r.loadN, (q-r.f0N)/(1+r.mu)), (q+r.f0N)/(1-r.mu))
	stress := math.Max(0, r.loadN-r.weightN) / (2 * netM2)
	e := gaugeM * stress / youngs
	if r.toeM > 0 {
		e -= r.toeM * (1 - math.Exp(-e/r.toeM))
	}
	if r.gain != 0 {
		e *= r.gain
	}
	if r.frozenAbovePa > 0 && pa >= r.frozenAbovePa && !r.frozen {
		r.frozen, r.frozenM = true, e
	}
	if r.frozen {
		e = r.frozenM
	}
	e += r.zeroM + r.rng.NormFloat64()*r.noiseM
	return math.Round(e/r.countM) * r.countM
}

// script is what the operator does: pressures in psi over time in s.
type script struct {
	t, psi []float64
	last   int // where at found its time
}

func from(psi float64) *script { return &script{t: []float64{0}, psi: []float64{psi}} }

func (s *script) now() (t, psi float64) { return s.t[len(s.t)-1], s.psi[len(s.psi)-1] }

func (s *script) to(psi, psiPerS float64) *script {
	t, p := s.now()
	s.t = append(s.t, t+math.Abs(psi-p)/psiPerS)
	s.psi = append(s.psi, psi)
	return s
}

func (s *script) rest(seconds float64) *script {
	t, p := s.now()
	s.t = append(s.t, t+seconds)
	s.psi = append(s.psi, p)
	return s
}

// strokes pumps up by hand: each stroke of a third of its time, then a sag.
func (s *script) strokes(psi, each, sag, stroke float64) *script {
	for {
		_, p := s.now()
		if p >= psi {
			return s
		}
		top := math.Min(p+each, psi) + 1e-9
		s.to(top, (top-p)/(0.3*stroke)).to(top*(1-sag), top*sag/(0.2*stroke)+1e-9).rest(0.5 * stroke)
		if _, after := s.now(); after <= p {
			return s.to(psi, each)
		}
	}
}

// stairs goes up or down in steps with holds.
func (s *script) stairs(psi, steps, psiPerS, hold float64) *script {
	_, p := s.now()
	for i := 1.0; i <= steps; i++ {
		s.to(p+(psi-p)*i/steps, psiPerS).rest(hold)
	}
	return s
}

// at is the pressure at a time; times mostly rise from call to call.
func (s *script) at(t float64) float64 {
	if s.last >= len(s.t) || s.last < 1 || t <= s.t[s.last-1] {
		s.last = 1
	}
	for i := s.last; i < len(s.t); i++ {
		if t <= s.t[i] {
			s.last = i
			return s.psi[i-1] + (s.psi[i]-s.psi[i-1])*(t-s.t[i-1])/(s.t[i]-s.t[i-1]+1e-12)
		}
	}
	return s.psi[len(s.psi)-1]
}

// played is what came of a script.
type played struct {
	events []recording.Event
	at     []float64 // s, of each event
	psi    []float64 // true gauge pressure at each event
	kinds  map[AlarmKind]bool
	k      *tracker
	a      *alarms
}

func (p played) count(kind recording.EventKind) int {
	n := 0
	for _, e := range p.events {
		if e.Kind == kind {
			n++
		}
	}
	return n
}

// play runs a script past tracker and alarms as a watch does: the setting 50
// times a second (10 in the short run), the extension 10 times.
func play(t testing.TB, h recording.Header, r *pretend, s *script, each func(*tracker, *alarms, float64)) played {
	t.Helper()
	site, err := newSite(h)
	if err != nil {
		t.Fatal(err)
	}
	k, a := newTracker(site, h.Plan, 0), newAlarms(site)
	k.countM = r.countM
	out := played{k: k, a: a, kinds: map[AlarmKind]bool{}}
	end, _ := s.now()
	step := 1
	if testing.Short() {
		step = 5
	}
	for i := 0; float64(i)*0.02 <= end; i += step {
		now := float64(i) * 0.02
		psi := s.at(now)
		setting := psi*psiPa + r.rng.NormFloat64()*r.noisePa
		a.setting(pairing.Reading{T: now, Value: setting, Status: protocol.Good}, now)
		e := r.extension(psi * psiPa)
		if i%5 == 0 {
			a.extension(pairing.Reading{T: now, Value: e, Status: protocol.Good}, now)
			k.pair(pairing.Pair{T: now, Setting: setting, Extension: e})
			if k.guard.short {
				a.short(setting)
			}
		}
		a.time(now)
		for _, kind := range a.fresh {
			out.kinds[kind] = true
			out.note(recording.Event{Kind: recording.Alarm, Text: string(kind)}, now, psi)
		}
		a.fresh = a.fresh[:0]
		for _, e := range k.take() {
			out.note(e, now, psi)
		}
		if each != nil {
			each(k, a, now)
		}
	}
	return out
}

func (p *played) note(e recording.Event, now, psi float64) {
	p.events, p.at, p.psi = append(p.events, e), append(p.at, now), append(p.psi, psi)
}

// cycles is the planned visit of T-1: one cycle to half of the target, then so
// many to the top.
func cycles(ramps int, psiPerS float64) *script {
	s := from(35).rest(10).to(415, psiPerS).rest(5).to(35, psiPerS).rest(8)
	for range ramps {
		s.to(860, psiPerS).rest(5).to(35, psiPerS).rest(8)
	}
	return s
}

func near(t *testing.T, what string, got, want, tolerance float64) {
	t.Helper()
	if !(math.Abs(got-want) <= tolerance) {
		t.Errorf("%s = %g, want %g within %g", what, got, want, tolerance)
	}
}
