package main

import (
	"context"
	"fmt"
	"strings"
	"text/tabwriter"

	"tautramp/acquire/port"
)

func runPorts(_ context.Context, args []string, e env) error {
	fs := flags("ports", "", "Lists the serial ports of this computer. Pseudo-terminals never show here; name them in full.", e)
	if err := parse(fs, args, 0, 0); err != nil {
		return err
	}
	found, err := port.List()
	if err != nil {
		return err
	}
	if len(found) == 0 {
		_, err := fmt.Fprintln(e.stdout, "no serial port found: plug the board in, and see that its cable carries data")
		return err
	}
	w := tabwriter.NewWriter(e.stdout, 0, 0, 2, ' ', 0)
	for _, p := range found {
		fmt.Fprintf(w, "%s\t%s\n", p.Path, strings.TrimSpace(p.Product+" "+p.Serial))
	}
	return w.Flush()
}
