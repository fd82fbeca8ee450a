package simrig

import (
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
