package report

import (
	"strings"
	"testing"

	"tautramp/acquire/mill"
	"tautramp/analyze"
)

func TestCardWarnsOfInstruments(t *testing.T) {
	text, err := cardOfT1(t, t1(t), CardOrder{Direction: analyze.Rising}, mill.US)
	if err != nil || !strings.Contains(text, "Instruments not corrected on the bench.") {
		t.Errorf("%v", err)
	}
}
