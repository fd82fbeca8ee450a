package recording

import "errors"

const hexDigits = "0123456789abcdef"

var errEscape = errors.New("a byte is not escaped as SPEC 3 says")

// plain reports whether a byte stands for itself (SPEC 3).
func plain(c byte) bool { return c >= 0x20 && c <= 0x7e && c != '\\' }

// appendEscaped appends text so that it can hold no line end, whatever it was.
func appendEscaped[T string | []byte](dst []byte, text T) []byte {
	for i := 0; i < len(text); i++ {
		c := text[i]
		if plain(c) {
			dst = append(dst, c)
			continue
		}
		dst = append(dst, '\\', hexDigits[c>>4], hexDigits[c&15])
	}
	return dst
}

// unescape decodes in place and returns the shorter slice of the same bytes.
// It takes exactly what appendEscaped writes: one text has one spelling.
func unescape(text []byte) ([]byte, error) {
	n := 0
	for i := 0; i < len(text); i++ {
		c := text[i]
		if c == '\\' {
			if i+2 >= len(text) {
				return nil, errEscape
			}
			high, low := hexValue(text[i+1]), hexValue(text[i+2])
			c = high<<4 | low&15
			if high > 15 || low > 15 || plain(c) {
				return nil, errEscape
			}
			i += 2
		} else if !plain(c) {
			return nil, errEscape
		}
		text[n] = c
		n++
	}
	return text[:n:n], nil
}

// hexValue is the value of a lower-case hex digit, or 0xff.
func hexValue(c byte) byte {
	switch {
	case c >= '0' && c <= '9':
		return c - '0'
	case c >= 'a' && c <= 'f':
		return c - 'a' + 10
	}
	return 0xff
}
