package main

import (
	"os"
	"strconv"
	"time"

	"github.com/rogpeppe/go-internal/testscript"

	"tautramp/acquire/mill"
)

// shopInstruments are what a bench test needs beside the example's.
const shopInstruments = `
[[instrument]]
name = "shop dial"
serial = "QF-G-0007"
measures = "setting"
limit = "16 psi"
range_high = "1000 psi"
division = "20 psi"

[[instrument]]
name = "old transducer"
serial = "QF-P-0001"
measures = "reference"
limit = "30 psi"
range_high = "1500 psi"

[[instrument]]
name = "small transducer"
serial = "QF-P-0002"
measures = "reference"
limit = "0.5 psi"
range_high = "500 psi"
`

// writeShopMill writes the example profile with a dial and two more references:
// shopmill FILE.
func writeShopMill(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) != 1 {
		ts.Fatalf("usage: shopmill FILE")
	}
	ts.Check(os.WriteFile(ts.MkAbs(args[0]), append(mill.Example(), shopInstruments...), 0o644))
}

// awaitPoints waits until a recording on disk holds so many points: awaitpoints
// FILE N.
func awaitPoints(ts *testscript.TestScript, neg bool, args []string) {
	if neg || len(args) != 2 {
		ts.Fatalf("usage: awaitpoints FILE N")
	}
	n, err := strconv.Atoi(args[1])
	ts.Check(err)
	for end := time.Now().Add(60 * time.Second); time.Now().Before(end); time.Sleep(10 * time.Millisecond) {
		if pointsIn(ts.MkAbs(args[0])) >= n {
			return
		}
	}
	ts.Fatalf("%s holds no %d points", args[0], n)
}
