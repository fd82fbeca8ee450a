package estimate

import (
	"math"
	"testing"
)

// Student's t has P(t <= 2.920) = 0.95 at 2 and P(t <= 1.833) = 0.95 at 9
// degrees of freedom, the normal P(z <= 1.645) = 0.95: JCGM 100:2008 table G.2,
// 90 % column, 2.92, 1.83 and 1.645.
func TestAboveIsStudents(t *testing.T) {
	for _, c := range []struct{ dof, factor float64 }{{2, 2.92}, {9, 1.83}, {math.Inf(1), 1.645}} {
		e := Estimate{Value: 5 + 0.1*c.factor, Random: 0.1, DoF: c.dof, Method: "made up"}
		if got := e.Above(5); math.Abs(got-0.95) > 5e-4 {
			t.Errorf("%g degrees of freedom: %.4f, want 0.95", c.dof, got)
		}
	}
	if got := Exact(2, "a count").Above(1.5); got != 1 {
		t.Errorf("a count of 2 is above 1.5 with %g", got)
	}
	if got := Exact(1, "a count").Above(1.5); got != 0 {
		t.Errorf("a count of 1 is above 1.5 with %g", got)
	}
	if got := Unknown("no reason").Above(1); !math.IsNaN(got) {
		t.Errorf("an unknown is above a limit with %g", got)
	}
}
