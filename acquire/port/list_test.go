package port

import (
	"errors"
	"testing"
)

func TestFindFollowsAUSBBoard(t *testing.T) {
	board := Info{Path: "/dev/ttyACM0", Vendor: "1A2B", Model: "0001", Serial: "77"}
	other := Info{Path: "/dev/ttyACM1", Vendor: "1A2B", Model: "0001", Serial: "78"}
	moved := Info{Path: "/dev/ttyACM2", Vendor: "1a2b", Model: "0001", Serial: "77"}
	twin := Info{Path: "/dev/ttyACM3", Vendor: "1A2B", Model: "0001", Serial: "77"}
	for _, c := range []struct {
		name  string
		all   []Info
		board Info
		want  string
		class error
	}{
		{"under another name", []Info{{Path: "/dev/ttyS0"}, other, moved}, board, moved.Path, nil},
		{"not back yet", []Info{other}, board, "", ErrNotFound},
		{"two alike", []Info{moved, twin}, board, "", ErrBadName},
		{"no USB board", []Info{{Path: "/dev/ttyS0"}}, Info{Path: "/dev/ttyS0"}, "", ErrBadName},
	} {
		t.Run(c.name, func(t *testing.T) {
			got, err := find(c.all, c.board)
			if got != c.want || !errors.Is(err, c.class) {
				t.Errorf("got %q, %v", got, err)
			}
		})
	}
}

func TestListGivesPathsOnly(t *testing.T) {
	all, err := List()
	if err != nil {
		t.Fatal(err)
	}
	for _, i := range all {
		if i.Path == "" {
			t.Errorf("a port without a path: %+v", i)
		}
	}
}
