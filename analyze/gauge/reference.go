package gauge

import (
	"math"

	"tautramp/acquire/mill"
)

// approach is a direction in the words of a bench record.
func approach(d Direction) mill.Approach {
	if d == Down {
		return mill.FromAbove
	}
	return mill.FromBelow
}

// reference is a reading of the reference with its correction, and what is left
// of doubt: that of the correction, or else its limit of error as a rectangular
// distribution (JCGM 100 4.3.7), and its least count.
func (w *work) reference(readSI float64, d Direction) (si, std float64) {
	return readReference(w.test.Plan, w.test.Instruments, readSI, d)
}

func readReference(p Plan, i Instruments, readSI float64, d Direction) (si, std float64) {
	si, std = readSI, math.Abs(i.Reference.Limit.SI)/math.Sqrt(3)
	if c, ok := i.Reference.Bench.CorrectionAt(readSI, approach(d)); ok {
		si, std = readSI+c.Add, c.Std
	}
	if p.ReferenceStreams() {
		std = math.Hypot(std, i.ReferenceCountSI/math.Sqrt(12))
	}
	return si, std
}

// zeroOf is the error at the zero before the series of a point; NaN where none
// was taken.
func (w *work) zeroOf(t Target) float64 {
	if z, ok := findZero(w.test.ZeroBefore, t.Series, t.Run, t.Repeat); ok {
		return z.errSI()
	}
	return math.NaN()
}

func findZero(list []Zero, s Series, run, repeat int) (Zero, bool) {
	for _, z := range list {
		if z.Series == s && z.Run == run && z.Repeat == repeat {
			return z, true
		}
	}
	return Zero{}, false
}

func (z Zero) errSI() float64 { return z.Indicated.SI - z.Reference.SI }
