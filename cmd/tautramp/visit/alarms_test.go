package visit

import (
	"math"
	"strings"
	"testing"

	"tautramp/acquire/pairing"
	"tautramp/protocol"
)

// feeder gives readings to alarms 50 times a second.
type feeder struct {
	t   *testing.T
	a   *alarms
	now float64
}

func newFeeder(t *testing.T) *feeder {
	site, err := newSite(header(t))
	if err != nil {
		t.Fatal(err)
	}
	return &feeder{t: t, a: newAlarms(site)}
}

func (f *feeder) one(psi float64, setting, extension protocol.Status) {
	f.now += 0.02
	value := psi * psiPa
	if setting == protocol.Absent || setting == protocol.Fault {
		value = math.NaN()
	}
	f.a.setting(pairing.Reading{T: f.now, Value: value, Status: setting}, f.now)
	f.a.extension(pairing.Reading{T: f.now, Status: extension}, f.now)
	f.a.time(f.now)
}

// ramp goes from one setting to another in so many seconds.
func (f *feeder) ramp(from, to, seconds float64, setting, extension protocol.Status) {
	n := math.Round(seconds * 50)
	for i := 1.0; i <= n; i++ {
		f.one(from+(to-from)*i/n, setting, extension)
	}
}

func (f *feeder) want(kind AlarmKind) {
	f.t.Helper()
	if got, text := f.a.gravest(); got != kind {
		f.t.Fatalf("at %.2f s: alarm %q (%s), want %q", f.now, got, text, kind)
	}
}

func TestOneReadingAtTheLimitIsEnough(t *testing.T) {
	f := newFeeder(t)
	f.ramp(35, 940, 100, protocol.Good, protocol.Good)
	f.want(NoAlarm)
	f.one(949.9, protocol.Good, protocol.Good)
	f.want(NoAlarm)
	f.one(950, protocol.Good, protocol.Good)
	f.want(OverLimit)
	if text := f.a.worst(); !strings.Contains(text, "the gauge stands at 950 psi and its limit is 950 psi") {
		t.Errorf("text %q", text)
	}
}

func TestLimitAlarmEndsWellBelowTheLimitOnly(t *testing.T) {
	f := newFeeder(t)
	f.one(960, protocol.Good, protocol.Good)
	f.ramp(940, 930, 5, protocol.Good, protocol.Good) // above 97 %
	f.want(OverLimit)
	f.ramp(921, 920, 0.9, protocol.Good, protocol.Good)
	f.want(OverLimit)
	f.ramp(930, 930, 0.1, protocol.Good, protocol.Good) // not for a whole second
	f.ramp(920, 920, 0.9, protocol.Good, protocol.Good)
	f.want(OverLimit)
	f.ramp(920, 919, 0.3, protocol.Good, protocol.Good)
	f.want(NoAlarm)
	if len(f.a.raised) != 1 {
		t.Errorf("raised %q", f.a.raised)
	}
	f.one(951, protocol.Good, protocol.Good)
	f.want(OverLimit)
	if len(f.a.raised) != 2 {
		t.Errorf("raised %q", f.a.raised)
	}
}

func TestSensorAtItsEndCountsForTheLimit(t *testing.T) {
	f := newFeeder(t)
	f.one(1000, protocol.High, protocol.Good)
	f.want(OverLimit)
}

func TestSettingAtTheEndOfItsRangeWhileRising(t *testing.T) {
	f := newFeeder(t)
	f.ramp(35, 500, 60, protocol.Good, protocol.Good)
	f.one(500, protocol.High, protocol.Good)
	f.want(Blind)
	if text := f.a.worst(); !strings.Contains(text, "end of its range") {
		t.Errorf("text %q", text)
	}
}

func TestSensorThatVanishesWhileTheSettingRises(t *testing.T) {
	for name, c := range map[string][2]protocol.Status{
		"extension absent":    {protocol.Good, protocol.Absent},
		"extension at an end": {protocol.Good, protocol.High},
		"setting absent":      {protocol.Absent, protocol.Good},
		"setting faulty":      {protocol.Fault, protocol.Good},
	} {
		t.Run(name, func(t *testing.T) {
			f := newFeeder(t)
			f.ramp(35, 300, 40, protocol.Good, protocol.Good)
			f.ramp(300, 308, 1.4, c[0], c[1])
			f.want(NoAlarm)
			f.ramp(308, 310, 0.6, c[0], c[1])
			f.want(Blind)
			f.ramp(310, 310, 20, c[0], c[1])
			f.want(Blind)
			f.ramp(310, 310, 1.5, protocol.Good, protocol.Good)
			f.want(NoAlarm)
		})
	}
}

func TestLinesThatStopWhileTheSettingRises(t *testing.T) {
	f := newFeeder(t)
	f.ramp(35, 300, 40, protocol.Good, protocol.Good)
	f.now += 1
	f.a.time(f.now)
	f.want(NoAlarm)
	f.now += 1
	f.a.time(f.now)
	f.now += 0.5
	f.a.time(f.now)
	f.want(Blind)
}

func TestHostThatStalledIsNotBlind(t *testing.T) {
	f := newFeeder(t)
	f.ramp(35, 300, 40, protocol.Good, protocol.Good)
	f.now += 4 // then all that waited comes at once, the setting first
	for i := range 200 {
		at := f.now - 4 + 0.02*float64(i)
		f.a.setting(pairing.Reading{T: at, Value: (300 + at - 40) * psiPa, Status: protocol.Good}, f.now)
		f.a.time(f.now)
	}
	f.a.extension(pairing.Reading{T: f.now, Status: protocol.Good}, f.now)
	f.a.time(f.now)
	f.want(NoAlarm)
	if len(f.a.raised) != 0 {
		t.Errorf("raised %q", f.a.raised)
	}
}

func TestMissingReadingsAtRestAreNoAlarm(t *testing.T) {
	f := newFeeder(t)
	f.ramp(35, 35, 10, protocol.Good, protocol.Absent)
	f.want(NoAlarm)
	if c := f.a.missing(f.now); c == nil || c.name != "the stretch" {
		t.Errorf("missing %v", c)
	}
	f.ramp(35, 60, 4, protocol.Good, protocol.Absent) // and now somebody pumps
	f.want(Blind)
}

func TestGravestAlarmIsShown(t *testing.T) {
	f := newFeeder(t)
	f.one(600, protocol.Good, protocol.Good)
	f.a.short(600 * psiPa)
	f.want(UnderReading)
	f.one(950, protocol.Good, protocol.Good)
	f.want(OverLimit)
	if !strings.Contains(f.a.worst(), "limit") || len(f.a.raised) != 2 {
		t.Errorf("worst %q of %q", f.a.worst(), f.a.raised)
	}
}

func TestFiguresAreInTheLimitsUnit(t *testing.T) {
	site, err := newSite(header(t))
	if err != nil {
		t.Fatal(err)
	}
	for si, want := range map[float64]string{950 * psiPa: "950 psi", 98.76 * psiPa: "98.8 psi", 1.234 * psiPa: "1.23 psi", 0: "0 psi", 12345.6 * psiPa: "12346 psi"} {
		if got := site.figure(si); got != want {
			t.Errorf("%q, want %q", got, want)
		}
	}
}

func TestExpectedFiguresOfTheMill(t *testing.T) {
	// T-1 with QW-6: A* 9.817 in2, net section 0.3045 in2, 820 lbf lifted, 9,500
	// psi wanted, E 29e6 psi over 20 in; p A* = 2 sigma A_b + W, hand arithmetic.
	site, err := newSite(header(t))
	if err != nil {
		t.Fatal(err)
	}
	near(t, "setting for the target, psi", site.full/psiPa, (2*9500*0.3045+820)/9.8175, 0.1)
	near(t, "for half of it", site.half/psiPa, (9500*0.3045+820)/9.8175, 0.1)
	near(t, "lift", site.lift/psiPa, 820/9.8175, 0.01)
	near(t, "slope, in/psi", site.slope*psiPa/inM, 9.8175*20/(2*0.3045*29e6), 1e-9)
}
