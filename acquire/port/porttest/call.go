package porttest

import (
	"errors"
	"time"
)

// result is what a Read, Write or Close gave.
type result struct {
	n   int
	err error
}

// call is a Read, Write or Close under way.
type call struct{ done chan result }

func start(f func() (int, error)) *call {
	c := &call{make(chan result, 1)}
	go func() {
		n, err := f()
		c.done <- result{n, err}
	}()
	return c
}

// within waits so long for the call to come back.
func (c *call) within(d time.Duration) (result, bool) {
	select {
	case r := <-c.done:
		return r, true
	case <-time.After(d):
		return result{}, false
	}
}

// errHangs stands for a call that did not come back.
var errHangs = errors.New("did not come back within ten seconds")

func (c *call) wait() result {
	if r, ok := c.within(10 * time.Second); ok {
		return r
	}
	return result{err: errHangs}
}
