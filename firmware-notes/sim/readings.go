package sim

import (
	"fmt"
	"io"
	"math"
	"math/rand/v2"
	"time"
)

// Fed is a reading that boards/cortexm3 was given.
type Fed struct {
	AtS     float64 // from the start of the feeding
	Channel byte    // 'a' pressure in 0.05 psi, 'b' indicator in 0.001 mm
	Count   int32
}

const (
	readingEvery = 10 * time.Millisecond
	displayEvery = 10 // readings of pressure to one of the indicator
)

// Readings feeds a board of boards/cortexm3 in real time, up to an instant or
// until done is closed: pressure 100 times a second, the indicator 10 times. It
// returns what was fed.
func (s Signals) Readings(done <-chan struct{}, w io.Writer, untilS float64) ([]Fed, error) {
	rng := rand.New(rand.NewPCG(s.Seed, 13))
	began := time.Now()
	tick := time.NewTicker(readingEvery)
	defer tick.Stop()
	var list []Fed
	for i := 0; ; i++ {
		select {
		case <-done:
			return list, nil
		case <-tick.C:
		}
		now := time.Since(began).Seconds()
		if now > untilS {
			return list, nil
		}
		pressure, extension := s.At(now)
		fed := []Fed{{now, 'a', int32(math.Round((pressure + s.NoisePa*rng.NormFloat64()) / (0.05 * psiPa)))}}
		if i%displayEvery == 0 {
			fed = append(fed, Fed{now, 'b', int32(math.Round((extension + s.ZeroM + s.NoiseM*rng.NormFloat64()) / 1e-6))})
		}
		for _, f := range fed {
			if _, err := fmt.Fprintf(w, "%c %d\n", f.Channel, f.Count); err != nil {
				return list, fmt.Errorf("stimulus: %w", err)
			}
		}
		list = append(list, fed...)
	}
}
