package sim_test

import (
	"bytes"
	"fmt"
	"io"
	"math"
	"net"
	"strings"
	"testing"
	"time"

	"tautramp/acquire/simrig"
	"tautramp/firmware-notes/sim"
)

func TestACableCarriesDelaysAndLoses(t *testing.T) {
	board, line := net.Pipe()
	cable := sim.NewCable(line, sim.Wire{Delay: 30 * time.Millisecond, ToHost: bytes.ToUpper})
	if _, err := board.Write([]byte("lost")); err != nil {
		t.Fatal(err)
	}
	for cable.Lost() != 4 {
		time.Sleep(time.Millisecond)
	}
	host, end := net.Pipe()
	cable.Plug(end)
	began := time.Now()
	if _, err := board.Write([]byte("carried")); err != nil {
		t.Fatal(err)
	}
	got := make([]byte, 7)
	if _, err := io.ReadFull(host, got); err != nil || string(got) != "CARRIED" {
		t.Errorf("%q, %v", got, err)
	}
	if took := time.Since(began); took < 30*time.Millisecond {
		t.Errorf("delayed by only %v", took)
	}
	go host.Write([]byte("back")) // the read below says whether it has come
	if _, err := io.ReadFull(board, got[:4]); err != nil || string(got[:4]) != "back" {
		t.Errorf("%q, %v", got[:4], err)
	}
	cable.Unplug()
	if n, err := host.Read(got); err != io.EOF {
		t.Errorf("after the unplugging: %d bytes, %v", n, err)
	}
	if err := board.Close(); err != nil {
		t.Error(err)
	}
	cable.Close()
}

func TestASpoilerSpoilsAboutAsOftenAsAsked(t *testing.T) {
	const size, every = 1_000_000, 1000
	spoil := sim.Spoiler(1, every)
	out := spoil(make([]byte, size))
	flipped := len(out) - bytes.Count(out, []byte{0})
	lost := size - len(out)
	for _, n := range []int{flipped, lost} { // each a binomial of mean 500, standard deviation 22
		if math.Abs(float64(n)-size/every/2) > 110 {
			t.Errorf("%d flipped, %d lost", flipped, lost)
		}
	}
}

func TestSignalsStandStillAroundTheTrace(t *testing.T) {
	s := sim.Signals{StartS: 10, Moments: []simrig.Moment{
		{T: 0, PressurePa: 100, ExtensionM: 1e-6}, {T: 1, PressurePa: 300, ExtensionM: 2e-6}, {T: 2, PressurePa: 200, ExtensionM: 4e-6},
	}}
	for at, want := range map[float64][2]float64{0: {100, 1e-6}, 10.5: {200, 1.5e-6}, 11.75: {225, 3.5e-6}, 99: {200, 4e-6}} {
		pressure, extension := s.At(at)
		if math.Abs(pressure-want[0]) > 1e-9 || math.Abs(extension-want[1]) > 1e-15 {
			t.Errorf("at %g s: %g Pa, %g m, want %v", at, pressure, extension, want)
		}
	}
	if v := sim.Volts(750 * 6894.757293168361); math.Abs(v-2.5) > 1e-12 {
		t.Errorf("half of the range gives %g V", v)
	}
}

// The stimulus of both indicators, read as the harness reads it.
func TestStimulusIsInOrderAndSpellsTheReading(t *testing.T) {
	s := sim.Signals{Moments: []simrig.Moment{{ExtensionM: -5.4e-6}, {T: 3, ExtensionM: -5.4e-6}}, ZeroM: 0}
	var text strings.Builder
	shown, err := s.Clocked(&text, 1.1)
	if err != nil || len(shown) != 1 || shown[0].Count != -5 {
		t.Fatalf("%v, %v", shown, err)
	}
	const clock, data = 0x04, 0x08
	bits, n, before := 0, 0, clock
	for _, pins := range inOrderOf(t, text.String(), "pins") {
		if pins&clock != 0 && before&clock == 0 {
			if pins&data != 0 {
				bits |= 1 << n
			}
			n++
		}
		before = pins
	}
	if want := 5 | 1<<20; n != 24 || bits&0xffffff != want {
		t.Errorf("%d edges, bits %x, want %x", n, bits, want)
	}
	moving := sim.Signals{Moments: []simrig.Moment{{}, {T: 1, ExtensionM: 20.5e-6}}}
	text.Reset()
	if err := moving.Quadrature(&text, 2); err != nil {
		t.Fatal(err)
	}
	levels := inOrderOf(t, text.String(), "pins")
	if len(levels) != 21 {
		t.Errorf("%d changes of the tracks for 20 steps", len(levels)-1)
	}
	for i := 1; i < len(levels); i++ {
		if changed := levels[i] ^ levels[i-1]; changed != clock && changed != data {
			t.Errorf("step %d changes pins %02x", i, changed)
		}
	}
}

// inOrderOf wants times never to fall, and returns the levels of one kind of record.
func inOrderOf(t *testing.T, text, kind string) (levels []int) {
	t.Helper()
	last := -1 << 62
	for line := range strings.Lines(text) {
		var word string
		var us, value int
		format := "%s %d %x"
		if _, err := fmt.Sscanf(line, format, &word, &us, &value); err != nil && word == kind {
			t.Fatalf("%q: %v", line, err)
		}
		if us < last {
			t.Fatalf("%q comes after %d", line, last)
		}
		last = us
		if word == kind {
			levels = append(levels, value)
		}
	}
	return levels
}
