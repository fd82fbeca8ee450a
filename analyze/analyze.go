// Package analyze turns pairs into branches, and branches into the
// calibration: stress against setting rising and falling, hysteresis,
// friction, and the setting for a target stress. Start with Analyze.
//
// Pure: no files, no clock. Deliberately absent: causes (findings), bench
// tests (gauge), rounding and units (report).
package analyze

import (
	"tautramp/acquire/mill"
	"tautramp/acquire/pairing"
	"tautramp/analyze/estimate"
)

// Input is what an analysis works from. Names may be empty where the profile
// has only one.
type Input struct {
	Profile   *mill.Profile
	Tensioner string
	Band      string
	Target    mill.Pressure // overrides the band's target when given
	Set       *pairing.Set
}

// Setup is the input resolved: everything the figures rest on.
type Setup struct {
	Mill        mill.Mill
	Tensioner   mill.Tensioner
	Band        mill.Band
	Rig         mill.Rig
	NetAreaM2   float64           // thickness x net width
	ModulusPa   estimate.Estimate // E
	GaugeM      estimate.Estimate // L
	TargetPa    float64           // band stress wanted; 0 when none is given
	LimitSI     float64           // of the setting
	GeometryM2  float64           // A* = N A_c R; 0 when not pressure-set
	CountM      float64           // extension least count
	CountSI     float64           // setting least count
	SettingStd  float64           // SI, from the instrument's limit; 0 and a warning when not given
	ExtensionSd float64           // m, from the instrument's limit; 0 and a warning when not given
}

// Direction is the way the setting moves.
type Direction string

// The two directions.
const (
	Rising  Direction = "rising"
	Falling Direction = "falling"
)

// PhaseKind is what the tensioner was doing.
type PhaseKind string

// The phases of a cycle, in the order in which a healthy one shows them.
const (
	Resting   PhaseKind = "rest"       // setting still, band slack
	SlackLift PhaseKind = "slack lift" // setting rises, extension still
	Seating   PhaseKind = "seating"    // toe: extension rises below its later slope
	Loading   PhaseKind = "loading"
	Holding   PhaseKind = "hold"
	Unloading PhaseKind = "unloading"
	Inside    PhaseKind = "inside the loop" // reversal, sag, wiggles: on neither branch
)

// Point is one pair as the analysis saw it; parallel to Set.Pairs.
type Point struct {
	Phase  PhaseKind
	Cycle  int     // index into Cycles; -1 outside any
	Stress float64 // Pa, with the cycle's zero; NaN where the zero is unknown
	Fitted bool    // used in a branch line
}

// Role says whether a cycle is fitted.
type Role string

// The roles of a cycle.
const (
	Exercise   Role = "exercise"   // first, never fitted
	Ramp       Role = "ramp"       // fitted
	Incomplete Role = "incomplete" // no closed loop
)

// Cycle is one rise and fall.
type Cycle struct {
	Role         Role
	First, Peak  int // pair indexes of the low turning point and the top
	Last         int // pair index of the next low turning point
	TopSI        float64
	Zero         estimate.Estimate // m, extension at zero tension
	ZeroFrom     string            // convention used: "slack band", "operator's mark", or ""
	Rising       Fit
	Falling      Fit
	ReturnM      estimate.Estimate // m, extension at the end of the cycle minus at its start, same setting
	ReversalSI   estimate.Estimate // fall of setting at the top before the extension follows
	RateSI       float64           // median |rate of setting| on the branches, SI/s
	SeatingEndSI float64           // setting above which the rising branch is straight
}

// Fit is one branch of one cycle: extension = Line.A + Line.B * setting, SI.
type Fit struct {
	Line   estimate.Line
	LowSI  float64 // range of setting fitted
	HighSI float64
	Points int
}

// Branch is all fitted cycles together: stress = Stress0 + Slope * setting.
type Branch struct {
	Direction Direction
	Stress0   estimate.Estimate // Pa
	Slope     estimate.Estimate // Pa per SI unit of setting
	LowSI     float64           // captured range of setting
	HighSI    float64
	LowPa     float64 // captured range of stress
	HighPa    float64
	Cycles    int
}

// Friction is the tensioner's, after p A* = S(1 +/- mu) +/- F0, S = F + W.
type Friction struct {
	F0N       estimate.Estimate // constant part, zero-immune formula
	Mu        estimate.Estimate // proportional part
	WeightN   estimate.Estimate // W, only as good as the zero
	AreaM2    estimate.Estimate // A*
	AreaRatio estimate.Estimate // A* / geometry's
	F0MuWN    estimate.Estimate // F0 + mu W, only together with its zero
	LoopJ     estimate.Estimate // energy lost in one cycle, by setting x displacement equivalent; unknown without travel
}

// WidthAt is the half-width of the loop at one stress.
type WidthAt struct {
	StressPa float64
	HalfSI   estimate.Estimate // setting units
}

// Grade is the verdict on the half-width at the working setting.
type Grade string

// The grades. The zero value is inconclusive.
const (
	Inconclusive Grade = ""
	Good         Grade = "good"
	Watch        Grade = "watch"
	Service      Grade = "service"
)

// TargetSetting is the setting for the target stress on one branch.
type TargetSetting struct {
	SettingSI estimate.Estimate // of the fitted curve
	NextSI    estimate.Estimate // of the next setting: adds ramp-to-ramp scatter; unknown with one ramp
	TrueSI    estimate.Estimate // so that the band's true stress is the target: adds everything that repeats
	Budget    []Term            // of TrueSI, in setting units
}

// Term is one line of a budget.
type Term struct {
	Name  string
	StdSI float64 // standard uncertainty in the setting, SI
	DoF   float64
	Type  string // "A" or "B"
	From  string // where the figure comes from
}

// RunningBand is the one-sided band in which the stress may wander after the
// tensioner was set to the target's setting.
type RunningBand struct {
	AfterRisingPa  [2]estimate.Estimate // lowest and highest change from target: +0 and more
	AfterFallingPa [2]estimate.Estimate // down and -0
	MiddlePa       estimate.Estimate    // where vibration brings it, pressure maintained
	Hold           mill.Hold            // as the profile states; "" = not stated, both cases apply
}

// Warning is something the reader must know beside the figures.
type Warning struct {
	Code string // stable word for machines
	Text string
}

// Result is the whole analysis.
type Result struct {
	Setup      Setup
	Points     []Point
	Cycles     []Cycle
	Rising     Branch
	Falling    Branch
	Friction   Friction
	Widths     []WidthAt
	WidthRatio estimate.Estimate // half-width at the working setting / that setting
	Grade      Grade
	AtRising   TargetSetting
	AtFalling  TargetSetting
	ResetSI    estimate.Estimate // after an overshoot: the setting to drop to before approaching again
	Running    RunningBand
	Warnings   []Warning
}
