package simrig

import (
	"fmt"
	"math"
	"math/rand/v2"
)

// Budget is how far a rig may be off in ways that repeating does not show: the
// standard uncertainty of each. 0 means that it is not off.
type Budget struct {
	GaugeZero float64 // zero of the setting's gauge, SI of the setting
	GaugeSpan float64 // its span, part of it
	Indicator float64 // error of the indicator along its travel, m: one curve for the whole visit
	Length    float64 // gauge length, part of it
	Modulus   float64 // of the band, part of it
	Section   float64 // net section of the band, part of it
	Area      float64 // of the cylinders, part of it
	TiltRad   float64 // of the measuring rig, rad
	CurlM     float64 // false extension of the face
	BandKS    float64 // warming of the band beyond the bar, K/s
}

// Draw puts errors on a configuration, each drawn by chance from a normal
// distribution of its standard uncertainty. The truth of the rig tells them. Its
// errors are ErrConfig and mill.ErrUnknownName.
func (b Budget) Draw(c *Config, by *rand.Rand) error {
	if c.Profile == nil {
		return fmt.Errorf("%w: no profile given", ErrConfig)
	}
	tensioner, err := c.Profile.FindTensioner(c.Tensioner)
	if err != nil {
		return err
	}
	// All are drawn, so that one more does not change the others.
	var n [10]float64
	for i := range n {
		n[i] = by.NormFloat64()
	}
	phase, pitch := 2*math.Pi*by.Float64(), within(by, 0.15e-3, 0.6e-3)
	gauge := c.gauge(tensioner.SetBy)
	gauge.OffsetSI += n[0] * b.GaugeZero
	gauge.Span = orElse(gauge.Span, 1) * (1 + n[1]*b.GaugeSpan)
	if b.Indicator > 0 {
		// A wave has its standard deviation times the root of 2 as its height.
		c.Indicator.RippleSI, c.Indicator.RipplePhase, c.Indicator.RippleM = n[2]*b.Indicator*math.Sqrt2, phase, pitch
	}
	c.Stretch.LengthFactor = orElse(c.Stretch.LengthFactor, 1) * (1 + n[3]*b.Length)
	c.ModulusFactor = orElse(c.ModulusFactor, 1) * (1 + n[4]*b.Modulus)
	c.SectionFactor = orElse(c.SectionFactor, 1) * (1 + n[5]*b.Section)
	c.AreaFactor = orElse(c.AreaFactor, 1) * (1 + n[6]*b.Area)
	c.Stretch.TiltRad += n[7] * b.TiltRad
	c.Stretch.CurlM += n[8] * b.CurlM
	c.Heat.BandKS += n[9] * b.BandKS
	return nil
}
