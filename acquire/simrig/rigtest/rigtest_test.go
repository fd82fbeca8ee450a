package rigtest

import (
	"bytes"
	"math"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/acquire/recording"
	"tautramp/acquire/simrig"
)

func hurried(t testing.TB) simrig.Config {
	t.Helper()
	p, err := mill.Parse(mill.Example())
	if err != nil {
		t.Fatal(err)
	}
	return simrig.Config{Profile: p, Tensioner: "T-1", Band: "QW-6", Seed: 7, Thermometer: true,
		Drive:     simrig.Drive{Ramps: 1, RatePaS: 138e3},
		Indicator: simrig.Sensor{AbsentAtS: 30, AbsentForS: 2}}
}

// A set made without the wire is the one that a memory card of the same rig
// gives, but for where its time begins.
func TestSetIsThatOfTheRecording(t *testing.T) {
	c := hurried(t)
	set, truth, err := Set(c)
	if err != nil {
		t.Fatal(err)
	}
	rig, err := simrig.New(c)
	if err != nil {
		t.Fatal(err)
	}
	var text bytes.Buffer
	if err := rig.WriteLog(&text); err != nil {
		t.Fatal(err)
	}
	rec := &recording.Recording{Header: recording.Header{Source: recording.Imported, ClockFactor: 1,
		Tensioner: "T-1", Band: "QW-6", Devices: []string{"card"}, Parsed: c.Profile, Plan: recording.Plan{Exercise: 1, Ramps: 1}}}
	for line := range bytes.Lines(text.Bytes()) {
		rec.Entries = append(rec.Entries, recording.Entry{Wire: bytes.TrimSuffix(line, []byte("\n"))})
	}
	want, err := pairing.FromRecording(rec)
	if err != nil {
		t.Fatal(err)
	}
	if len(set.Pairs) != len(want.Pairs) || len(set.Pairs) < 1500 || set.Plan != want.Plan || !set.Simulated ||
		set.Unpaired != want.Unpaired || len(set.Others) != 1 || set.Setting.CountSI != want.Setting.CountSI || set.Setting.PeriodS != want.Setting.PeriodS {
		t.Fatalf("%d pairs, %d unpaired, want %d and %d; plan %+v", len(set.Pairs), set.Unpaired, len(want.Pairs), want.Unpaired, set.Plan)
	}
	start := want.Pairs[0].T - set.Pairs[0].T
	for i, p := range set.Pairs {
		w := want.Pairs[i]
		if math.Abs(p.T+start-w.T) > 1e-6 || math.Abs(p.Setting-w.Setting) > 1e-3 || math.Abs(p.Extension-w.Extension) > 1e-15 ||
			math.Abs(p.SettingStd-w.SettingStd) > 1e-3 || p.Part != w.Part {
			t.Fatalf("pair %d: %+v, recorded %+v", i, p, w)
		}
	}
	if truth.F0N == 0 {
		t.Error("no truth")
	}
}

// A whole visit of four cycles, 900 s, into pairs.
func BenchmarkSet(b *testing.B) {
	c := hurried(b)
	c.Drive = simrig.Drive{}
	for b.Loop() {
		if _, _, err := Set(c); err != nil {
			b.Fatal(err)
		}
	}
}
