package analyze

// PhaseKind is what the tensioner was doing.
type PhaseKind string

// The phases of a cycle, in the order in which a healthy one shows them.
const (
	Resting   PhaseKind = "rest"       // setting still, band slack
	SlackLift PhaseKind = "slack lift" // setting moves, extension still at the slack band's
	Seating   PhaseKind = "seating"    // toe: extension rises below its later slope
	Loading   PhaseKind = "loading"
	Holding   PhaseKind = "hold"
	Unloading PhaseKind = "unloading"
	Inside    PhaseKind = "inside the loop" // reversal, sag, wiggles: on neither branch
)

// Point is one pair as the analysis saw it; parallel to Set.Pairs.
type Point struct {
	T          float64 // s, the pair's own
	SettingSI  float64 // the pair's own; report draws the pairs from these three
	ExtensionM float64 // the pair's own, as indicated
	Phase      PhaseKind
	Cycle      int     // index into Cycles; -1 outside any
	Stress     float64 // Pa, with the cycle's zero; NaN where the zero is unknown
	Fitted     bool    // used in a branch line
}
