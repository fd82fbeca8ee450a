package simrig

import "testing"

// One drive of one ramp, 225 s, physics alone.
func BenchmarkDrive(b *testing.B) {
	r := mustNew(b, t1(b))
	for b.Loop() {
		if _, err := r.Trace(1); err != nil {
			b.Fatal(err)
		}
	}
}
