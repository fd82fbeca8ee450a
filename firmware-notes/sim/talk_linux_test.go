package sim_test

import (
	"bytes"
	"fmt"
	"math/rand/v2"
	"os/exec"
	"testing"
	"time"

	"tautramp/protocol"
	"tautramp/protocol/protocoltest"
)

func onEveryBoard(t *testing.T, do func(*talk)) {
	if testing.Short() {
		t.Skip("the full run has it")
	}
	for name, board := range boards() {
		t.Run(name, func(t *testing.T) { do(newTalk(t, board(t))) })
	}
}

// TestTheCorePassesTheVectorsOnThisMachine runs the core's own tests: shared
// vectors and conduct, under ASan and UBSan.
func TestTheCorePassesTheVectorsOnThisMachine(t *testing.T) {
	if testing.Short() {
		t.Skip("the full run has it")
	}
	python := tool(t, "python3", "python3")
	desk := got(notes(t).Desk())(t)
	if out, err := exec.Command(python, "../core/test/check.py", desk).CombinedOutput(); err != nil {
		t.Errorf("%v\n%s", err, out)
	}
}

// TestImagesAnswerTheSharedCommands sends every command of the vectors and wants
// what SPEC 7 promises: its own answer, a wont, or silence and a count.
func TestImagesAnswerTheSharedCommands(t *testing.T) {
	onEveryBoard(t, func(k *talk) {
		vectors, err := protocoltest.Load()
		if err != nil {
			k.Fatal(err)
		}
		k.booted()
		refused, seen := 0, 0
		for _, v := range vectors.Commands {
			if v.Way == "write" || len(bytes.TrimRight(v.Line, "\r\n")) == 0 { // an empty line is no command (SPEC 2.9)
				continue
			}
			seen++
			k.say(v.Line)
			if err := answered(v, answers(k)); err != nil {
				k.Errorf("%s: %v", v.Name, err)
			}
			if v.Class != "" && v.Command.Verb == "" {
				refused += len(v.Line)
			}
		}
		if beat := k.beat(); int(beat.Refused) != refused || beat.Dropped != 0 {
			k.Errorf("%+v, want %d bytes refused", beat, refused)
		}
		if seen < 50 {
			k.Errorf("only %d vectors", seen)
		}
	})
}

// answers is what the board has sent but numbered lines, up to the answer to an
// echo that is asked for now.
func answers(k *talk) (list []protocol.Record) {
	for _, r := range k.ask(protocol.Command{Verb: protocol.EchoMe}) {
		switch r.(type) {
		case protocol.Val, protocol.Beat, protocol.Button:
		default:
			list = append(list, r)
		}
	}
	return list[:len(list)-1]
}

func answered(v protocoltest.CommandVector, list []protocol.Record) error {
	var last protocol.Record
	if len(list) > 0 {
		last = list[len(list)-1]
	}
	good := false
	switch r := last.(type) {
	case nil:
		good = v.Class != "" && v.Command.Verb == ""
	case protocol.Did:
		good = v.Class == "" && r.Verb == v.Command.Verb && r.Token == v.Command.Token
	case protocol.Echo:
		good = v.Class == "" && v.Command.Verb == protocol.EchoMe && r.Token == v.Command.Token
	case protocol.Chan:
		good = v.Class == "" && v.Command.Bare
	case protocol.Wont:
		good = r.Verb == string(v.Command.Verb) && r.Token == v.Command.Token && len(list) == 1 &&
			(v.Class != "" || v.Command.Verb == protocol.Pace) // a period or a channel that it has not
	}
	if !good {
		return fmt.Errorf("answered %+v", list)
	}
	return nil
}

// TestImagesConductThemselves holds a plain conversation against every rule that
// no single line can show.
func TestImagesConductThemselves(t *testing.T) {
	onEveryBoard(t, func(k *talk) {
		_, channels := k.booted()
		k.ask(protocol.Command{Verb: protocol.Who})
		k.ask(protocol.Command{Verb: protocol.Run})
		for beats := 0; beats < 4; {
			if _, ok := k.next().(protocol.Beat); ok {
				beats++
			}
		}
		k.ask(protocol.Command{Verb: protocol.Pace, Channel: channels[0].ID, Period: 2 * channels[0].Period})
		for beats := 0; beats < 3; {
			if _, ok := k.next().(protocol.Beat); ok {
				beats++
			}
		}
		k.ask(protocol.Command{Verb: protocol.Rest})
		k.ask(protocol.Command{Verb: protocol.EchoMe})
		if err := protocoltest.Conduct(k.turns); err != nil {
			k.Error(err)
		}
		if len(k.turns) < 200 {
			k.Errorf("a conversation of only %d lines", len(k.turns))
		}
	})
}

// TestImagesOutliveNoise sends what no host should, and wants the next good
// command answered each time, and every byte of it counted.
func TestImagesOutliveNoise(t *testing.T) {
	onEveryBoard(t, func(k *talk) {
		k.booted()
		rng := rand.New(rand.NewPCG(7, 7))
		noise := make([]byte, 10_000)
		for i := range noise {
			noise[i] = byte(rng.Uint32())
		}
		refused := 0
		for _, c := range []struct {
			name  string
			bytes []byte
		}{
			{"half a command", []byte("run 0\n")},
			{"a command with a bad check", []byte("run 01;a0b5\n")},
			{"a command without end", bytes.Repeat([]byte("run 01;a0b4"), 40)},
			{"10 kB of noise", append(noise, '\n')},
		} {
			if bytes.HasSuffix(c.bytes, []byte("4")) {
				c.bytes = append(c.bytes, '\n')
			}
			k.say(c.bytes)
			refused += countRefused(c.bytes)
			if list := answers(k); len(list) != 0 {
				k.Errorf("%s: answered %+v", c.name, list)
			}
			if beat := k.beat(); int(beat.Refused) != refused {
				k.Errorf("%s: %d bytes refused so far, want %d", c.name, beat.Refused, refused)
			}
		}
	})
}

// countRefused is how many bytes a board that answers none of these lines
// counts (SPEC 7.3, 2.9).
func countRefused(stream []byte) (n int) {
	for line := range bytes.SplitAfterSeq(stream, []byte{'\n'}) {
		if len(bytes.TrimSuffix(bytes.TrimSuffix(line, []byte{'\n'}), []byte{'\r'})) > 0 {
			n += len(line)
		}
	}
	return n
}

// TestImagesOutliveAFlood sends 500 commands without waiting for an answer, which
// no host may (SPEC 7.1). Each is answered or its bytes are counted, to the byte, and the
// next good command is answered. On a part that holds only if its receiver never
// overruns, which hides how much it has lost: the AVR's holds two bytes while a third
// comes in, so no byte may wait for its interrupt as long as two take.
func TestImagesOutliveAFlood(t *testing.T) {
	onEveryBoard(t, func(k *talk) {
		k.booted()
		const commands, bytesEach = 500, 13
		for token := range commands {
			line, err := protocol.AppendCommand(nil, protocol.Command{Verb: protocol.EchoMe, Token: byte(token)})
			if err != nil || len(line) != bytesEach {
				k.Fatal(line, err)
			}
			k.say(line)
		}
		echoes := 0
		for quiet := false; !quiet; {
			select {
			case line := <-k.lines:
				if _, ok := line.Record.(protocol.Echo); !ok {
					k.Fatalf("%q: %v", line.Text, line.Err)
				}
				echoes++
			case <-time.After(time.Second):
				quiet = true
			}
		}
		k.Logf("%d of %d commands answered", echoes, commands)
		refused, unanswered := int(k.beat().Refused), (commands-echoes)*bytesEach
		k.Logf("%d bytes refused of %d that were not answered", refused, unanswered)
		if echoes == 0 || refused != unanswered {
			k.Error("they must be equal, and some answered")
		}
		const twoBytesCycles = 2 * 10 * 16_000_000 / 500_000 // at the faster of the two rates
		figures, err := k.board.Stop()
		if err != nil || figures.WaitedCycles >= twoBytesCycles {
			k.Errorf("%v: a byte has waited for %d cycles, want less than %d", err, figures.WaitedCycles, twoBytesCycles)
		}
	})
}
