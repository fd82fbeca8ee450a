package mill

import (
	"errors"
	"fmt"
	"strconv"
	"strings"

	"github.com/BurntSushi/toml"
)

// largestFile is far beyond any profile, and keeps what is no profile at all
// from being taken apart.
const largestFile = 256 << 10

// Parse reads a mill.toml. The error joins one *ProfileError for each fault, in
// line order.
func Parse(text []byte) (*Profile, error) {
	if len(text) > largestFile {
		return nil, &ProfileError{Problem: fmt.Sprintf("%d bytes is too long for a mill.toml", len(text)), Hint: "is it the right file?"}
	}
	root := map[string]any{}
	if _, err := toml.Decode(string(text), &root); err != nil {
		return nil, syntaxFault(err)
	}
	f := &faults{lines: keyLines(strings.TrimPrefix(string(text), "\ufeff"))}
	p := readProfile(&table{faults: f, values: root})
	checkNames(f, p)
	if err := f.err(); err != nil {
		return nil, err
	}
	return p, nil
}

// syntaxFault puts an error of the decoder into our own terms.
func syntaxFault(err error) error {
	bad := &ProfileError{Problem: err.Error(), Hint: "this is not TOML: compare with the written example"}
	var syntax toml.ParseError
	if errors.As(err, &syntax) {
		bad.Line, bad.Key, bad.Problem = syntax.Position.Line, syntax.LastKey, syntax.Message
	}
	return bad
}

func readProfile(t *table) *Profile {
	p := &Profile{}
	if m, ok := t.one("mill"); ok {
		p.Mill = readMill(m)
	}
	for _, e := range t.list("tensioner") {
		p.Tensioners = append(p.Tensioners, readTensioner(e))
	}
	for _, e := range t.list("band") {
		p.Bands = append(p.Bands, readBand(e))
	}
	if r, ok := t.one("rig"); ok {
		p.Rig = readRig(r)
	}
	for _, e := range t.list("instrument") {
		p.Instruments = append(p.Instruments, readInstrument(e))
	}
	t.needTable("mill", "write [mill] with its name")
	t.needTable("tensioner", "write at least one [[tensioner]]")
	t.needTable("band", "write at least one [[band]]")
	t.needTable("rig", "write [rig] with its gauge_length")
	t.rest()
	return p
}

func readMill(t *table) Mill {
	defer t.rest()
	return Mill{
		Name:       t.need("name", "write the name of the mill"),
		ServicedBy: t.text("serviced_by"),
	}
}

func readTensioner(t *table) Tensioner {
	defer t.rest()
	s := Tensioner{
		Name:  t.need("name", "write the name on its plate or card"),
		SetBy: oneOf(t, "set_by", SetByPressure, SetByTorque, SetByTurns, SetBySpring),
	}
	if !t.has("set_by") {
		t.faults.add(t.at("set_by"), "write pressure, torque, turns or spring", missing)
	}
	s.SettingLimit = Setting{t.settingLimit(s)}
	s.Cylinders = t.whole("cylinders", 1, 100)
	s.Bore = Length{t.quantity("bore", DimLength)}
	s.TravelRatio = t.number("travel_ratio", 0.001, 1000)
	s.LiftedWeight = Force{t.orZero("lifted_weight", DimForce)}
	s.Hold = oneOf(t, "hold", HoldMaintained, HoldLocked)
	s.Note = t.text("note")
	if r, ok := t.one("rehearsal"); ok {
		s.Rehearsal = readRehearsal(r)
	}
	t.checkHydraulic(s)
	return s
}

// settingLimit takes the limit, in whatever the tensioner is set by.
func (t *table) settingLimit(s Tensioner) Quantity {
	const hint = "write the maker's limit for this setting, or a lower one; nothing is measured without it"
	if s.SetBy == "" { // already refused: any dimension will do
		return t.needQuantity("setting_limit", hint)
	}
	return t.needQuantity("setting_limit", hint, s.SettingDim())
}

// checkHydraulic refuses half a cylinder, and cylinders where none can be.
func (t *table) checkHydraulic(s Tensioner) {
	if s.SetBy != SetByPressure && s.SetBy != "" {
		for _, key := range []string{"cylinders", "bore", "hold"} {
			if t.has(key) {
				t.faults.add(t.at(key), "take the line out, or write set_by = \"pressure\"",
					"belongs to a tensioner set by pressure, this one is set by %s", s.SetBy)
			}
		}
		return
	}
	if t.has("cylinders") != t.has("bore") {
		t.faults.add(t.path, "write both cylinders and bore, or neither", "cylinders and bore go together")
	}
}

func readRehearsal(t *table) *Rehearsal {
	defer t.rest()
	return &Rehearsal{
		FrictionConstant:     Force{t.orZero("friction_constant", DimForce)},
		FrictionProportional: t.number("friction_proportional", 0, 0.9),
		Weight:               Force{t.orZero("weight", DimForce)},
		BandLoop:             Length{t.quantity("band_loop", DimLength)},
	}
}

func readBand(t *table) Band {
	defer t.rest()
	b := Band{
		Name:       t.need("name", "write the name of the band section"),
		Thickness:  Length{t.needQuantity("thickness", "measure it at 3 places", DimLength)},
		NetWidth:   Length{t.needQuantity("net_width", "measure from the back to the gullet bottom at 3 places", DimLength)},
		GrossWidth: Length{t.quantity("gross_width", DimLength)},
		Target:     Pressure{t.quantity("target", DimPressure)},
		Modulus:    Pressure{t.needQuantity("modulus", `write Young's modulus of the band steel, such as "29.0 Mpsi" or "200 GPa"`, DimPressure)},
		ModulusStd: t.number("modulus_uncertainty", 0, 0.5),
		Note:       t.text("note"),
	}
	if b.GrossWidth.Given() && b.NetWidth.SI >= b.GrossWidth.SI {
		t.faults.add(t.at("net_width"), "net width runs from the back to the gullet bottom, gross width to the tooth tip",
			"%s is not less than the gross width %s", b.NetWidth, b.GrossWidth)
	}
	if b.NetWidth.Given() && b.Thickness.SI >= b.NetWidth.SI {
		t.faults.add(t.at("thickness"), "check that the units are not mixed up",
			"%s is not less than the net width %s", b.Thickness, b.NetWidth)
	}
	return b
}

func readRig(t *table) Rig {
	defer t.rest()
	r := Rig{
		GaugeLength:    Length{t.needQuantity("gauge_length", "measure it between the knife edges of the clamps", DimLength)},
		GaugeLengthStd: Length{t.quantity("gauge_length_uncertainty", DimLength)},
		Material:       t.text("material"),
		Faces:          t.whole("faces", 1, 2),
		Note:           t.text("note"),
	}
	if r.GaugeLength.Given() && r.GaugeLengthStd.SI >= r.GaugeLength.SI/2 {
		t.faults.add(t.at("gauge_length_uncertainty"), "it is the doubt about the gauge length, commonly under 1 %",
			"%s is too much for a gauge length of %s", r.GaugeLengthStd, r.GaugeLength)
	}
	return r
}

func readInstrument(t *table) Instrument {
	defer t.rest()
	i := Instrument{
		Name:     t.need("name", "write what it is called in the shop"),
		Serial:   t.text("serial"),
		Measures: oneOf(t, "measures", MeasuresSetting, MeasuresExtension),
	}
	if !t.has("measures") {
		t.faults.add(t.at("measures"), "write setting or extension", missing)
	}
	dims := []Dim{DimLength}
	if i.Measures != MeasuresExtension {
		dims = []Dim{DimPressure, DimTorque, DimAngle, DimLength}
	}
	i.Limit = Setting{t.quantity("limit", dims...)}
	i.Due = t.date("due")
	return i
}

// checkNames refuses a name that stands twice in its list.
func checkNames(f *faults, p *Profile) {
	seen := map[string]bool{}
	check := func(list string, i int, name string) {
		if name != "" && seen[list+name] {
			f.add(join(join(list, strconv.Itoa(i)), "name"), "give each its own name", "%q stands twice", name)
		}
		seen[list+name] = true
	}
	for i, e := range p.Tensioners {
		check("tensioner", i, e.Name)
	}
	for i, e := range p.Bands {
		check("band", i, e.Name)
	}
	for i, e := range p.Instruments {
		check("instrument", i, e.Name)
	}
}
