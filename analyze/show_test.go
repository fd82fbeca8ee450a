package analyze

import (
	"math"
	"slices"

	"tautramp/acquire/pairing"
	"tautramp/protocol"
)

func round(v, count float64) float64 {
	if count == 0 {
		return v
	}
	return math.Round(v/count) * count
}

// measure runs a path through the bench and pairs what it shows.
func (b *bench) measure(h *path) *pairing.Set {
	truth := make([]float64, len(h.p))
	f0N, areaM2 := b.f0N, b.areaM2
	for i, p := range h.p {
		if slices.Contains(h.begins, i) {
			b.f0N = f0N * (1 + b.wander*b.rng.NormFloat64())
			if b.wanderArea > 0 {
				b.areaM2 = areaM2 * (1 + b.wanderArea*b.rng.NormFloat64())
			}
		}
		truth[i] = b.settle(p) + b.driftMPerS*h.t[i]
		if b.slipM != 0 && h.t[i] >= b.slipS {
			truth[i] += b.slipM
		}
	}
	b.f0N, b.areaM2 = f0N, areaM2
	set := &pairing.Set{
		Setting:   pairing.Channel{CountSI: b.countSI, Spec: protocol.Chan{Quantity: protocol.Pressure}},
		Extension: pairing.Channel{CountSI: b.countM, Spec: protocol.Chan{Quantity: protocol.Extension, Shows: b.shows}},
		Plan:      b.plan,
	}
	set.Setting.Readings = b.settings(h)
	each := max(1, int(1/(b.settingHz*pathStepS)))
	noise := b.noise(b.noiseM, 1/b.extensionHz)
	display := &display{bench: b}
	slow := int(1 / (b.extensionHz * pathStepS))
	for i := slow / 2; i < len(h.p); i += slow {
		k := i / each
		if k+1 >= len(set.Setting.Readings) {
			break
		}
		lo, hi := set.Setting.Readings[k], set.Setting.Readings[k+1]
		p := lo.Value + (hi.Value-lo.Value)*(h.t[i]-lo.T)/(hi.T-lo.T)
		e := display.shows(b.averaged(truth, i) + noise())
		around := max(1, int(0.5/pathStepS))
		from, to := max(0, i-around), min(len(h.p)-1, i+around)
		rate := math.Abs(h.p[to]-h.p[from]) / (h.t[to] - h.t[from])
		set.Pairs = append(set.Pairs, pairing.Pair{T: h.t[i], Setting: p, Extension: e, SettingStd: b.timeStdS * rate})
	}
	return set
}

// settings is what the transducer shows of a path.
func (b *bench) settings(h *path) []pairing.Reading {
	var out []pairing.Reading
	noise := b.noise(b.noiseSI, 1/b.settingHz)
	each := max(1, int(1/(b.settingHz*pathStepS)))
	for i := 0; i < len(h.p); i += each {
		out = append(out, pairing.Reading{T: h.t[i], Value: b.gaugeShows(h.p[i], noise()), Status: protocol.Good})
	}
	return out
}

func (b *bench) gaugeShows(pPa, noise float64) float64 {
	return round(b.gaugeTrue(pPa)+noise, b.countSI)
}

// gaugeTrue is what the transducer would show without noise and count.
func (b *bench) gaugeTrue(pPa float64) float64 {
	return pPa + between(b.settingErrSI, pPa/(900*psi)) + b.gaugeErr.at((pPa/psi-100)/800)
}

// noise is normal, and where the bench's noise remembers it dies away.
func (b *bench) noise(std, stepS float64) func() float64 {
	keep := 0.0
	if b.memoryS > 0 {
		keep = math.Exp(-stepS / b.memoryS)
	}
	now := std * b.rng.NormFloat64()
	return func() float64 {
		now = keep*now + math.Sqrt(1-keep*keep)*std*b.rng.NormFloat64()
		return now
	}
}

// averaged is the extension as the display has it at a point of a path: late,
// and the mean over the time before.
func (b *bench) averaged(truth []float64, i int) float64 {
	to := min(max(i-int(math.Round(b.lateS/pathStepS)), 0), len(truth)-1)
	from := max(0, to-int(math.Round(b.averageS/pathStepS)))
	sum := 0.0
	for _, e := range truth[from : to+1] {
		sum += e
	}
	return sum / float64(to+1-from)
}

// display turns an extension into what is shown, and remembers which way it last
// moved.
type display struct {
	*bench
	behind float64 // the extension as the display's own slack has it
	begun  bool
}

// shows is what is paired: half a count is added to what a truncating display
// shows, unless that is 0 (SPEC 6.4).
func (d *display) shows(e float64) float64 {
	half := d.displayM / 2
	if !d.begun {
		d.behind, d.begun = e, true
	}
	d.behind = math.Min(math.Max(d.behind, e-half), e+half)
	return d.shown(d.behind)
}

func (b *bench) shown(e float64) float64 {
	if b.shows != protocol.ShowsTruncated {
		return b.code(e)
	}
	n := math.Trunc(e / b.countM)
	if n != 0 {
		n += math.Copysign(0.5, n)
	}
	return n * b.countM
}

// code is the nearest count, by steps that lie where this display has them.
func (b *bench) code(e float64) float64 {
	if b.codeScatter == 0 || b.countM == 0 {
		return round(e, b.countM)
	}
	n := int(math.Round(e / b.countM))
	for e >= b.step(n+1) {
		n++
	}
	for e < b.step(n) {
		n--
	}
	return float64(n) * b.countM
}

// step is the extension at which the display steps up to a count.
func (b *bench) step(n int) float64 {
	if b.codes == nil {
		b.codes = map[int]float64{}
	}
	off, known := b.codes[n]
	if !known {
		off = b.codeScatter * b.rng.NormFloat64()
		b.codes[n] = off
	}
	return (float64(n) - 0.5 + off) * b.countM
}
