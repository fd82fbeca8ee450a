package protocol

import "bytes"

func parseChan(body []byte) (Record, *SyntaxError) {
	f := cut(body, "5.2")
	f.count("5.2", 8, maxFields)
	keys := f.keyed("5.2", 5, 3, "lo", "hi", "per", "res", "zero", "shows", "face", "span", "sn")
	c := Chan{ID: f.letter(f.at[1], 'a', 'z')}
	c.Quantity, c.Unit = f.unit(f.at[2], f.at[3])
	c.Mantissa, c.Exponent = f.scale(f.at[4])
	c.Low = f.decimal(keys[0], -maxDecimal, maxDecimal, "5.2")
	c.High = f.decimal(keys[1], -maxDecimal, maxDecimal, "5.2")
	c.Period = uint32(f.decimal(keys[2], 1, maxDecimal, "5.2"))
	f.optional(&c, keys[3:])
	if f.err == nil && c.Low >= c.High {
		f.fail(OutOfBounds, "5.2", "lo=%d is not below hi=%d", c.Low, c.High)
	}
	return f.done(c)
}

// optional reads the keys that have a default (SPEC 5.2).
func (f *fields) optional(c *Chan, keys [][]byte) {
	c.Res, c.Shows = 1, ShowsUnknown
	if v := keys[0]; v != nil {
		c.Res = f.decimal(v, 1, maxDecimal, "5.2")
	}
	if v := keys[1]; v != nil {
		c.ZeroCount = f.decimal(v, -maxDecimal, maxDecimal, "5.2")
	}
	if v := keys[2]; v != nil {
		c.Shows = Shows(f.oneOf(v, "6.4", string(ShowsRounded), string(ShowsTruncated), string(ShowsUnknown)))
	}
	if v := keys[3]; v != nil {
		c.Face = f.letter(v, 'A', 'B')
	}
	if v := keys[4]; v != nil {
		c.Span = f.letter(v, '1', '2') - '0'
	}
	if v := keys[5]; v != nil {
		c.Serial = f.name(v)
	}
}

// unit reads a quantity and one of its units (SPEC 6.1, 6.2).
func (f *fields) unit(quantity, code []byte) (Quantity, string) {
	if f.err != nil {
		return "", ""
	}
	known := false
	for _, u := range units() {
		if string(u.Quantity) != string(quantity) {
			continue
		}
		known = true
		if u.Code == string(code) {
			return u.Quantity, u.Code
		}
	}
	if !known {
		f.fail(BadWord, "6.1", "%q is not a quantity of version 1", quantity)
	}
	f.fail(BadWord, "6.2", "%q is not a unit of %q", code, quantity)
	return "", ""
}

// scale reads mantissa and exponent (SPEC 3.4).
func (f *fields) scale(text []byte) (mantissa int32, exponent int8) {
	if f.err != nil {
		return 0, 0
	}
	m, e, cut := bytes.Cut(text, []byte{'e'})
	mv, okM := decimal(m)
	ev, okE := decimal(e)
	switch {
	case !cut || !okM || !okE:
		f.fail(BadNumber, "3.4", "%q is not mantissa e exponent", text)
	case mv == 0 || ev < -12 || ev > 12:
		f.fail(OutOfBounds, "3.4", "%q: mantissa 0, or exponent not within -12 to 12", text)
	}
	return mv, int8(ev)
}
