package pairing

import (
	"fmt"

	"tautramp/acquire/recording"
	"tautramp/protocol"
)

// choice is the channels that a recording's pairs are made of.
type choice struct {
	setting, extension source
	quantity           protocol.Quantity // of the setting
	steps              steps             // in place of the setting's channel,
	stepped            bool              // where the presses tell it
	warnings           []string
}

// choose takes the first channel of each quantity, in the order of devices and
// channels.
func (in *intake) choose(h recording.Header) (choice, error) {
	var c choice
	quantity, err := h.SettingQuantity()
	if err != nil {
		return c, fmt.Errorf("%w: %w", ErrNoSetting, err)
	}
	c.quantity = quantity
	if c.steps, c.stepped, err = stepsOf(h); err != nil {
		return c, err
	}
	settings, extensions := in.candidates(quantity), in.candidates(protocol.Extension)
	switch {
	case c.stepped: // whatever measures it is not asked
	case len(settings) == 0:
		return c, fmt.Errorf("%w: tensioner %q is set by %s, and no device declared a channel of it%s", ErrNoSetting, h.Tensioner, quantity, in.declared())
	default:
		c.setting = settings[0]
		c.warnings = several(settings, "setting")
	}
	if len(extensions) == 0 {
		return c, fmt.Errorf("%w: no device declared one%s", ErrNoExtension, in.declared())
	}
	c.extension = extensions[0]
	if c.stepped {
		c.setting = c.extension // the same clock, and no channel of its own
	}
	if _, both := in.otherFace(c.extension); !both || len(extensions) > 2 {
		c.warnings = append(c.warnings, several(extensions, "extension")...)
	}
	return c, nil
}

func several(found []source, what string) []string {
	if len(found) < 2 {
		return nil
	}
	return []string{fmt.Sprintf("%d channels measure the %s; channel %s is used, the others are not",
		len(found), what, found[0])}
}

func (a source) String() string {
	return fmt.Sprintf("%c of device %d", a.channel, a.device+1)
}

// declared is a list for messages of what the devices did declare.
func (in *intake) declared() string {
	text := ""
	for i := range in.devices {
		if !in.devices[i].known {
			text += fmt.Sprintf(", device %d never said who it is", i+1)
		}
		for _, spec := range in.devices[i].specs {
			if spec != nil {
				text += fmt.Sprintf(", device %d has %s on channel %c", i+1, spec.Quantity, spec.ID)
			}
		}
	}
	return text
}
