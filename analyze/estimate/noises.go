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
	w, k := f.roundWindow()
	phi := newLnPhi()
	nodes := f.march(b, w, k, 1, phi)
	nodes = append(nodes, f.march(b, nodes[0].window, k-1, -1, phi)...)
	return mixed(nodes)
}

// noise is the k-th noise of the integral, in equal steps of its logarithm from
// the floor.
func (f *intervalFit) noise(k int) float64 {
	const ratio = 1.5
	return f.floor * math.Pow(ratio, float64(k))
}

// march integrates at one noise after the other, up or down, until they count
// for nothing. The first is always there.
func (f *intervalFit) march(b bounds, w window, k, step int, phi *lnPhi) []noiseNode {
	const nothing = 7.0
	var nodes []noiseNode
	best := math.Inf(-1)
	for ; k >= 0 && (f.noise(k) < 1 || len(nodes) == 0); k += step {
		sd := f.noise(k)
		next, mass := b.settled(w, sd, phi)
		n := noiseNode{next, sd, mass + f.belief()*math.Log(sd)}
		if k == 0 { // the end of the integral: half a step
			n.logWeight -= math.Ln2
		}
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

// roundWindow is a first guess of the lines' spread, from the information at the
// smallest noise from the fitted one on that lets that say something.
func (f *intervalFit) roundWindow() (w window, k int) {
	for ; ; k++ {
		sd := f.noise(k)
		if sd < f.sd/1.2 {
			continue
		}
		fit := f.at(sd)
		if fit.info.At(0, 0) < f.crossings && sd < 1 {
			continue
		}
		fit.atLimit = true
		if cov := fit.covariance(); cov != nil {
			return window{f.a, f.b, cov.At(0, 0), cov.At(1, 1), cov.At(0, 1)}, k
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
