package analyze

import (
	"fmt"
	"math"
	"time"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// Setup is the input resolved: everything the figures rest on.
type Setup struct {
	Mill          mill.Mill
	Tensioner     mill.Tensioner
	Band          mill.Band
	Rig           mill.Rig
	NetAreaM2     float64           // thickness x net width
	SectionRelStd float64           // relative standard uncertainty of NetAreaM2
	ModulusPa     estimate.Estimate // E
	GaugeM        estimate.Estimate // L
	TargetPa      float64           // band stress wanted; 0 when none is given
	LimitSI       float64           // of the setting
	GeometryM2    float64           // A* = N A_c R; 0 when not pressure-set
	CountM        float64           // extension least count
	CountSI       float64           // setting least count
	SettingStd    float64           // SI, from the instrument's limit; 0 and a warning when not given
	ExtensionSd   float64           // m, from the instrument's limit; 0 and a warning when not given
	ReversalSd    float64           // m, of how far the indicator reads rising and falling apart
	ReversalFrom  string            // where ReversalSd comes from
	WarmthStd     float64           // strain, from band and bar at other temperatures
	WarmthFrom    string            // where it comes from
	CosineStd     float64           // share of the stretch, from a bar that is not along the band
	CurlSd        float64           // m, of curl on one face; 0 where both were measured
	Bands         []mill.Band       // all on file
	Overdue       []mill.Instrument // in use, and their check was due before the day
	Used          []Used            // instruments that the figures rest on: of the setting, of the extension
	Records       string            // file of instrument records that took the place of the recording's; "" for none
}

// Assumed where the profile does not say. The shares are common practice, no
// source.
const (
	assumedModulusStd = 0.01   // of E
	assumedGaugeStd   = 0.0025 // of L
	// A thickness at three places with a micrometer and a net width at three
	// places with a rule: about 0.5 % and 0.9 %.
	assumedSectionStd = 0.01
)

func resolve(in Input) (Setup, error) {
	if in.Profile == nil {
		return Setup{}, fmt.Errorf("analyze: no profile: %w", mill.ErrUnknownName)
	}
	p := in.Profile
	t, err := p.FindTensioner(in.Tensioner)
	if err != nil {
		return Setup{}, fmt.Errorf("analyze: %w", err)
	}
	b, err := p.FindBand(in.Band)
	if err != nil {
		return Setup{}, fmt.Errorf("analyze: %w", err)
	}
	s := Setup{
		Mill: p.Mill, Tensioner: t, Band: b, Rig: p.Rig,
		NetAreaM2: b.NetAreaM2(), SectionRelStd: assumedSectionStd,
		ModulusPa: given(b.Modulus.SI, b.Modulus.SI*orElse(b.ModulusStd, assumedModulusStd)),
		GaugeM:    given(p.Rig.GaugeLength.SI, orElse(p.Rig.GaugeLengthStd.SI, p.Rig.GaugeLength.SI*assumedGaugeStd)),
		TargetPa:  b.Target.SI, LimitSI: t.LimitSI(), GeometryM2: t.GeometryAreaM2(), Bands: p.Bands, Records: in.Records,
	}
	if in.Set != nil && in.Set.BothFaces {
		s.Rig.Faces = 2
	}
	s.mounting()
	if in.Target.Given() {
		s.TargetPa = in.Target.SI
	}
	if in.Set != nil {
		s.CountM, s.CountSI = in.Set.Extension.CountSI, in.Set.Setting.CountSI
		gauge, hasGauge := p.FindInstrument(mill.MeasuresSetting, t.SettingDim(), in.Set.Setting.Spec.Serial)
		indicator, hasIndicator := p.FindInstrument(mill.MeasuresExtension, mill.DimLength, in.Set.Extension.Spec.Serial)
		s.SettingStd, s.ExtensionSd = limitStd(gauge), limitStd(indicator)
		s.overdue(gauge, hasGauge, in.Day)
		s.overdue(indicator, hasIndicator, in.Day)
		s.useBench(gauge, indicator, in.Set)
		s.reversal()
	}
	return s, nil
}

// limitStd is an instrument's standard uncertainty, its largest permitted error
// taken as a rectangular distribution (JCGM 100 4.3.7); 0 when not given.
func limitStd(i mill.Instrument) float64 { return math.Abs(i.Limit.SI) / math.Sqrt(3) }

// An indicator's own reversal is taken for at most this share of its limit of
// error where nobody measured it. Judgement, after bench limits of 3 um for error
// and 2 um for reversal.
const reversalOfLimit = 2.0 / 3

func (s *Setup) reversal() {
	if b := s.bench(mill.MeasuresExtension); b != nil { // both ways corrected: both corrections are in doubt
		s.ReversalSd, s.ReversalFrom = math.Sqrt2*s.ExtensionSd, "corrections of the bench record of "+b.Checked
		return
	}
	s.ReversalSd, s.ReversalFrom = reversalOfLimit*s.ExtensionSd, "assumed: 2/3 of its "+limitOf("error")
}

func (s *Setup) overdue(i mill.Instrument, found bool, day time.Time) {
	if found && !day.IsZero() && i.OverdueOn(day) {
		s.Overdue = append(s.Overdue, i)
	}
}

func given(value, std float64) estimate.Estimate {
	return estimate.Estimate{Value: value, System: std, DoF: math.Inf(1), Method: "given in the profile"}
}

func orElse(value, assumed float64) float64 {
	if value == 0 {
		return assumed
	}
	return value
}
