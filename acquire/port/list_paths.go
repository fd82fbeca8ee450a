package port

import "go.bug.st/serial"

// listPaths lists ports without their USB details.
func listPaths() ([]Info, error) {
	paths, err := serial.GetPortsList()
	if err != nil {
		return nil, err
	}
	all := make([]Info, len(paths))
	for i, p := range paths {
		all[i].Path = p
	}
	return all, nil
}
