package analyze

import (
	"testing"

	"tautramp/acquire/pairing"
)

// BenchmarkTenMinutes is a capture of ten minutes with up to 100 lines a
// second. It is to take less than a second.
func BenchmarkTenMinutes(b *testing.B) {
	for _, c := range []struct {
		name                   string
		settingHz, extensionHz float64
	}{
		{"50 of setting, 10 of extension", 50, 10},
		{"50 of each", 50, 50},
	} {
		b.Run(c.name, func(b *testing.B) {
			rig := newBench(1)
			rig.settingHz, rig.extensionHz = c.settingHz, c.extensionHz
			rig.plan = pairing.Plan{Ramps: 3}
			h := &path{}
			h.add(0)
			for range 3 {
				h.to(860*psi, 9*psi)
				h.hold(5)
				h.to(0, 9*psi)
				h.hold(5)
			}
			set := rig.measure(h)
			p := profile(b)
			b.ReportMetric(float64(len(set.Setting.Readings)+len(set.Pairs)), "readings")
			for b.Loop() {
				if _, err := Analyze(Input{Profile: p, Tensioner: "T-1", Band: "QW-6", Set: set}); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
