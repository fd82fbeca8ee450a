package analyze

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
)

// Used is an instrument that the figures rest on.
type Used struct {
	mill.Instrument
	Corrected bool    // its readings are corrected by its bench record
	StdSI     float64 // standard uncertainty: of the correction, or else the limit of error / sqrt 3; 0: not known
}

// useBench puts the bench records of the instruments in the place of their
// limits: the doubt left is that of the correction, at its largest over the
// readings.
func (s *Setup) useBench(gauge, indicator mill.Instrument, set *pairing.Set) {
	for _, i := range []mill.Instrument{gauge, indicator} {
		if i.Name == "" && i.Serial == "" {
			continue
		}
		u := Used{Instrument: i, StdSI: limitStd(i)}
		low, high := readRange(set, i.Measures)
		if std, ok := correctionStd(i.Bench, low, high); ok {
			u.Corrected, u.StdSI = true, std
		}
		s.Used = append(s.Used, u)
		switch {
		case !u.Corrected:
		case i.Measures == mill.MeasuresSetting:
			s.SettingStd = u.StdSI
		default:
			s.ExtensionSd = u.StdSI
		}
	}
}

// readRange is the range of a channel's readings in the pairs.
func readRange(set *pairing.Set, measures string) (low, high float64) {
	low, high = math.Inf(1), math.Inf(-1)
	for _, p := range set.Pairs {
		v := p.Setting
		if measures == mill.MeasuresExtension {
			v = p.Extension
		}
		low, high = math.Min(low, v), math.Max(high, v)
	}
	return low, high
}

// correctionStd is the largest doubt of a correction over a range of readings.
func correctionStd(b *mill.Bench, low, high float64) (std float64, ok bool) {
	const steps = 40
	for k := range steps + 1 {
		for _, from := range []mill.Approach{mill.FromBelow, mill.FromAbove} {
			c, has := b.CorrectionAt(low+(high-low)*float64(k)/steps, from)
			if has && finite(c.Std) {
				std, ok = math.Max(std, c.Std), true
			}
		}
	}
	return std, ok
}

// corrected is the set with the readings of setting and extension corrected by
// the bench records, each from the side that it was come to; the set itself
// where there is nothing to correct.
func (s *Setup) corrected(set *pairing.Set) *pairing.Set {
	setting, extension := s.bench(mill.MeasuresSetting), s.bench(mill.MeasuresExtension)
	if setting == nil && extension == nil || set == nil {
		return set
	}
	out := *set
	out.Pairs = slices.Clone(set.Pairs)
	settings, extensions := make([]float64, len(set.Pairs)), make([]float64, len(set.Pairs))
	times := make([]float64, len(set.Pairs))
	for i, p := range set.Pairs {
		times[i], settings[i], extensions[i] = p.T, p.Setting, p.Extension
	}
	upward, outward := newSides(times, settings), newSides(times, extensions)
	for i := range out.Pairs {
		p := &out.Pairs[i]
		p.Setting += add(setting, p.Setting, upward.at(p.T))
		p.Extension += add(extension, p.Extension, outward.at(p.T))
	}
	out.Setting.Readings = slices.Clone(set.Setting.Readings)
	for i := range out.Setting.Readings {
		if r := &out.Setting.Readings[i]; r.Status.Ok() {
			r.Value += add(setting, r.Value, upward.at(r.T))
		}
	}
	return &out
}

// bench is the record that corrects a channel; nil where none does.
func (s *Setup) bench(measures string) *mill.Bench {
	for _, u := range s.Used {
		if u.Measures == measures && u.Corrected {
			return u.Bench
		}
	}
	return nil
}

func add(b *mill.Bench, value float64, from mill.Approach) float64 {
	c, ok := b.CorrectionAt(value, from)
	if !ok || !finite(c.Add) {
		return 0
	}
	return c.Add
}

// sides says from which side a reading was come to, by the turns of its
// channel.
type sides struct {
	turns       []float64 // times
	risingFirst bool
}

// A turn goes back by this share of the channel's range: less is a stroke's sag,
// or noise. Judgement.
const turnShare = 0.03

func newSides(t, v []float64) sides {
	low, high := math.Inf(1), math.Inf(-1)
	for _, x := range v {
		low, high = math.Min(low, x), math.Max(high, x)
	}
	turns := Turning(v, turnShare*(high-low))
	if len(turns) < 2 {
		return sides{risingFirst: true}
	}
	s := sides{risingFirst: v[turns[1]] > v[turns[0]]}
	for _, i := range turns[1 : len(turns)-1] { // both ends are among them
		s.turns = append(s.turns, t[i])
	}
	return s
}

func (s sides) at(t float64) mill.Approach {
	n, _ := slices.BinarySearch(s.turns, t)
	if (n%2 == 0) == s.risingFirst {
		return mill.FromBelow
	}
	return mill.FromAbove
}

// benchFrom says of the sources that are instruments which record their doubt
// comes from.
func (w *work) benchFrom(list []source) []source {
	for i, s := range list {
		measures := ""
		switch {
		case strings.HasPrefix(s.name, "setting gauge"):
			measures = mill.MeasuresSetting
		case strings.HasPrefix(s.name, "stretch indicator") && !strings.Contains(s.name, "reversal"):
			measures = mill.MeasuresExtension
		}
		if b := w.setup.bench(measures); b != nil {
			list[i].from = "correction of the bench record of " + b.Checked
		}
	}
	return list
}

// warnBench tells of every instrument in use that is not corrected, or that
// failed or was not decided on the bench, and of readings beyond what was
// tested.
func (w *work) warnBench() {
	if w.setup.Records != "" {
		w.warn("instruments-replaced", fmt.Sprintf("Instrument records from %s take the place of those in the recording.", w.setup.Records))
	}
	var raw []string
	for _, u := range w.setup.Used {
		name := instrumentName(u.Instrument)
		if !u.Corrected {
			raw = append(raw, name)
		}
		switch b := u.Bench; {
		case b == nil:
		case b.Verdict == "fail":
			w.warn("instrument-failed", fmt.Sprintf("%s failed its bench test of %s. Set nothing by it before it is repaired or replaced.", name, b.Checked))
		case b.Verdict != "pass":
			w.warn("instrument-undecided", fmt.Sprintf("The bench test of %s of %s gave no pass: %s.", name, b.Checked, b.Verdict))
		}
		low, high := readRange(w.set, u.Measures)
		if u.Corrected && (beyond(u.Bench, low) || beyond(u.Bench, high)) {
			w.warn("beyond-bench", fmt.Sprintf("%s read values beyond those that its bench test covered: there its last correction holds, with twice its doubt.", name))
		}
	}
	if len(raw) > 0 {
		w.warn("instrument-uncorrected", "Not corrected by a bench record: "+strings.Join(raw, ", ")+".")
	}
}

// beyond allows for a reading a little past the last point.
func beyond(b *mill.Bench, si float64) bool {
	first, last := b.Points[0].At.SI, b.Points[len(b.Points)-1].At.SI
	slack := 0.05 * (last - first)
	return si < first-slack || si > last+slack
}
