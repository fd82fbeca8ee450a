package simrig

import (
	"errors"
	"strings"
	"testing"

	"tautramp/acquire/mill"
)

func exampleProfile(t testing.TB) *mill.Profile {
	t.Helper()
	p, err := mill.Parse(mill.Example())
	if err != nil {
		t.Fatal(err)
	}
	return p
}

// t1 is tensioner T-1 with band QW-6 of the invented mill, one ramp.
func t1(t testing.TB) Config {
	return Config{Profile: exampleProfile(t), Tensioner: "T-1", Band: "QW-6", Seed: 1, Drive: Drive{Exercise: -1, Ramps: 1}}
}

// quick is t1 hurried: a faster ramp, no rests, little slack.
func quick(t testing.TB) Config {
	c := t1(t)
	c.Drive = Drive{Exercise: -1, Ramps: 1, RatePaS: 20 * psiPa, RestS: -1, HoldTopS: 1, HoldLowS: 1}
	c.SlackM, c.SlackTimeS = 1e-3, 1
	return c
}

func mustNew(t testing.TB, c Config) *Rig {
	t.Helper()
	r, err := New(c)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

func mustTrace(t testing.TB, c Config) (*Rig, []Moment) {
	t.Helper()
	r := mustNew(t, c)
	trace, err := r.Trace(0.05)
	if err != nil {
		t.Fatal(err)
	}
	return r, trace
}

func TestAreaFactorIsTheTruth(t *testing.T) {
	c := t1(t)
	plain := mustNew(t, c).Truth()
	c.AreaFactor = 0.9
	less := mustNew(t, c).Truth()
	near(t, "area", less.AreaM2, 0.9*plain.AreaM2, 1e-15)
	near(t, "setting", less.RisingPa(50e6), plain.RisingPa(50e6)/0.9, 1e-3)
}

// Any tensioner set by pressure will do: a light one with a lever and a narrow
// band, and one so stiff with friction that the band never goes slack.
func TestOtherTensionersFollowTheirForceBalance(t *testing.T) {
	const lbfN = 4.4482216152605
	light := exampleProfile(t)
	lever := &light.Tensioners[0]
	lever.Cylinders, lever.Bore.SI, lever.TravelRatio, lever.SettingLimit.SI = 1, 1.5*inchM, 1.5, 1500*psiPa
	lever.Rehearsal = &mill.Rehearsal{FrictionProportional: 0.08}
	lever.Rehearsal.FrictionConstant.SI, lever.Rehearsal.Weight.SI, lever.Rehearsal.BandLoop.SI = 30*lbfN, 200*lbfN, 4.6
	stuck := exampleProfile(t)
	stuck.Tensioners[0].Rehearsal.FrictionConstant.SI = 900 * lbfN
	for name, c := range map[string]Config{
		"light": {Profile: light, Tensioner: "T-1", Band: "QN-17"},
		"stuck": {Profile: stuck, Tensioner: "T-1", Band: "QM-2"},
	} {
		c.Drive = Drive{Exercise: -1, Ramps: 1, RestS: -1}
		r, trace := mustTrace(t, c)
		for _, part := range []float64{0.4, 0.7, 1} {
			stress := part * r.conf.band.Target.SI
			up, down := crossings(trace, r.Truth().PullN(stress), true), crossings(trace, r.Truth().PullN(stress), false)
			if len(up) != 1 || len(down) > 1 {
				t.Fatalf("%s: %.0f MPa crossed %d times rising, %d falling", name, stress/1e6, len(up), len(down))
			}
			near(t, name+", rising", up[0], r.Truth().RisingPa(stress), 0.003*up[0])
			if len(down) == 1 {
				near(t, name+", falling", down[0], r.Truth().FallingPa(stress), 0.003*down[0])
			}
		}
		if slack := trace[len(trace)-1].PullN == 0; slack != (r.Truth().LiftFallingPa() > 0) {
			t.Errorf("%s: falling slack lift %.0f psi, band slack at the end: %t", name, r.Truth().LiftFallingPa()/psiPa, slack)
		}
	}
}

func TestBandWithoutTargetIsDrivenByTheLimit(t *testing.T) {
	c := Config{Profile: exampleProfile(t), Tensioner: "T-1", Band: "QW-6"}
	c.Profile.Bands[0].Target = mill.Pressure{}
	d := mustNew(t, c).conf.Drive
	if d.TopPa >= 950*psiPa || d.TopPa < 800*psiPa || d.ExercisePa >= d.TopPa || d.ExercisePa < 200*psiPa {
		t.Errorf("top %.0f psi, exercise %.0f psi", d.TopPa/psiPa, d.ExercisePa/psiPa)
	}
}

// Reference mechanics: 1000 psi on a 4 in bore pushes 12566.3706143592 lbf;
// 10,000 psi in 6 x 0.049 in pulls 5880 lbf with both spans (computed from the
// definitions).
func TestForcesFollowFromAreas(t *testing.T) {
	const lbfN = 4.4482216152605
	p := exampleProfile(t)
	p.Tensioners[0].Cylinders, p.Tensioners[0].Bore.SI = 1, 4*inchM
	p.Bands[0].Thickness.SI, p.Bands[0].NetWidth.SI = 0.049*inchM, 6*inchM
	r := mustNew(t, Config{Profile: p, Tensioner: "T-1", Band: "QW-6"})
	near(t, "cylinder, lbf", r.Truth().AreaM2*1000*psiPa/lbfN, 12566.3706143592, 1e-7)
	near(t, "band, lbf", r.Truth().PullN(10000*psiPa)/lbfN, 5880, 1e-8)
}

func TestRigRefusesWhatItCannotBe(t *testing.T) {
	noTable := exampleProfile(t)
	noTable.Tensioners[0].Rehearsal = nil
	noLoop := exampleProfile(t)
	noLoop.Tensioners[0].Rehearsal.BandLoop.SI = 0
	thin := exampleProfile(t)
	thin.Bands[0].Thickness.SI = 0
	noLead := exampleProfile(t)
	noLead.Tensioners[1].Screw, noLead.Tensioners[1].Turns = nil, nil
	noTarget := exampleProfile(t)
	noTarget.Bands[2].Target = mill.Pressure{}
	good := exampleProfile(t)
	base := Config{Profile: good, Tensioner: "T-1", Band: "QW-6"}
	with := func(edit func(*Config)) Config {
		c := base
		edit(&c)
		return c
	}
	for name, c := range map[string]struct {
		config Config
		want   error
		says   string
	}{
		"no profile":       {Config{}, ErrConfig, "no profile"},
		"no lead":          {with(func(c *Config) { c.Profile, c.Tensioner, c.Band = noLead, "T-2", "QN-17" }), ErrConfig, "lead of the screw"},
		"no target":        {with(func(c *Config) { c.Profile, c.Tensioner, c.Band = noTarget, "T-2", "QN-17" }), ErrConfig, "target"},
		"over the torque":  {with(func(c *Config) { c.Tensioner, c.Band, c.Drive.TopSI = "T-2", "QN-17", 60 }), ErrOverLimit, "limit"},
		"unknown name":     {with(func(c *Config) { c.Tensioner = "T-9" }), mill.ErrUnknownName, "T-9"},
		"unknown band":     {with(func(c *Config) { c.Band = "QZ" }), mill.ErrUnknownName, "QZ"},
		"no table":         {Config{Profile: noTable, Tensioner: "T-1", Band: "QW-6"}, ErrNotRehearsable, "[tensioner.rehearsal]"},
		"no loop":          {Config{Profile: noLoop, Tensioner: "T-1", Band: "QW-6"}, ErrConfig, "length of the band"},
		"no thickness":     {Config{Profile: thin, Tensioner: "T-1", Band: "QW-6"}, ErrConfig, "net section"},
		"over the limit":   {with(func(c *Config) { c.Drive.TopPa = 951 * psiPa }), ErrOverLimit, "limit"},
		"top below low":    {with(func(c *Config) { c.Drive.TopPa = 10 * psiPa }), ErrConfig, "drive"},
		"bad shape":        {with(func(c *Config) { c.Drive.Shape = "zigzag" }), ErrConfig, "zigzag"},
		"bad sag":          {with(func(c *Config) { c.Drive.Shape, c.Drive.SagPart = Strokes, 0.9 }), ErrConfig, "hand pump"},
		"bad law":          {with(func(c *Config) { c.Law.Kind = "glue" }), ErrConfig, "glue"},
		"three boards":     {with(func(c *Config) { c.Boards = make([]BoardSpec, 3) }), ErrConfig, "3 boards"},
		"bad ticks":        {with(func(c *Config) { c.Boards = []BoardSpec{{TickHz: 2_000_000}} }), ErrConfig, "ticks"},
		"bad unit":         {with(func(c *Config) { c.Pressure.Count = Count{"furlong", 1, 0} }), ErrConfig, "pressure"},
		"too fast":         {with(func(c *Config) { c.Pressure.PerSecond = 5000 }), ErrConfig, "samples a second"},
		"too much load":    {with(func(c *Config) { c.Load = 5000 }), ErrConfig, "load"},
		"button elsewhere": {with(func(c *Config) { c.Presses = []Press{{Board: 1}} }), ErrConfig, "press"},
	} {
		_, err := New(c.config)
		if !errors.Is(err, c.want) || !strings.Contains(err.Error(), c.says) {
			t.Errorf("%s: got %v, want %v saying %q", name, err, c.want, c.says)
		}
	}
}
