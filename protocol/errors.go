package protocol

import "fmt"

// Error says what was refused, where, and under which clause of SPEC.md.
func (e *SyntaxError) Error() string {
	where := ""
	if e.Line > 0 {
		where = fmt.Sprintf("line %d (byte %d): ", e.Line, e.Offset)
	}
	return fmt.Sprintf("%s%s: %s (wire rule %s)", where, e.Class, e.Detail, e.Clause)
}

func refuse(class Class, clause, format string, args ...any) *SyntaxError {
	return &SyntaxError{Class: class, Clause: clause, Detail: fmt.Sprintf(format, args...)}
}
