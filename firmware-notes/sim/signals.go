package sim

import (
	"bufio"
	"fmt"
	"io"
	"math"
	"math/rand/v2"
	"slices"
	"sort"

	"tautramp/acquire/simrig"
)

const psiPa = 6894.757293168361

// Signals is what the sensors of a board meet: the rig's trace, from so many
// seconds after the board's power-on. Before and after it all stands still.
type Signals struct {
	Moments []simrig.Moment // evenly spaced
	StartS  float64
	ZeroM   float64 // what the indicator shows of a slack band
	NoiseM  float64 // of the indicator, standard deviation
	NoisePa float64 // of a digital pressure sensor, standard deviation
	Seed    uint64  // of that noise
}

// EndS is when the trace has ended, s after power-on.
func (s Signals) EndS() float64 { return s.StartS + s.Moments[len(s.Moments)-1].T }

// At is the pressure and the extension at an instant, in Pa and m.
func (s Signals) At(t float64) (pressurePa, extensionM float64) {
	list := s.Moments
	i := sort.Search(len(list), func(i int) bool { return list[i].T >= t-s.StartS })
	switch i {
	case 0:
		return list[0].PressurePa, list[0].ExtensionM
	case len(list):
		return list[i-1].PressurePa, list[i-1].ExtensionM
	}
	a, b := list[i-1], list[i]
	part := (t - s.StartS - a.T) / (b.T - a.T)
	return a.PressurePa + part*(b.PressurePa-a.PressurePa), a.ExtensionM + part*(b.ExtensionM-a.ExtensionM)
}

// Volts is what the transducer gives: 0.5 to 4.5 V for 0 to 1500 psi.
func Volts(pressurePa float64) float64 { return 0.5 + 4*pressurePa/(1500*psiPa) }

// Shown is a reading that a digital sensor has shown.
type Shown struct {
	AtS   float64 // from power-on: when its first bit went out
	Count int32
}

// The pins of boards/avr328 as the harness's records name them.
const (
	pinClock = 1 << 2
	pinData  = 1 << 3
	pinFoot  = 1 << 4
	pinsIdle = pinClock | pinData | pinFoot
)

const (
	voltEveryUS  = 10_000
	burstEveryUS = 100_000
	bitUS        = 400 // from bit to bit of a burst
)

// record is one line of the stimulus.
type record struct {
	us   int64
	text string
}

// Clocked writes the stimulus of an AVR with a clocked indicator that shows
// 0.001 mm, up to an instant, and returns what the indicator has shown. The
// stimulus does not end the simulation.
func (s Signals) Clocked(w io.Writer, untilS float64) ([]Shown, error) {
	rng := rand.New(rand.NewPCG(s.Seed, 12))
	list := s.volts(untilS)
	var shown []Shown
	for us := int64(1_037_000); us < int64(untilS*1e6); us += burstEveryUS {
		_, extension := s.At(float64(us) / 1e6)
		count := int32(math.Round((extension + s.ZeroM + s.NoiseM*rng.NormFloat64()) / 1e-6))
		shown = append(shown, Shown{float64(us) / 1e6, count})
		list = append(list, burst(us, count)...)
	}
	return shown, write(w, list)
}

// burst is a reading on clock and data, the least bit first: 20 bits of size, a
// sign, three zeros. Data change 100 us before the clock rises.
func burst(us int64, count int32) (list []record) {
	bits := uint32(count)
	if count < 0 {
		bits = uint32(-count) | 1<<20
	}
	for i := range 24 {
		data := int(bits>>i&1) * pinData
		at := us + int64(i)*bitUS
		list = append(list,
			record{at - 100, fmt.Sprintf("pins %d %02x\n", at-100, pinFoot|data)},
			record{at, fmt.Sprintf("pins %d %02x\n", at, pinFoot|pinClock|data)})
	}
	last := us + 24*bitUS
	return append(list, record{last, fmt.Sprintf("pins %d %02x\n", last, pinsIdle)})
}

// volts is the transducer's voltage in straight pieces.
func (s Signals) volts(untilS float64) (list []record) {
	uv := func(us int64) int64 {
		pressure, _ := s.At(float64(us) / 1e6)
		return int64(math.Round(1e6 * Volts(pressure)))
	}
	for us := int64(0); us < int64(untilS*1e6); us += voltEveryUS {
		slope := (uv(us+voltEveryUS) - uv(us)) * (1_000_000 / voltEveryUS)
		list = append(list, record{us, fmt.Sprintf("volt %d %d %d\n", us, uv(us), slope)})
	}
	return list
}

// write puts the records in order.
func write(w io.Writer, list []record) error {
	slices.SortStableFunc(list, func(a, b record) int { return int(max(-1, min(1, a.us-b.us))) })
	out := bufio.NewWriter(w)
	for _, r := range list {
		if _, err := out.WriteString(r.text); err != nil {
			return fmt.Errorf("stimulus: %w", err)
		}
	}
	return out.Flush()
}

// Quadrature writes the stimulus of an AVR with a scale of 0.001 mm from edge to
// edge, up to an instant. The scale has no zero of its own: a board counts from
// where it stands at boot.
func (s Signals) Quadrature(w io.Writer, untilS float64, more ...Order) error {
	const stepUS = 1000
	list := s.volts(untilS)
	at := s.Edge(0)
	list = append(list, record{0, fmt.Sprintf("pins 0 %02x\n", tracks(at))})
	for us := int64(stepUS); us < int64(untilS*1e6); us += stepUS {
		for goal := s.Edge(float64(us) / 1e6); at != goal; {
			if goal > at {
				at++
			} else {
				at--
			}
			list = append(list, record{us, fmt.Sprintf("pins %d %02x\n", us, tracks(at))})
		}
	}
	for _, o := range more {
		us := int64(o.AtS * 1e6)
		list = append(list, record{us, fmt.Sprintf("%s %d %s\n", o.word, us, o.argument)})
	}
	return write(w, list)
}

// Edge is the number of the scale's step at an instant.
func (s Signals) Edge(t float64) int32 {
	_, extension := s.At(t)
	return int32(math.Floor((extension + s.ZeroM) / 1e-6))
}

// tracks are the two tracks of a scale, A ahead on the way out.
func tracks(step int32) int {
	return pinFoot | [4]int{0, pinClock, pinClock | pinData, pinData}[step&3]
}

// Order is something that befalls an AVR at an instant, s from power-on.
type Order struct {
	AtS            float64
	word, argument string
}

// Host is bytes from the host, at most 64.
func Host(atS float64, bytes []byte) Order { return Order{atS, "host", fmt.Sprintf("%x", bytes)} }

// Reset is a pull at the reset line.
func Reset(atS float64) Order { return Order{atS, "boot", "reset"} }

// End ends the simulation.
func End(atS float64) Order { return Order{atS, "end", ""} }
