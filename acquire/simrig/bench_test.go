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

// A whole visit, one exercise and three ramps, 900 s, into readings.
func BenchmarkVisit(b *testing.B) {
	c := t1(b)
	c.Drive = Drive{}
	r := mustNew(b, c)
	for b.Loop() {
		if _, err := r.Samples(); err != nil {
			b.Fatal(err)
		}
	}
}
