package protocol

// maxName is the longest model, serial or sensor name (SPEC 3.3).
const maxName = 16

// maxDecimal is the largest magnitude that 7 digits can write (SPEC 3.1).
const maxDecimal = 9_999_999

// isWord reports 2 to 8 lower-case letters (SPEC 2.8).
func isWord(text []byte) bool {
	if len(text) < 2 || len(text) > 8 {
		return false
	}
	for _, c := range text {
		if c < 'a' || c > 'z' {
			return false
		}
	}
	return true
}

// isName reports a name as SPEC 3.3 has it.
func isName(text []byte) bool {
	if len(text) < 1 || len(text) > maxName {
		return false
	}
	for _, c := range text {
		letter := c >= 'a' && c <= 'z' || c >= 'A' && c <= 'Z'
		digit := c >= '0' && c <= '9'
		if !letter && !digit && c != '-' && c != '.' && c != '_' {
			return false
		}
	}
	return true
}

// decimal reads a decimal as SPEC 3.1 writes it: at most 7 digits, no plus, no
// leading zero, no minus zero.
func decimal(text []byte) (int32, bool) {
	digits := text
	negative := len(text) > 0 && text[0] == '-'
	if negative {
		digits = text[1:]
	}
	if len(digits) < 1 || len(digits) > 7 {
		return 0, false
	}
	if digits[0] == '0' && (len(digits) > 1 || negative) {
		return 0, false
	}
	v := int32(0)
	for _, c := range digits {
		if c < '0' || c > '9' {
			return 0, false
		}
		v = v*10 + int32(c-'0')
	}
	if negative {
		v = -v
	}
	return v, true
}
