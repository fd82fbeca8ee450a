package simrig

import "math"

// screw is a turned screw that pushes the slide through springs. The torque is
// what the balance of forces and moments at thread and collar leaves to the
// hand, with the friction of both a state that follows the turning.
type screw struct {
	leadM    float64
	meanM    float64 // radius of the thread's flank, where it bears
	flankRad float64 // half the angle between two flanks
	collarM  float64 // mean radius of the collar
	idleNM   float64 // torque of cover and bearings without load
	playRad  float64 // free turn between the hand and the screw
	ratio    float64 // travel of the screw / of the wheel
	springNM float64 // N/m of the springs together
	bindM    float64 // squeeze at which they are solid; 0 means never
	springMu float64 // friction within a stack of disc springs, part of its force
	slackM   float64 // from the slide's stop to the taut band
	thread   contact // its level is the coefficient; it follows the way along the flank
	collar   contact
	stack    contact // of the springs, level 1

	handRad  float64 // what has been turned
	screwRad float64
	wheelM   float64 // travel of the wheel
	squeezeM float64
	loadN    float64 // of the springs, on thread and collar
	torqueNM float64 // at the hand

	// For this step.
	now      command
	dt       float64
	turnsRad float64 // of the screw
}

const (
	bindStiff = 60   // how much stiffer solid springs are
	stackM    = 5e-5 // squeeze over which the friction of a stack builds up
	flankM    = 5e-6 // way along thread and collar over which theirs does
)

func (s *screw) begin(c command, dt float64) {
	s.now, s.dt = c, dt
	turn := 0.0
	if !c.hold {
		turn = c.rate * dt
		if c.rate > 0 {
			turn = min(turn, max(0, c.toSI-s.handRad))
		} else {
			turn = max(turn, min(0, c.toSI-s.handRad))
		}
	}
	s.handRad += turn
	// The hand takes the screw along at either end of the free turn.
	before := s.screwRad
	s.screwRad = max(s.handRad-s.playRad, min(s.handRad, s.screwRad))
	s.turnsRad = s.screwRad - before
}

// squeeze is how far the springs are pressed together when the wheel stands at
// a travel.
func (s *screw) squeeze(wheelM float64) float64 {
	return s.screwRad*s.leadM/(2*math.Pi) - s.ratio*(wheelM+s.slackM)
}

// springs is their force at a squeeze, and its slope.
func (s *screw) springs(squeezeM float64) (forceN, slopeNM float64) {
	if squeezeM <= 0 {
		return 0, 0
	}
	forceN, slopeNM = s.springNM*squeezeM, s.springNM
	if s.bindM > 0 && squeezeM > s.bindM {
		forceN += bindStiff * s.springNM * (squeezeM - s.bindM)
		slopeNM += bindStiff * s.springNM
	}
	if s.springMu > 0 {
		strain, _ := s.stack.law.strain(&s.stack, squeezeM-s.squeezeM)
		forceN, slopeNM = forceN*(1+s.springMu*strain), slopeNM*(1+s.springMu*strain)
	}
	return forceN, slopeNM
}

func (s *screw) force(dx float64) (forceN, fallNM float64) {
	forceN, slope := s.springs(s.squeeze(s.wheelM + dx))
	return s.ratio * forceN, s.ratio * s.ratio * slope
}

func (s *screw) end(dx float64) {
	s.wheelM += dx
	squeeze := s.squeeze(s.wheelM)
	s.loadN, _ = s.springs(squeeze)
	s.stack.move(squeeze-s.squeezeM, s.dt)
	s.squeezeM = squeeze
	s.thread.move(s.turnsRad*s.meanM, s.dt)
	s.collar.move(s.turnsRad*s.collarM, s.dt)
	s.torqueNM = s.handNM()
}

// handNM is the torque at the hand. A hand that lets go leaves nothing, unless
// the screw would run back by itself, and within the free turn there is nothing
// to feel.
func (s *screw) handNM() float64 {
	switch {
	case s.now.hold:
		return max(0, s.momentNM(-1, -1))
	case s.turnsRad == 0:
		return 0
	}
	return s.momentNM(s.thread.strain, s.collar.strain)
}

// momentNM is the torque that the load takes with the frictions at these
// strains. On the flank, inclined by the lead and tilted by half the thread's
// angle, the normal force N and the friction mu N z along the way balance the
// load Q along the axis and the torque around it:
//
//	Q     = N (cos a cos l - mu z sin l)
//	T / r = N (cos a sin l + mu z cos l)
//
// with lead angle l, flank angle a, and strain z.
func (s *screw) momentNM(thread, collar float64) float64 {
	lead := math.Atan(s.leadM / (2 * math.Pi * s.meanM))
	mu := s.thread.levelN(0) * thread
	sin, cos, flank := math.Sin(lead), math.Cos(lead), math.Cos(s.flankRad)
	normal := s.loadN / (flank*cos - mu*sin)
	return normal*(flank*sin+mu*cos)*s.meanM + s.collar.levelN(0)*collar*s.loadN*s.collarM + s.idleNM*thread
}

func (s *screw) show(v *view) {
	v.torqueNM, v.angleRad, v.springM = s.torqueNM, s.handRad, max(0, s.squeezeM)
}
