package findings

import (
	"math"
	"slices"

	"tautramp/analyze/estimate"
)

// jumps is what the readings leave of the two lines, looked through for sudden
// changes.
type jumps struct {
	window   int      // points on either side that are compared
	noise    float64  // standard deviation of a change that is none, m
	branches [][]jump // of each rise and fall, largest first
	all      []jump   // of the whole recording, with how much of them lasted
}

// jump is one sudden change of what the lines do not explain.
type jump struct {
	at   int     // first point after it
	size float64 // m, positive where the stretch grew
	read float64 // m, the change of the reading itself
	kept float64 // m, of it still there some seconds later
}

const (
	jumpS = 0.5 // s over which means are compared on either side
	keptS = 8.0 // s over which a step must last
)

func (d *data) findJumps() jumps {
	j := jumps{window: 3}
	if step := d.stepS; step > 0 {
		j.window = max(3, int(math.Round(jumpS/step)))
	}
	j.noise = d.noiseM * math.Sqrt(2/float64(j.window))
	change := d.changes(j.window)
	for _, c := range d.r.Cycles {
		if c.Rising.Points == 0 {
			continue
		}
		for _, leg := range [][2]int{{c.First, c.Peak}, {c.Peak, c.Last}} {
			found := d.peaks(change, leg[0], leg[1], j.window)
			slices.SortStableFunc(found, larger)
			j.branches = append(j.branches, found)
		}
	}
	j.all = d.peaks(change, 0, len(d.t)-1, j.window)
	for i := range j.all {
		j.all[i].kept = d.kept(j.all[i].at, j.window)
	}
	return j
}

func larger(a, b jump) int { return compare(math.Abs(b.size), math.Abs(a.size)) }

func compare(a, b float64) int {
	switch {
	case a < b:
		return -1
	case a > b:
		return 1
	}
	return 0
}

func (d *data) medianStep() float64 {
	steps := make([]float64, 0, len(d.t))
	for i := 1; i < len(d.t); i++ {
		steps = append(steps, d.t[i]-d.t[i-1])
	}
	return estimate.Median(steps)
}

// changes is the mean of what the lines leave over the points from each on,
// less the mean over those before it; NaN where not all of them are good.
func (d *data) changes(window int) []float64 {
	out := make([]float64, len(d.t))
	for i := range out {
		out[i] = math.NaN()
		if i < window || i+window > len(out) {
			continue
		}
		sum, good := 0.0, true
		for k := range window {
			good = good && d.follow.good[i+k] && d.follow.good[i-1-k]
			sum += d.follow.rest[i+k] - d.follow.rest[i-1-k]
		}
		if good {
			out[i] = sum / float64(window)
		}
	}
	return out
}

// peaks is the places where a change is larger than any other within a window.
func (d *data) peaks(change []float64, first, last, window int) []jump {
	var out []jump
	for i := first; i <= last; i++ {
		if math.IsNaN(change[i]) {
			continue
		}
		top := true
		for k := max(first, i-window); k <= min(last, i+window) && top; k++ {
			bigger := math.Abs(change[k]) > math.Abs(change[i])
			top = !bigger && !(k < i && math.Abs(change[k]) == math.Abs(change[i]))
		}
		if top {
			out = append(out, jump{at: i, size: change[i] - usual(change, i, window), read: d.moved(i, window)})
		}
	}
	return out
}

// usual is the change that goes on about a place anyway, where the lines do not
// fit: the median of those near it, not so near that it would be in them.
func usual(change []float64, at, window int) float64 {
	var near []float64
	for k := 2 * window; k <= 5*window; k++ {
		for _, i := range []int{at - k, at + k} {
			if i >= 0 && i < len(change) && !math.IsNaN(change[i]) {
				near = append(near, change[i])
			}
		}
	}
	if len(near) < window {
		return 0
	}
	return estimate.Median(near)
}

// moved is the change of the reading itself, as the change of what is left.
func (d *data) moved(at, window int) float64 {
	sum := 0.0
	for k := range window {
		sum += d.e[at+k] - d.e[at-1-k]
	}
	return sum / float64(window)
}

// kept is the change at a place over some seconds on either side.
func (d *data) kept(at, clear int) float64 {
	mean := func(from, to float64) float64 {
		var v []float64
		for i := search(d.t, from); i < len(d.t) && d.t[i] <= to; i++ {
			if d.follow.good[i] {
				v = append(v, d.follow.rest[i])
			}
		}
		return estimate.Median(v)
	}
	gap := float64(clear) * d.stepS
	t := d.t[at]
	return mean(t+gap/2, t+gap/2+keptS) - mean(t-gap/2-keptS, t-gap/2)
}

// thirdJump is the third largest jump of a branch that goes the branch's way,
// the median of the branches.
func (d *data) thirdJump() estimate.Estimate {
	v, ok := d.third()
	if !ok {
		return estimate.Unknown("no branch is long enough to look for jumps")
	}
	return known(v/d.workingM, d.jumps.noise/d.workingM, math.Inf(1), "change of the stretch within half a second that the setting does not ask for")
}

func (d *data) jumpNoise() estimate.Estimate {
	v, ok := d.third()
	if !ok || !(d.jumps.noise > 0) {
		return estimate.Unknown("no branch is long enough to look for jumps")
	}
	return known(v/d.jumps.noise, 1, math.Inf(1), "noise of the stretch at rest")
}

func (d *data) third() (sizeM float64, ok bool) {
	var thirds []float64
	for i, b := range d.jumps.branches {
		sign := 1.0
		if i%2 == 1 {
			sign = -1
		}
		var ahead []float64
		for _, j := range b {
			if j.size*sign > 0 {
				ahead = append(ahead, math.Abs(j.size))
			}
		}
		if len(ahead) >= 3 {
			thirds = append(thirds, ahead[2])
		} else {
			thirds = append(thirds, 0)
		}
	}
	// One count of the display makes a change of as much by itself.
	return math.Max(0, estimate.Median(thirds)-d.countM), len(thirds) > 0
}

// lasted is how much of a sudden change is still there some seconds later, and
// was there at once; none where the setting jumped and the reading stood.
func (j jump) lasted() float64 {
	if math.IsNaN(j.kept) || j.kept*j.size <= 0 || j.read/j.size < 0.5 {
		return 0
	}
	return math.Min(math.Abs(j.kept), 1.2*math.Abs(j.size))
}

// largestStep is the change that lasted most.
func (d *data) largestStep() (j jump, ok bool) {
	for _, c := range d.jumps.all {
		if c.lasted() > j.lasted() {
			j, ok = c, true
		}
	}
	return j, ok
}

func (d *data) slip() estimate.Estimate {
	j, ok := d.largestStep()
	if !ok {
		return d.noStep()
	}
	return known(j.lasted()/d.workingM, d.jumps.noise/d.workingM, math.Inf(1), "what the lines leave, some seconds before and after")
}

func (d *data) noStep() estimate.Estimate {
	if !d.usable() {
		return estimate.Unknown("too little was recorded to look for steps")
	}
	return known(0, d.jumps.noise/math.Max(d.workingM, d.jumps.noise), math.Inf(1), "no step was seen")
}

func (d *data) slipCounts() estimate.Estimate {
	j, ok := d.largestStep()
	if !ok {
		e := d.noStep()
		return e
	}
	count := math.Max(d.countM, d.noiseM)
	return known(j.lasted()/count, d.jumps.noise/count, math.Inf(1), "what the lines leave, some seconds before and after")
}

// slipAlone is the largest step over the third largest of those elsewhere: a
// mount slips once or twice, stick-slip goes on.
func (d *data) slipAlone() estimate.Estimate {
	j, ok := d.largestStep()
	if !ok {
		return estimate.Unknown("no step was seen")
	}
	var rest []float64
	for _, o := range d.jumps.all {
		if math.Abs(d.t[o.at]-d.t[j.at]) > 2*keptS {
			rest = append(rest, o.lasted())
		}
	}
	slices.SortFunc(rest, func(a, b float64) int { return compare(b, a) })
	next := math.Max(d.jumps.noise, d.countM/2)
	if len(rest) >= 3 {
		next = math.Max(rest[2], next)
	}
	v := j.lasted() / next
	return known(v, math.Hypot(1, v)*d.jumps.noise/next, math.Inf(1), "largest step over the third largest elsewhere")
}
