package station

import (
	"math"

	"tautramp/analyze/gauge"
)

// step is one thing that the plan asks for.
type step struct {
	kind   StepKind
	target gauge.Target // of a point; of others the series, run and repeat
	from   float64      // of a point: the nominal before it on the same leg; NaN for the first
	near   float64      // of a point, and of the hold at one: distance to the nearest other point
	cycle  int          // of exercise, from 1
}

// stepsOf lays the plan out.
func stepsOf(p gauge.Plan) []step {
	var all []step
	if p.WarmUpS > 0 {
		all = append(all, step{kind: WarmUp})
	}
	run := -1
	targets := p.Targets()
	for i := 0; i < len(targets); {
		t := targets[i]
		if t.Run != run {
			run = t.Run
			all = append(all, opening(p, run)...)
		}
		leg := i
		for leg < len(targets) && sameSeries(targets[leg], t) {
			leg++
		}
		all = append(all, series(p, targets[i:leg])...)
		i = leg
	}
	return append(all, step{kind: Done})
}

// opening is what comes before the first point of a mounting.
func opening(p gauge.Plan, run int) []step {
	var all []step
	about := gauge.Target{Run: run}
	if run > 0 {
		all = append(all, step{kind: Mounting, target: about})
	}
	for c := range p.Exercise {
		all = append(all, step{kind: Exercise, target: about, cycle: c + 1})
	}
	return all
}

func sameSeries(a, b gauge.Target) bool {
	return a.Series == b.Series && a.Run == b.Run && a.Repeat == b.Repeat
}

// series is one rise, and fall, with its zeros.
func series(p gauge.Plan, targets []gauge.Target) []step {
	about := gauge.Target{Series: targets[0].Series, Run: targets[0].Run, Repeat: targets[0].Repeat}
	all := []step{{kind: ZeroBefore, target: about}}
	from := math.NaN()
	for i, t := range targets {
		if i > 0 && t.Direction != targets[i-1].Direction && p.TopHoldS > 0 {
			all = append(all, step{kind: TopHold, target: targets[i-1], near: spacing(p, targets[i-1].Index)})
		}
		all = append(all, step{kind: PointStep, target: t, from: from, near: spacing(p, t.Index)})
		from = t.Nominal.SI
	}
	return append(all, step{kind: ZeroAfter, target: about})
}

// spacing is the distance from a point to the nearest other.
func spacing(p gauge.Plan, index int) float64 {
	near := math.Inf(1)
	for i, q := range p.Points {
		if i != index {
			near = math.Min(near, math.Abs(q.SI-p.Points[index].SI))
		}
	}
	return near
}
