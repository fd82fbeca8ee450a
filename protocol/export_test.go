package protocol

// Seal frames any body, well-formed or not, for tests.
func Seal(dst, body []byte) []byte {
	from := len(dst)
	return seal(append(dst, body...), from)
}
