package mill

// Quantity is a number with the unit it was entered in. The zero value is "not
// given".
type Quantity struct {
	SI      float64 // in the SI unit of its dimension
	Entered string  // as written, such as "5.25 in"; "" when not given
	Unit    Unit    // the unit entered
}

// Unit is a unit of measure by the name that people write.
type Unit struct {
	Name string // "psi", "in", "lbf ft"
	Dim  Dim
	SI   float64 // SI units in one of this unit, exact where the definition is
}

// Dim is a dimension, named by what it measures here.
type Dim string

// The dimensions that quantities may have, with their SI unit.
const (
	DimLength    Dim = "length"                 // m
	DimPressure  Dim = "pressure"               // Pa, gauge pressure and band stress
	DimForce     Dim = "force"                  // N
	DimTorque    Dim = "torque"                 // N.m
	DimAngle     Dim = "angle"                  // rad
	DimWarmth    Dim = "temperature difference" // K; never a temperature
	DimStiffness Dim = "stiffness"              // N/m
	DimVolume    Dim = "volume"                 // m3
)

// Length is a Quantity in metres.
type Length struct{ Quantity }

// Pressure is a Quantity in pascals; stresses and moduli are pressures too.
type Pressure struct{ Quantity }

// Warmth is a Quantity of a temperature difference in kelvins.
type Warmth struct{ Quantity }

// Force is a Quantity in newtons.
type Force struct{ Quantity }

// Torque is a Quantity in newton metres.
type Torque struct{ Quantity }

// Angle is a Quantity in radians.
type Angle struct{ Quantity }

// Stiffness is a Quantity in newtons per metre.
type Stiffness struct{ Quantity }

// Volume is a Quantity in cubic metres.
type Volume struct{ Quantity }

// Setting is a Quantity of whatever a tensioner is set by, or an instrument
// measures: any dimension.
type Setting struct{ Quantity }

// System is the set of units that people read.
type System string

// The two systems.
const (
	US System = "us"
	SI System = "si"
)

// Role is what a number is for; it chooses the display unit. Gauge pressure
// and band stress are kept apart: "gauge psi" and "band psi".
type Role string

// The roles and their display units, US and SI.
const (
	RoleStress    Role = "stress"    // psi, MPa
	RolePressure  Role = "pressure"  // psi, bar
	RoleTorque    Role = "torque"    // lbf ft, N m
	RoleTurns     Role = "turns"     // turn, turn
	RoleSpring    Role = "spring"    // in, mm
	RoleExtension Role = "extension" // in, mm
	RoleSection   Role = "section"   // in, mm (thickness, width, bore, gauge length)
	RoleForce     Role = "force"     // lbf, kN
	RoleStiffness Role = "stiffness" // lbf/in, kN/mm
)
