package sim_test

import (
	"bytes"
	"errors"
	"os"
	"os/exec"
	"path/filepath"
	"testing"
	"time"

	"tautramp/acquire/mill"
	"tautramp/acquire/simrig"
	"tautramp/firmware-notes/sim"
	"tautramp/protocol"
	"tautramp/protocol/protocoltest"
)

const psi = 6894.757293168361 // Pa, from the exact inch, pound and standard gravity

// got gives a value, or skips the test where a tool is missing. With
// TAUTRAMP_STRICT=1 that is a failure.
func got[T any](v T, err error) func(testing.TB) T {
	return func(t testing.TB) T {
		t.Helper()
		switch {
		case errors.Is(err, sim.ErrMissing) && os.Getenv("TAUTRAMP_STRICT") != "1":
			t.Skip(err)
		case err != nil:
			t.Fatal(err)
		}
		return v
	}
}

func tool(t testing.TB, name, packages string) string {
	t.Helper()
	path, err := exec.LookPath(name)
	if err != nil {
		err = errors.Join(errors.New(name+": apt-get install "+packages), sim.ErrMissing)
	}
	return got(path, err)(t)
}

func notes(t testing.TB) sim.Notes { return sim.Notes{Dir: "..", Out: t.TempDir()} }

// program builds the host's program.
func program(t testing.TB) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), "tautramp")
	if out, err := exec.Command("go", "build", "-o", path, "tautramp/cmd/tautramp").CombinedOutput(); err != nil {
		t.Fatalf("building the program: %v\n%s", err, out)
	}
	return path
}

// ramps is a short visit of T-1 with QW-6 of the invented mill.
func ramps(t testing.TB, change func(*simrig.Config)) *simrig.Rig {
	t.Helper()
	profile, err := mill.Parse(mill.Example())
	if err != nil {
		t.Fatal(err)
	}
	c := simrig.Config{Profile: profile, Tensioner: "T-1", Band: "QW-6", Seed: 5,
		Drive: simrig.Drive{Exercise: 1, Ramps: 2, RatePaS: 16 * psi, RestS: 5, HoldTopS: 5, HoldLowS: 8}}
	change(&c)
	rig, err := simrig.New(c)
	if err != nil {
		t.Fatal(err)
	}
	return rig
}

func signals(t testing.TB, rig *simrig.Rig, startS float64) sim.Signals {
	t.Helper()
	moments, err := rig.Trace(0.01)
	if err != nil {
		t.Fatal(err)
	}
	return sim.Signals{Moments: moments, StartS: startS, ZeroM: 3.217e-4, NoiseM: 2e-7, Seed: 5}
}

// stop ends a board and logs what it did.
func stop(t testing.TB, b *sim.Board) sim.Figures {
	t.Helper()
	f, err := b.Stop()
	if err != nil {
		t.Error(err)
	}
	t.Logf("%+v", f)
	return f
}

// talk is a conversation with a board, line by line.
type talk struct {
	testing.TB
	board *sim.Board
	lines chan protocol.Line
	turns []protocoltest.Turn
	token byte
}

func newTalk(t testing.TB, b *sim.Board) *talk {
	k := &talk{TB: t, board: b, lines: make(chan protocol.Line, 1<<16)}
	t.Cleanup(func() { stop(t, b) })
	go func() {
		defer close(k.lines)
		for s := protocol.NewScanner(b.Line); s.Scan(); {
			line := s.Line()
			line.Text = bytes.Clone(line.Text)
			k.lines <- line
		}
	}()
	return k
}

// next is the next line, which must be a good one.
func (k *talk) next() protocol.Record {
	k.Helper()
	select {
	case line, ok := <-k.lines:
		if !ok {
			k.Fatal("the board is gone")
		}
		if line.Err != nil {
			k.Fatalf("%q: %v", line.Text, line.Err)
		}
		k.turns = append(k.turns, protocoltest.Turn{Text: line.Text})
		return line.Record
	case <-time.After(10 * time.Second):
		k.Fatal("no line for 10 s")
	}
	return nil
}

func (k *talk) say(bytes []byte) {
	k.Helper()
	if _, err := k.board.Line.Write(bytes); err != nil {
		k.Fatal(err)
	}
}

// ask sends a command with a token of its own and returns what came up to its
// answer.
func (k *talk) ask(c protocol.Command) []protocol.Record {
	k.Helper()
	k.token++
	c.Token = k.token
	line, err := protocol.AppendCommand(nil, c)
	if err != nil {
		k.Fatal(err)
	}
	k.turns = append(k.turns, protocoltest.Turn{FromHost: true, Text: bytes.TrimSuffix(line, []byte{'\n'})})
	k.say(line)
	return k.until(func(r protocol.Record) bool {
		switch r := r.(type) {
		case protocol.Did:
			return r.Token == c.Token && r.Verb == c.Verb
		case protocol.Wont:
			return r.Token == c.Token && r.Verb == string(c.Verb)
		case protocol.Echo:
			return r.Token == c.Token && c.Verb == protocol.EchoMe
		}
		return false
	})
}

// until reads up to a line that is wanted.
func (k *talk) until(wanted func(protocol.Record) bool) (list []protocol.Record) {
	k.Helper()
	for {
		r := k.next()
		list = append(list, r)
		if wanted(r) {
			return list
		}
	}
}

// booted waits for the declaration after power-on.
func (k *talk) booted() (here protocol.Here, channels []protocol.Chan) {
	k.Helper()
	for {
		switch r := k.next().(type) {
		case protocol.Here:
			here = r
		case protocol.Chan:
			channels = append(channels, r)
		}
		if here.Version != 0 && len(channels) == here.Channels {
			return here, channels
		}
	}
}

// beat runs the board until it beats, and lets it rest.
func (k *talk) beat() protocol.Beat {
	k.Helper()
	k.ask(protocol.Command{Verb: protocol.Run})
	list := k.until(func(r protocol.Record) bool { _, ok := r.(protocol.Beat); return ok })
	k.ask(protocol.Command{Verb: protocol.Rest})
	return list[len(list)-1].(protocol.Beat)
}

// boards are the images that talk, with quiet sensors.
func boards() map[string]func(testing.TB) *sim.Board {
	avr := func(image string) func(testing.TB) *sim.Board {
		return func(t testing.TB) *sim.Board {
			n := notes(t)
			b := got(sim.StartAVR(got(n.Harness())(t), got(n.AVR(image))(t), sim.AVROptions{Speed: 8}))(t)
			if _, err := b.Stimulus.WriteString("volt 0 1000000 0\npins 0 1c\n"); err != nil {
				t.Fatal(err)
			}
			if err := b.Stimulus.Close(); err != nil {
				t.Fatal(err)
			}
			return b
		}
	}
	return map[string]func(testing.TB) *sim.Board{
		"cortex-m": func(t testing.TB) *sim.Board {
			b := got(sim.StartCortexM(got(notes(t).CortexM("cortexm3.elf"))(t)))(t)
			go quiet(b)
			return b
		},
		"avr clocked 115200":    avr("clocked-115200.elf"),
		"avr quadrature 500000": avr("quadrature-500000.elf"),
	}
}

// quiet feeds a Cortex-M the same readings until its simulator ends.
func quiet(b *sim.Board) {
	still := sim.Signals{Moments: []simrig.Moment{{PressurePa: 100 * psi, ExtensionM: 1e-4}}}
	still.Readings(b.Exited(), b.Stimulus, 3600) // the board's end breaks it off
}
