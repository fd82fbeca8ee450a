package findings

import (
	"math"
	"testing"

	"tautramp/acquire/pairing"
	"tautramp/protocol"
)

// A gauge that reads 12 kPa when it is vented, of a working setting of 5 MPa:
// 0.24 %. Readings elsewhere say nothing of it.
func TestVentedGaugeIsReadWhereTheOperatorSaysSo(t *testing.T) {
	set := &pairing.Set{}
	for i := range 500 {
		at := float64(i) * 0.1
		value := 240e3
		if at > 18.5 && at < 21.5 {
			value = 12e3 + 500*math.Sin(float64(i))
		}
		set.Setting.Readings = append(set.Setting.Readings, pairing.Reading{T: at, Value: value, Status: protocol.Good})
	}
	d := &data{r: emptyResult(), set: set, workingSI: 5e6}
	if e := d.atVent(); e.Known() {
		t.Errorf("nobody said so: %+v", e)
	}
	set.Vents = []float64{5, 20}
	if e := d.atVent(); !e.Known() || math.Abs(e.Value-0.0024) > 0.0001 || !(e.Random > 0 && e.Random < 0.0001) {
		t.Errorf("%+v, want 0.0024", e)
	}
	set.Vents = []float64{900}
	if e := d.atVent(); e.Known() {
		t.Errorf("no readings about it: %+v", e)
	}
}
