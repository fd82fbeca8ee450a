package mill

import (
	"fmt"
	"strconv"
	"strings"

	"github.com/BurntSushi/toml"
)

// largestFile is far beyond any profile, and keeps what is no profile at all
// from being taken apart.
const largestFile = 256 << 10

// Parse reads a mill.toml. The error joins one *ProfileError for each fault, in
// line order, and after them one for each measure that can be read and is more
// often a slip: otherwise one fault would hide it until the next try.
func Parse(text []byte) (*Profile, error) {
	t, err := readTable(text, "mill.toml")
	if err != nil {
		return nil, err
	}
	f := t.faults
	p := readProfile(t)
	checkNames(f, p)
	if len(f.found) == 0 {
		return p, nil
	}
	for _, doubt := range p.doubts() {
		f.found = append(f.found, &ProfileError{Problem: "look again too: " + doubt})
	}
	return nil, f.err()
}

// readTable is the top table of a text; what names its kind for a message.
func readTable(text []byte, what string) (*table, error) {
	if len(text) > largestFile {
		return nil, &ProfileError{Problem: fmt.Sprintf("%d bytes is too long for a %s", len(text), what), Hint: "is it the right file?"}
	}
	root := map[string]any{}
	if _, err := toml.Decode(string(text), &root); err != nil {
		return nil, syntaxFault(string(text), err)
	}
	return &table{faults: &faults{lines: keyLines(strings.TrimPrefix(string(text), "\ufeff"))}, values: root}, nil
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
	for _, e := range t.list("gauge_limit") {
		p.GaugeLimits = append(p.GaugeLimits, readGaugeLimit(e))
	}
	if m, ok := t.one("thresholds"); ok {
		p.OwnThresholds = readThresholds(m)
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
	s.OffLoadDrag = Pressure{t.quantity("off_load_drag", DimPressure)}
	s.OilVolume = Volume{t.quantity("oil_volume", DimVolume)}
	t.readDrivetrain(&s)
	s.Note = t.text("note")
	if d, ok := t.one("dial"); ok {
		s.Dial = readDialFace(d, s)
	}
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
		for _, key := range []string{"cylinders", "bore", "hold", "oil_volume"} {
			if t.has(key) {
				t.faults.add(t.at(key), "take the line out, or write set_by = \"pressure\"",
					"belongs to a tensioner set by pressure, this one is set by %s", s.SetBy)
			}
		}
		return
	}
	switch cylinders, bore := t.has("cylinders"), t.has("bore"); {
	case bore && !cylinders:
		t.faults.add(t.at("bore"), "write how many cylinders lift the wheel together, such as cylinders = 2", "of how many cylinders?")
	case cylinders && !bore:
		t.faults.add(t.at("cylinders"), `write the inside diameter of one of them, such as bore = "2.5 in"`, "of what bore?")
	}
}

func readRehearsal(t *table) *Rehearsal {
	defer t.rest()
	return &Rehearsal{
		FrictionConstant:     Force{t.orZero("friction_constant", DimForce)},
		FrictionProportional: t.number("friction_proportional", 0, 0.9),
		Weight:               Force{t.orZero("weight", DimForce)},
		BandLoop:             Length{t.quantity("band_loop", DimLength)},
		FrictionThread:       t.number("friction_thread", 0, 0.9),
		FrictionCollar:       t.number("friction_collar", 0, 0.9),
		RestTorque:           Torque{t.orZero("rest_torque", DimTorque)},
		Play:                 Angle{t.orZero("play", DimAngle)},
		GiveStiffness:        Stiffness{t.quantity("give_stiffness", DimStiffness)},
		SpringRate:           Stiffness{t.quantity("spring_rate", DimStiffness)},
		SpringFree:           Length{t.quantity("spring_free", DimLength)},
		SpringBind:           Length{t.quantity("spring_bind", DimLength)},
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
		Loop:       Length{t.quantity("loop", DimLength)},
		Note:       t.text("note"),
	}
	if b.GrossWidth.Given() && b.NetWidth.SI >= b.GrossWidth.SI {
		t.faults.add(t.at("net_width"), "net width runs from the back to the gullet bottom, gross width to the tooth tip",
			"%s is not less than the gross width %s", b.NetWidth, b.GrossWidth)
	}
	switch {
	case b.NetWidth.Given() && b.Thickness.SI >= b.NetWidth.SI:
		t.faults.add(t.at("thickness"), "check that the units are not mixed up",
			"%s is not less than the net width %s", b.Thickness, b.NetWidth)
	case b.Thickness.SI > mostThickM:
		t.faults.add(t.at("thickness"), "check that the units are not mixed up", "%s is no band: above 1 in (25.4 mm)", b.Thickness)
	}
	if m := b.Modulus; m.Given() && (m.SI < leastModulusPa || m.SI > mostModulusPa) {
		t.faults.add(t.at("modulus"), "Young's modulus of steel is 200 to 207 GPa, 29 to 30 Mpsi", "%s is no steel's: outside 100 to 300 GPa (14.5 to 43.5 Mpsi)", m)
	}
	if b.Target.SI > mostTargetPa {
		t.faults.add(t.at("target"), "write the band stress wanted, not a pressure of the gauge or a wheel pull", "%s would break any band: above 150,000 psi (1,034 MPa)", b.Target)
	}
	return b
}

// Beyond these a measure of a band is refused: what is there can only be a slip
// of the pen. Judgement: the thickest bands are near 0.1 in, steels for springs
// and saws lie within 5 % of 205 GPa, and none carries 150,000 psi for long.
const (
	mostThickM     = 1 * inchM
	leastModulusPa = 100e9
	mostModulusPa  = 300e9
	mostTargetPa   = 150e3 * psiPa
)

func readRig(t *table) Rig {
	defer t.rest()
	r := Rig{
		GaugeLength:    Length{t.needQuantity("gauge_length", "measure it between the knife edges of the clamps", DimLength)},
		GaugeLengthStd: Length{t.quantity("gauge_length_uncertainty", DimLength)},
		Material:       t.text("material"),
		Faces:          t.whole("faces", 1, 2),
		WarmthLimit:    Warmth{t.orZero("temperature_difference", DimWarmth)},
		Misalignment:   Angle{t.orZero("misalignment", DimAngle)},
		Curl:           Length{t.orZero("curl", DimLength)},
		Note:           t.text("note"),
	}
	if r.GaugeLength.Given() && r.GaugeLengthStd.SI >= r.GaugeLength.SI/2 {
		t.faults.add(t.at("gauge_length_uncertainty"), "it is the doubt about the gauge length, commonly under 1 %",
			"%s is too much for a gauge length of %s", r.GaugeLengthStd, r.GaugeLength)
	}
	return r
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
	for i, e := range p.GaugeLimits {
		check("gauge_limit", i, e.Name)
	}
}
