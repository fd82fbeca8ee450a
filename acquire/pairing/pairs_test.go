package pairing

import (
	"bytes"
	"errors"
	"math"
	"reflect"
	"strings"
	"testing"
	"time"

	"tautramp/acquire/recording"
	"tautramp/protocol"
)

// oneBoard sends both channels; the pressure rises by 1 count per sample of
// 10 ms, the extension is sampled at other instants.
func oneBoard(t testing.TB, seconds float64) *board {
	b := &board{t: t, hz: 1e6, start: 1000, delayS: noDelay}
	b.hello(0, protocol.CauseAsked, 1, pressureChan('a', 10000), extensionChan('b', 100000))
	for i := range int(seconds * 100) {
		at := float64(i) / 100
		b.val(at, 'a', int32(i))
		if i%10 == 4 {
			b.val(at+0.0031, 'b', int32(i))
		}
	}
	return b
}

func TestInterpolationIsExactOnARamp(t *testing.T) {
	set := build(t, header(t, 1), oneBoard(t, 10).lines)
	if len(set.Pairs) != 100 || set.Unpaired != 0 {
		t.Fatalf("%d pairs, %d unpaired", len(set.Pairs), set.Unpaired)
	}
	for i, p := range set.Pairs {
		count := float64(10*i + 4)
		near(t, "setting", p.Setting, (count+0.31)*0.1*psiPa, 1e-6*psiPa)
		near(t, "extension", p.Extension, count*5e-5*inM, 1e-15)
		near(t, "instant", p.T, count/100+0.0031, 1e-6)
		near(t, "uncertainty of one tick at 10 psi/s", p.SettingStd, 10*psiPa*1e-6, 1e-3*psiPa*1e-6)
	}
}

func TestSampleOfTheSameTickNeedsNoNeighbour(t *testing.T) {
	b := &board{t: t, hz: 1e6, delayS: noDelay}
	b.hello(0, protocol.CauseAsked, 1, pressureChan('a', 10000), extensionChan('b', 10000))
	b.val(1, 'a', 7240)
	b.val(1, 'b', 131)
	set := build(t, header(t, 1), b.lines)
	if len(set.Pairs) != 1 || set.Pairs[0].Setting != 724*psiPa {
		t.Fatalf("pairs %v", set.Pairs)
	}
	near(t, "extension of protocol/SPEC.md section 0", set.Pairs[0].Extension, 0.00655*inM, 1e-15)
}

func TestNoPairAcrossAGap(t *testing.T) {
	b := &board{t: t, hz: 1e6, delayS: noDelay}
	b.hello(0, protocol.CauseAsked, 1, pressureChan('a', 10000), extensionChan('b', 10000))
	for _, at := range []float64{0, 0.4, 0.8, 1.4, 1.8} { // at most 0.5 s may lie between
		b.val(at, 'a', int32(1000*at))
	}
	b.val(0.6, 'b', 1)  // older than the line before it by a little: allowed
	b.val(1.1, 'b', 2)  // in the gap
	b.val(1.6, 'b', 3)  // good again
	b.val(1.95, 'b', 4) // nothing after it
	set := build(t, header(t, 1), b.lines)
	if len(set.Pairs) != 2 || set.Unpaired != 2 {
		t.Fatalf("%d pairs, %d unpaired", len(set.Pairs), set.Unpaired)
	}
	near(t, "first setting", set.Pairs[0].Setting, 60*psiPa, 1e-6)
	near(t, "second setting", set.Pairs[1].Setting, 160*psiPa, 1e-6)
}

func TestNoPairAcrossTwoParts(t *testing.T) {
	before, after := Reading{T: 1, Value: 10, Status: protocol.Good}, Reading{T: 1.2, Value: 20, Status: protocol.Good, Part: 1}
	if v, ok := valueAt(1.1, before, after, 0.5); ok {
		t.Errorf("%g between a reading before a restart and one after it", v)
	}
	after.Part = 0
	if v, ok := valueAt(1.1, before, after, 0.5); !ok || math.Abs(v-15) > 1e-9 {
		t.Errorf("%g, %t", v, ok)
	}
}

func TestSlowChannelMayHaveWiderGaps(t *testing.T) {
	b := &board{t: t, hz: 1e6, delayS: noDelay}
	b.hello(0, protocol.CauseAsked, 1, pressureChan('a', 1_000_000), extensionChan('b', 10000))
	b.val(0, 'a', 0)
	b.val(1.7, 'b', 1)
	b.val(4, 'a', 4000)
	b.val(7, 'b', 1)
	b.val(9.5, 'a', 9500)
	set := build(t, header(t, 1), b.lines)
	if len(set.Pairs) != 1 || set.Unpaired != 1 {
		t.Fatalf("%d pairs, %d unpaired", len(set.Pairs), set.Unpaired)
	}
	near(t, "setting", set.Pairs[0].Setting, 170*psiPa, 1e-6)
}

func TestOnlyGoodSamplesMakePairs(t *testing.T) {
	b := &board{t: t, hz: 1e6, delayS: noDelay}
	b.hello(0, protocol.CauseAsked, 1, pressureChan('a', 100000), extensionChan('b', 100000))
	state := map[int][2]protocol.Status{ // setting, extension at i tenths of a second
		5: {protocol.High, protocol.Good}, 6: {protocol.Low, protocol.Good}, 7: {protocol.Absent, protocol.Good},
		8: {protocol.Good, protocol.High}, 9: {protocol.Good, protocol.Fault}, 10: {protocol.Good, protocol.Absent},
	}
	for i := range 20 {
		s, ok := state[i]
		if !ok {
			s = [2]protocol.Status{protocol.Good, protocol.Good}
		}
		b.status(float64(i)/10, 'a', s[0], 100)
		b.status(float64(i)/10, 'b', s[1], 100)
	}
	set := build(t, header(t, 1), b.lines)
	if len(set.Pairs) != 14 || set.Unpaired != 3 {
		t.Errorf("%d pairs, %d unpaired", len(set.Pairs), set.Unpaired)
	}
	if c := set.Counters[0]; c.Saturated != 3 || c.Missing != 3 || c.Samples != 40 {
		t.Errorf("counters %+v", c)
	}
	if text := strings.Join(set.Warnings, "\n"); !strings.Contains(text, "2 readings of the setting stood at the end") || !strings.Contains(text, "1 readings of the extension stood") {
		t.Errorf("warnings %q", text)
	}
	if r := set.Setting.Readings[7]; !math.IsNaN(r.Value) {
		t.Errorf("a missing reading has the value %g", r.Value)
	}
}

func TestWhatIsLostIsCounted(t *testing.T) {
	b := oneBoard(t, 10)
	// Three lines vanish, a fourth is damaged on the way, one comes twice.
	b.lines = append(b.lines[:100], b.lines[103:]...)
	bad := bytes.Clone(b.lines[200].Wire)
	bad[5] ^= 1
	b.lines[200].Wire = bad
	again := b.lines[300]
	b.lines = append(b.lines[:301], append([]recording.Entry{again}, b.lines[301:]...)...)
	b.put(10, protocol.Beat{Seq: b.seq, Tick: b.tick(10), Dropped: 2})
	b.lines = append(b.lines, recording.Entry{HasAt: true, At: 11 * time.Second, Wire: []byte("\r")})
	c := build(t, header(t, 1), b.lines).Counters[0]
	want := Counters{Lines: 3 + 1096 + 1 + 1, Samples: 1097, Lost: 4, DeviceSaid: 2, Rejected: 1, Backward: 1}
	if c != want {
		t.Errorf("%+v, want %+v", c, want)
	}
}

func TestSequenceWraps(t *testing.T) {
	for _, c := range []struct {
		name         string
		before, next uint16
		later        bool
		lost         int
	}{
		{"next", 7, 8, false, 0},
		{"next over the wrap", 65535, 0, false, 0},
		{"three missing over the wrap", 65533, 1, false, 3},
		{"seen before", 9, 8, false, 0},
		{"the same again", 9, 9, false, 0},
		{"more than half a round in a long silence", 10, 5, true, 65530},
	} {
		q := sequence{last: c.before, has: true}
		if got := q.step(c.next, c.later); got != c.lost {
			t.Errorf("%s: lost %d, want %d", c.name, got, c.lost)
		}
	}
	var fresh sequence
	if fresh.step(500, false) != 0 {
		t.Error("numbers before the first line count as lost")
	}
}

func TestImportedLogIsMappedByTicks(t *testing.T) {
	b := oneBoard(t, 10)
	for i := range b.lines {
		b.lines[i].At, b.lines[i].HasAt = 0, false
	}
	h := header(t, 1)
	h.Source = recording.Imported
	set := build(t, h, b.lines)
	if len(set.Pairs) != 100 || set.Clocks[0].Method != MethodTicks {
		t.Fatalf("%d pairs by %q", len(set.Pairs), set.Clocks[0].Method)
	}
	near(t, "instant", set.Pairs[0].T, 0.0431, 1e-9)
	near(t, "setting", set.Pairs[0].Setting, 0.431*psiPa, 1e-6)
}

func TestImportedLogWithTwoBoots(t *testing.T) {
	b := &board{t: t, hz: 1e6, imp: true, start: 20_000_000}
	for boot := range uint32(2) {
		b.hello(0, protocol.CausePower, boot+1, pressureChan('a', 10000), extensionChan('b', 10000))
		for i := range 100 {
			b.val(float64(i)/10, 'a', 5)
			b.val(float64(i)/10, 'b', 5)
		}
		b.seq = 0
	}
	set := build(t, header(t, 1), b.lines)
	if len(set.Pairs) != 200 || set.Counters[0].Restarts != 1 || set.Pairs[100].Part == set.Pairs[99].Part {
		t.Fatalf("%d pairs, %d restarts", len(set.Pairs), set.Counters[0].Restarts)
	}
	near(t, "the second boot stands after the first", set.Pairs[100].T, 9.9+partGapS, 1e-9)
	if text := strings.Join(set.Warnings, "\n"); !strings.Contains(text, "how long it was off between them is not known") {
		t.Errorf("warnings %q", text)
	}
}

func TestRepeatedStretchOfALogIsRefused(t *testing.T) {
	b := &board{t: t, hz: 1e6, imp: true, start: 100_000_000}
	b.hello(0, protocol.CausePower, 1, pressureChan('a', 10000), extensionChan('b', 10000))
	for i := range 100 {
		b.val(float64(i)/10, 'a', 5)
		b.val(float64(i)/10, 'b', 5)
	}
	b.lines = append(b.lines[:150], b.lines[50:]...)
	set := build(t, header(t, 1), b.lines)
	if len(set.Pairs) != 100 || set.Counters[0].Backward != 100 || set.Counters[0].Lost != 0 {
		t.Errorf("%d pairs, %+v", len(set.Pairs), set.Counters[0])
	}
}

func TestWhyThereAreNoPairs(t *testing.T) {
	two := func(imp bool, chans ...protocol.Chan) []recording.Entry {
		var all []recording.Entry
		for i, c := range chans {
			b := &board{t: t, index: i, hz: 1e6, imp: imp, delayS: noDelay}
			b.hello(0, protocol.CauseAsked, 1, c)
			for k := range 20 {
				b.val(float64(k)/10, c.ID, 5)
			}
			all = append(all, b.lines...)
		}
		return all
	}
	late := &board{t: t, hz: 1e6, delayS: noDelay}
	late.hello(0, protocol.CauseAsked, 1, pressureChan('a', 10000), extensionChan('b', 10000))
	late.val(1, 'a', 5)
	late.val(2, 'b', 5)
	for _, c := range []struct {
		name    string
		devices int
		entries []recording.Entry
		want    error
	}{
		{"no lines", 1, nil, ErrNoSetting},
		{"no setting", 1, two(false, extensionChan('a', 1000)), ErrNoSetting},
		{"no extension", 1, two(false, pressureChan('a', 1000)), ErrNoExtension},
		{"two devices without receive times", 2, two(true, pressureChan('a', 1000), extensionChan('a', 1000)), ErrNoTime},
		{"two devices with receive times", 2, two(false, pressureChan('a', 1000), extensionChan('a', 1000)), nil},
		{"never at the same time", 1, late.lines, ErrNoPairs},
	} {
		_, err := FromRecording(&recording.Recording{Header: header(t, c.devices), Entries: c.entries})
		if !errors.Is(err, c.want) {
			t.Errorf("%s: %v, want %v", c.name, err, c.want)
		}
	}
}

func TestFirstOfSeveralChannelsIsChosen(t *testing.T) {
	b := &board{t: t, hz: 1e6, delayS: noDelay}
	second := pressureChan('c', 10000)
	temperature := protocol.Chan{ID: 'd', Quantity: protocol.Temperature, Unit: "Cel", Mantissa: 1, Exponent: -1, High: 1000, Res: 1, Period: 1000, Shows: protocol.ShowsRounded}
	b.hello(0, protocol.CauseAsked, 1, second, extensionChan('b', 10000), pressureChan('a', 10000), temperature)
	for _, c := range []byte("abcd") {
		b.val(1, c, 100)
	}
	set := build(t, header(t, 1), b.lines)
	if set.Setting.Spec.ID != 'a' || len(set.Others) != 2 || set.Others[1].Spec.ID != 'd' {
		t.Errorf("setting %c, others %d", set.Setting.Spec.ID, len(set.Others))
	}
	near(t, "temperature", set.Others[1].Readings[0].Value, 283.15, 1e-9)
	if len(set.Warnings) != 1 || !strings.Contains(set.Warnings[0], "2 channels measure the setting; channel a of device 1") {
		t.Errorf("warnings %q", set.Warnings)
	}
}

func TestHowADisplayMakesItsLastDigit(t *testing.T) {
	for _, c := range []struct {
		shows  protocol.Shows
		count  int32
		counts float64
		warned bool
	}{
		{protocol.ShowsRounded, 10, 10, false},
		{protocol.ShowsUnknown, 10, 10, true},
		// Cut off towards zero: the middle lies half a step of 2 further out.
		{protocol.ShowsTruncated, 10, 11, false},
		{protocol.ShowsTruncated, -10, -11, false},
		{protocol.ShowsTruncated, 0, 0, false},
	} {
		spec := extensionChan('b', 10000)
		spec.Res, spec.Shows = 2, c.shows
		b := &board{t: t, hz: 1e6, delayS: noDelay}
		b.hello(0, protocol.CauseAsked, 1, pressureChan('a', 10000), spec)
		b.val(1, 'a', 100)
		b.val(1, 'b', c.count)
		set := build(t, header(t, 1), b.lines)
		near(t, string(c.shows), set.Pairs[0].Extension, c.counts*5e-5*inM, 1e-15)
		near(t, "least count", set.Extension.CountSI, 1e-4*inM, 1e-15)
		if warned := len(set.Warnings) > 0; warned != c.warned {
			t.Errorf("%s: warnings %q", c.shows, set.Warnings)
		}
	}
}

func TestLinesBeforeTheIdentityAreUsed(t *testing.T) {
	// The host opens a board that runs already and has to ask who it is.
	b := oneBoard(t, 5)
	b.lines = append(b.lines[3:], b.lines[:3]...)
	for i := range 3 {
		b.lines[len(b.lines)-3+i].At = 5 * time.Second
	}
	here := protocol.Here{Version: 1, Model: "two-port", Serial: "0000", TickHz: 1e6, Channels: 2, Up: b.tick(5), Cause: protocol.CauseAsked, Boot: 1, HasBoot: true}
	b.lines[len(b.lines)-3].Wire = wire(t, here)
	if set := build(t, header(t, 1), b.lines); len(set.Pairs) != 50 || len(set.Clocks) != 1 {
		t.Errorf("%d pairs in %d parts", len(set.Pairs), len(set.Clocks))
	}
}

func TestMarksStandOnTheHostTimeline(t *testing.T) {
	b := oneBoard(t, 10)
	b.put(10, protocol.Button{ID: '1', Seq: b.seq, Tick: b.tick(9.9), Down: true})
	b.put(10, protocol.Button{ID: '1', Seq: b.seq + 1, Tick: b.tick(9.95)})
	entries := append(b.lines,
		event(-1, 12*time.Second, recording.Mark, "pump squeals"),
		event(-1, 13*time.Second, recording.ZeroMark, ""),
		event(-1, 14*time.Second, recording.Undo, ""),
		event(-1, 11*time.Second, recording.ZeroMark, ""))
	set := build(t, header(t, 1), entries)
	for i := range set.Marks {
		set.Marks[i].T = math.Round(set.Marks[i].T*1e4) / 1e4
	}
	want := []Mark{{T: 9.9, Kind: Button, Text: "1"}, {T: 11, Kind: Zero}, {T: 12, Kind: Operator, Text: "pump squeals"}}
	if !reflect.DeepEqual(set.Marks, want) {
		t.Errorf("marks %v, want %v", set.Marks, want)
	}
}

func TestLaterWireVersionIsNotUsed(t *testing.T) {
	b := oneBoard(t, 1)
	b.lines[0].Wire = wire(t, protocol.Here{Version: 2, Model: "two-port", Serial: "0000", TickHz: 1e6, Channels: 2, Cause: protocol.CauseAsked})
	_, err := FromRecording(&recording.Recording{Header: header(t, 1), Entries: b.lines})
	if !errors.Is(err, ErrNoSetting) {
		t.Errorf("%v", err)
	}
}

func TestSameRecordingSameSet(t *testing.T) {
	entries, _, _ := twoBoards(t, 1, 30, 0.011, 0.097)
	first, second := build(t, header(t, 2), entries), build(t, header(t, 2), entries)
	if !reflect.DeepEqual(first, second) {
		t.Error("two runs differ")
	}
}
