package simrig

import (
	"math"
	"testing"
)

// still is a cylinder whose wheel does not move.
func still(edit Oil, pressurePa float64) *oil {
	o := &oil{Oil: edit, areaM2: 1e-3, giveM3P: 1e-12, flowM3S: 1e-5, pressurePa: pressurePa, gaugePa: pressurePa}
	o.AirS, o.HoseS, o.VolumeM3 = orElse(edit.AirS, 1.5), orElse(edit.HoseS, 4), 6e-4
	return o
}

// run lets a command act for a time while the wheel stands.
func (o *oil) run(c command, forS float64) {
	for range int(math.Round(forS / 0.02)) {
		o.begin(c, 0.02)
		o.end(0)
	}
}

// A leak on a wheel that friction holds, and one between a shut valve and the
// transducer, both follow the published exponential.
func TestLeaksFollowThePublishedExponential(t *testing.T) {
	v := readVectors(t).Leak
	cylinder := still(Oil{LeakPerS: 1 / v.Tau}, v.Y0-v.Low)
	gauge := still(Oil{CheckTee: true, TeePerS: 1 / v.Tau}, v.Y0-v.Low)
	last := 0.0
	for i, s := range v.T {
		cylinder.run(command{hold: true}, s-last)
		gauge.run(command{hold: true}, s-last)
		last = s
		near(t, "cylinder", cylinder.pressurePa, v.Y[i]-v.Low, 2e-4*v.Y0)
		near(t, "gauge", gauge.gaugePa, v.Y[i]-v.Low, 1e-9*v.Y0)
	}
	near(t, "cylinder behind the shut valve", gauge.pressurePa, v.Y0-v.Low, 1e-12)
}

// Hoses that follow late let the pressure sag after a rise and rebound after a
// release, by their part of it.
func TestHosesSagAndRebound(t *testing.T) {
	o := still(Oil{HosePart: 0.1, HoseS: 3}, 0)
	o.run(command{rate: 1e7, toSI: 5e6}, 0.6)
	top := o.pressurePa
	o.run(command{hold: true}, 30)
	near(t, "sag after the rise", 1-o.pressurePa/top, 0.1, 0.015)
	o.run(command{rate: -1e7, toSI: 1e6}, 0.6)
	low := o.pressurePa
	o.run(command{hold: true}, 30)
	near(t, "rebound after the release, of the fall", (o.pressurePa-low)/(0.9*top-low), 0.1, 0.015)
}

// Air gives 1.4 times as much once it has cooled as it does at once (isothermal
// and adiabatic law), and the less the higher the pressure.
func TestAirGivesByTheGasLaws(t *testing.T) {
	volume := func(o *oil, fromPa, toPa float64) (atOnce, cooled float64) {
		o.pressurePa = fromPa
		o.begin(command{hold: true}, 1e-6)
		quick := o.soft - o.giveM3P
		o.begin(command{hold: true}, 1e6)
		return quick * (toPa - fromPa), (o.soft - o.giveM3P) * (toPa - fromPa)
	}
	o := still(Oil{AirM3: 1e-4}, 0)
	quick, slow := volume(o, 0, 100)
	near(t, "cooled, of at once", slow/quick, 1.4, 1e-4)
	near(t, "isothermal at open air, m3/Pa", slow/100, 1e-4/atmospherePa, 1e-13)
	_, high := volume(o, 9*atmospherePa, 9*atmospherePa+100)
	near(t, "at ten atmospheres, of one", high/slow, 0.01, 1e-6)
}

// Oil that warms behind a shut valve presses more.
func TestLockedOilWarms(t *testing.T) {
	o := still(Oil{WarmingKS: 1e-3}, 1e6)
	o.run(command{hold: true}, 100)
	near(t, "rise after 0.1 K, Pa", o.pressurePa-1e6, oilPerK*6e-4*0.1/1e-12, 1)
}
