package analyze

import "testing"

// A setting that falls back between strokes while the stretch goes on makes steps
// that all lie at one setting: no code stands in for more of them.
func TestStepsAtOneSettingAddNothing(t *testing.T) {
	w := &work{x: []float64{0, 1, 2}, e: []float64{0, 1, 2}}
	for _, x := range [][]float64{{1, 1}, {1, 0.9}, {1, 1 + 1e-9}} {
		if sx, _ := w.stood([]int{0, 1, 2}, x, []float64{0.5, 1.5}); len(sx) != len(x) {
			t.Errorf("steps at %v: %d of them", x, len(sx))
		}
	}
	w.x[2] = 1.5
	if sx, _ := w.stood([]int{0, 1, 2}, []float64{0.2, 0.6}, []float64{0.5, 1.5}); len(sx) != 3 {
		t.Errorf("%v, want the last code in the place of a step at 1", sx)
	}
}
