package analyze

import (
	"fmt"
	"math"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// Warning is something the reader must know beside the figures.
type Warning struct {
	Code string // stable word for machines
	Text string
}

func (w *work) warn(code, text string) {
	w.res.Warnings = append(w.res.Warnings, Warning{code, text})
}

const (
	// A ramp faster than this share of its top a second. Ramps of 1 to 5 minutes
	// are asked for. Judgement.
	fastShare = 0.02
	// An effective area further than this from geometry's. Judgement.
	areaOff = 0.05
	// A zero that moves by more counts than this within a cycle. Judgement.
	returnCounts = 3
)

// warnings says what the figures do not: what was assumed, missing, or out of
// the ordinary. Their order is fixed.
func (w *work) warnings() {
	for _, check := range []func(){
		w.warnVisit, w.warnRamps, w.warnInstruments, w.warnBench, w.warnZero, w.warnZeros, w.warnMarks, w.warnReturn, w.warnTarget, w.warnShape, w.warnStop, w.warnOutliers, w.warnSteps, w.warnPace, w.warnArea, w.warnWeight, w.warnPredicted,
	} {
		check()
	}
}

// warnVisit repeats what the operator was warned of at the time.
func (w *work) warnVisit() {
	for _, a := range w.set.Alarms {
		w.warn("alarm", fmt.Sprintf("Alarm during the visit at %.0f s: %s", a.T, a.Text))
	}
}

func (w *work) warnRamps() {
	switch n := len(w.ramps); n {
	case 1:
		w.warn("one-cycle", "One ramp only: how well the next setting repeats is not known. Ramp at least three times.")
	case 2:
		w.warn("two-cycles", "Two ramps only: the intervals are wide because two say little about the next. Ramp three times.")
	}
	for i, c := range w.res.Cycles {
		if c.Role == Incomplete {
			w.warn("incomplete-cycle", fmt.Sprintf("Cycle %d did not come down again and is not fitted.", i+1))
		}
	}
}

func (w *work) warnInstruments() {
	if w.setup.SettingStd == 0 {
		w.warn("no-setting-instrument", "The profile gives no limit of error for the instrument that shows the setting: its error is in no interval.")
	}
	if w.setup.ExtensionSd == 0 {
		w.warn("no-extension-instrument", "The profile gives no limit of error for the instrument that shows the stretch: its error is in no interval.")
	}
	for _, i := range w.setup.Overdue {
		w.warn("check-overdue", fmt.Sprintf("The check of %s was due %s, before this was measured: its error may be larger than the limit that the intervals rest on.", instrumentName(i), i.Due))
	}
	if w.setup.Rig.Faces < 2 {
		w.warn("one-face", "Stretch was measured on one face only: curl of the band shows as stretch, and takes up much of the doubt. Measure the other face too.")
	}
	if !w.set.Extension.CutKnown() {
		w.warn("display-unknown", "The stretch indicator does not say whether it rounds or cuts off its last digit: half a count is added to the doubt of the zero.")
	}
}

func instrumentName(i mill.Instrument) string {
	switch {
	case i.Name != "" && i.Serial != "":
		return i.Name + " (" + i.Serial + ")"
	case i.Name+i.Serial != "":
		return i.Name + i.Serial
	}
	return "the instrument that measures the " + i.Measures
}

func (w *work) warnZero() {
	if !w.zeroKnown() {
		w.warn("zero-unknown", "No band stress can be given, nor a setting for the target: "+w.noSlack()+".")
		return
	}
	for _, i := range w.fitted {
		if !w.lulls[i].level.Known() && !w.lulls[i+1].level.Known() && w.res.Cycles[i].ZeroFrom == slackBand {
			w.warn("zero-borrowed", fmt.Sprintf("The band was not slack before or after cycle %d: the zero of another cycle stands in.", i+1))
		}
	}
}

// noSlack says why the stretch of the slack band is not known, and what to do.
func (w *work) noSlack() string {
	worst := neverStill
	for _, l := range w.lulls {
		worst = max(worst, l.why)
	}
	switch worst {
	case countHides:
		return "the stretch stood still at the low end, but with so coarse a count of the indicator that cannot be told from friction holding the band. Mark the zero on the slack band (z in a capture), let the setting down further, or fit a finer indicator"
	case heldStill:
		return "the stretch stood still at the low end no longer than friction holds a loaded band. Let the setting down until the band is slack before and after each ramp, or mark the zero on the slack band (z in a capture)"
	}
	return "the stretch never stood still at the low end. Let the band go slack and rest before and after each ramp, or mark the zero on the slack band (z in a capture)"
}

// warnReturn tells of a mount that slipped or drifted.
func (w *work) warnReturn() {
	for _, i := range w.fitted {
		r := w.res.Cycles[i].ReturnM
		if r.Known() && math.Abs(r.Value) > returnCounts*w.setup.CountM+3*w.noiseM {
			w.warn("mount-moved", fmt.Sprintf("In cycle %d the stretch did not come back to where it began: the rig slipped, crept or warmed. Check the clamps and ramp again.", i+1))
		}
	}
}

func (w *work) warnTarget() {
	if w.setup.TargetPa <= 0 {
		w.warn("no-target", "No target is given: no setting is worked out for one.")
		return
	}
	if _, ok := w.res.TargetError().(*OutOfRangeError); ok {
		w.warn("target-out-of-range", "The target lies outside the captured range on one branch or both. One above it needs a longer ramp, never past the maker's limit; one below it lies where the band is still seating.")
	}
	if at := w.res.AtRising.SettingSI; w.setup.LimitSI > 0 && at.Known() && at.Value > w.setup.LimitSI {
		w.warn("target-over-limit", "The setting for the target lies above the tensioner's limit: do not set it.")
	}
}

func (w *work) warnShape() {
	for _, i := range w.fitted {
		c := w.res.Cycles[i]
		if c.Rising.Shape == estimate.Curved || c.Falling.Shape == estimate.Curved {
			w.warn("branch-curved", fmt.Sprintf("Cycle %d bends over its whole range: a straight line does not describe it.", i+1))
		}
		for k := c.First + 1; k <= c.Last; k++ {
			if w.set.Pairs[k].Part != w.set.Pairs[k-1].Part {
				w.warn("gap", fmt.Sprintf("Cycle %d has a gap in its readings.", i+1))
				break
			}
		}
	}
}

// warnStop tells of a branch that bends near its top.
func (w *work) warnStop() {
	for i, c := range w.res.Cycles {
		how := "less"
		if c.StopRatio > 1 {
			how = "more"
		}
		if !math.IsInf(c.StopSI, 1) {
			w.warn("branch-ends", fmt.Sprintf("Cycle %d: near the top the stretch follows the setting %s than before: the end of the travel, or a spring gone solid. That part is not fitted. Go no higher until the cause is found.", i+1, how))
		}
	}
}

func (w *work) warnPace() {
	for _, i := range w.fitted {
		c := w.res.Cycles[i]
		if w.meanRate(c) > fastShare*c.TopSI {
			w.warn("too-fast", fmt.Sprintf("Cycle %d was ramped faster than 2 %% of its top a second: lag between the instruments opens the loop.", i+1))
		}
	}
}

func (w *work) warnArea() {
	r := w.res.Friction.AreaRatio
	if !r.Known() {
		return
	}
	lo, hi := r.Interval95()
	if math.Abs(r.Value-1) > areaOff && (lo > 1 || hi < 1) {
		w.warn("area-off", fmt.Sprintf("The area that works is %.2f of what bore, cylinders and travel ratio give: check them, the gauge and the section. Band stress does not depend on them.", r.Value))
	}
}

// warnWeight compares the weight that the loop gives with the profile's: a
// wrong zero lands wholly in it.
func (w *work) warnWeight() {
	given, found := w.setup.Tensioner.LiftedWeight, w.res.Friction.WeightN
	if !given.Given() || !found.Known() {
		return
	}
	if lo, hi := found.Interval95(); given.SI < lo || given.SI > hi {
		w.warn("weight-off", fmt.Sprintf("The lifted weight that the loop gives is %.2f of the profile's: the zero may be off, or curl of the band shows as stretch. Measure the other face too.", found.Value/given.SI))
	}
}
