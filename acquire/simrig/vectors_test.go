package simrig

import (
	"bytes"
	"testing"

	"tautramp/protocol"
	"tautramp/protocol/protocoltest"
)

// Every command of the shared vectors gets the answer that SPEC 7 promises:
// its own, a wont that repeats word and token, or silence and a count.
func TestBoardAnswersTheSharedCommands(t *testing.T) {
	vectors, err := protocoltest.Load()
	if err != nil {
		t.Fatal(err)
	}
	checked := 0
	for _, v := range vectors.Commands {
		if v.Way == "write" || len(v.Line) <= 1 { // an empty line is no command (SPEC 2.9)
			continue
		}
		checked++
		d := newDesk(t, t1(t))
		d.hear(0)
		list := d.tell(0, string(v.Line))
		refused := d.rig.boards[0].refused
		switch {
		case v.Class == "":
			checkCarriedOut(t, v, list)
		case v.Command.Verb != "":
			if len(list) != 1 || refused != 0 {
				t.Errorf("%s: %d answers, %d bytes refused", v.Name, len(list), refused)
				continue
			}
			if wont, ok := list[0].(protocol.Wont); !ok || wont.Verb != string(v.Command.Verb) || wont.Token != v.Command.Token {
				t.Errorf("%s: answered %+v", v.Name, list[0])
			}
		default:
			if len(list) != 0 || int(refused) != len(v.Line) {
				t.Errorf("%s: answered %+v, %d bytes refused of %d", v.Name, list, refused, len(v.Line))
			}
		}
	}
	if checked < 40 {
		t.Errorf("only %d vectors", checked)
	}
}

// checkCarriedOut looks at the last line of an answer; a period or a channel
// that this board has not may be refused.
func checkCarriedOut(t *testing.T, v protocoltest.CommandVector, list []protocol.Record) {
	t.Helper()
	if len(list) == 0 {
		t.Errorf("%s: no answer", v.Name)
		return
	}
	token, ok := byte(0), false
	switch r := list[len(list)-1].(type) {
	case protocol.Did:
		token, ok = r.Token, r.Verb == v.Command.Verb
	case protocol.Echo:
		token, ok = r.Token, v.Command.Verb == protocol.EchoMe
	case protocol.Wont:
		token, ok = r.Token, v.Command.Verb == protocol.Pace
	case protocol.Chan:
		ok = v.Command.Bare
	}
	if !ok || token != v.Command.Token {
		t.Errorf("%s: answered %+v", v.Name, list[len(list)-1])
	}
}

// turns cuts what one side sent into lines.
func turns(fromHost bool, text []byte) (list []protocoltest.Turn) {
	for _, line := range bytes.SplitAfter(text, []byte{'\n'}) {
		if len(line) > 0 {
			list = append(list, protocoltest.Turn{FromHost: fromHost, Text: bytes.TrimSuffix(line, []byte{'\n'})})
		}
	}
	return list
}

// A long conversation keeps every rule that no single line can show: with a
// sensor that falls out, another pace, a line too slow, a boot.
func TestBoardConductsItselfOverTime(t *testing.T) {
	c := quick(t)
	c.Thermometer = true
	c.Pressure.AbsentAtS, c.Pressure.AbsentForS = 5, 4
	c.Presses = []Press{{AtS: 3}, {AtS: 33}}
	c.Boards = []BoardSpec{{QueueBytes: 6000}}
	d := newDesk(t, c)
	b := d.rig.boards[0]
	talk := turns(false, b.take(nil))
	hear := func(seconds, every float64) {
		for ; seconds > 0; seconds -= every {
			d.pass(every)
			talk = append(talk, turns(false, b.take(nil))...)
		}
	}
	token := byte(0)
	say := func(v protocol.Verb, period uint32) {
		cmd := protocol.Command{Verb: v, Token: token}
		if v == protocol.Pace {
			cmd.Channel, cmd.Period = 'b', period
		}
		token++
		line := encode(t, cmd)
		talk = append(talk, turns(true, line)...)
		b.receive(line, d.s)
		hear(0.1, 0.1)
	}
	say(protocol.Who, 0)
	say(protocol.Run, 0)
	hear(20, 0.5)
	say(protocol.Pace, 33_333)
	say(protocol.EchoMe, 0)
	hear(10, 0.5)
	hear(30, 10) // too slow: lines are dropped
	hear(5, 0.5)
	say(protocol.Rest, 0)
	hear(3, 1)
	say(protocol.Pace, 5)
	say(protocol.Run, 0)
	hear(3, 0.5)
	b.boot(d.s, protocol.CauseWatchdog)
	hear(1, 1)
	say(protocol.Who, 0)
	say(protocol.Run, 0)
	hear(5, 0.5)
	if err := protocoltest.Conduct(talk); err != nil {
		t.Error(err)
	}
	if len(talk) < 2000 {
		t.Errorf("a conversation of only %d lines", len(talk))
	}
}

func TestLogConductsItself(t *testing.T) {
	if err := protocoltest.Conduct(turns(false, logOf(t, quick(t)))); err != nil {
		t.Error(err)
	}
}
