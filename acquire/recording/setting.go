package recording

import (
	"errors"
	"fmt"

	"tautramp/acquire/mill"
	"tautramp/protocol"
)

// SettingQuantity is what the channel of the setting measures: what the
// header's tensioner is set by, in the words of the wire.
func (h Header) SettingQuantity() (protocol.Quantity, error) {
	if h.Parsed == nil {
		return "", errors.New("find what the tensioner is set by: the profile was not read")
	}
	t, err := h.Parsed.FindTensioner(h.Tensioner)
	if err != nil {
		return "", fmt.Errorf("find what the tensioner is set by: %w", err)
	}
	return quantityOf(t.SetBy)
}

func quantityOf(by mill.SetBy) (protocol.Quantity, error) {
	switch by {
	case mill.SetByPressure:
		return protocol.Pressure, nil
	case mill.SetByTorque:
		return protocol.Torque, nil
	case mill.SetByTurns:
		return protocol.Angle, nil
	case mill.SetBySpring:
		return protocol.Spring, nil
	}
	return "", fmt.Errorf("the profile sets a tensioner by %q, which no channel measures", by)
}
