package findings

import (
	"math"

	"tautramp/analyze/estimate"
)

// FeatureKey names a feature; stable, for machines.
type FeatureKey string

// Measure is how a feature's number is to be read.
type Measure string

// The measures.
const (
	Share        Measure = "share"            // of what the name says
	OfSetting    Measure = "share of setting" // of OfSI, a setting
	OfStretch    Measure = "share of stretch" // of OfSI, m
	Times        Measure = "times"            // a ratio
	Count        Measure = "count"
	PerMinute    Measure = "share a minute"
	MetresMinute Measure = "m a minute"
	PerSecond    Measure = "share a second"
	Seconds      Measure = "s"
)

// Feature is one figure computed from the recording.
type Feature struct {
	Key  FeatureKey
	Name string
	In   Measure
	Is   estimate.Estimate // unknown says why
	OfSI float64           // what a share is of, where Measure says so
}

// The features.
const (
	fHalf         FeatureKey = "half_width"
	fConstant     FeatureKey = "half_width_constant"
	fProportional FeatureKey = "half_width_proportional"
	fOffLoad      FeatureKey = "off_load_share"
	fThirdJump    FeatureKey = "third_jump"
	fJumpNoise    FeatureKey = "third_jump_noise"
	fPlay         FeatureKey = "reversal_beyond_friction"
	fToe          FeatureKey = "toe_end"
	fTopSlope     FeatureKey = "top_slope"
	fTopSpan      FeatureKey = "top_span"
	fBind         FeatureKey = "upper_over_lower_slope"
	fSoft         FeatureKey = "low_strokes"
	fHoldSetting  FeatureKey = "hold_setting_loss"
	fHoldRise     FeatureKey = "hold_setting_rise"
	fHoldStretch  FeatureKey = "hold_stretch_loss"
	fHoldBeyond   FeatureKey = "hold_loss_beyond_warmth"
	fHoldFreed    FeatureKey = "hold_reversals"
	fHoldFollow   FeatureKey = "hold_stretch_follows"
	fHoldCreeps   FeatureKey = "hold_slows_down"
	fCollapse     FeatureKey = "stroke_fall"
	fCollapseRate FeatureKey = "stroke_fall_rate"
	fDipFollow    FeatureKey = "stroke_stretch_follows"
	fMountCreep   FeatureKey = "stretch_creep"
	fSlip         FeatureKey = "stretch_step"
	fSlipCounts   FeatureKey = "stretch_step_counts"
	fSlipAlone    FeatureKey = "stretch_step_alone"
	fVent         FeatureKey = "vented_reading"
	fWeight       FeatureKey = "weight_off"
	fSticky       FeatureKey = "gauge_sticks"
	fCurve        FeatureKey = "gauge_curve"
	fWarmLink     FeatureKey = "warmth_link"
	fWarmPerK     FeatureKey = "warmth_per_degree"
	fWarmShift    FeatureKey = "warmth_shift"
	fGaugeSpan    FeatureKey = "gauge_span"
	fSpans        FeatureKey = "spans_differ"
	fFirst        FeatureKey = "first_ramp"
	fArea         FeatureKey = "area_off"
	fLag          FeatureKey = "lag"
	fLagWidth     FeatureKey = "lag_width"
	fSaturated    FeatureKey = "saturated"
	fFlatTop      FeatureKey = "flat_top"
	fScrew        FeatureKey = "screw_efficiency"
	fIdle         FeatureKey = "turn_lost_idle"
	fBound        FeatureKey = "springs_solid"
	fGive         FeatureKey = "give_of_expected"
	fRamps        FeatureKey = "ramps"
	fFast         FeatureKey = "rate"
	fRagged       FeatureKey = "largest_fall"
)

// features is how each is computed, in the order of the report.
func features() []struct {
	key  FeatureKey
	name string
	in   Measure
	of   func(*data) estimate.Estimate
} {
	type row = struct {
		key  FeatureKey
		name string
		in   Measure
		of   func(*data) estimate.Estimate
	}
	return []row{
		{fHalf, "half-width of the loop at the working setting", OfSetting, (*data).half},
		{fConstant, "constant part of the half-width", OfSetting, (*data).constant},
		{fProportional, "part that grows with the load", Share, (*data).proportional},
		{fOffLoad, "drag of the cylinders off load, of the constant part", Share, (*data).offLoad},
		{fThirdJump, "third largest jump of the stretch on a branch", OfStretch, (*data).thirdJump},
		{fJumpNoise, "the same jump, in noise", Times, (*data).jumpNoise},
		{fPlay, "reversal beyond twice the half-width", OfSetting, (*data).play},
		{fToe, "band stress up to which the rising line is not straight, of the target", Share, (*data).toe},
		{fTopSlope, "slope at the top, of the slope below", Share, (*data).topSlope},
		{fTopSpan, "range of setting at the top over which that holds", OfSetting, (*data).topSpan},
		{fBind, "slope of the upper third, of the slope of the lower third", Times, (*data).bind},
		{fSoft, "time for the setting to reach the slack lift, of what the ramp's pace takes", Times, (*data).soft},
		{fHoldSetting, "loss of setting in the hold", PerMinute, (*data).holdSetting},
		{fHoldRise, "rise of setting in the hold", PerMinute, (*data).holdRise},
		{fHoldStretch, "loss of stretch in the hold", PerMinute, (*data).holdStretch},
		{fHoldBeyond, "the same loss, less what a band that warms would make", PerMinute, (*data).holdBeyond},
		{fHoldFreed, "loss of setting in the hold, of the width that friction locks", Times, (*data).holdFreed},
		{fHoldFollow, "stretch lost, of what the loss of setting beyond friction asks for", Share, (*data).holdFollow},
		{fHoldCreeps, "loss that slows down as creep does (1) or runs on as a leak does (0)", Count, (*data).holdCreeps},
		{fCollapse, "dips of the setting that come back, of the width that friction locks", Times, (*data).collapse},
		{fCollapseRate, "pace of those dips", PerSecond, (*data).collapseRate},
		{fDipFollow, "stretch that goes with those dips, of what they ask for beyond friction", Share, (*data).dipFollow},
		{fMountCreep, "drift of the stretch while the setting holds", MetresMinute, (*data).mountCreep},
		{fSlip, "largest lasting step of the stretch", OfStretch, (*data).slip},
		{fSlipCounts, "the same step, in counts", Times, (*data).slipCounts},
		{fSlipAlone, "the same step, of the next largest", Times, (*data).slipAlone},
		{fVent, "reading of the vented gauge", OfSetting, (*data).vent},
		{fWeight, "lifted weight that the loop gives, off the profile's, as setting", OfSetting, (*data).weight},
		{fSticky, "difference of the gauge between rising and falling on the bench, of its span", Share, (*data).sticky},
		{fCurve, "bend of the gauge's error on the bench, of its span", Share, (*data).curve},
		{fGaugeSpan, "error of the gauge's span on the bench", Share, (*data).gaugeSpan},
		{fWarmLink, "correlation of the drift with the temperature", Count, (*data).warmLink},
		{fWarmPerK, "drift for each degree, over that of a steel bar", Times, (*data).warmCoefficient},
		{fWarmShift, "drift of the stretch with the temperature", OfStretch, (*data).warmShift},
		{fSpans, "difference of the slopes of the two spans", Share, (*data).spans},
		{fFirst, "slope of the later ramps beyond the first one's", Share, (*data).first},
		{fArea, "area that works, off what bore, cylinders and ratio give", Share, (*data).area},
		{fLag, "lag of the stretch behind the setting", Seconds, (*data).lag},
		{fLagWidth, "half-width that the lag pretends", OfSetting, (*data).lagWidth},
		{fSaturated, "readings at the end of an instrument's range", Count, (*data).saturated},
		{fFlatTop, "rise of the stretch while the setting reads the same", OfStretch, (*data).flatTop},
		{fScrew, "efficiency of the screw, of what its thread gives at its usual friction", Share, (*data).screw},
		{fIdle, "turn lost between rising and falling with no pull", OfSetting, (*data).idleTurn},
		{fBound, "range of setting above the knee at which the springs go solid", OfSetting, (*data).bound},
		{fGive, "stiffness of what gives beside the band, of the profile's", Share, (*data).give},
		{fRamps, "ramps up and down again", Count, (*data).ramps},
		{fFast, "rate of the fastest ramp, of its top", PerSecond, (*data).fast},
		{fRagged, "largest fall of setting within a rise, of the width that friction locks", Times, (*data).ragged},
	}
}

// measure computes every feature once.
func measure(d *data) []Feature {
	var all []Feature
	for _, row := range features() {
		f := Feature{Key: row.key, Name: row.name, In: row.in, Is: row.of(d)}
		switch row.in {
		case OfSetting:
			f.OfSI = d.workingSI
		case OfStretch:
			f.OfSI = d.workingM
		}
		if f.Is.Known() && (math.IsNaN(f.Is.Value) || math.IsInf(f.Is.Value, 0) || math.IsNaN(f.Is.Std())) {
			f.Is = estimate.Unknown("not a finite number")
		}
		all = append(all, f)
	}
	return all
}

func index(list []Feature) map[FeatureKey]Feature {
	m := make(map[FeatureKey]Feature, len(list))
	for _, f := range list {
		m[f.Key] = f
	}
	return m
}

// size is the absolute value of an estimate.
func size(e estimate.Estimate) estimate.Estimate {
	e.Value = math.Abs(e.Value)
	return e
}
