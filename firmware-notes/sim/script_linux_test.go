package sim_test

import (
	"bufio"
	"os/exec"
	"strings"
	"syscall"
	"testing"

	"tautramp/acquire/simrig"
	"tautramp/protocol"
)

// TestADeviceMadeFromTheSpecAloneIsAccepted captures a board that knows nothing
// of the Go and C code. What it pretends is T-1 with QW-6: F0 210 lbf, mu 0.045.
func TestADeviceMadeFromTheSpecAloneIsAccepted(t *testing.T) {
	if testing.Short() {
		t.Skip("the full run has it")
	}
	const speed = 15
	host := program(t)
	device := exec.Command(tool(t, "python3", "python3"), "testdata/spec_device.py", "15")
	device.SysProcAttr = &syscall.SysProcAttr{Pdeathsig: syscall.SIGKILL}
	var said strings.Builder
	device.Stderr = &said
	out, err := device.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := device.Start(); err != nil {
		t.Fatal(err)
	}
	defer func() {
		device.Process.Kill()
		device.Wait() // killed: its error is known
		if said.Len() > 0 {
			t.Error(said.String())
		}
	}()
	path, err := bufio.NewReader(out).ReadString('\n')
	if err != nil {
		t.Fatal(err)
	}
	rec := capture(t, host, strings.TrimSpace(path), speed, 2)
	const lbf, in = 4.4482216152605, 0.0254
	set := agrees(t, rec, simrig.Truth{F0N: 210 * lbf, Mu: 0.045, WeightN: 820 * lbf, AreaM2: 9.817477 * in * in, NetAreaM2: 0.3045 * in * in})
	countedAlike(t, set, 0)
	if c := set.Counters[0]; c.Rejected > 0 {
		t.Errorf("%d lines refused", c.Rejected)
	}
	for _, e := range rec.Entries {
		record, bad := protocol.Parse(e.Wire)
		if _, unknown := record.(protocol.Unknown); len(e.Wire) > 0 && (bad != nil || unknown) {
			t.Errorf("%q: %v", e.Wire, bad)
		}
	}
}
