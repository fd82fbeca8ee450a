package findings

import (
	"math"

	"tautramp/analyze"
	"tautramp/analyze/estimate"
)

// Comparison is a tensioner as it was found and as it was left.
type Comparison struct {
	Changes []Change
	Same    bool     // the same instruments and band: what repeats cancels
	Notes   []string // why the two may not be compared, or not fully
}

// Change is one figure in two recordings.
type Change struct {
	Name   string
	Role   Quantity
	Before estimate.Estimate // SI
	After  estimate.Estimate
	By     estimate.Estimate // After less Before; of what repeats, only what can differ
	Chance float64           // of a change at least as large where there is none; NaN where it is not known
	Word   Significance
}

// Quantity says what a compared figure is.
type Quantity string

// The quantities.
const (
	ASetting Quantity = "setting"
	AForce   Quantity = "force"
	AShare   Quantity = "share"
)

// Significance says whether a change is told from none.
type Significance string

// The words: clear at a chance below 1 in 100, likely below 5 in 100 (common
// practice of significance tests).
const (
	ClearChange  Significance = "clear"
	LikelyChange Significance = "likely"
	NoChange     Significance = "not told from none"
	NotCompared  Significance = ""
)

// Compare sets what was left against what was found: half-width, its constant
// and its growing part, and the settings for the target.
func Compare(found, left *analyze.Result) Comparison {
	c := Comparison{Same: sameMeasuring(found, left)}
	if a, b := found.Setup.Tensioner.Name, left.Setup.Tensioner.Name; a != b {
		c.Notes = append(c.Notes, "The two recordings are of two tensioners.")
	}
	if found.Setup.Tensioner.SetBy != left.Setup.Tensioner.SetBy {
		c.Notes = append(c.Notes, "The two tensioners are set by different things: nothing is compared.")
		return c
	}
	if !c.Same {
		c.Notes = append(c.Notes, "Band or instruments are not the same: all that repeats counts as doubt of the change.")
	}
	targetOf := func(r *analyze.Result, t analyze.TargetSetting) estimate.Estimate {
		e := t.TrueSI
		if r.Setup.TargetPa != left.Setup.TargetPa {
			return estimate.Unknown("the two targets differ")
		}
		return e
	}
	for _, row := range []struct {
		name string
		role Quantity
		of   func(*analyze.Result) estimate.Estimate
	}{
		{"half-width of the loop at the working setting", ASetting, func(r *analyze.Result) estimate.Estimate { return r.Working.HalfSI }},
		{"half-width, share of the working setting", AShare, func(r *analyze.Result) estimate.Estimate { return r.WidthRatio }},
		{"F0, friction that is always there", AForce, func(r *analyze.Result) estimate.Estimate { return r.Friction.F0N }},
		{"mu, friction in proportion to load", AShare, func(r *analyze.Result) estimate.Estimate { return r.Friction.Mu }},
		{"setting for the target, rising", ASetting, func(r *analyze.Result) estimate.Estimate { return targetOf(r, r.AtRising) }},
		{"setting for the target, falling", ASetting, func(r *analyze.Result) estimate.Estimate { return targetOf(r, r.AtFalling) }},
	} {
		c.Changes = append(c.Changes, change(row.name, row.role, row.of(found), row.of(left), c.Same))
	}
	return c
}

// sameMeasuring is whether band, rig and instruments are the same.
func sameMeasuring(a, b *analyze.Result) bool {
	if a.Setup.Band.Name == "" || a.Setup.Band.Name != b.Setup.Band.Name || a.Setup.NetAreaM2 != b.Setup.NetAreaM2 || a.Setup.GaugeM.Value != b.Setup.GaugeM.Value {
		return false
	}
	sa, sb := a.Set(), b.Set()
	return sa != nil && sb != nil && sa.Setting.Spec.Serial == sb.Setting.Spec.Serial && sa.Extension.Spec.Serial == sb.Extension.Spec.Serial
}

// change is one row. What repeats is the same in both recordings where the
// measuring is, in proportion to the figure: only its share of the difference
// is left.
func change(name string, role Quantity, before, after estimate.Estimate, same bool) Change {
	c := Change{Name: name, Role: role, Before: before, After: after, Chance: math.NaN()}
	if !before.Known() || !after.Known() {
		why := before.Why
		if before.Known() {
			why = after.Why
		}
		c.By = estimate.Unknown(why)
		return c
	}
	parts := []estimate.Component{{Std: before.Random, DoF: before.DoF}, {Std: after.Random, DoF: after.DoF}}
	c.By = estimate.Estimate{Value: after.Value - before.Value, Random: estimate.RootSum(parts), DoF: estimate.EffectiveDoF(parts), Method: "what was left less what was found"}
	if c.By.System = math.Hypot(before.System, after.System); same {
		c.By.System = math.Abs(after.System - before.System)
	}
	above := c.By.Above(0)
	c.Chance = 2 * math.Min(above, 1-above)
	switch {
	case c.Chance < 0.01:
		c.Word = ClearChange
	case c.Chance < 0.05:
		c.Word = LikelyChange
	default:
		c.Word = NoChange
	}
	return c
}
