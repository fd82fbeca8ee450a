package estimate

import (
	"maps"
	"math"
	"slices"

	"gonum.org/v1/gonum/floats"
	"gonum.org/v1/gonum/mat"
)

// find minimises the residuals over the delay: a grid, then closer and closer
// about the lowest point.
func (f *delayFit) find(of offsets) Estimate {
	const coarse, fine = 0.1, 1e-4 // s
	f.fixed = f.constants(of)
	at, least, ok := f.lowest(coarse)
	if !ok {
		return Unknown("the runs cannot be fitted")
	}
	for step := coarse / 2; step > fine; step /= 2 {
		for _, late := range []float64{at - step, at + step} {
			if rss := f.rss(late); rss < least {
				at, least = late, rss
			}
		}
	}
	if at < f.Least+coarse || at > f.Most-coarse {
		return Unknown("no delay within what was searched fits best")
	}
	return f.uncertain(of, f.closer(at))
}

// closer goes on from the lowest point found by the secants that the uncertainty is
// reckoned by: the residuals dip in steps, as noise sets the setting's extreme in
// holds, and their very lowest point is one of many.
func (f *delayFit) closer(late float64) float64 {
	const steps, most = 4, 0.1 // s
	for range steps {
		c, ok := f.changeAbout(late)
		if !ok || !(sumSquares(c.alone) > 0) { // a setting that stands says nothing
			return late
		}
		move := floats.Dot(c.alone, c.rest) / sumSquares(c.alone)
		late += math.Max(-most, math.Min(most, move))
	}
	return late
}

// change is what a delay does about one: y's residuals there, their change for each
// second with the fit done anew, and the setting's extreme for each second.
type change struct{ rest, alone, rate []float64 }

func (f *delayFit) changeAbout(late float64) (c change, ok bool) {
	const half = 0.25 // s; shorter, and noise would look like changes of rate
	soon, later := f.extreme(late-half), f.extreme(late+half)
	rest, ok := project(f.design(f.extreme(late)), f.y)
	before, okB := project(f.design(soon), f.y)
	after, okA := project(f.design(later), f.y)
	if !ok || !okB || !okA {
		return change{}, false
	}
	c = change{rest, make([]float64, len(rest)), make([]float64, len(rest))}
	for i := range rest {
		c.rate[i] = (soon[i] - later[i]) / (2 * half)
		c.alone[i] = (before[i] - after[i]) / (2 * half)
	}
	return c, true
}

// lowest is the dip of the residuals on a grid that lies nearest to no delay
// among those about as low as the lowest.
func (f *delayFit) lowest(step float64) (at, rss float64, ok bool) {
	const asLow = 1.1
	var late, sums []float64
	best := math.Inf(1)
	for l := f.Least; l <= f.Most; l += step {
		late, sums = append(late, l), append(sums, f.rss(l))
		best = math.Min(best, sums[len(sums)-1])
	}
	at = math.Inf(1)
	for i, s := range sums {
		dip := (i == 0 || s <= sums[i-1]) && (i+1 == len(sums) || s <= sums[i+1])
		if dip && s <= asLow*best && math.Abs(late[i]) < math.Abs(at) {
			at, rss = late[i], s
		}
	}
	return at, rss, !math.IsInf(at, 0)
}

func (f *delayFit) rss(late float64) float64 {
	rest, ok := project(f.design(f.seen(late)), f.y)
	if !ok {
		return math.Inf(1)
	}
	return sumSquares(rest)
}

// seen is extreme, kept for the next fit.
func (f *delayFit) seen(late float64) []float64 {
	m, ok := f.extremes[late]
	if !ok {
		m = f.extreme(late)
		f.extremes[late] = m
	}
	return m
}

// design is all columns, for settings m.
func (f *delayFit) design(m []float64) [][]float64 { return slices.Concat(f.fixed, f.slopes(m)) }

// project is what a least-squares fit of the columns leaves of v. The columns
// are few and centred, so their products do.
func project(columns [][]float64, v []float64) ([]float64, bool) {
	p := len(columns)
	if len(v) <= p+1 {
		return nil, false
	}
	gram, right := mat.NewSymDense(p, nil), mat.NewVecDense(p, nil)
	for j, c := range columns {
		for k := range j + 1 {
			gram.SetSym(j, k, floats.Dot(c, columns[k]))
		}
		right.SetVec(j, floats.Dot(c, v))
	}
	var chol mat.Cholesky
	if !chol.Factorize(gram) || chol.Cond() > 1e12 {
		return nil, false
	}
	var b mat.VecDense
	if chol.SolveVecTo(&b, right) != nil {
		return nil, false
	}
	rest := slices.Clone(v)
	for j, c := range columns {
		floats.AddScaled(rest, -b.AtVec(j), c)
	}
	return rest, true
}

// leastApart is how much of the change that the delay makes must be beyond what
// constants and slopes imitate, as a share of its square. Rates that differ by
// less than some 15 % stay below it, and so does what noise looks like.
const leastApart = 0.02

// uncertain is the delay with its uncertainty: y's change with the delay, less
// what the constants and slopes can imitate of it, against the residuals.
func (f *delayFit) uncertain(of offsets, late float64) Estimate {
	x := f.design(f.extreme(late))
	c, ok := f.changeAbout(late)
	if !ok {
		return Unknown("the runs cannot be fitted")
	}
	if apart, ok := project(x, c.rate); !ok || sumSquares(apart) < leastApart*sumSquares(c.rate) {
		return Unknown("one rate all along: no hold, stroke, step or ramp at another rate")
	}
	parts := append(f.scatter(c.alone, c.rest, len(x)+1), f.roundingOfHolds(c.alone, f.extreme(late)))
	if of == offsetsOfCycles {
		parts = append(parts, f.betweenRuns(c.alone, c.rest))
	}
	if !(parts[0].DoF >= 3) {
		return Unknown("too few readings to tell how well it is known")
	}
	return Estimate{Value: late, Random: RootSum(parts), DoF: EffectiveDoF(parts), Method: of.method()}
}

func sumSquares(v []float64) float64 {
	sum := 0.0
	for _, x := range v {
		sum += x * x
	}
	return sum
}

func (o offsets) method() string {
	if o == offsetsOfRuns {
		return "changes of rate within runs"
	}
	return "runs of different rate"
}

// scatter is the standard uncertainty of the delay from blocks of readings
// within the runs; so many parameters were fitted.
func (f *delayFit) scatter(alone, rest []float64, parameters int) []Component {
	length := int(math.Ceil(blocksPerTime * Dependence(rest)))
	length = max(length, (len(rest)+2*mostBlocks-1)/(2*mostBlocks))
	sum, count, blocks, squares := 0.0, 0, 0.0, 0.0
	var tells, told, toldSquares float64
	for i := range rest {
		sum += alone[i] * rest[i]
		tells += alone[i] * alone[i]
		count++
		if count >= length || i+1 == len(rest) || f.run[i+1] != f.run[i] {
			squares += sum * sum
			told += tells
			toldSquares += tells * tells
			blocks++
			sum, count, tells = 0, 0, 0
		}
	}
	// Where few blocks tell nearly all, as the starts of few holds do, their number
	// counts and not that of all blocks.
	dof := math.Min(blocks-float64(parameters), told*told/toldSquares-1)
	return []Component{{Std: math.Sqrt(squares*blocks/math.Max(1, blocks-float64(parameters))) / sumSquares(alone), DoF: dof}}
}

// roundingOfHolds is what the display's rounding does where the setting's
// extreme stands, and with it y: each code shown there errs by one value,
// wherever it is shown.
func (f *delayFit) roundingOfHolds(alone, extreme []float64) Component {
	shown := map[float64]float64{}
	for i, yes := range f.standing(extreme) {
		if yes {
			shown[f.y[i]] += alone[i]
		}
	}
	codes := slices.Sorted(maps.Keys(shown))
	sum := 0.0
	for _, c := range codes {
		sum += shown[c] * shown[c]
	}
	return Component{Std: f.Count / math.Sqrt(12) * math.Sqrt(sum) / sumSquares(alone), DoF: math.Inf(1)}
}

// betweenRuns is what scatter of whole runs adds: as stated, or as the runs'
// mean residuals show.
func (f *delayFit) betweenRuns(alone, rest []float64) Component {
	n, weight, mean := make([]float64, len(f.runs)), make([]float64, len(f.runs)), make([]float64, len(f.runs))
	cycles := map[int]bool{}
	for i, k := range f.run {
		n[k]++
		weight[k] += alone[i]
		mean[k] += rest[i]
		cycles[f.runs[k].Cycle] = true
	}
	std, dof := f.RunStd, math.Inf(1)
	// Constants of the cycles and of the direction, and the delay, are fitted.
	if room := len(f.runs) - len(cycles) - 2; std == 0 && room > 0 {
		for k := range mean {
			mean[k] /= n[k]
		}
		std, dof = math.Sqrt(sumSquares(mean)/float64(room)), float64(room)
	}
	std = math.Hypot(std, f.roundingOfRun(rest))
	return Component{Std: std * math.Sqrt(sumSquares(weight)) / sumSquares(alone), DoF: dof}
}

// roundingOfRun is what a display's saw-tooth leaves in the mean of a run, about
// its spread over how many teeth there are.
func (f *delayFit) roundingOfRun(rest []float64) float64 {
	crossings := 1.0
	for i := 1; i < len(rest); i++ {
		if f.run[i] == f.run[i-1] && rest[i] > 0 != (rest[i-1] > 0) {
			crossings++
		}
	}
	teeth := math.Max(1, crossings/2/float64(len(f.runs)))
	return math.Sqrt(sumSquares(rest)/float64(len(rest))) / teeth
}
