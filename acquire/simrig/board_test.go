package simrig

import (
	"fmt"
	"strings"
	"testing"

	"tautramp/protocol"
)

func TestBoardIntroducesItselfAtBoot(t *testing.T) {
	d := newDesk(t, t1(t))
	first := d.rig.boards[0].out[0]
	list := d.hear(0)
	if first != '\n' || words(list) != "here chan note" {
		t.Fatalf("boot starts with %q and says %s", first, words(list))
	}
	here := list[0].(protocol.Here)
	if here.Cause != protocol.CausePower || here.Boot != 1 || !here.HasBoot || here.Running || here.Channels != 2 || here.TickHz != 1_000_000 {
		t.Errorf("got %+v", here)
	}
	chans := only[protocol.Chan](list)
	if chans[0].Quantity != protocol.Pressure || chans[1].Quantity != protocol.Extension {
		t.Fatalf("channels %+v", chans)
	}
	near(t, "pressure count, psi", protocol.LeastSI(chans[0])/psiPa, 0.05, 1e-12)
	near(t, "extension count, in", protocol.LeastSI(chans[1])/inchM, 0.00005, 1e-15)
	near(t, "top of the range, psi", protocol.ToSI(chans[0], chans[0].High)/psiPa, 1500, 1e-9)
	if chans[0].Period != 20_000 || chans[1].Period != 100_000 || chans[1].Shows != protocol.ShowsRounded {
		t.Errorf("channels %+v", chans)
	}
}

func TestConversation(t *testing.T) {
	d := newDesk(t, t1(t))
	d.hear(0)
	d.pass(0.5)
	if list := d.hear(0); len(list) != 0 {
		t.Errorf("at rest the board says %s", words(list))
	}
	list := d.ask(0, protocol.Command{Verb: protocol.Who, Token: 1})
	if words(list) != "here chan did" || list[0].(protocol.Here).Cause != protocol.CauseAsked {
		t.Errorf("who: %+v", list)
	}
	if list := d.tell(0, "who\n"); words(list) != "here chan" {
		t.Errorf("bare who: %s", words(list))
	}
	if list := d.tell(0, "who\r\n"); words(list) != "here chan" {
		t.Errorf("bare who with CR: %s", words(list))
	}
	echo := d.ask(0, protocol.Command{Verb: protocol.EchoMe, Token: 2})[0].(protocol.Echo)
	if echo.Token != 2 || echo.Tick != d.rig.boards[0].bootTick+500_000 {
		t.Errorf("echo %+v, want tick %d", echo, d.rig.boards[0].bootTick+500_000)
	}
	if list := d.ask(0, protocol.Command{Verb: protocol.Run, Token: 3}); words(list) != "did" {
		t.Errorf("run: %s", words(list))
	}
	d.pass(2)
	vals := only[protocol.Val](d.hear(0))
	if len(vals) < 115 || len(vals) > 121 {
		t.Errorf("%d samples in 2 s, want 120", len(vals))
	}
	if list := d.ask(0, protocol.Command{Verb: protocol.Who, Token: 4}); !list[0].(protocol.Here).Running {
		t.Error("a running board says it rests")
	}
	if list := d.ask(0, protocol.Command{Verb: protocol.Run, Token: 5}); words(list) != "did" {
		t.Errorf("run again: %s", words(list))
	}
	d.pass(0.5)
	list = d.ask(0, protocol.Command{Verb: protocol.Rest, Token: 6})
	if did, ok := list[len(list)-1].(protocol.Did); !ok || did.Verb != protocol.Rest {
		t.Errorf("rest: %s", words(list))
	}
	d.pass(3)
	if list := d.hear(0); len(list) != 0 {
		t.Errorf("after rest: %s", words(list))
	}
}

func TestNonsenseIsRefusedAndCounted(t *testing.T) {
	d := newDesk(t, t1(t))
	d.hear(0)
	seal := func(body string) string { // a command of no known verb, checked by hand
		crc := uint16(0xffff)
		for _, c := range []byte(body) {
			crc ^= uint16(c) << 8
			for range 8 {
				if crc&0x8000 != 0 {
					crc = crc<<1 ^ 0x1021
				} else {
					crc <<= 1
				}
			}
		}
		return fmt.Sprintf("%s;%04x\n", body, crc)
	}
	for text, why := range map[string]string{
		seal("dance 07"):             "unknown",
		seal("run 07 9"):             "fields",
		seal("pace 07 a 0"):          "fields",
		seal("pace 07 z 50000"):      "channel",
		seal("pace 07 a 999"):        "period",
		seal("pace 07 a 20000 more"): "fields",
	} {
		list := d.tell(0, text)
		if len(list) != 1 {
			t.Errorf("%q: %+v", text, list)
			continue
		}
		if wont, ok := list[0].(protocol.Wont); !ok || wont.Why != why || wont.Token != 7 {
			t.Errorf("%q: %+v, want wont 07 %s", text, list[0], why)
		}
	}
	silent := []string{"run 01;0000\n", "hello\n", "\xff\x00\n", seal("run zz"), strings.Repeat("x", 300) + "\n"}
	bytes := 0
	for _, text := range silent {
		bytes += len(text)
		if list := d.tell(0, text); len(list) != 0 {
			t.Errorf("%q was answered: %+v", text, list)
		}
	}
	if list := d.tell(0, "\n\r\n"); len(list) != 0 {
		t.Errorf("empty lines were answered: %+v", list)
	}
	d.ask(0, protocol.Command{Verb: protocol.Run, Token: 9})
	d.pass(1.5)
	if beats := only[protocol.Beat](d.hear(0)); len(beats) != 1 || beats[0].Refused != uint32(bytes) {
		t.Errorf("beats %+v, want one with %d bytes refused", beats, bytes)
	}
}

func TestPaceHoldsUntilTheNextBoot(t *testing.T) {
	d := newDesk(t, t1(t))
	d.hear(0)
	d.ask(0, protocol.Command{Verb: protocol.Run, Token: 1})
	if list := d.ask(0, protocol.Command{Verb: protocol.Pace, Token: 2, Channel: 'a', Period: 1000}); words(list) != "did" {
		t.Fatalf("pace: %+v", list)
	}
	var list []protocol.Record
	for range 10 {
		d.pass(1)
		list = append(list, d.hear(0)...)
	}
	var a []protocol.Val
	for _, v := range only[protocol.Val](list) {
		if v.Channel == 'a' {
			a = append(a, v)
		}
	}
	if len(a) < 9990 || len(a) > 10001 || a[1].Tick-a[0].Tick != 1000 || sequence(t, list) != 0 {
		t.Errorf("%d samples at a period of 1 ms in 10 s, %d ticks apart", len(a), a[1].Tick-a[0].Tick)
	}
	d.rig.boards[0].boot(d.s, protocol.CauseWatchdog)
	for _, c := range only[protocol.Chan](d.hear(0)) {
		if c.ID == 'a' && c.Period != 20_000 {
			t.Errorf("after a boot the period is %d", c.Period)
		}
	}
}

func TestRebootStartsEverythingAfreshButTheDrive(t *testing.T) {
	d := newDesk(t, t1(t))
	d.ask(0, protocol.Command{Verb: protocol.Run, Token: 1})
	d.pass(60)
	moved := d.rig.world.wheel.pullN
	d.hear(0)
	d.rig.boards[0].boot(d.s, protocol.CauseBrown)
	list := d.hear(0)
	here := list[0].(protocol.Here)
	if here.Boot != 2 || here.Cause != protocol.CauseBrown || here.Running || here.Up != 0 {
		t.Errorf("got %+v", here)
	}
	d.pass(5)
	if list := d.hear(0); len(list) != 0 {
		t.Errorf("at rest after a boot: %s", words(list))
	}
	d.ask(0, protocol.Command{Verb: protocol.Run, Token: 1})
	d.pass(1)
	if v := only[protocol.Val](d.hear(0)); v[0].Seq != 0 || v[0].Tick > 6_000_000 {
		t.Errorf("first sample after a boot: %+v", v[0])
	}
	if now := d.rig.world.wheel.pullN; moved <= 0 || now <= moved {
		t.Errorf("pull %g N before, %g N after: the drive did not go on", moved, now)
	}
}

func TestBusyLineDropsWholeLinesAndCounts(t *testing.T) {
	c := t1(t)
	c.Boards = []BoardSpec{{QueueBytes: 2000}}
	d := newDesk(t, c)
	d.ask(0, protocol.Command{Verb: protocol.Run, Token: 1})
	d.pass(30) // nobody listens
	before := d.hear(0)
	if list := d.ask(0, protocol.Command{Verb: protocol.EchoMe, Token: 2}); words(list) != "echo" {
		t.Errorf("a full queue kept no room for the answer: %s", words(list))
	}
	d.pass(0.6)
	after := d.hear(0)
	d.pass(0.6)
	after = append(after, d.hear(0)...)
	missing := sequence(t, append(before, after...))
	beats := only[protocol.Beat](after)
	if len(beats) == 0 || missing < 1500 || int(beats[0].Dropped) != missing {
		t.Errorf("%d numbers missing, the board owns up to %+v", missing, beats)
	}
}

func TestUnconnectedBoardGoesOnAndCounts(t *testing.T) {
	d := newDesk(t, t1(t))
	d.ask(0, protocol.Command{Verb: protocol.Run, Token: 1})
	d.pass(2)
	before := d.hear(0)
	d.rig.boards[0].plugged = false
	d.pass(10)
	d.rig.boards[0].plugged = true
	d.pass(1.1)
	after := d.hear(0)
	beats := only[protocol.Beat](after)
	if missing := sequence(t, append(before, after...)); missing < 600 || len(beats) == 0 || int(beats[0].Dropped) != missing {
		t.Errorf("%d numbers missing, beats %+v", missing, beats)
	}
}

func TestMissingSensorSaysSoOnceASecond(t *testing.T) {
	c := t1(t)
	c.Pressure.Absent = true
	d := newDesk(t, c)
	d.ask(0, protocol.Command{Verb: protocol.Run, Token: 1})
	d.pass(10)
	missing := 0
	for _, v := range only[protocol.Val](d.hear(0)) {
		if v.Channel == 'a' {
			missing++
			if v.HasCount || v.Status != protocol.Absent {
				t.Fatalf("a missing sensor reads %+v", v)
			}
		}
	}
	if missing < 9 || missing > 11 {
		t.Errorf("%d lines in 10 s, want one a second", missing)
	}
}

func TestButtonsGrowthAndTemperature(t *testing.T) {
	c := t1(t)
	c.Thermometer = true
	c.Presses = []Press{{AtS: 3, ID: '2', HoldS: 0.5}, {AtS: 4}}
	d := newDesk(t, c)
	d.ask(0, protocol.Command{Verb: protocol.Run, Token: 1})
	d.pass(30)
	list := d.hear(0)
	buttons, base := only[protocol.Button](list), d.rig.boards[0].bootTick
	want := []protocol.Button{
		{ID: '2', Tick: base + 3_000_000, Down: true}, {ID: '2', Tick: base + 3_500_000},
		{ID: '1', Tick: base + 4_000_000, Down: true}, {ID: '1', Tick: base + 4_200_000},
	}
	if len(buttons) != len(want) {
		t.Fatalf("buttons %+v", buttons)
	}
	for i, b := range buttons {
		b.Seq = 0
		if diff := int32(b.Tick - want[i].Tick); diff < -1 || diff > 1 {
			t.Errorf("edge %d at tick %d, want %d", i, b.Tick, want[i].Tick)
		}
		if b.Tick = want[i].Tick; b != want[i] {
			t.Errorf("edge %d: %+v, want %+v", i, b, want[i])
		}
	}
	if n := len(only[protocol.Unknown](list)); n != 4 {
		t.Errorf("%d records of unknown type in 30 s, want one every 7 s", n)
	}
	warm := 0
	for _, v := range only[protocol.Val](list) {
		if v.Channel == 'c' {
			warm++
			near(t, "temperature, 0.1 degC", float64(v.Count), 180, 5)
		}
	}
	if warm < 28 || warm > 30 {
		t.Errorf("%d temperatures in 30 s", warm)
	}
}

func TestDriveWaitsForEveryBoardAndMayRepeat(t *testing.T) {
	c := quick(t)
	c.Boards = []BoardSpec{{}, {}}
	c.Drive.Repeat, c.Drive.TopPa = true, 400*psiPa
	d := newDesk(t, c)
	run := protocol.Command{Verb: protocol.Run, Token: 1}
	d.ask(0, run)
	d.pass(30)
	if d.rig.world.drive != nil {
		t.Fatal("the drive began with one board at rest")
	}
	d.ask(1, run)
	d.pass(10)
	if d.rig.world.wheel.pullN == 0 {
		t.Fatal("nothing moves")
	}
	select {
	case <-d.rig.Done():
		t.Fatal("done before its time")
	default:
	}
	d.pass(60)
	select {
	case <-d.rig.Done():
	default:
		t.Fatal("never done")
	}
	for board := range 2 {
		d.ask(board, protocol.Command{Verb: protocol.Rest, Token: 2})
		d.ask(board, run)
	}
	d.pass(10)
	if d.rig.world.wheel.pullN == 0 {
		t.Error("told to run again, nothing moves")
	}
}
