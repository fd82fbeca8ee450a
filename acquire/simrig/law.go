package simrig

import (
	"errors"
	"fmt"
	"math"
)

// LawKind names a friction law.
type LawKind string

// The friction laws. All are published ones; each is integrated as a state
// that follows the wheel's travel.
const (
	Dahl              LawKind = "dahl"               // F0 + mu S, reached along Dahl's curve
	Elastoplastic     LawKind = "elastoplastic"      // the same level, reached along a straight line (Prandtl's stop)
	Stribeck          LawKind = "stribeck"           // Dahl, and the level falls as the wheel moves faster
	LuGre             LawKind = "lugre"              // bristles that bend less the faster the wheel moves, damped, and oil film drag
	PrandtlIshlinskii LawKind = "prandtl-ishlinskii" // many stops that let go one after the other
	ConstantOnly      LawKind = "constant"           // Dahl with mu = 0
	ProportionalOnly  LawKind = "proportional"       // Dahl with F0 = 0
)

// Laws lists the friction laws, the default first.
func Laws() []LawKind {
	return []LawKind{Dahl, Elastoplastic, Stribeck, LuGre, PrandtlIshlinskii, ConstantOnly, ProportionalOnly}
}

// ErrConfig is a configuration that no rig can be built from.
var ErrConfig = errors.New("rehearsal rig cannot be built")

// Law is the friction law of the wheel. The level F0 + mu S comes from the
// tensioner's rehearsal table.
type Law struct {
	Kind        LawKind // "" means Dahl
	PreslidingM float64 // m of travel, level / initial stiffness; 0 means 0.005 mm: a reversal is 98 % over within 0.02 mm
	Exponent    float64 // n of Dahl's law; 0 means 1
	StaticRatio float64 // Stribeck, LuGre: level at rest / level when fast; 0 means 1.15
	StribeckMS  float64 // Stribeck, LuGre: m/s at which 1/e of the excess is left; 0 means 0.1 mm/s
	MemoryS     float64 // Stribeck, LuGre: s by which the level lags the speed; 0 means 0.5
	BristleNsM  float64 // LuGre: sigma1, N s/m of the bristles; 0 means none
	ViscousNsM  float64 // LuGre: sigma2, N s/m of the oil film; 0 means none

	// What a rest adds to the level, and sliding wipes out again (Dieterich's
	// ageing contact, saturated). With a short way it makes the wheel stick and slip,
	// with a long time a breakaway after a rest.
	RestRatio float64 // level after a long rest / level when sliding; 0 means 1, nothing added
	RestS     float64 // s of rest after which half of it is there; 0 means 0.5
	RenewM    float64 // m of sliding that wipe out all but 1/e of the age; 0 means 0.005 mm
}

// law is a Law with everything filled in.
type law struct {
	kind                   LawKind
	lengthM, exponent      float64
	staticRatio, fastMS    float64
	memoryS                float64
	bristleNsM, viscousNsM float64
	restRatio, restS       float64
	renewM                 float64
}

// newContact makes the friction of a contact that has no history but a rest.
func (l Law) newContact(f0N, mu float64) (contact, error) {
	r := law{kind: l.Kind, lengthM: orElse(l.PreslidingM, 5e-6), exponent: orElse(l.Exponent, 1), staticRatio: 1,
		restRatio: orElse(l.RestRatio, 1), restS: orElse(l.RestS, 0.5), renewM: orElse(l.RenewM, 5e-6)}
	c := contact{f0N: f0N, mu: mu}
	switch l.Kind {
	case Dahl, "":
		r.kind = Dahl
	case Elastoplastic, PrandtlIshlinskii:
	case Stribeck, LuGre:
		r.staticRatio, r.fastMS, r.memoryS = orElse(l.StaticRatio, 1.15), orElse(l.StribeckMS, 1e-4), orElse(l.MemoryS, 0.5)
		if r.staticRatio < 1 || !(r.fastMS > 0) || !(r.memoryS > 0) {
			return contact{}, fmt.Errorf("%w: static ratio %g must be 1 or more, Stribeck speed %g m/s and memory %g s above 0", ErrConfig, r.staticRatio, r.fastMS, r.memoryS)
		}
	case ConstantOnly:
		r.kind, c.mu = Dahl, 0
	case ProportionalOnly:
		r.kind, c.f0N = Dahl, 0
	default:
		return contact{}, fmt.Errorf("%w: no friction law %q; known: %v", ErrConfig, l.Kind, Laws())
	}
	if r.kind == LuGre {
		r.bristleNsM, r.viscousNsM = l.BristleNsM, l.ViscousNsM
	}
	if !(r.lengthM > 0) || !(r.exponent > 0) || r.restRatio < 1 || !(r.restS > 0) || !(r.renewM > 0) || r.bristleNsM < 0 || r.viscousNsM < 0 {
		return contact{}, fmt.Errorf("%w: friction law %+v: lengths, times and the exponent must be above 0, the ratios 1 or more", ErrConfig, l)
	}
	c.law = r
	c.boostNow = 1
	if r.kind == Stribeck {
		c.boostNow = r.stribeck(0)
	}
	return c, nil
}

// strain is the contact's strain after dx metres of travel, and by how much it
// grows for each metre there.
func (l *law) strain(c *contact, dx float64) (strain, slope float64) {
	switch l.kind {
	case Elastoplastic:
		return stop(c.strain, dx, l.lengthM)
	case PrandtlIshlinskii:
		for i := range c.parts {
			s, k := stop(c.parts[i], dx, piRadius(i)*l.lengthM)
			strain, slope = strain+s/piParts, slope+k/piParts
		}
		return strain, slope
	case LuGre:
		g := l.stribeck(c.speedMS)
		strain, slope = dahl(c.strain/g, dx, l.lengthM*g)
		return strain * g, slope * g
	}
	if l.exponent != 1 {
		return dahlN(c.strain, dx, l.lengthM, l.exponent)
	}
	return dahl(c.strain, dx, l.lengthM)
}

// dahl is Dahl's law in units of the level, dz/dx = (1 - z sgn v)/length
// (P. R. Dahl, 1968), over a travel dx.
func dahl(z, dx, lengthM float64) (strain, slope float64) {
	dir := math.Copysign(1, dx)
	left := (1 - z*dir) * math.Exp(-math.Abs(dx)/lengthM)
	return dir * (1 - left), left / lengthM
}

// dahlN is the law with its exponent, dr/du = -r^n for the room r = 1 - z sgn v
// and u = |dx|/length.
func dahlN(z, dx, lengthM, n float64) (strain, slope float64) {
	dir := math.Copysign(1, dx)
	room := max(0, 1-z*dir)
	if room > 0 {
		room = math.Pow(max(0, math.Pow(room, 1-n)+(n-1)*math.Abs(dx)/lengthM), 1/(1-n))
	}
	return dir * (1 - room), math.Pow(room, n) / lengthM
}

// stop is elastic up to the level, then slides.
func stop(z, dx, lengthM float64) (strain, slope float64) {
	z += dx / lengthM
	if math.Abs(z) >= 1 {
		return math.Copysign(1, z), 0
	}
	return z, 1 / lengthM
}

// piParts is how many stops of equal strength make Prandtl-Ishlinskii's law.
const piParts = 6

// piRadius is the travel over which stop i builds up, in presliding lengths:
// from a quarter to four.
func piRadius(i int) float64 {
	return [piParts]float64{0.25, 0.5, 0.9, 1.5, 2.4, 4}[i]
}

// stribeck is 1 + (ratio - 1) exp(-(v/vs)^2), the Gaussian form of the
// Stribeck curve without its viscous part.
func (l *law) stribeck(v float64) float64 {
	u := v / l.fastMS
	return 1 + (l.staticRatio-1)*math.Exp(-u*u)
}

// rested is the factor of a contact of an age.
func (l *law) rested(stillS float64) float64 {
	return 1 + (l.restRatio-1)*stillS/(stillS+l.restS)
}

// orElse is v, or the default where v is 0.
func orElse(v, otherwise float64) float64 {
	if v == 0 {
		return otherwise
	}
	return v
}

// orNone is orElse for a figure of which "none" is worth asking for: it is 0
// where v is negative.
func orNone(v, otherwise float64) float64 {
	return max(0, orElse(v, otherwise))
}
