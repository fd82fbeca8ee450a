package findings_test

import (
	"math"

	"tautramp/acquire/mill"
	"tautramp/acquire/simrig"
	"tautramp/analyze/findings"
)

// noticeable is the least that a cause's feature must show: its limit, and three
// standard uncertainties beyond it.
func noticeable(p planting, u doubts, s *subject) float64 {
	limit, _ := (*mill.Profile)(nil).Threshold(p.limit)
	least := 1.0
	if p.limit != "" {
		least = limit + 3*u.of(p.feature, s)
	} else if p.least != nil {
		least = 0
	}
	if p.least != nil {
		least = math.Max(least, p.least(s))
	}
	return least
}

// stopSpan is the range over which the count lets a slope be told: of a line no
// counts long, sqrt(6) counts hide the whole slope (a count's error at either end).
func stopSpan(s *subject) float64 {
	limit, _ := (*mill.Profile)(nil).Threshold(mill.StopSlope)
	return 3 * s.countM / math.Sqrt(6) / limit / s.workM
}

// softness is what a pause of the operator's leaves open of the time to the slack
// lift: two and a half seconds of the ramp's pace.
func softness(s *subject) float64 {
	limit, _ := (*mill.Profile)(nil).Threshold(mill.AirSoftness)
	rise := s.truth.LiftRisingPa() - 0.6*s.truth.LiftFallingPa()
	return limit + 3*2.5*s.c.Drive.RatePaS/(0.6*rise)
}

// doubts is the usual standard uncertainty of each feature on healthy rigs, by
// how finely the indicator counts.
type doubts map[bool]map[findings.FeatureKey]float64

func (u doubts) of(k findings.FeatureKey, s *subject) float64 { return u[s.coarse()][k] }

func (s *subject) coarse() bool { return s.countM > 5e-6 }

// plant puts a cause on a rig at so many times the noticeable severity. ok is
// false where that is beyond what is met in mills.
func (p planting) plant(s *subject, u doubts, times float64) (ok bool, err error) {
	size := p.size(s, times*noticeable(p, u, s))
	if p.fits != nil && !p.fits(s) {
		return false, nil
	}
	if !(size > p.fewest) || size > p.most {
		return false, nil
	}
	if p.kind == simrig.WrongSection && s.rng.IntN(2) == 0 || p.kind == simrig.WrongArea && s.rng.IntN(2) == 0 {
		size = -size / (1 + size)
	}
	if p.also != nil {
		p.also(s, size)
	}
	return true, simrig.Plant(&s.c, simrig.Fault{Kind: p.kind, Size: size})
}

// usualDoubts is as a pilot run of 24 healthy rigs found it, on seeds of their
// own: go test ./analyze/findings -run Confusion -pilot -only none.
func usualDoubts() doubts {
	return doubts{
		false: {
			"area_off":                 0.018,
			"first_ramp":               0.001,
			"flat_top":                 0.0027,
			"gauge_curve":              0.0005,
			"gauge_sticks":             0.0007,
			"half_width":               0.0041,
			"half_width_constant":      0.0041,
			"half_width_proportional":  0.00043,
			"hold_reversals":           0.02,
			"hold_setting_loss":        0.00025,
			"hold_setting_rise":        0.00025,
			"hold_stretch_loss":        0.003,
			"lag":                      0.23,
			"lag_width":                0.0024,
			"low_strokes":              0.65,
			"reversal_beyond_friction": 0.0012,
			"spans_differ":             0.02,
			"stretch_creep":            4e-09,
			"stretch_step":             0.0022,
			"stretch_step_alone":       0.68,
			"stretch_step_counts":      0.24,
			"stroke_fall":              0.2,
			"stroke_fall_rate":         0.0001,
			"third_jump":               0.0022,
			"third_jump_noise":         1,
			"toe_end":                  0.012,
			"top_slope":                0.29,
			"top_span":                 0.021,
			"upper_over_lower_slope":   0.0068,
			"warmth_link":              0.16,
			"warmth_per_degree":        0.049,
			"warmth_shift":             0.0006,
			"weight_off":               0.014,
		},
		true: {
			"area_off":                 0.019,
			"first_ramp":               0.0032,
			"flat_top":                 0.025,
			"gauge_curve":              0.0005,
			"gauge_sticks":             0.0007,
			"half_width":               0.0038,
			"half_width_constant":      0.0038,
			"half_width_proportional":  0.00066,
			"hold_reversals":           0.023,
			"hold_setting_loss":        0.00022,
			"hold_setting_rise":        0.00022,
			"hold_stretch_loss":        0.031,
			"lag":                      2.4,
			"lag_width":                0.019,
			"low_strokes":              0.3,
			"reversal_beyond_friction": 0.0013,
			"spans_differ":             0.02,
			"stretch_creep":            7.9e-08,
			"stretch_step":             0.02,
			"stretch_step_alone":       0.56,
			"stretch_step_counts":      0.24,
			"stroke_fall":              0.2,
			"stroke_fall_rate":         0.0001,
			"third_jump":               0.02,
			"third_jump_noise":         1,
			"toe_end":                  0.012,
			"top_span":                 0.024,
			"upper_over_lower_slope":   0.088,
			"warmth_link":              0.15,
			"warmth_per_degree":        0.84,
			"warmth_shift":             0.011,
			"weight_off":               0.039,
		},
	}
}
