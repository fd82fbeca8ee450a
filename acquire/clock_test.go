package acquire

import (
	"context"
	"errors"
	"testing"
	"testing/synctest"
	"time"
)

func TestClockRunsByItsFactor(t *testing.T) {
	for _, factor := range []float64{1, 8, 0.5} {
		synctest.Test(t, func(t *testing.T) {
			begun := time.Now()
			c := NewClock(factor)
			if err := c.Sleep(t.Context(), 40*time.Second); err != nil {
				t.Fatal(err)
			}
			real := time.Since(begun)
			if want := time.Duration(40 / factor * float64(time.Second)); real != want || c.Now() != 40*time.Second {
				t.Errorf("factor %v: 40 s took %v (want %v), the clock says %v", factor, real, want, c.Now())
			}
			if wall := c.Wall(); !wall.Equal(begun.Add(40 * time.Second)) {
				t.Errorf("factor %v: the wall clock says %v, want 40 s after %v", factor, wall, begun)
			}
			if c.Factor() != factor {
				t.Errorf("factor %v is said to be %v", factor, c.Factor())
			}
		})
	}
}

func TestClockWithoutAFactorIsReal(t *testing.T) {
	for _, factor := range []float64{0, -3} {
		if got := NewClock(factor).Factor(); got != 1 {
			t.Errorf("factor %v became %v, want 1", factor, got)
		}
	}
}

func TestSleepEndsWithItsContext(t *testing.T) {
	synctest.Test(t, func(t *testing.T) {
		c := NewClock(1)
		ctx, cancel := context.WithCancel(t.Context())
		time.AfterFunc(time.Second, cancel)
		if err := c.Sleep(ctx, time.Hour); !errors.Is(err, context.Canceled) || c.Now() != time.Second {
			t.Errorf("after %v: %v", c.Now(), err)
		}
		if err := c.Sleep(ctx, 0); !errors.Is(err, context.Canceled) {
			t.Errorf("in a context that has ended: %v", err)
		}
	})
}
