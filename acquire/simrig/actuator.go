package simrig

// command is what the operator's hand does now.
type command struct {
	hold bool    // hands off: the valve shut, the screw let alone
	rate float64 // wanted, in SI of what the hand works on: Pa/s of oil, rad/s of a screw
	toSI float64 // and no further
	sags bool    // the rate is a sag between strokes, not the release valve
}

// actuator is what pushes the wheel: oil, or a screw with its spring. Over a
// step it is asked what force it gives for each travel of the wheel, and then
// told which it was.
type actuator interface {
	// begin takes what is asked of it for the next dt seconds.
	begin(c command, dt float64)
	// force is the push at the end of the step if the wheel moves dx, N, and by how
	// much it falls for each metre of it.
	force(dx float64) (forceN, fallNM float64)
	// end carries its state over the step.
	end(dx float64)
	// show writes what can be seen of it.
	show(v *view)
}
