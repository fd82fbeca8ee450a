package recording

import (
	"bytes"
	"os"
	"testing"
	"time"
)

// TestGoldenFile keeps version 1 of the file as it is: a file written once must
// stay readable, and the writer must not drift from it unnoticed. The seals of
// the file were recomputed with sha256sum: see testdata/SOURCES.md.
func TestGoldenFile(t *testing.T) {
	want, err := os.ReadFile("testdata/version1.ramp")
	if err != nil {
		t.Fatal(err)
	}
	h := testHeader()
	h.Profile = []byte(tinyProfile)
	h.Started = time.Date(2026, 3, 14, 8, 30, 0, 0, time.FixedZone("", -5*3600))
	var f memory
	w, err := NewWriter(&f, h, time.Second)
	if err != nil {
		t.Fatal(err)
	}
	for _, e := range []Entry{
		event(0, 1_000_000, Opened, "/dev/ttyUSB0"), event(1, 1_200_000, Opened, "/dev/ttyUSB1"),
		wire(0, 812_000_000, "\x00\xffboot\r"), wire(0, 812_400_000, "seal 1 0000"),
		event(0, 2_500_000_000, Sent, "who 01;b021"), event(-1, 2_600_000_000, Mark, "band slack \\ \u00bd turn"),
	} {
		if err := w.Write(e); err != nil {
			t.Fatal(err)
		}
		if err := w.Tick(e.At, h.Started.Add(e.At)); err != nil {
			t.Fatal(err)
		}
	}
	if err := w.Close(3*time.Second, h.Started.Add(3*time.Second)); err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(f.Bytes(), want) {
		t.Errorf("written:\n%s\nwant:\n%s", f.Bytes(), want)
	}
	rec, err := Read(bytes.NewReader(want))
	if err != nil || rec.Outcome != Complete || len(rec.Entries) != 8 || len(rec.Header.Devices) != 2 {
		t.Errorf("read back: %v, %+v", err, rec)
	}
}
