package pairing

import (
	"math"
	"slices"
)

const (
	blocksMax = 16 // stretches of one segment whose smallest delays are compared
	// A rate of its own takes this long and this many lines: at 1 ms of doubt
	// at either end, 20 s tell 70 ppm; nominal rates are seldom better.
	ownRateSpanS  = 20.0
	ownRatePoints = 50
	// nominalRateStd is the relative standard uncertainty of a nominal tick
	// rate: a ceramic resonator's +/-0.5 % as a rectangular distribution (common
	// practice, no source).
	nominalRateStd = 0.005 / 1.7320508075688772
	// frameStdS is the standard uncertainty, in real seconds, of the part of the
	// delay that all lines of a port share and no line can show: one frame of
	// full-speed USB, 1 ms, as a rectangular distribution (frame length from
	// memory of the USB 2.0 specification).
	frameStdS = 1e-3 / 3.4641016151377544
)

// envelope collects the receive times of one segment in bounded memory: the
// hull of all, and hulls of 8 to 16 equal stretches of it.
type envelope struct {
	whole  hull
	blocks []hull
	width  float64 // ticks of one stretch
	n      int
	sumX   float64
}

// add takes one point; firstWidth is the width of a stretch at the start.
func (e *envelope) add(p point, firstWidth float64) {
	if e.width == 0 {
		e.width = math.Max(firstWidth, 1)
	}
	e.n++
	e.sumX += p.x
	e.whole.add(p)
	for p.x >= e.width*blocksMax {
		e.merge()
	}
	k := int(math.Max(p.x, 0) / e.width)
	for len(e.blocks) <= k {
		e.blocks = append(e.blocks, nil)
	}
	e.blocks[k].add(p)
}

// merge makes one stretch of each two.
func (e *envelope) merge() {
	e.width *= 2
	for i := range (len(e.blocks) + 1) / 2 {
		joined := e.blocks[2*i]
		if 2*i+1 < len(e.blocks) {
			for _, p := range e.blocks[2*i+1] {
				joined.add(p)
			}
		}
		e.blocks[i] = joined
	}
	e.blocks = e.blocks[:(len(e.blocks)+1)/2]
}

// clockLine maps ticks since a segment's first to the host: t = a + b x.
type clockLine struct {
	a, b    float64
	std     float64 // s, of a mapped instant
	rateStd float64 // relative
	method  string
}

// line is the line under all points that makes the sum of the delays least: the
// edge of the lower hull over the mean of x (Moon, Skelly and Towsley 1999,
// "Estimation and removal of clock skew from network delay measurements", from
// memory). Delays only ever make a line late, so the earliest lines tell the
// clock. A short segment takes the nominal rate and the smallest delay.
func (e *envelope) line(hz, clockFactor float64) clockLine {
	span := e.whole[len(e.whole)-1].x - e.whole[0].x
	frame := frameStdS * clockFactor
	if e.n < ownRatePoints || span < ownRateSpanS*hz {
		drift := nominalRateStd * span / hz / 2
		return clockLine{a: e.whole.height(0, 1/hz), b: 1 / hz,
			std: math.Hypot(frame, drift), rateStd: nominalRateStd, method: MethodNominal}
	}
	a, b := e.whole.under(e.sumX / float64(e.n))
	spread, perTick := e.spread(a, b)
	return clockLine{a: a, b: b, std: math.Hypot(frame, spread), rateStd: perTick / b, method: MethodEnvelope}
}

// spread is how far the smallest delays of the stretches stay above the line:
// 1.4826 times their median, the standard deviation if they were halves of a
// normal distribution. It shows both a thin supply of prompt lines and a clock
// that does not run straight. perTick is the doubt of the slope: of a line
// through the stretches' middles with that scatter.
func (e *envelope) spread(a, b float64) (std, perTick float64) {
	var heights, middles []float64
	for i, block := range e.blocks {
		if len(block) > 0 {
			heights = append(heights, block.height(a, b))
			middles = append(middles, (float64(i)+0.5)*e.width)
		}
	}
	var mean, squares float64
	for _, x := range middles {
		mean += x / float64(len(middles))
	}
	for _, x := range middles {
		squares += (x - mean) * (x - mean)
	}
	slices.Sort(heights)
	std = 1.4826 * heights[len(heights)/2]
	return std, std / math.Sqrt(squares)
}
