// Package protocol is the line grammar between a measuring board and the host,
// version 1: the records, the scanner that reads them, the encoder that writes
// them, and the classes of error. SPEC.md beside this file is the contract;
// every rejection here names its clause. Start with Scanner.
//
// Deliberately absent: ports, clocks, unit conversion beyond the spec's own
// table, and any memory of earlier lines. Unknown records pass through as
// Unknown, so that the grammar can grow.
package protocol

// Version is the wire version that this package speaks.
const Version = 1

// MaxLine is the longest line in bytes, its LF included (SPEC 2.3).
const MaxLine = 120

// MaxCommand is the longest command in bytes, its LF included (SPEC 2.4).
const MaxCommand = 32

// TickBits is the width of a device's tick counter; ticks wrap (SPEC 4.2).
const TickBits = 32

// Record is one well-formed line from a device: Here, Chan, Val, Button,
// Beat, Did, Wont, Echo, Note or Unknown.
type Record interface{ word() string }

// Here is a device's identity, sent after a reset and as the answer to "who".
type Here struct {
	Version  int
	Model    string
	Serial   string
	Boot     uint32 // counter of boots in non-volatile memory
	HasBoot  bool   // false: the board has no such memory
	TickHz   uint32 // ticks per second, 1 to 1,000,000
	Channels int
	Up       uint32 // tick now
	Running  bool
	Cause    Cause
	// Simulated: what it measures is made up. Nothing may be set by it.
	Simulated bool
}

// Cause says why a device sent its identity.
type Cause string

// The causes of a Here record (SPEC 5.1).
const (
	CauseAsked    Cause = "asked"    // answer to "who"
	CausePower    Cause = "power"    // power came on
	CauseReset    Cause = "reset"    // reset line or DTR
	CauseBrown    Cause = "brown"    // supply dipped
	CauseWatchdog Cause = "watchdog" // firmware hung
	CauseUnknown  Cause = "unknown"
)

// Chan declares one channel: what its counts mean.
// Value in Unit = (count - ZeroCount) * Mantissa * 10^Exponent.
type Chan struct {
	ID        byte // 'a' to 'z'
	Quantity  Quantity
	Unit      string // UCUM code from the table in SPEC 6
	Mantissa  int32
	Exponent  int8
	ZeroCount int32
	Low, High int32  // range in counts
	Res       int32  // least count, in counts (>= 1)
	Period    uint32 // nominal sample period in ticks
	Shows     Shows
	Face      byte   // 'A', 'B' or 0
	Span      byte   // 1, 2 or 0
	Serial    string // the sensor's own, may be empty
}

// Quantity is what a channel measures (SPEC 6.1).
type Quantity string

// The quantities of version 1.
const (
	Pressure    Quantity = "pressure"
	Extension   Quantity = "extension"
	Force       Quantity = "force"
	Torque      Quantity = "torque"
	Angle       Quantity = "angle"  // turns of a screw, or an angle
	Spring      Quantity = "spring" // spring length
	Temperature Quantity = "temperature"
	Voltage     Quantity = "voltage"
)

// Shows says how a display makes its last digit (SPEC 6.4).
type Shows string

// How a reading is cut to its least count.
const (
	ShowsUnknown   Shows = "unknown" // adds half a count to the zero
	ShowsRounded   Shows = "rounded"
	ShowsTruncated Shows = "truncated"
)

// Val is one sample of one channel at one tick.
type Val struct {
	Channel  byte
	Seq      uint16
	Tick     uint32
	Status   Status
	Count    int32
	HasCount bool // false: the reading is missing, never zero
}

// Status is the condition of one sample (SPEC 5.3).
type Status byte

// The conditions of a sample. Only Good, Low and High carry a count.
const (
	Good   Status = 'g'
	Low    Status = 'l' // at or below the range
	High   Status = 'h' // at or above the range
	Absent Status = 'x' // no sensor, or no answer from it
	Fault  Status = 'f' // the sensor reports a fault
)

// Button is an edge of a push button or foot switch, debounced by the device.
type Button struct {
	ID   byte // '1' to '9'
	Seq  uint16
	Tick uint32
	Down bool
}

// Beat is the line a running device sends at least once a second.
type Beat struct {
	Seq     uint16
	Tick    uint32
	Dropped uint32 // lines numbered but never sent, since boot
	Refused uint32 // bytes of commands refused, since boot
}

// Did answers a command that was carried out.
type Did struct {
	Token byte
	Verb  Verb
}

// Wont answers a command that was refused.
type Wont struct {
	Token byte
	Verb  string // as received; may be unknown
	Why   string // one word
}

// Echo answers "echo": the device's tick when the command's LF came in.
type Echo struct {
	Token byte
	Tick  uint32
}

// Note is free text from the device for the log.
type Note struct{ Text string }

// Unknown is a well-formed line whose record word this version does not know.
type Unknown struct {
	Word string
	Body string // the whole body, Word included
}

func (Here) word() string      { return "here" }
func (Chan) word() string      { return "chan" }
func (Val) word() string       { return "val" }
func (Button) word() string    { return "btn" }
func (Beat) word() string      { return "beat" }
func (Did) word() string       { return "did" }
func (Wont) word() string      { return "wont" }
func (Echo) word() string      { return "echo" }
func (Note) word() string      { return "note" }
func (u Unknown) word() string { return u.Word }

// Verb is a command word.
type Verb string

// The commands of version 1 (SPEC 7).
const (
	Who    Verb = "who"  // send Here, then each Chan
	Run    Verb = "run"  // start sending samples
	Rest   Verb = "rest" // stop sending samples
	Pace   Verb = "pace" // set a channel's sample period
	EchoMe Verb = "echo" // send Echo
)

// Command is one line from the host. At most one is outstanding.
type Command struct {
	Verb    Verb
	Token   byte   // repeated in the answer
	Channel byte   // Pace only
	Period  uint32 // Pace only, ticks
	Bare    bool   // "who" typed by hand: no token, no check
}

// Class is a kind of line error; the words are those of SPEC 8 and of the
// vectors.
type Class string

// The classes of error (SPEC 8).
const (
	TooLong     Class = "too-long"      // more than MaxLine bytes before LF
	BadByte     Class = "bad-byte"      // not printable ASCII
	NoCheck     Class = "no-check"      // no separator and four digits at the end
	BadCheck    Class = "bad-check"     // the check sum does not fit
	BadShape    Class = "bad-shape"     // fields missing, too many, out of order
	BadNumber   Class = "bad-number"    // a number not written as the spec says
	BadWord     Class = "bad-word"      // a word outside its list
	Unfinished  Class = "unfinished"    // the stream ended inside a line
	UpperHex    Class = "upper-hex"     // hex digits must be lower case
	OutOfBounds Class = "out-of-bounds" // a number outside its bounds
)

// SyntaxError is a line that was refused. It is a value, not a failure of the
// stream: the scanner goes on with the next line.
type SyntaxError struct {
	Class  Class
	Clause string // of SPEC.md, such as "5.3"
	Line   int    // 1-based; 0 when parsed on its own
	Offset int64  // byte offset of the line's first byte in the stream
	Detail string
}
