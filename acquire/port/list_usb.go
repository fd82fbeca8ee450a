//go:build (linux || windows || darwin) && (!darwin || cgo)

package port

import "go.bug.st/serial/enumerator"

// list asks for the USB details, which on macOS takes cgo.
func list() ([]Info, error) {
	ports, err := enumerator.GetDetailedPortsList()
	if err != nil {
		return listPaths()
	}
	all := make([]Info, 0, len(ports))
	for _, p := range ports {
		if p.Name == "" { // a built-in port without a device behind it
			continue
		}
		all = append(all, Info{Path: p.Name, Product: p.Product, Vendor: p.VID, Model: p.PID, Serial: p.SerialNumber})
	}
	return all, nil
}
