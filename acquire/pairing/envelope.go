package pairing

import (
	"math"
	"slices"
)

const (
	blocksMax = 16 // stretches of one segment whose delays are compared
	// A rate of its own takes this long and this many lines: at 1 ms of doubt
	// at either end, 20 s tell 70 ppm; nominal rates are seldom better.
	ownRateSpanS  = 20.0
	ownRatePoints = 50
	// nominalRateStd is the relative standard uncertainty of a nominal tick
	// rate: a ceramic resonator's +/-0.5 % as a rectangular distribution (common
	// practice, no source).
	nominalRateStd = 0.005 / root3
	// frameStdS is the standard uncertainty, in real seconds, of a delay that all
	// lines of a port share: one frame of full-speed USB, 1 ms, as a rectangular
	// distribution (frame length from memory of the USB 2.0 specification).
	frameStdS = 1e-3 / (2 * root3)
	root3     = 1.7320508075688772
)

// envelope collects the receive times of one segment in bounded memory: all
// together, and in 8 to 16 stretches of equal length.
type envelope struct {
	whole  block
	blocks []block
	width  float64 // ticks of one stretch
}

// block is a set of points by its lower hull and its sums.
type block struct {
	hull       hull
	n          int
	sumX, sumY float64
}

func (b *block) add(p point) {
	b.n++
	b.sumX += p.x
	b.sumY += p.y
	b.hull.add(p)
}

// absorb adds a block of later points.
func (b *block) absorb(next block) {
	b.n += next.n
	b.sumX += next.sumX
	b.sumY += next.sumY
	for _, p := range next.hull {
		b.hull.add(p)
	}
}

// add takes one point; firstWidth is the width of a stretch at the start.
func (e *envelope) add(p point, firstWidth float64) {
	if e.width == 0 {
		e.width = math.Max(firstWidth, 1)
	}
	e.whole.add(p)
	for p.x >= e.width*blocksMax {
		e.merge()
	}
	k := int(math.Max(p.x, 0) / e.width)
	for len(e.blocks) <= k {
		e.blocks = append(e.blocks, block{})
	}
	e.blocks[k].add(p)
}

// merge makes one stretch of each two.
func (e *envelope) merge() {
	e.width *= 2
	for i := range (len(e.blocks) + 1) / 2 {
		joined := e.blocks[2*i]
		if 2*i+1 < len(e.blocks) {
			joined.absorb(e.blocks[2*i+1])
		}
		e.blocks[i] = joined
	}
	clear(e.blocks[(len(e.blocks)+1)/2:])
	e.blocks = e.blocks[:(len(e.blocks)+1)/2]
}

// clockLine maps ticks since a segment's first to the host: t = a + b x.
type clockLine struct {
	a, b   float64
	method string
}

// line is the line under all points that makes the sum of the delays least: the
// edge of the lower hull over the mean of x (Moon, Skelly and Towsley 1999,
// "Estimation and removal of clock skew from network delay measurements", from
// memory). Delays only ever make a line late, so the earliest lines tell the
// clock. A short segment takes the nominal rate and the smallest delay.
func (e *envelope) line(hz float64) clockLine {
	if e.whole.n < ownRatePoints || e.span() < ownRateSpanS*hz {
		return clockLine{a: e.whole.hull.height(0, 1/hz), b: 1 / hz, method: MethodNominal}
	}
	a, b := e.whole.hull.under(e.whole.sumX / float64(e.whole.n))
	return clockLine{a, b, MethodEnvelope}
}

func (e *envelope) span() float64 {
	h := e.whole.hull
	return h[len(h)-1].x - h[0].x
}

// stds are the standard uncertainties of a line of this envelope: of a mapped
// instant, s, and of the rate, relative. The first is the root sum of squares
// of what the points show, see doubt, of one USB frame, and in a short segment
// of the nominal rate over half the span.
func (e *envelope) stds(l clockLine, hz, clockFactor float64) (instant, rate float64) {
	instant, slope := e.doubt(l)
	instant, rate = math.Hypot(frameStdS*clockFactor, instant), slope/l.b
	if l.method == MethodNominal {
		rate = nominalRateStd
		instant = math.Hypot(instant, rate*e.span()/hz/2)
	}
	return instant, rate
}

// doubt is what the points say against a line under them, as standard
// uncertainties.
//
// std, of a mapped instant, s: the smallest delays of the stretches show a thin
// supply of prompt lines and a clock that does not run straight; 1.4826 times
// their median is the standard deviation that half a normal distribution would
// have. And a link whose lines are late by m in the mean may hide as much from
// all of them, such as a bridge that hands over in step with the samples: m as a
// rectangular distribution. Medians, so that a host that once stood still for
// seconds does not decide.
//
// slope, s per tick: of a line through the middles of the stretches with the
// scatter of the smallest delays.
func (e *envelope) doubt(l clockLine) (std, slope float64) {
	var least, mean, middle []float64
	for i, b := range e.blocks {
		if b.n > 0 {
			n := float64(b.n)
			least = append(least, b.hull.height(l.a, l.b))
			mean = append(mean, b.sumY/n-l.a-l.b*b.sumX/n)
			middle = append(middle, (float64(i)+0.5)*e.width)
		}
	}
	scatter := 1.4826 * median(least)
	return math.Hypot(scatter, median(mean)/(2*root3)), scatter / math.Sqrt(squares(middle))
}

// median sorts its argument; of an even number it is the upper one.
func median(x []float64) float64 {
	slices.Sort(x)
	return x[len(x)/2]
}

// squares is the sum of squares about the mean.
func squares(x []float64) float64 {
	var mean, sum float64
	for _, v := range x {
		mean += v / float64(len(x))
	}
	for _, v := range x {
		sum += (v - mean) * (v - mean)
	}
	return sum
}
