package analyze_test

import (
	"bytes"
	"strings"
	"testing"
	"time"

	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/acquire/recording"
	"tautramp/acquire/simrig"
	"tautramp/analyze"
)

// inMemory is a file that is never synced.
type inMemory struct{ bytes.Buffer }

func (*inMemory) Sync() error  { return nil }
func (*inMemory) Close() error { return nil }

// tenMinutes is the file of a capture of 60,000 lines, 100 a second: 50 of the
// setting and 50 of the extension.
func tenMinutes(b *testing.B) (whole []byte, lines int) {
	p, err := mill.Parse(mill.Example())
	if err != nil {
		b.Fatal(err)
	}
	rig, err := simrig.New(simrig.Config{
		Profile: p, Tensioner: "T-1", Band: "QW-6", Seed: 18,
		Indicator: simrig.Sensor{PerSecond: 50}, Drive: simrig.Drive{Repeat: true},
	})
	if err != nil {
		b.Fatal(err)
	}
	var log bytes.Buffer
	if err := rig.WriteLog(&log); err != nil {
		b.Fatal(err)
	}
	started := time.Date(2026, 9, 1, 8, 0, 0, 0, time.UTC)
	var file inMemory
	w, err := recording.NewWriter(&file, recording.Header{
		Program: "bench", Source: recording.Live, Devices: []string{"port"}, Tensioner: "T-1", Band: "QW-6", ClockFactor: 1,
		Started: started, Profile: mill.Example(), Plan: recording.Plan{Exercise: 1},
	}, time.Second)
	if err != nil {
		b.Fatal(err)
	}
	var at time.Duration
	for line := range strings.Lines(log.String()) {
		if lines == 60_000 {
			break
		}
		at = time.Duration(lines) * 10 * time.Millisecond
		lines++
		if err := w.Write(recording.Entry{At: at, HasAt: true, Wire: []byte(strings.TrimRight(line, "\r\n"))}); err != nil {
			b.Fatal(err)
		}
		if err := w.Tick(at, started.Add(at)); err != nil {
			b.Fatal(err)
		}
	}
	if err := w.Close(at, started.Add(at)); err != nil {
		b.Fatal(err)
	}
	return file.Bytes(), lines
}

// BenchmarkTenMinutesFromTheFile is the whole way: file, lines, pairs, result.
// It is to take less than a second.
func BenchmarkTenMinutesFromTheFile(b *testing.B) {
	file, lines := tenMinutes(b)
	b.SetBytes(int64(len(file)))
	for b.Loop() {
		rec, err := recording.Read(bytes.NewReader(file))
		if err != nil {
			b.Fatal(err)
		}
		set, err := pairing.FromRecording(rec)
		if err != nil {
			b.Fatal(err)
		}
		if _, err := analyze.Analyze(analyze.Input{Profile: rec.Header.Parsed, Tensioner: "T-1", Band: "QW-6", Set: set, Day: rec.Header.Started}); err != nil {
			b.Fatal(err)
		}
	}
	b.ReportMetric(float64(lines), "lines")
}
