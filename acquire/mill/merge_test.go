package mill

import (
	"reflect"
	"strings"
	"testing"
)

const transducerRecord = `
[[instrument]]
name = "pressure transducer"
serial = "QF-P-1107"
measures = "setting"
limit = "3.75 psi"
due = "2027-09-01"

[instrument.bench]
checked = "2026-09-01"
verdict = "pass"

[[instrument.bench.point]]
at = "0 psi"
rising = "0 psi"
uncertainty = "0.4 psi"

[[instrument.bench.point]]
at = "1500 psi"
rising = "-15 psi"
falling = "-16 psi"
uncertainty = "0.6 psi"
`

func TestARecordTakesThePlaceOfItsInstrumentAndOfNothingElse(t *testing.T) {
	merged, names, err := MergeInstruments(Example(), []byte(transducerRecord))
	if err != nil {
		t.Fatal(err)
	}
	if len(names) != 1 || names[0] != "pressure transducer" {
		t.Error(names)
	}
	before, _ := Parse(Example())
	after, err := Parse(merged)
	if err != nil {
		t.Fatal(err)
	}
	i, ok := after.FindInstrument(MeasuresSetting, DimPressure, "QF-P-1107")
	if !ok || i.Due != "2027-09-01" || len(i.Bench.Points) != 2 {
		t.Errorf("%+v", i)
	}
	if len(after.Instruments) != len(before.Instruments) {
		t.Errorf("%d instruments, were %d", len(after.Instruments), len(before.Instruments))
	}
	before.Instruments, after.Instruments = nil, nil
	if !reflect.DeepEqual(before, after) {
		t.Error("something else changed")
	}
	if !strings.Contains(string(merged), "# One [[gauge_limit]] for each limit") || !strings.Contains(string(merged), "\n[[gauge_limit]]") {
		t.Error("remarks are lost")
	}
	again, _, err := MergeInstruments(merged, []byte(transducerRecord))
	if err != nil || string(again) != string(merged) {
		t.Errorf("merged twice it differs: %v\n%s", err, again)
	}
}

func TestARecordOfAnUnknownInstrumentIsAdded(t *testing.T) {
	other := strings.Replace(strings.Replace(transducerRecord, "QF-P-1107", "QF-P-9", 1), "pressure transducer", "spare", 1)
	merged, _, err := MergeInstruments(Example(), []byte(other))
	if err != nil {
		t.Fatal(err)
	}
	before, _ := Parse(Example())
	after, _ := Parse(merged)
	if len(after.Instruments) != len(before.Instruments)+1 {
		t.Error(len(after.Instruments))
	}
	same := strings.Replace(transducerRecord, "QF-P-1107", "QF-P-9", 1)
	if _, _, err := MergeInstruments(Example(), []byte(same)); err == nil || !strings.Contains(err.Error(), "stands twice") {
		t.Errorf("two instruments of one name: %v", err)
	}
}

func TestRemarksBehindAReplacedInstrumentStay(t *testing.T) {
	head := strings.Replace(transducerRecord, "QF-P-1107", "QF-M-0102", 1)
	head = strings.ReplaceAll(strings.Replace(head, "pressure transducer", "micrometer head", 1), " psi", " mm")
	merged, _, err := MergeInstruments(Example(), []byte(head))
	if err != nil {
		t.Fatal(err)
	}
	if !strings.Contains(string(merged), "# One [[gauge_limit]] for each limit") {
		t.Errorf("the remarks before the next table went with the last instrument:\n%s", merged)
	}
}

func TestInstrumentsComeBackFromTheirText(t *testing.T) {
	p, _ := Parse(Example())
	again, err := ParseInstruments(EncodeInstruments(p.Instruments))
	if err != nil || !reflect.DeepEqual(again, p.Instruments) {
		t.Errorf("%v\n%+v\n%+v", err, again, p.Instruments)
	}
	for _, text := range []string{"", "[mill]\nname = \"x\"", "instrument = 3"} {
		if _, err := ParseInstruments([]byte(text)); err == nil {
			t.Errorf("%q is an instrument record", text)
		}
	}
}
