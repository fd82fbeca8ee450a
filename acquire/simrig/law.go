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
	Dahl             LawKind = "dahl"          // F0 + mu S, reached along Dahl's curve
	Elastoplastic    LawKind = "elastoplastic" // the same level, reached along a straight line (Prandtl's stop)
	Stribeck         LawKind = "stribeck"      // Dahl, and the level falls as the wheel moves faster
	ConstantOnly     LawKind = "constant"      // Dahl with mu = 0
	ProportionalOnly LawKind = "proportional"  // Dahl with F0 = 0
)

// Laws lists the friction laws, the default first.
func Laws() []LawKind {
	return []LawKind{Dahl, Elastoplastic, Stribeck, ConstantOnly, ProportionalOnly}
}

// ErrConfig is a configuration that no rig can be built from.
var ErrConfig = errors.New("rehearsal rig cannot be built")

// Law is the friction law of the wheel. The level F0 + mu S comes from the
// tensioner's rehearsal table.
type Law struct {
	Kind        LawKind // "" means Dahl
	PreslidingM float64 // m of travel, level / initial stiffness; 0 means 0.005 mm: a reversal is 98 % over within 0.02 mm
	Exponent    float64 // n of Dahl's law; 0 means 1
	StaticRatio float64 // Stribeck: level at rest / level when fast; 0 means 1.15
	StribeckMS  float64 // Stribeck: m/s at which 1/e of the excess is left; 0 means 0.1 mm/s
	MemoryS     float64 // Stribeck: s by which the level lags the speed; 0 means 0.5
}

// bristle is the friction of a sliding contact. Its force against the motion
// is level times strain; strain follows the travel and stays within -1 and 1.
// With a level that does not change this is Dahl's law dF/dx = s (1 - F/Fc
// sgn v)^n with s = Fc / presliding travel.
type bristle struct {
	f0N, mu  float64
	slope    func(strain, dir float64) float64 // d(strain)/dx in 1/m while moving towards dir
	boost    func(speedMS float64) float64     // factor on the level
	memoryS  float64
	strain   float64
	speedMS  float64 // as the level remembers it
	boostNow float64
}

// newBristle makes the friction of a contact at rest that has no history.
func (l Law) newBristle(f0N, mu float64) (bristle, error) {
	length := orElse(l.PreslidingM, 5e-6)
	n := orElse(l.Exponent, 1)
	if !(length > 0) || !(n > 0) {
		return bristle{}, fmt.Errorf("%w: presliding travel %g m and exponent %g must be above 0", ErrConfig, length, n)
	}
	b := bristle{f0N: f0N, mu: mu, slope: dahlSlope(length, n), boost: steadyLevel, boostNow: 1}
	switch l.Kind {
	case Dahl, "":
	case Elastoplastic:
		b.slope = stopSlope(length)
	case Stribeck:
		ratio, fastMS := orElse(l.StaticRatio, 1.15), orElse(l.StribeckMS, 1e-4)
		if ratio < 1 || !(fastMS > 0) {
			return bristle{}, fmt.Errorf("%w: static ratio %g must be 1 or more and Stribeck speed %g m/s above 0", ErrConfig, ratio, fastMS)
		}
		b.boost, b.memoryS = stribeckLevel(ratio, fastMS), orElse(l.MemoryS, 0.5)
		b.boostNow = b.boost(0)
	case ConstantOnly:
		b.mu = 0
	case ProportionalOnly:
		b.f0N = 0
	default:
		return bristle{}, fmt.Errorf("%w: no friction law %q; known: %v", ErrConfig, l.Kind, Laws())
	}
	return b, nil
}

// dahlSlope is Dahl's law in units of the level (P. R. Dahl, 1968).
func dahlSlope(lengthM, n float64) func(strain, dir float64) float64 {
	return func(strain, dir float64) float64 {
		room := max(0, 1-strain*dir)
		if n != 1 {
			room = math.Pow(room, n)
		}
		return room / lengthM
	}
}

// stopSlope is the stop operator: elastic up to the level, then sliding.
func stopSlope(lengthM float64) func(strain, dir float64) float64 {
	return func(strain, dir float64) float64 {
		if strain*dir >= 1 {
			return 0
		}
		return 1 / lengthM
	}
}

func steadyLevel(float64) float64 { return 1 }

// stribeckLevel is 1 + (ratio - 1) exp(-(v/vs)^2), the Gaussian form of the
// Stribeck curve without its viscous part.
func stribeckLevel(ratio, fastMS float64) func(float64) float64 {
	return func(v float64) float64 {
		u := v / fastMS
		return 1 + (ratio-1)*math.Exp(-u*u)
	}
}

// levelN is the friction of full sliding under the load, N.
func (b *bristle) levelN(loadN float64) float64 {
	return max(0, b.f0N+b.mu*math.Abs(loadN)) * b.boostNow
}

// move carries the state over dx metres of travel made in dt seconds: one
// midpoint step, so dx must be small beside the presliding travel.
func (b *bristle) move(dx, dt float64) {
	if b.memoryS > 0 || b.boostNow != 1 {
		b.speedMS += (dx/dt - b.speedMS) * dt / (b.memoryS + dt)
		b.boostNow = b.boost(b.speedMS)
	}
	if dx == 0 {
		return
	}
	dir := math.Copysign(1, dx)
	middle := b.strain + b.slope(b.strain, dir)*dx/2
	b.strain = max(-1, min(1, b.strain+b.slope(middle, dir)*dx))
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
