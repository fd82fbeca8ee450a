package estimate

import "math"

// Blocks of neighbouring readings are how serial dependence is allowed for: a
// block's mean error is taken as independent of the next block's.
const (
	mostBlocks    = 20 // fewer, longer blocks see slower noise
	blocksPerTime = 4  // a block is so many times as long as the noise remembers
)

// scores are a fit's residuals, weighted by what each reading tells of the
// line: the residual is push / weight.
type scores struct {
	x, push, weight []float64
	cell            []int // where it changes a block may end; nil: anywhere
}

// dependence is by what factor the covariance of a line that takes readings as
// independent is too small, from the scatter of the blocks' means about a line
// through them, and how many blocks there were: it is known with blocks - 2
// degrees of freedom. memory is over how many readings the noise's correlation
// is known to reach; 0: as the residuals show. Fewer than three blocks tell
// nothing, and the factor is 1.
//
// What blocks of finite length miss is added as for noise whose correlation
// dies away at a constant rate.
func (s scores) dependence(memory int) (factor float64, blocks int) {
	// A correlation that has fallen to 5 % in so many readings makes 2/3 of them
	// tell as much as one.
	tau := math.Max(Dependence(s.standardised()), 2.0/3*float64(memory))
	length := max(int(math.Ceil(blocksPerTime*tau)), (len(s.x)+mostBlocks-1)/mostBlocks)
	x, y, w := s.blockMeans(length)
	if len(x) < 3 {
		return 1, len(x)
	}
	l, err := fitCentred(x, y, w)
	if err != nil {
		return 1, 0
	}
	missed := (tau*tau - 1) / 2 / float64(length)
	return l.ResidualSD * l.ResidualSD * tau / math.Max(tau-missed, tau/2), len(x)
}

func (s scores) standardised() []float64 {
	out := make([]float64, len(s.push))
	for i, w := range s.weight {
		if w > 0 {
			out[i] = s.push[i] / math.Sqrt(w)
		}
	}
	return out
}

// blockMeans is the weighted means of x and of the residual over blocks of at
// least so many readings, with their weights. What is left at the end goes to
// the last block.
func (s scores) blockMeans(length int) (x, y, w []float64) {
	var sx, sy, sw float64
	count := 0
	for i := range s.x {
		sx += s.weight[i] * s.x[i]
		sy += s.push[i]
		sw += s.weight[i]
		count++
		if count < length || i+1 < len(s.x) && s.cell != nil && s.cell[i+1] == s.cell[i] {
			continue
		}
		x, y, w = append(x, sx), append(y, sy), append(w, sw)
		sx, sy, sw, count = 0, 0, 0, 0
	}
	if n := len(x) - 1; n >= 0 {
		x[n], y[n], w[n] = x[n]+sx, y[n]+sy, w[n]+sw
	}
	kept := 0
	for k := range x {
		if w[k] > 0 {
			x[kept], y[kept], w[kept] = x[k]/w[k], y[k]/w[k], w[k]
			kept++
		}
	}
	return x[:kept], y[:kept], w[:kept]
}
