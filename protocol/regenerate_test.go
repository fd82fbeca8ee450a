package protocol_test

import (
	"os/exec"
	"testing"
)

func TestVectorsAreWhatTheirMakerMakes(t *testing.T) {
	python, err := exec.LookPath("python3")
	if err != nil {
		t.Skip("no python3 on this machine: the vectors are not made again")
	}
	out, err := exec.Command(python, "../testdata/protocol/make_vectors.py", "--check").CombinedOutput()
	if err != nil {
		t.Errorf("run python3 testdata/protocol/make_vectors.py and look at the difference: %v\n%s", err, out)
	}
}
