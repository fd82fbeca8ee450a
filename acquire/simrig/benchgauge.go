package simrig

import "math"

// BenchGauge is what is wrong with the tested instrument. The zero value is a
// perfect one but for its lag.
type BenchGauge struct {
	ZeroSI  float64 // shown with nothing on it
	Span    float64 // factor on what is true; 0 means 1
	BowSI   float64 // most by which it strays from straight, halfway up
	LoopSI  float64 // by how much it shows more on the way down than up, halfway, after the whole range
	StickSI float64 // the pointer hangs back until it is off by so much
	TapSI   float64 // what a tap adds, beside setting a pointer free that sticks
	LagS    float64 // s by which the pointer follows slowly; 0 means 0.2, negative none
	CreepSI float64 // what it gains at the top in the long run
	CreepS  float64 // s of that; 0 means 30
}

// benchGauge is one at work: an elastic element with friction inside (a few
// Prandtl stops of different reach), a slow creep, a lag, and a pointer that
// sticks (a play).
type benchGauge struct {
	BenchGauge
	span    float64
	last    float64 // true value at the last step
	stops   [3]float64
	creep   float64
	lagged  float64
	pointer float64
	tapped  float64 // what taps have added since the pointer last moved on
}

// stopReach is how far each stop reaches, of the range.
func stopReach() [3]float64 { return [3]float64{0.02, 0.07, 0.2} }

func newBenchGauge(g BenchGauge, span float64) benchGauge {
	g.Span, g.CreepS, g.LagS = orElse(g.Span, 1), orElse(g.CreepS, 30), orNone(g.LagS, 0.2)
	return benchGauge{BenchGauge: g, span: span}
}

// settle is an instrument that has stood at a value for long.
func (g *benchGauge) settle(trueSI float64) {
	g.last = trueSI
	g.lagged = g.elastic(trueSI)
	g.pointer = g.lagged
}

// elastic is where the element stands: straight, a bow, and the stops' hold.
func (g *benchGauge) elastic(trueSI float64) float64 {
	u := trueSI / g.span
	y := g.ZeroSI + g.Span*trueSI + 4*g.BowSI*u*(1-u) + g.creep
	for i, reach := range stopReach() {
		y -= g.LoopSI / 2 / float64(len(g.stops)) * g.stops[i] / reach
	}
	return y
}

func (g *benchGauge) step(trueSI float64, tapping bool, dt float64) {
	du := (trueSI - g.last) / g.span
	g.last = trueSI
	for i, reach := range stopReach() {
		g.stops[i] = max(-reach, min(reach, g.stops[i]+du))
	}
	g.creep += (g.CreepSI*max(0, trueSI/g.span) - g.creep) * dt / g.CreepS
	g.lagged += (g.elastic(trueSI) - g.lagged) * min(1, dt/max(g.LagS, dt))
	before := g.pointer
	g.pointer = max(g.lagged-g.StickSI, min(g.lagged+g.StickSI, g.pointer))
	if tapping {
		g.pointer, g.tapped = g.lagged, g.TapSI
	} else if math.Abs(g.pointer-before) > 0 && math.Abs(du) > 1e-6 {
		g.tapped *= math.Exp(-dt / 2)
	}
}

// shown is where the pointer stands.
func (g *benchGauge) shown() float64 { return g.pointer + g.tapped }
