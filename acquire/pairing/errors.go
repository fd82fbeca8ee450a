package pairing

import "errors"

// Why a recording gives no pairs. FromRecording wraps them with what was found
// instead.
var (
	ErrNoSetting   = errors.New("no channel measures what the tensioner is set by")
	ErrNoExtension = errors.New("no channel measures the extension of the band")
	ErrNoTime      = errors.New("the readings have no common time")
	ErrNoPairs     = errors.New("no extension reading has a setting at its instant")
)
