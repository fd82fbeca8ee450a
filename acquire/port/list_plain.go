//go:build !(linux || windows || darwin) || (darwin && !cgo)

package port

// list knows only the paths: the enumerator of USB details does not build here.
func list() ([]Info, error) { return listPaths() }
