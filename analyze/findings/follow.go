package findings

import (
	"math"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// follow is what the stretch would be if the band followed the setting by the
// two lines and held still between them, and what is left of the readings.
type follow struct {
	p     []float64 // setting at the points, smoothed over the time between two of them
	is    []float64 // m, by the two lines
	rest  []float64 // m, read less expected
	noise float64   // standard deviation of p
	good  []bool    // where the two lines speak: not in the toe, nor with a slack band
}

// play is the play operator, generalised to two curves: what it follows may
// move between low and high and is carried along by whichever it meets. With
// low = u - r and high = u + r it is the play of half-width r.
func play(was, low, high float64) float64 { return math.Max(low, math.Min(high, was)) }

// seatedShare is the part of the working stretch below which the lines do not
// speak: the band seats there. Judgement: usable above 15 to 20 %.
const (
	seatedShare = 0.2
	mostSeated  = 0.35 // a fit that begins higher has its own reason
)

func (d *data) newFollow(lateS float64) follow {
	n := len(d.t)
	f := follow{p: d.smoothed(lateS), is: make([]float64, n), rest: make([]float64, n), good: make([]bool, n)}
	f.noise = estimate.Noise(f.p)
	zero := d.zeroM()
	seated := d.seatedM(zero)
	now := zero
	for i, p := range f.p {
		low, high := d.up.at(p), d.down.at(p)
		if high < low {
			low, high = (low+high)/2, (low+high)/2
		}
		now = play(now, low, high)
		now = math.Max(now, zero)
		f.is[i], f.rest[i] = now, d.e[i]-now
		f.good[i] = now > seated && d.e[i] > seated
	}
	return f
}

// seatedM is the extension above which the lines speak: where the ramps say
// that the band is seated, within bounds.
func (d *data) seatedM(zero float64) float64 {
	var ends []float64
	for _, c := range d.r.Cycles {
		if c.Rising.Points > 0 && c.SeatingEndSI > 0 {
			ends = append(ends, d.up.at(c.SeatingEndSI)-zero)
		}
	}
	end := estimate.Median(ends)
	if math.IsNaN(end) {
		end = 0
	}
	return zero + math.Max(seatedShare*d.workingM, math.Min(end, mostSeated*d.workingM))
}

// zeroM is the extension of the slack band; that of the rising line at its low
// end, less what it had gained there, where it is not known.
func (d *data) zeroM() float64 {
	var zeros []float64
	for _, c := range d.r.Cycles {
		if c.Zero.Known() {
			zeros = append(zeros, c.Zero.Value)
		}
	}
	if len(zeros) > 0 {
		return estimate.Median(zeros)
	}
	return d.up.at(d.r.Rising.LowSI)
}

// smoothed is the setting at the points, as one that rises with the load: the mean
// of its own readings from half a point before to half a point after, so much
// earlier. A torque is read off the points: its readings know of no pull while the
// wrench is let go.
func (d *data) smoothed(lateS float64) []float64 {
	out := append([]float64(nil), d.p...)
	if d.set == nil || len(d.set.Setting.Readings) <= len(d.t) || d.setBy(mill.SetByTorque) {
		return out
	}
	readings := d.set.Setting.Readings
	from := 0
	for i := range d.t {
		half := 0.0
		if i > 0 {
			half = (d.t[i] - d.t[i-1]) / 2
		}
		if i+1 < len(d.t) && (i == 0 || d.t[i+1]-d.t[i] < 2*half) {
			half = (d.t[i+1] - d.t[i]) / 2
		}
		for from < len(readings) && readings[from].T < d.t[i]-lateS-half {
			from++
		}
		sum, n := 0.0, 0.0
		for k := from; k < len(readings) && readings[k].T <= d.t[i]-lateS+half; k++ {
			if readings[k].Status.Ok() {
				sum += d.r.Setup.Tensioner.Rising(readings[k].Value)
				n++
			}
		}
		if n > 0 {
			out[i] = sum / n
		}
	}
	return out
}
