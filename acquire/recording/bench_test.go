package recording

import (
	"bytes"
	"fmt"
	"testing"
	"time"
)

// five minutes of two devices at 1,000 lines/s each.
const benchLines = 600_000

func benchFile(b *testing.B) []byte {
	var f memory
	w, err := NewWriter(&f, testHeader(), 0)
	if err != nil {
		b.Fatal(err)
	}
	for i := range benchLines {
		at := time.Duration(i) * time.Millisecond / 2
		line := fmt.Sprintf("val a %04x %08x g %d;5d3c", i&0xffff, i*500, i%15000)
		if err := w.Write(wire(i%2, at, line)); err != nil {
			b.Fatal(err)
		}
		if err := w.Tick(at, testStart.Add(at)); err != nil {
			b.Fatal(err)
		}
	}
	if err := w.Close(time.Hour, testStart); err != nil {
		b.Fatal(err)
	}
	return f.Bytes()
}

func BenchmarkRead(b *testing.B) {
	file := benchFile(b)
	b.SetBytes(int64(len(file)))
	b.ReportAllocs()
	for b.Loop() {
		rec, err := Read(bytes.NewReader(file))
		if err != nil || len(rec.Entries) < benchLines {
			b.Fatal(err)
		}
	}
}

type nowhere struct{}

func (nowhere) Write(p []byte) (int, error) { return len(p), nil }
func (nowhere) Sync() error                 { return nil }
func (nowhere) Close() error                { return nil }

func BenchmarkWrite(b *testing.B) {
	w, err := NewWriter(nowhere{}, testHeader(), 0)
	if err != nil {
		b.Fatal(err)
	}
	e := wire(0, 0, "val a 0123 00345678 g 7240;5d3c")
	b.ReportAllocs()
	for b.Loop() {
		e.At += time.Millisecond
		if err := w.Write(e); err != nil {
			b.Fatal(err)
		}
		if err := w.Tick(e.At, testStart); err != nil {
			b.Fatal(err)
		}
	}
}
