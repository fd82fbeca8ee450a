package simrig

import "math"

// contact is the friction of two parts that slide on each other. Its force
// against the motion is level times strain: the level is that of full sliding,
// the strain, between -1 and 1, is the state. It follows the travel by one of
// the laws, each carried over a step exactly for a travel at steady speed, so
// that a step may be long.
type contact struct {
	f0N, mu  float64 // level: F0 + mu * load
	law      law
	strain   float64
	parts    [piParts]float64 // strains of Prandtl-Ishlinskii's elements
	speedMS  float64          // as the level remembers it
	stillS   float64          // age of the contact
	boostNow float64          // factor on the level now

	triedM, triedStrain float64 // the last travel tried in this step; 0 is none
}

// levelN is the friction of full sliding under the load, N.
func (c *contact) levelN(loadN float64) float64 {
	return max(0, c.f0N+c.mu*math.Abs(loadN)) * c.boostNow
}

// forceN is the friction at the end of a step of dx metres made in dt seconds
// under a load that grows by loadNM for each metre, and by how much the force
// grows for each metre.
func (c *contact) forceN(dx, dt, loadN, loadNM float64) (forceN, slopeNM float64) {
	level := c.levelN(loadN)
	if level == 0 {
		return 0, 0
	}
	strain, slope := c.law.strain(c, dx)
	c.triedM, c.triedStrain = dx, strain
	force := level * strain
	slopeNM = level*slope + c.mu*c.boostNow*math.Copysign(loadNM, loadN)*strain
	if c.law.bristleNsM != 0 || c.law.viscousNsM != 0 {
		force += (c.law.bristleNsM*c.law.lengthM*(strain-c.strain) + c.law.viscousNsM*dx) / dt
		slopeNM += (c.law.bristleNsM*c.law.lengthM*slope + c.law.viscousNsM) / dt
	}
	return force, slopeNM
}

// move carries the state over dx metres of travel made in dt seconds.
func (c *contact) move(dx, dt float64) {
	if c.law.kind == PrandtlIshlinskii {
		for i := range c.parts {
			c.parts[i], _ = stop(c.parts[i], dx, piRadius(i)*c.law.lengthM)
		}
		c.strain, _ = c.law.strain(c, 0)
	} else if dx == c.triedM && dx != 0 {
		c.strain = c.triedStrain
	} else {
		c.strain, _ = c.law.strain(c, dx)
	}
	c.triedM = 0
	c.remember(dx, dt)
}

// remember carries what the level depends on over a step: the speed, and the
// contact's age. The age is Dieterich's: it grows by a second a second at rest
// and is wiped out by sliding over the way that renews the contact
// (Dieterich 1979, ageing law d(age)/dt = 1 - v age / way).
func (c *contact) remember(dx, dt float64) {
	l := &c.law
	c.boostNow = 1
	if l.staticRatio > 1 {
		c.speedMS += (dx/dt - c.speedMS) * dt / (l.memoryS + dt)
		if l.kind == Stribeck {
			c.boostNow = l.stribeck(c.speedMS)
		}
	}
	if l.restRatio > 1 {
		worn := math.Abs(dx) / l.renewM
		if worn < 1e-9 {
			c.stillS += dt
		} else {
			steady := l.renewM * dt / math.Abs(dx)
			c.stillS = steady + (c.stillS-steady)*math.Exp(-worn)
		}
		c.boostNow *= l.rested(c.stillS)
	}
}
