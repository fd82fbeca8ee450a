package analyze

import (
	"math"

	"tautramp/acquire/mill"
	"tautramp/analyze/estimate"
)

// LockedBand is what becomes of a band whose oil a valve has shut in after it
// was set rising: vibration frees the friction, and the wheel moves until band
// and oil share what friction held.
type LockedBand struct {
	GainPa estimate.Estimate // of band stress
	DropSI estimate.Estimate // of the gauge
}

// Bulk modulus of hydraulic oil at low pressure, with a little air in it and
// hoses that give: 1.0 to 1.9 GPa, rectangular (from memory; mineral oil without
// air is near the upper end). Softer oil lets the band gain more.
const (
	oilBulkPa  = 1.45e9
	oilBulkStd = 0.45e9 / 1.7320508075688772 // half the range / sqrt 3
)

// locked works it out from the wheel's balance. Friction held h A* of the oil's
// push (h the half-width at that setting). With the wheel free to move by x,
//
//	h A* = (k_band + k_oil) x,  k_band = 4 E A_b / loop,  k_oil = A*^2 K / V,
//
// the band gains k_band x / (2 A_b) and the oil loses k_oil x / A*.
func (w *work) locked(settingSI float64) LockedBand {
	t, loop := w.setup.Tensioner, w.setup.Band.Loop.SI
	why := ""
	switch {
	case t.SetBy != mill.SetByPressure:
		why = "only oil can be locked in"
	case !(t.OilVolume.SI > 0):
		why = "the profile does not give the oil_volume of the tensioner"
	case !(loop > 0):
		why = "the profile does not give the loop of the band"
	}
	if why != "" {
		return LockedBand{estimate.Unknown(why), estimate.Unknown(why)}
	}
	share := func(r ramp, k constants, bulkPa float64) (gainPa, dropSI float64) {
		area := balanceOf(r, k).areaM2()
		net := k.areaM2
		if k.otherM2 > 0 {
			net = k.otherM2
		}
		band := 4 * k.modulusPa * net / loop
		oil := area * area * bulkPa / t.OilVolume.SI
		x := halfWidth(settingSI)(r, k) * area / (band + oil)
		return band * x / (2 * net), oil * x / area
	}
	of := func(pick func(gainPa, dropSI float64) float64) estimate.Estimate {
		with := func(bulkPa float64) estimate.Estimate {
			return w.combine(func(r ramp, k constants) float64 { return pick(share(r, k, bulkPa)) }, "not a finite number")
		}
		e := with(oilBulkPa)
		if e.Known() {
			soft, stiff := with(oilBulkPa-oilBulkStd), with(oilBulkPa+oilBulkStd)
			e.System = math.Hypot(e.System, (soft.Value-stiff.Value)/2)
			e.Method += "; bulk modulus of the oil assumed, 1.0 to 1.9 GPa"
		}
		return e
	}
	return LockedBand{
		GainPa: of(func(gainPa, _ float64) float64 { return gainPa }),
		DropSI: of(func(_, dropSI float64) float64 { return dropSI }),
	}
}
