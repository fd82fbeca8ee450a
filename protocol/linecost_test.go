package protocol_test

import (
	"os/exec"
	"testing"
)

// The C encoder's bytes and cycles on a simulated board, against the vectors
// and the figures written down.
func TestLineOnASimulatedBoard(t *testing.T) {
	if testing.Short() {
		t.Skip("short: the board is not simulated")
	}
	for _, tool := range []string{"make", "cc", "avr-gcc", "python3", "pkg-config"} {
		if _, err := exec.LookPath(tool); err != nil {
			t.Skipf("no %s on this machine: the board is not simulated", tool)
		}
	}
	if err := exec.Command("pkg-config", "--exists", "simavr").Run(); err != nil {
		t.Skip("no libsimavr on this machine: the board is not simulated")
	}
	out, err := exec.Command("make", "-C", "../firmware-notes/linecost", "check", "BUILD="+t.TempDir()).CombinedOutput()
	t.Logf("%s", out)
	if err != nil {
		t.Error(err)
	}
}
