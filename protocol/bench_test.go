package protocol_test

import (
	"bytes"
	"testing"

	"tautramp/protocol"
)

// session is ten seconds of a device with two channels at 100 samples a second.
func session(b *testing.B) (stream []byte, lines int) {
	b.Helper()
	add := func(r protocol.Record) {
		var err error
		if stream, err = protocol.Append(stream, r); err != nil {
			b.Fatal(err)
		}
		lines++
	}
	seq := uint16(0)
	for i := range uint32(1000) {
		tick := 10000 * i
		add(protocol.Val{Channel: 'a', Seq: seq, Tick: tick, Status: protocol.Good, Count: int32(1200 + 7*i), HasCount: true})
		add(protocol.Val{Channel: 'b', Seq: seq + 1, Tick: tick + 40, Status: protocol.Good, Count: int32(i / 8), HasCount: true})
		seq += 2
		if i%100 == 99 {
			add(protocol.Beat{Seq: seq, Tick: tick})
			seq++
		}
	}
	return stream, lines
}

func BenchmarkScanner(b *testing.B) {
	stream, lines := session(b)
	b.SetBytes(int64(len(stream)))
	b.ReportAllocs()
	for b.Loop() {
		s := protocol.NewScanner(bytes.NewReader(stream))
		n := 0
		for s.Scan() {
			if s.Line().Err == nil {
				n++
			}
		}
		if n != lines {
			b.Fatalf("%d lines, want %d", n, lines)
		}
	}
	b.ReportMetric(float64(lines)*float64(b.N)/b.Elapsed().Seconds(), "lines/s")
}

// BenchmarkGarbage is the same stream with every line spoiled.
func BenchmarkGarbage(b *testing.B) {
	stream, lines := session(b)
	stream = bytes.ReplaceAll(stream, []byte(" g "), []byte(" G "))
	b.SetBytes(int64(len(stream)))
	b.ReportAllocs()
	for b.Loop() {
		var a protocol.Assembler
		n := 0
		a.Feed(stream, func(protocol.Line) { n++ })
		if n != lines {
			b.Fatalf("%d lines, want %d", n, lines)
		}
	}
	b.ReportMetric(float64(lines)*float64(b.N)/b.Elapsed().Seconds(), "lines/s")
}

func BenchmarkAppend(b *testing.B) {
	v := protocol.Val{Channel: 'a', Seq: 200, Tick: 1234567, Status: protocol.Good, Count: 7240, HasCount: true}
	var line []byte
	b.ReportAllocs()
	for b.Loop() {
		var err error
		if line, err = protocol.Append(line[:0], v); err != nil {
			b.Fatal(err)
		}
	}
}

func BenchmarkToSI(b *testing.B) {
	c := protocol.Chan{ID: 'a', Quantity: protocol.Voltage, Unit: "mV", Mantissa: 1, Exponent: -1, High: 1, Res: 1, Period: 1, Shows: protocol.ShowsUnknown}
	sum := 0.0
	for b.Loop() {
		sum += protocol.ToSI(c, 7240)
	}
	if sum <= 0 {
		b.Fatal(sum)
	}
}
