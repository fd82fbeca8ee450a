package protocol

// checkSum is CRC-16/CCITT-FALSE: polynomial 0x1021, start 0xffff, no
// reflection, no final inversion (SPEC 2.6). One byte at a time without a
// table, the way that costs a small processor least.
func checkSum(body []byte) uint16 {
	crc := uint16(0xffff)
	for _, b := range body {
		x := byte(crc>>8) ^ b
		x ^= x >> 4
		crc = crc<<8 ^ uint16(x)<<12 ^ uint16(x)<<5 ^ uint16(x)
	}
	return crc
}

const hexDigits = "0123456789abcdef"

// appendHex appends the low digits of v, most significant first (SPEC 3.2).
func appendHex(dst []byte, v uint32, digits int) []byte {
	for shift := 4 * (digits - 1); shift >= 0; shift -= 4 {
		dst = append(dst, hexDigits[v>>shift&15])
	}
	return dst
}

// hexValue reads exactly the digits of text; ok is false when one is not a
// hex digit, upper says that one was an upper-case letter.
func hexValue(text []byte) (v uint32, upper, ok bool) {
	for _, c := range text {
		switch {
		case c >= '0' && c <= '9':
			v = v<<4 | uint32(c-'0')
		case c >= 'a' && c <= 'f':
			v = v<<4 | uint32(c-'a'+10)
		case c >= 'A' && c <= 'F':
			v, upper = v<<4|uint32(c-'A'+10), true
		default:
			return 0, upper, false
		}
	}
	return v, upper, true
}

// seal appends the separator, the check over dst[from:] and LF (SPEC 2.5).
func seal(dst []byte, from int) []byte {
	sum := checkSum(dst[from:])
	dst = append(dst, ';')
	dst = appendHex(dst, uint32(sum), 4)
	return append(dst, '\n')
}

// unseal applies what all lines share, in the order of SPEC 8.1, and returns
// the body. The length has been checked before.
func unseal(line []byte) ([]byte, *SyntaxError) {
	for i, c := range line {
		if c < 0x20 || c > 0x7e {
			return nil, refuse(BadByte, "2.1", "byte %d is 0x%02x, not printable ASCII", i+1, c)
		}
	}
	at := -1
	for i, c := range line {
		if c == ';' {
			at = i
			break
		}
	}
	if at < 0 || at != len(line)-5 {
		return nil, refuse(NoCheck, "2.5", "the line does not end in its only ';' and four hex digits")
	}
	sum, upper, ok := hexValue(line[at+1:])
	switch {
	case !ok:
		return nil, refuse(NoCheck, "2.5", "%q is not four hex digits", line[at+1:])
	case upper:
		return nil, refuse(UpperHex, "2.5", "check %q has an upper-case digit", line[at+1:])
	}
	if want := checkSum(line[:at]); uint16(sum) != want {
		return nil, refuse(BadCheck, "2.6", "check is %04x, the line makes %04x", sum, want)
	}
	return line[:at], nil
}

// dropCR drops the one CR that may stand before LF (SPEC 2.2).
func dropCR(line []byte) []byte {
	if n := len(line); n > 0 && line[n-1] == '\r' {
		return line[:n-1]
	}
	return line
}
