package simrig

import "math"

// Heat is how the day warms the parts from the start of the drive on.
type Heat struct {
	BandKS  float64 // K/s of the band beyond the measuring bar and the frame, as in the sun; 0 means none
	RigKS   float64 // K/s of the measuring bar; 0 means none
	RigPerK float64 // strain of the bar per K; 0 means as the band, 11.5e-6
}

const bandPerK = 11.5e-6 // strain of band steel per K (published values: 10.4e-6 to 12e-6)

// heat is the warmth of band and bar over time.
type heat struct {
	Heat
	halfLoopM float64 // of the band between the wheels
}

func newHeat(h Heat, loopM float64) heat {
	h.RigPerK = orElse(h.RigPerK, bandPerK)
	return heat{Heat: h, halfLoopM: loopM / 2}
}

// morningK is what everything in the shop warms up by, slowly.
func morningK(s float64) float64 { return 0.8 * (1 - math.Exp(-max(0, s)/1800)) }

// bandK and rigK are the temperatures s seconds into the drive.
func (h *heat) bandK(s float64) float64 {
	return iceK + 18 + morningK(s) + max(0, s)*(h.RigKS+h.BandKS)
}
func (h *heat) rigK(s float64) float64 { return iceK + 18 + morningK(s) + max(0, s)*h.RigKS }

// mountM is how much the warmth lengthens the band between the clamps more than
// the bar.
func (h *heat) mountM(lengthM, s float64) float64 {
	if h.RigPerK == bandPerK {
		return lengthM * bandPerK * h.BandKS * max(0, s)
	}
	band, rig := h.bandK(s)-h.bandK(0), h.rigK(s)-h.rigK(0)
	return lengthM * (bandPerK*band - h.RigPerK*rig)
}

// bandM is how much longer the half loop has become than the frame that the
// wheels stand on, which follows the bar.
func (h *heat) bandM(s float64) float64 { return h.halfLoopM * bandPerK * h.BandKS * max(0, s) }
