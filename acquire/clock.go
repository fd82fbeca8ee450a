package acquire

import (
	"context"
	"time"
)

// realClock is the machine's clock, run faster by a factor.
type realClock struct {
	start  time.Time
	factor float64
}

// NewClock starts a clock that runs factor times as fast as the machine's; a
// factor of 0 or less means 1. At factor 1 the wall clock is the machine's own,
// so that a laptop's sleep shows as a jump against Now; at any other the wall
// follows Now, since a rehearsal's hours pass on no wall.
func NewClock(factor float64) Clock {
	if !(factor > 0) {
		factor = 1
	}
	return realClock{start: time.Now(), factor: factor}
}

func (c realClock) Now() time.Duration {
	return time.Duration(float64(time.Since(c.start)) * c.factor)
}

func (c realClock) Wall() time.Time {
	if c.factor == 1 {
		return time.Now().Round(0)
	}
	return c.start.Round(0).Add(c.Now())
}

func (c realClock) Factor() float64 { return c.factor }

func (c realClock) Sleep(ctx context.Context, d time.Duration) error {
	if err := ctx.Err(); err != nil {
		return err
	}
	t := time.NewTimer(time.Duration(float64(d) / c.factor))
	defer t.Stop()
	select {
	case <-t.C:
		return nil
	case <-ctx.Done():
		return ctx.Err()
	}
}
