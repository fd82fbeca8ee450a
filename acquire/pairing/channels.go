package pairing

import "fmt"

// FromChannels makes the set of channels whose readings stand on one timeline
// already, such as a simulated rig's without its wire: it has pairs, but no
// clocks, marks and counters. stdS is the standard uncertainty of the time
// between the setting and the extension, s. A set without pairs is ErrNoPairs.
func FromChannels(setting, extension Channel, others []Channel, stdS float64) (*Set, error) {
	s := &Set{Setting: setting, Extension: extension, Others: others}
	s.join(&joiner{
		maxGap:  max(gapLeastS, gapPeriods*setting.PeriodS),
		timeStd: func(int, int) float64 { return stdS },
	})
	if len(s.Pairs) == 0 {
		return s, fmt.Errorf("%w: %d readings of the setting, %d of the extension", ErrNoPairs, len(setting.Readings), len(extension.Readings))
	}
	return s, nil
}
