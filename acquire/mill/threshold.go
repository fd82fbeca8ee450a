package mill

import "math"

// ThresholdKey names one limit of the findings, as it stands in mill.toml.
type ThresholdKey string

// Status says where a threshold comes from.
type Status string

// The three kinds of threshold.
const (
	Judgement Status = "judgement" // a starting point, to be tuned on real mills
	Published Status = "published"
	Derived   Status = "derived" // follows from the physics or from other limits
)

// Threshold is one limit that a finding rests on.
type Threshold struct {
	Key    ThresholdKey
	Value  float64
	Unit   string // in words; "" for a plain share
	Status Status
	Says   string // what is found beyond it, and the source
}

// The thresholds. Shares are fractions: 0.04 is 4 %.
const (
	FrictionWide         ThresholdKey = "friction_wide"
	FrictionConstant     ThresholdKey = "friction_constant"
	FrictionProportional ThresholdKey = "friction_proportional"
	FrictionFlat         ThresholdKey = "friction_flat"
	SealShare            ThresholdKey = "seal_share"
	JumpSize             ThresholdKey = "jump_size"
	JumpNoise            ThresholdKey = "jump_noise"
	PlayWidth            ThresholdKey = "play_width"
	ToeReach             ThresholdKey = "toe_reach"
	StopSlope            ThresholdKey = "stop_slope"
	StopSpan             ThresholdKey = "stop_span"
	BindSlope            ThresholdKey = "bind_slope"
	AirSoftness          ThresholdKey = "air_softness"
	HoldLoss             ThresholdKey = "hold_loss"
	HoldRise             ThresholdKey = "hold_rise"
	HoldFreed            ThresholdKey = "hold_freed"
	HoldFollow           ThresholdKey = "hold_follow"
	StrokeLoss           ThresholdKey = "stroke_loss"
	StrokeRate           ThresholdKey = "stroke_rate"
	MountCreep           ThresholdKey = "mount_creep"
	MountSlip            ThresholdKey = "mount_slip"
	SlipCounts           ThresholdKey = "slip_counts"
	SlipAlone            ThresholdKey = "slip_alone"
	WeightOff            ThresholdKey = "weight_off"
	GaugeZero            ThresholdKey = "gauge_zero"
	GaugeSticky          ThresholdKey = "gauge_sticky"
	GaugeCurve           ThresholdKey = "gauge_curve"
	WarmthLink           ThresholdKey = "warmth_link"
	WarmthShift          ThresholdKey = "warmth_shift"
	WarmthPerK           ThresholdKey = "warmth_per_degree"
	WarmthAgrees         ThresholdKey = "warmth_agrees"
	GaugeSpan            ThresholdKey = "gauge_span"
	SpanDiffer           ThresholdKey = "span_differ"
	FirstRamp            ThresholdKey = "first_ramp"
	ScrewLow             ThresholdKey = "screw_low"
	GiveLow              ThresholdKey = "give_low"
	AreaOff              ThresholdKey = "area_off"
	LagWidth             ThresholdKey = "lag_width"
	Saturated            ThresholdKey = "saturated"
	FlatTop              ThresholdKey = "flat_top"
	LeastRamps           ThresholdKey = "least_ramps"
	FastRamp             ThresholdKey = "fast_ramp"
	RaggedRamp           ThresholdKey = "ragged_ramp"
)

// Thresholds is the one table of them, as they are where mill.toml says nothing.
func Thresholds() []Threshold {
	return []Threshold{
		{FrictionWide, 0.06, "", Judgement, "half-width of the loop at the working setting, of that setting"},
		{FrictionConstant, 0.04, "", Judgement, "constant part of the half-width, of the working setting"},
		{FrictionProportional, 0.05, "", Judgement, "part of the half-width that grows with the load, of the load"},
		{FrictionFlat, 0.02, "", Judgement, "below it the loop counts as parallel"},
		{SealShare, 0.5, "", Judgement, "drag of the cylinder off load, of the constant part of the half-width"},
		{JumpSize, 0.01, "", Judgement, "third largest jump on a branch, of the stretch at the working setting"},
		{JumpNoise, 4, "times the noise", Judgement, "the same jump"},
		{PlayWidth, 0.02, "", Judgement, "reversal beyond twice the half-width, of the working setting"},
		{ToeReach, 0.2, "", Judgement, "stress up to which the rising readings leave their line by 1 % of the working stretch, of the target"},
		{StopSlope, 0.4, "", Judgement, "slope at the top, of the slope below: a stop leaves none, and a coarse count hides some"},
		{StopSpan, 0.03, "", Judgement, "range of setting over which that holds, of the top setting"},
		{BindSlope, 1.1, "", Judgement, "slope of the upper third, of the slope of the lower third"},
		{AirSoftness, 2, "times", Judgement, "time for the setting to reach the slack lift, of what the ramp's pace takes"},
		{HoldLoss, 0.002, "a minute", Judgement, "loss of setting, or of stretch, in a hold"},
		{HoldRise, 0.005, "a minute", Judgement, "rise of setting in a hold"},
		{HoldFreed, 1, "reversal lengths", Derived, "loss of setting beyond which friction no longer holds the band: 2 h"},
		{HoldFollow, 0.5, "", Derived, "loss of stretch, of what the loss of setting beyond 2 h asks for: half way between none and all"},
		{StrokeLoss, 1.5, "reversal lengths", Judgement, "fall of setting that comes back while the stretch holds"},
		{StrokeRate, 0.01, "a second", Judgement, "pace of that fall: a leak of the gauge's side is slower"},
		{MountCreep, 1e-6, "m a minute", Judgement, "drift of the stretch while the setting holds"},
		{MountSlip, 0.01, "", Judgement, "lasting step of the stretch, of the stretch at the working setting"},
		{SlipCounts, 5, "counts", Judgement, "the same step"},
		{SlipAlone, 2, "times", Judgement, "the same step, of the third largest: a mount slips once or twice, stick-slip goes on"},
		{WeightOff, 0.01, "", Judgement, "lifted weight that the loop gives off the profile's, as a setting, of the working setting"},
		{GaugeZero, 0.005, "", Judgement, "reading of the vented gauge, of the working setting"},
		{GaugeSticky, 0.005, "", Judgement, "difference of the gauge between rising and falling on the bench, of its span"},
		{GaugeCurve, 0.005, "", Judgement, "what is left of the gauge's error when a straight line is taken off, of its span"},
		{WarmthLink, 0.7, "", Judgement, "correlation of the stretch's drift with the temperature"},
		{WarmthShift, 0.01, "", Judgement, "drift of the stretch with the temperature, of the stretch at the working setting"},
		{WarmthPerK, 3, "times", Derived, "drift for each degree over that of a steel bar: a bar of aluminium on a cold band makes 2"},
		{WarmthAgrees, 1.6, "times", Derived, "the same drift, for it to be laid to warmth: a warmer band on a steel bar makes 1, an aluminium bar as warm as the band 1"},
		{GaugeSpan, 0.01, "", Judgement, "error of the gauge's span on the bench"},
		{SpanDiffer, 0.03, "", Judgement, "difference of the slopes of the two spans"},
		{FirstRamp, 0.01, "", Judgement, "slope of the later ramps beyond the first one's"},
		{ScrewLow, 0.83, "", Derived, "efficiency of the screw, of what its usual friction gives: a torque a fifth higher for the same pull"},
		{GiveLow, 0.7, "", Judgement, "stiffness of what gives beside the band, of the profile's"},
		{AreaOff, 0.04, "", Judgement, "area that works, off what the geometry gives"},
		{LagWidth, 0.003, "", Judgement, "half-width that the lag pretends, of the working setting"},
		{Saturated, 0.5, "readings", Derived, "readings at the end of an instrument's range: one is too many"},
		{FlatTop, 0.02, "", Judgement, "rise of the stretch while the setting shows one and the same highest value, of the stretch at the working setting"},
		{LeastRamps, 2.5, "ramps", Published, "fewer are too few: the factor for 95 % is 12.7 with two ramps and 4.3 with three (JCGM 100:2008 table G.2)"},
		{FastRamp, 0.02, "a second", Judgement, "rate of the setting, of the top setting"},
		{RaggedRamp, 1, "reversal lengths", Derived, "largest fall of the setting in a rise: beyond 2 h it leaves the rising line"},
	}
}

// Threshold is a limit: this mill's own, or the table's. NaN for a key that is
// in no table.
func (p *Profile) Threshold(key ThresholdKey) (value float64, own bool) {
	if p != nil {
		if v, ok := p.OwnThresholds[key]; ok {
			return v, true
		}
	}
	for _, t := range Thresholds() {
		if t.Key == key {
			return t.Value, false
		}
	}
	return math.NaN(), false
}

// readThresholds takes the table [thresholds]: plain numbers.
func readThresholds(t *table) map[ThresholdKey]float64 {
	defer t.rest()
	own := map[ThresholdKey]float64{}
	for _, d := range Thresholds() {
		if key := string(d.Key); t.has(key) {
			own[d.Key] = t.number(key, 0, 1000)
		} else {
			t.known = append(t.known, key)
		}
	}
	return own
}
