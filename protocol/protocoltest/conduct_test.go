package protocoltest_test

import (
	"os"
	"slices"
	"strings"
	"testing"

	"tautramp/protocol"
	"tautramp/protocol/protocoltest"
)

// exchange is the worked exchange of the spec.
func exchange(t *testing.T) []protocoltest.Turn {
	t.Helper()
	text, err := os.ReadFile("../SPEC.md")
	if err != nil {
		t.Fatal(err)
	}
	var turns []protocoltest.Turn
	for line := range strings.Lines(string(text)) {
		line = strings.TrimSuffix(line, "\n")
		if rest, ok := strings.CutPrefix(line, "> "); ok {
			turns = append(turns, protocoltest.Turn{FromHost: true, Text: []byte(rest)})
		}
		if rest, ok := strings.CutPrefix(line, "< "); ok {
			turns = append(turns, protocoltest.Turn{Text: []byte(rest)})
		}
	}
	if len(turns) < 20 {
		t.Fatalf("%d turns", len(turns))
	}
	return turns
}

func said(t *testing.T, r protocol.Record) protocoltest.Turn {
	t.Helper()
	line, err := protocol.Append(nil, r)
	if err != nil {
		t.Fatal(err)
	}
	return protocoltest.Turn{Text: line[:len(line)-1]}
}

func TestTheWorkedExchangeIsGoodConduct(t *testing.T) {
	if err := protocoltest.Conduct(exchange(t)); err != nil {
		t.Error(err)
	}
}

// find is the index of the first turn that begins so.
func find(t *testing.T, turns []protocoltest.Turn, start string) int {
	t.Helper()
	i := slices.IndexFunc(turns, func(turn protocoltest.Turn) bool { return strings.HasPrefix(string(turn.Text), start) })
	if i < 0 {
		t.Fatalf("no turn %q", start)
	}
	return i
}

// Each case spoils the worked exchange in one way; the clause must be named.
func TestBadConductIsFound(t *testing.T) {
	last := func(turns []protocoltest.Turn) protocoltest.Turn { return turns[len(turns)-1] }
	for clause, spoil := range map[string][]func([]protocoltest.Turn) []protocoltest.Turn{
		"4.5": {
			func(l []protocoltest.Turn) []protocoltest.Turn {
				i := find(t, l, "btn")
				return slices.Delete(l, i, i+1)
			},
			func(l []protocoltest.Turn) []protocoltest.Turn {
				l[find(t, l, "beat")] = said(t, protocol.Beat{Seq: 6, Tick: 640000, Dropped: 1})
				return l
			},
		},
		"4.4": {
			func(l []protocoltest.Turn) []protocoltest.Turn {
				i := find(t, l, "btn")
				return slices.Insert(l, i, l[i])
			},
			func(l []protocoltest.Turn) []protocoltest.Turn {
				i := find(t, l, "btn")
				l[i], l[i-1] = l[i-1], l[i]
				return l
			},
		},
		"4.3": {
			func(l []protocoltest.Turn) []protocoltest.Turn {
				l[find(t, l, "val a 0003")] = said(t, protocol.Val{Channel: 'a', Seq: 3, Tick: 512000, Status: protocol.Good, Count: 5, HasCount: true})
				return l
			},
			func(l []protocoltest.Turn) []protocoltest.Turn {
				l[find(t, l, "btn")] = said(t, protocol.Button{ID: '1', Seq: 2, Tick: 1<<32 - 488000})
				return l
			},
		},
		"4.6": {func(l []protocoltest.Turn) []protocoltest.Turn {
			return slices.Insert(l, find(t, l, "beat")+1, said(t, protocol.Button{ID: '1', Seq: 7, Tick: 640000 + 1050001}))
		}},
		"4.7": {func(l []protocoltest.Turn) []protocoltest.Turn {
			return append(l, said(t, protocol.Here{Version: 1, Model: "m", Serial: "s", TickHz: 1, Running: true, Cause: protocol.CauseReset}))
		}},
		"4.8": {func(l []protocoltest.Turn) []protocoltest.Turn {
			return append(l, said(t, protocol.Here{Version: 1, Model: "m", Serial: "s", TickHz: 1, Cause: protocol.CauseReset, Boot: 42, HasBoot: true}))
		}},
		"5.1": {
			func(l []protocoltest.Turn) []protocoltest.Turn { return slices.Delete(l, 1, 2) },
			func(l []protocoltest.Turn) []protocoltest.Turn { return slices.Insert(l, 3, l[2]) },
			func(l []protocoltest.Turn) []protocoltest.Turn {
				return slices.Insert(l, 1, said(t, protocol.Button{ID: '1'}))
			},
		},
		"5.2": {
			func(l []protocoltest.Turn) []protocoltest.Turn { l[2] = l[1]; return l },
			func(l []protocoltest.Turn) []protocoltest.Turn {
				l[find(t, l, "val b 0001")] = said(t, protocol.Val{Channel: 'c', Seq: 1, Tick: 513216, Status: protocol.Absent})
				return l
			},
		},
		"5.5": {func(l []protocoltest.Turn) []protocoltest.Turn {
			i := find(t, l, "beat")
			return slices.Insert(slices.Delete(l, i, i+1), i,
				said(t, protocol.Beat{Seq: 6, Tick: 640000, Refused: 2}), said(t, protocol.Beat{Seq: 7, Tick: 650000, Refused: 1}))
		}},
		"6.5": {
			func(l []protocoltest.Turn) []protocoltest.Turn {
				l[find(t, l, "val a 0003")] = said(t, protocol.Val{Channel: 'a', Seq: 3, Tick: 572000, Status: protocol.Good, Count: 15200, HasCount: true})
				return l
			},
			func(l []protocoltest.Turn) []protocoltest.Turn {
				l[find(t, l, "val a 0003")] = said(t, protocol.Val{Channel: 'a', Seq: 3, Tick: 572000, Status: protocol.Low, Count: 0, HasCount: true})
				return l
			},
		},
		"7.1": {func(l []protocoltest.Turn) []protocoltest.Turn {
			i := find(t, l, "did 04 run")
			return slices.Insert(l, i, l[i-1])
		}},
		"7.2": {
			func(l []protocoltest.Turn) []protocoltest.Turn { return l[:len(l)-1] },
			func(l []protocoltest.Turn) []protocoltest.Turn { return append(l, last(l)) },
			func(l []protocoltest.Turn) []protocoltest.Turn {
				l[find(t, l, "did 02")] = said(t, protocol.Did{Token: 3, Verb: protocol.Pace})
				return l
			},
		},
		"7.4": {func(l []protocoltest.Turn) []protocoltest.Turn {
			i := find(t, l, "who")
			return slices.Delete(l, i+1, i+4)
		}},
		"7.6": {func(l []protocoltest.Turn) []protocoltest.Turn {
			return append(l, said(t, protocol.Val{Channel: 'a', Seq: 7, Tick: 692000, Status: protocol.Good, Count: 5, HasCount: true}))
		}},
		"2.6": {func(l []protocoltest.Turn) []protocoltest.Turn {
			i := find(t, l, "btn")
			l[i].Text = []byte(strings.Replace(string(l[i].Text), "btn 1", "btn 2", 1))
			return l
		}},
	} {
		for n, spoil := range spoil {
			err := protocoltest.Conduct(spoil(exchange(t)))
			if err == nil || !strings.Contains(err.Error(), "clause "+clause+":") {
				t.Errorf("clause %s, case %d: found %v", clause, n+1, err)
			}
		}
	}
}

func TestALogWithTwoBootsIsGoodConduct(t *testing.T) {
	boot := func(id uint32) []protocoltest.Turn {
		return []protocoltest.Turn{
			{},
			said(t, protocol.Here{Version: 1, Model: "card", Serial: "3", TickHz: 1000, Channels: 1, Running: true, Cause: protocol.CausePower, Boot: id, HasBoot: true}),
			said(t, protocol.Chan{ID: 'c', Quantity: protocol.Force, Unit: "kN", Mantissa: 1, Exponent: -3, Low: -100, High: 50000, Res: 1, Period: 100, Shows: protocol.ShowsUnknown}),
			said(t, protocol.Val{Channel: 'c', Tick: 100, Status: protocol.Good, Count: 12, HasCount: true}),
			said(t, protocol.Unknown{Word: "moon", Body: "moon full"}),
			said(t, protocol.Beat{Seq: 1, Tick: 150}),
		}
	}
	garbage := protocoltest.Turn{Text: []byte("\xf0\x80boot")}
	if err := protocoltest.Conduct(slices.Concat([]protocoltest.Turn{garbage}, boot(7), boot(8))); err != nil {
		t.Error(err)
	}
}
