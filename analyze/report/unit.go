package report

import (
	"tautramp/acquire/mill"
)

// unit is a display unit with the words around it. Name is for headings and
// paper: gauge pressure and band stress never share one.
type unit struct {
	name   string // "gauge psi", "band MPa", "lbf", "%"; "" for a bare number
	factor float64
}

// show converts an SI value.
func (u unit) show(si float64) float64 { return si / u.factor }

// with puts the unit behind a number.
func (u unit) with(number string) string {
	if u.name == "" {
		return number
	}
	return number + " " + u.name
}

// units are the display units of one report.
type units struct {
	setting   unit // of the tensioner's setting
	stress    unit // of the band
	extension unit // stretch over the gauge length
	section   unit // thickness, width, gauge length
	area      unit
	force     unit
	settingIs setBy
}

// unitsFor chooses the units for a tensioner in a system.
func unitsFor(t mill.Tensioner, s mill.System) units {
	by := setByOf(t.SetBy)
	if t.FallsWithLoad() {
		by.noun, by.suffix = "how much shorter the spring is than without a load", " shorter"
	}
	section, setting := s.Unit(mill.RoleSection), s.Unit(t.SettingRole())
	if setting.SI == 0 { // a kind of setting that has no display unit
		setting.Name, setting.SI = by.siUnit, 1
	}
	return units{
		setting:   unit{by.prefix + setting.Name + by.suffix, setting.SI},
		stress:    unit{"band " + s.Unit(mill.RoleStress).Name, s.Unit(mill.RoleStress).SI},
		extension: unit{s.Unit(mill.RoleExtension).Name, s.Unit(mill.RoleExtension).SI},
		section:   unit{section.Name, section.SI},
		area:      unit{section.Name + "2", section.SI * section.SI},
		force:     unit{s.Unit(mill.RoleForce).Name, s.Unit(mill.RoleForce).SI},
		settingIs: by,
	}
}

// SettingName, StressName and SettingNoun are for the page.
func (u units) SettingName() string { return u.setting.name }
func (u units) StressName() string  { return u.stress.name }
func (u units) SettingNoun() string { return u.settingIs.noun }

func percent() unit { return unit{"%", 0.01} }
func bare() unit    { return unit{"", 1} }

// setBy is how a kind of setting is called, and how its JSON members end.
type setBy struct {
	noun   string // "gauge pressure"
	prefix string // before the unit: "gauge "
	suffix string // behind it: the plural of turn
	member string // JSON: pa, n_m, rad, m
	siUnit string // JSON: Pa, N m, rad, m
}

// setByOf words a kind of setting. An unknown kind is called the setting and
// shown in SI.
func setByOf(s mill.SetBy) setBy {
	switch s {
	case mill.SetByPressure:
		return setBy{noun: "gauge pressure", prefix: "gauge ", member: "pa", siUnit: "Pa"}
	case mill.SetByTorque:
		return setBy{noun: "screw torque", member: "n_m", siUnit: "N m"}
	case mill.SetByTurns:
		return setBy{noun: "turns of the screw", suffix: "s", member: "rad", siUnit: "rad"}
	case mill.SetBySpring:
		return setBy{noun: "spring length", member: "m", siUnit: "m"}
	}
	return setBy{noun: "setting", member: "pa", siUnit: "Pa"}
}
