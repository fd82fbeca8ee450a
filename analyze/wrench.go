package analyze

import (
	"math"
	"sort"

	"tautramp/acquire/pairing"
	"tautramp/analyze/estimate"
)

// wrench reads a torque as the torque that turns the screw, in the sense of its
// turning. A wrench shows three things that no pressure does:
//
//   - A screw that locks itself is loosened by a torque of the other sign. It is
//     counted positive here: so it falls as the load falls, as every setting does.
//   - The torque is gone while nobody pulls. The screw stands then, and what
//     turned it last stands for it.
//   - Between tightening and loosening it passes through nothing, the screw
//     standing: there the first torque that loosens stands for it.
//
// It was let go where it falls below half of what it has shown on the way up, or
// will still show on the way down, with all on both sides that is clearly below
// that: the torque builds up and dies away. Tops are those of the extension, for
// the torque itself may rise while the load falls.
type wrench struct {
	t, raw  []float64
	tops    []int     // indexes at which the extension is highest
	opposed bool      // some loosening torque had the other sign
	sign    []float64 // +1 tightening, -1 loosening by a torque of the other sign
	back    []bool    // the screw is being let back
	most    []float64 // highest torque so far on the way up, still to come on the way down
	letGo   []bool    // nobody turns the screw
	stands  []float64 // what stands for the torque while it is let go
	noise   float64
}

func newWrench(set *pairing.Set) *wrench {
	tr := newTrace(set, 0)
	n := len(tr.t)
	w := &wrench{t: tr.t, raw: tr.p, noise: tr.noise, sign: make([]float64, n), back: make([]bool, n), most: make([]float64, n), letGo: make([]bool, n), stands: make([]float64, n)}
	for i := range w.sign {
		w.sign[i] = 1
	}
	e := make([]float64, len(set.Pairs))
	for i, q := range set.Pairs {
		e[i] = q.Extension
	}
	low, high := estimate.Quantile(e, 0.001), estimate.Quantile(e, 0.999)
	turns := Turning(e, math.Max(cycleShare*(high-low), 8*estimate.Noise(e)))
	for i := 1; i < len(turns); i++ {
		if e[turns[i]] > e[turns[i-1]] {
			w.tops = append(w.tops, max(0, w.at(set.Pairs[turns[i]].T)))
		}
	}
	for k, top := range w.tops {
		next := n - 1
		if k+1 < len(w.tops) {
			next = w.tops[k+1]
		}
		w.opposed = w.loosen(top, next, w.atLoad(set, top, next)) || w.opposed
	}
	w.bound()
	return w
}

// at is the last reading at or before a time; -1 before the first.
func (w *wrench) at(t float64) int {
	return sort.Search(len(w.t), func(i int) bool { return w.t[i] > t }) - 1
}

// A torque below this share of a cycle's top is no loosening torque: an offset
// of the wrench is as much. Judgement.
const loosenShare = 0.01

// loosen marks the way down after a top, up to the next one. atLoad is the
// torques while the extension falls.
func (w *wrench) loosen(top, next int, atLoad []float64) (opposed bool) {
	end := w.lowest(top, next)
	if opposed = -estimate.Quantile(atLoad, 0.1) > math.Max(0, estimate.Quantile(atLoad, 0.9)); opposed {
		floor := -math.Max(loosenShare*estimate.Quantile(w.raw, 0.999), 4*w.noise)
		for i := top; i <= next; i++ {
			if w.raw[i] < floor {
				end = i
			}
		}
	}
	for i := end; i > top; i-- { // at the top itself the torque still tightens
		w.back[i] = true
		if opposed {
			w.sign[i] = -1
		}
	}
	return opposed
}

// atLoad is the torques on the way down from a top while the extension passes
// the middle half of its fall.
func (w *wrench) atLoad(set *pairing.Set, top, next int) (torques []float64) {
	var e []float64
	var at []int
	for _, q := range set.Pairs {
		if i := w.at(q.T); i > top && i <= next {
			e, at = append(e, q.Extension), append(at, i)
		}
	}
	if len(e) == 0 {
		return nil
	}
	least := 0
	for k := range e {
		if e[k] < e[least] {
			least = k
		}
	}
	low, high := e[least], estimate.Quantile(e[:least+1], 1)
	for k := range least {
		if share := (e[k] - low) / (high - low); share > 0.25 && share < 0.75 {
			torques = append(torques, w.raw[at[k]])
		}
	}
	return torques
}

// lowest is where the torque is lowest.
func (w *wrench) lowest(from, to int) int {
	at := from
	for i := from; i <= to; i++ {
		if w.raw[i] < w.raw[at] {
			at = i
		}
	}
	return at
}

// A few readings together: so many that noise and one bad one do not make the
// torque.
const fewReadings = 9

// bound fills in the highest torque of each way, leg by leg.
func (w *wrench) bound() {
	for from := 0; from < len(w.t); {
		to := from
		for to < len(w.t) && w.back[to] == w.back[from] {
			to++
		}
		most := math.Inf(-1)
		for n := range to - from {
			i := from + n
			if w.back[from] {
				i = to - 1 - n
			}
			most = math.Max(most, w.about(i, from, to))
			w.most[i] = most
		}
		w.release(from, to)
		w.stand(from, to)
		from = to
	}
}

// about is the middle of a few readings of one leg.
func (w *wrench) about(i, from, to int) float64 {
	var few [fewReadings]float64
	n := 0
	for k := max(from, i-fewReadings/2); k < min(to, i+fewReadings/2+1); k++ {
		few[n] = w.sign[k] * w.raw[k]
		n++
	}
	return estimate.Median(few[:n])
}

// stand fills in what stands for the torque of one leg while it is let go: the
// last few readings that turned the screw, before the first of them those.
func (w *wrench) stand(from, to int) {
	var last []float64
	begun := from
	for i := from; i < to; i++ {
		if !w.letGo[i] {
			last = append(last, w.sign[i]*w.raw[i])
		}
		few := last[max(0, len(last)-fewReadings):]
		w.stands[i] = estimate.Median(few)
		if len(last) < fewReadings {
			begun = i + 1
		}
	}
	for i := from; i < begun && begun < to; i++ {
		w.stands[i] = w.stands[begun]
	}
}

// Torques of one way below these shares of the highest: clearly below it, and
// let go. Judgement: a breakaway takes up to 1.3 times the running torque.
const (
	clearlyBelow = 0.9
	letGoBelow   = 0.5
)

// release marks where the torque of one leg is let go.
func (w *wrench) release(from, to int) {
	below := func(i int, share float64) bool {
		return w.sign[i]*w.raw[i] < math.Min(share*w.most[i], w.most[i]-4*w.noise)
	}
	for i := from; i < to; i++ {
		if !below(i, letGoBelow) {
			continue
		}
		first, last := i, i
		for first > from && below(first-1, clearlyBelow) {
			first--
		}
		for last+1 < to && below(last+1, clearlyBelow) {
			last++
		}
		for k := first; k <= last; k++ {
			w.letGo[k] = true
		}
		i = last
	}
}

// read is the set with the torque that turns the screw.
func (w *wrench) read(set *pairing.Set) *pairing.Set {
	out := *set
	out.Setting.Readings = append([]pairing.Reading(nil), set.Setting.Readings...)
	for k, r := range out.Setting.Readings {
		if i := w.at(r.T); i >= 0 && r.Status.Ok() {
			out.Setting.Readings[k].Value = w.value(i, i, r.Value)
		}
	}
	out.Pairs = append([]pairing.Pair(nil), set.Pairs...)
	for k, q := range out.Pairs { // it lies between two readings
		i := max(0, w.at(q.T))
		out.Pairs[k].Setting = w.value(i, min(i+1, len(w.t)-1), q.Setting)
	}
	return &out
}

// value is the torque that turns the screw, where the wrench shows raw between
// two readings.
func (w *wrench) value(i, next int, raw float64) float64 {
	if (w.letGo[i] || w.letGo[next] || w.sign[i] != w.sign[next]) && finite(w.stands[i]) {
		return w.stands[i]
	}
	return raw * w.sign[i]
}

// pulled tells whether the torque turned the screw at a time, or tried to:
// beyond noise, and not let go.
func (w *wrench) pulled(t float64) bool {
	i := max(0, w.at(t))
	return w.sign[i]*w.raw[i] > 4*w.noise && !w.letGo[i]
}

// loosenRate is how fast the loosening torque falls on the way down, stops
// counted in, N m/s.
func (w *wrench) loosenRate() float64 {
	var rates []float64
	for from := 1; from < len(w.t); from++ {
		if !w.back[from] || w.back[from-1] {
			continue
		}
		to := from
		for to+1 < len(w.t) && w.back[to+1] {
			to++
		}
		if to > from {
			rates = append(rates, w.most[from]/(w.t[to]-w.t[from]))
		}
	}
	return estimate.Median(rates)
}

// opposed tells whether the falling settings are torques of the other sense.
func (w *work) opposed() bool { return w.wrench != nil && w.wrench.opposed }

// turnedOn is whether the screw went on turning while the extension stood still,
// which a taut band does not let it: for longer than a pull takes to build up,
// and than the count hides at the pace of the ramps.
func (w *work) turnedOn(r run) bool {
	const buildsUpS = 2.0 // judgement
	pulledS := 0.0
	for i := r.first; i <= r.last; i++ {
		if w.wrench.pulled(w.t[i]) {
			pulledS += w.pairStepS
		}
	}
	var slopes []float64
	for i, c := range w.res.Cycles {
		if w.legs[i].ok {
			slopes = append(slopes, c.Rising.Line.B)
		}
	}
	hiddenS := 2 * w.stillM() / (estimate.Median(slopes) * w.rate)
	return pulledS > buildsUpS+hiddenS
}
