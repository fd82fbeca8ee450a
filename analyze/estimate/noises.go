package estimate

import "math"

// noiseNode is the lines' spread at one noise, and the log of its weight among
// all noises.
type noiseNode struct {
	window
	sd, logWeight float64
}

// byAllNoises is the mean of all lines, and their covariance, over every noise
// from the floor on.
func (f *intervalFit) byAllNoises() Line {
	var b bounds
	for i, x := range f.x {
		if f.kept[i] >= 0.5 {
			b.add(x, f.lo[i], f.hi[i])
		}
	}
	w, sd := f.roundWindow()
	phi := newLnPhi()
	nodes := f.march(b, w, sd, noiseRatio, phi)
	nodes = append(nodes, f.march(b, nodes[0].window, sd/noiseRatio, 1/noiseRatio, phi)...)
	return mixed(nodes)
}

const noiseRatio = 1.5

// march integrates at one noise after the other until they count for nothing.
func (f *intervalFit) march(b bounds, w window, sd, ratio float64, phi *lnPhi) []noiseNode {
	const nothing = 7.0
	var nodes []noiseNode
	best := math.Inf(-1)
	for ; sd >= f.floor && sd < 1; sd *= ratio {
		next, mass := b.settled(w, sd, phi)
		n := noiseNode{next, sd, mass}
		n.logWeight += f.belief() * math.Log(sd)
		nodes = append(nodes, n)
		best = math.Max(best, n.logWeight)
		if n.logWeight < best-nothing {
			break
		}
		w = next
	}
	return nodes
}

// belief is the power of the noise by which it is weighted beforehand, in equal
// steps of its logarithm. Where the caller states a noise, twice as much is a
// sixteenth as likely; where not, all are taken as equally likely. Chosen so
// that intervals hold the truth as often as they say where the true noise is 0.8
// to 1 of the stated one, see TestBranchIntervalsHoldTheTruth.
func (f *intervalFit) belief() float64 {
	if f.stated {
		return -4
	}
	return 1
}

// roundWindow is a first guess of the lines' spread, from the information at a
// noise large enough for that to say something.
func (f *intervalFit) roundWindow() (window, float64) {
	for sd := math.Max(f.sd, f.floor); ; sd *= noiseRatio {
		fit := f.at(sd)
		if fit.info.At(0, 0) < f.crossings && sd < 1 {
			continue
		}
		fit.atLimit = true
		if cov := fit.covariance(); cov != nil {
			return window{f.a, f.b, cov.At(0, 0), cov.At(1, 1), cov.At(0, 1)}, sd
		}
	}
}

// mixed is the mean and covariance of all nodes together.
func mixed(nodes []noiseNode) Line {
	best := math.Inf(-1)
	for _, n := range nodes {
		best = math.Max(best, n.logWeight)
	}
	var all float64
	var l Line
	for _, n := range nodes {
		p := math.Exp(n.logWeight - best)
		all += p
		l.A += p * n.a
		l.B += p * n.b
		l.ResidualSD += p * n.sd
	}
	l.A, l.B, l.ResidualSD = l.A/all, l.B/all, l.ResidualSD/all
	for _, n := range nodes {
		p := math.Exp(n.logWeight-best) / all
		da, db := n.a-l.A, n.b-l.B
		l.VarA += p * (n.varA + da*da)
		l.VarB += p * (n.varB + db*db)
		l.CovAB += p * (n.cov + da*db)
	}
	return l
}
