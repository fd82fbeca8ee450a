package protocol

import "testing"

func TestAppendThenParseGivesTheSameRecord(t *testing.T) {
	for _, r := range []Record{
		Here{Version: 1, Model: "QB-1", Serial: "0007", TickHz: 1e6, Channels: 2, Cause: CausePower},
		Chan{ID: 'a', Quantity: Pressure, Unit: "[psi]", Mantissa: 1, Exponent: -1, High: 15000, Res: 1, Period: 10000, Shows: ShowsUnknown},
		Val{Channel: 'a', Seq: 1, Tick: 2, Status: Good, Count: 5, HasCount: true},
		Val{Channel: 'a', Seq: 1, Tick: 2, Status: Absent},
		Button{ID: '1', Down: true}, Beat{Seq: 9}, Did{Token: 3, Verb: Run}, Wont{Token: 3, Verb: "zap", Why: "unknown"},
		Echo{Token: 1, Tick: 2}, Note{Text: "a  b"}, Unknown{Word: "moon", Body: "moon full"},
	} {
		line, err := Append(nil, r)
		if err != nil {
			t.Error(err)
			continue
		}
		got, bad := Parse(line[:len(line)-1])
		if bad != nil || got != r {
			t.Errorf("%q: %+v %v", line, got, bad)
		}
	}
	for _, c := range []Command{{Verb: Who, Bare: true}, {Verb: Who, Token: 1}, {Verb: Pace, Token: 255, Channel: 'b', Period: 7}, {Verb: EchoMe}} {
		line, err := AppendCommand(nil, c)
		got, bad := ParseCommand(line[:max(0, len(line)-1)])
		if err != nil || bad != nil || got != c {
			t.Errorf("%q: %+v %v %v", line, got, bad, err)
		}
	}
	if checkSum([]byte("123456789")) != 0x29b1 {
		t.Error("check sum")
	}
}
