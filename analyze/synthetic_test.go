package analyze

import (
	"math"
	"math/rand/v2"
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
	gaugeErr                 errorOver  // and besides: of the transducer, Pa, over 100 to 900 psi
	indicatorErr             errorOver  // of the indicator with the band taut, m, over 0.6 to 12 ksi of band stress
	tautM                    float64    // read too much with the band taut: curl, cosine, a warmer band
	reversalM                float64    // by which it reads more while the extension falls
	codeScatter              float64    // standard deviation of where each step of the display lies, counts
	displayM                 float64    // by how much the extension turns round before the display does
	averageS                 float64    // over which the display averages before it shows
	driftMPerS               float64    // of the mount
	memoryS                  float64    // of the noise: it dies away to 1/e; 0: none
	wander                   float64    // relative standard deviation of F0 from cycle to cycle
	wanderArea               float64    // relative standard deviation of the area that works, from cycle to cycle
	timeStdS                 float64    // stated with the pairs
	loadN                    float64    // S now; starts at nothing
	falling                  bool       // it last fell
	shows                    protocol.Shows
	plan                     pairing.Plan
	rng                      *rand.Rand
	codes                    map[int]float64
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
		plan: pairing.Plan{Exercise: 1, Ramps: 3}, timeStdS: 1e-4,
		rng: rand.New(rand.NewPCG(seed, 0x7a)),
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
	taut := 1 - math.Exp(-stress/(300*psi))
	e := b.zeroM + taut*(b.tautM+b.indicatorErr.at((stress/psi-600)/11400)) + b.gaugeM/b.modulusPa*(stress-b.toePa*u*math.Exp(1-u))
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

// errorOver is an instrument's error over its scale: any curve within a limit,
// smooth, one end independent of the other.
type errorOver struct{ u, v float64 }

// drawnWithin draws a curve that at each point is anywhere within the limit alike:
// two coordinates of a point on a sphere.
func drawnWithin(r *rand.Rand, limit float64) errorOver {
	x, y, z := r.NormFloat64(), r.NormFloat64(), r.NormFloat64()
	by := limit / math.Sqrt(x*x+y*y+z*z)
	return errorOver{x * by, y * by}
}

// at is the error at a share of the scale.
func (e errorOver) at(share float64) float64 {
	q := (math.Min(math.Max(share, -0.3), 1.3) - 0.5) * math.Pi / 3
	return e.u*math.Cos(q) + e.v*math.Sin(q)
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
