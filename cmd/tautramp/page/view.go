package page

import (
	"math"
	"strconv"

	"tautramp/acquire/mill"
	"tautramp/cmd/tautramp/station"
	"tautramp/cmd/tautramp/visit"
)

// number is a figure in SI units for the browser; what is not known is null.
type number float64

func unknown() number { return number(math.NaN()) }

// MarshalJSON writes seven digits: a screen shows four.
func (n number) MarshalJSON() ([]byte, error) {
	if v := float64(n); !math.IsNaN(v) && !math.IsInf(v, 0) {
		return strconv.AppendFloat(nil, v, 'g', 7, 64), nil
	}
	return []byte("null"), nil
}

// statusView is visit.Status for the browser. Figures are SI.
type statusView struct {
	At        number   `json:"at"` // s
	Setting   number   `json:"setting"`
	Goal      number   `json:"goal"`
	Low       number   `json:"low"`
	Stretch   number   `json:"stretch"`
	Stress    number   `json:"stress"`
	Pace      number   `json:"pace"`
	Slow      number   `json:"slow"`
	Fast      number   `json:"fast"`
	PaceWord  string   `json:"paceWord"`
	Phase     string   `json:"phase"`
	Cycle     int      `json:"cycle"`
	Planned   int      `json:"planned"`
	Exercise  bool     `json:"exercise"`
	Resting   bool     `json:"resting"`
	Lost      int      `json:"lost"`
	Rejected  int      `json:"refused"`
	Link      []string `json:"link"`
	Alarm     string   `json:"alarm"`
	AlarmText string   `json:"alarmText"`
	Next      string   `json:"next"`
	Reply     string   `json:"reply"`
	ReplyAt   number   `json:"replyAt"`
	Marks     int      `json:"marks"`
	Done      bool     `json:"done"`
	Simulated bool     `json:"simulated"`
}

func statusOf(s visit.Status) statusView {
	return statusView{
		At: number(s.At.Seconds()), Setting: number(s.SettingSI), Goal: number(s.GoalSI), Low: number(s.LowSI), Stretch: number(s.StretchM), Stress: number(s.StressPa),
		Pace: number(s.PaceSI), Slow: number(s.SlowSI), Fast: number(s.FastSI), PaceWord: string(s.Pace),
		Phase: string(s.Phase), Cycle: s.Cycle, Planned: s.Planned, Exercise: s.Exercise, Resting: s.Resting, Lost: s.Lost, Rejected: s.Rejected, Link: s.Link,
		Alarm: string(s.Alarm), AlarmText: s.AlarmText, Next: s.Next, Reply: string(s.Reply.Kind), ReplyAt: number(s.Reply.At.Seconds()),
		Marks: s.Reply.Number, Done: s.Done, Simulated: s.Simulated,
	}
}

// benchView is station.Status for the browser. Figures are SI.
type benchView struct {
	Bench     bool         `json:"bench"`
	At        number       `json:"at"` // s
	Step      string       `json:"step"`
	Series    string       `json:"series"`
	Way       string       `json:"way"`    // up or down
	Target    string       `json:"target"` // as the plan has it
	Unit      displayUnits `json:"unit"`   // of the plan
	Go        number       `json:"go"`
	Back      bool         `json:"back"`
	Now       number       `json:"now"`
	Tested    number       `json:"tested"`
	Wait      number       `json:"wait"` // s
	Cycle     int          `json:"cycle"`
	Cycles    int          `json:"cycles"`
	Taken     int          `json:"taken"`
	Planned   int          `json:"planned"`
	Next      string       `json:"next"`
	Answer    string       `json:"answer"`
	Refused   bool         `json:"refused"`
	Alarm     string       `json:"alarm"`
	AlarmText string       `json:"alarmText"`
	Link      []string     `json:"link"`
	Lost      int          `json:"lost"`
	Rejected  int          `json:"rejected"`
	Done      bool         `json:"done"`
}

func benchOf(s station.Status, unit mill.Unit) benchView {
	return benchView{
		Bench: true, At: number(s.At.Seconds()), Step: string(s.Step), Series: string(s.Target.Series), Way: string(s.Goes),
		Target: s.Target.Nominal.Entered, Unit: displayUnits{unit.Name, unit.SI}, Go: number(s.GoSI), Back: s.Back,
		Now: number(s.NowSI), Tested: number(s.TestedSI), Wait: number(s.WaitS), Cycle: s.Cycle, Cycles: s.Cycles,
		Taken: s.Taken, Planned: s.Planned, Next: s.Next, Answer: s.Answer.Text, Refused: s.Answer.Refused,
		Alarm: string(s.Alarm), AlarmText: s.AlarmText, Link: s.Link, Lost: s.Lost, Rejected: s.Rejected, Done: s.Done,
	}
}

// siteView is what a visit measures.
type siteView struct {
	Kind      Kind      `json:"kind"`
	Mill      string    `json:"mill"`
	Tensioner string    `json:"tensioner"`
	Band      string    `json:"band"`
	Role      mill.Role `json:"role"`    // of the setting
	Limit     number    `json:"limit"`   // of the setting
	Target    number    `json:"target"`  // band stress
	Screw     bool      `json:"screw"`   // a lower turn may have to be declared
	Press     string    `json:"press"`   // what a press says: step, dial, or nothing but a mark
	Shorter   bool      `json:"shorter"` // the setting is how much shorter a spring is than without a load
	Vent      bool      `json:"vent"`
	Tested    string    `json:"tested"` // of a bench test
	Reference string    `json:"reference"`
}

// papersView is a recording that the page holds ready.
type papersView struct {
	ID      string `json:"id"`
	Name    string `json:"name"`
	Kind    Kind   `json:"kind"`
	Seal    string `json:"seal"`
	Of      string `json:"of"` // seal of the recording that it goes on from
	Alarm   string `json:"alarm"`
	Verdict string `json:"verdict"`
	Says    string `json:"says"`
	RigOff  bool   `json:"rigOff"`
}

// deskView is what is going on.
type deskView struct {
	Program  string                                     `json:"program"`
	System   mill.System                                `json:"system"` // to begin with
	Units    map[mill.System]map[mill.Role]displayUnits `json:"units"`
	Run      *siteView                                  `json:"run"` // null: none runs
	Fault    string                                     `json:"fault"`
	Papers   []papersView                               `json:"papers"`
	Plans    []Plan                                     `json:"plans"`
	OneVisit bool                                       `json:"oneVisit"`
}

// displayUnits is a unit and what one of it is in SI.
type displayUnits struct {
	Name string  `json:"name"`
	SI   float64 `json:"si"`
}

func unitTable() map[mill.System]map[mill.Role]displayUnits {
	table := map[mill.System]map[mill.Role]displayUnits{}
	for _, s := range []mill.System{mill.US, mill.SI} {
		table[s] = map[mill.Role]displayUnits{}
		for _, r := range []mill.Role{mill.RoleStress, mill.RolePressure, mill.RoleTorque, mill.RoleTurns, mill.RoleSpring, mill.RoleExtension, mill.RoleSection, mill.RoleForce} {
			u := s.Unit(r)
			table[s][r] = displayUnits{u.Name, u.SI}
		}
	}
	return table
}
