package pairing

// sequence counts the numbers that are missing; they are 16 bits wide on the
// wire (SPEC 4.4).
type sequence struct {
	last uint16
	has  bool
}

// step takes the next number and returns how many are missing before it,
// modulo 65,536. A number that stays or goes back is a line seen before, unless
// time has gone on: then over half a round was lost.
func (q *sequence) step(number uint16, later bool) (lost int) {
	ahead := number - q.last
	if q.has && (ahead == 0 || ahead >= 0x8000) && !later {
		return 0
	}
	if q.has {
		lost = int(ahead - 1)
	}
	q.last, q.has = number, true
	return lost
}
