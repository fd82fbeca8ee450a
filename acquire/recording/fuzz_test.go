package recording

import (
	"bytes"
	"errors"
	"reflect"
	"testing"
)

// FuzzRead reads anything: no panic, every error of a known kind, and what was
// read can be written and read again to the same.
func FuzzRead(f *testing.F) {
	file, _, seals := small(f)
	f.Add(file)
	for _, n := range []int{0, 10, seals[0], seals[1] + 5, seals[3]} {
		f.Add(file[:n])
	}
	f.Add(append(bytes.Clone(file[:seals[2]]), "seal 3 x\n"...))
	f.Fuzz(func(t *testing.T, data []byte) {
		rec, err := Read(bytes.NewReader(data))
		var corrupt *CorruptError
		if errors.As(err, &corrupt) && (rec == nil || rec.Outcome != Corrupt || corrupt.Offset > int64(len(data))) {
			t.Fatalf("%v with %+v", err, rec)
		}
		if rec == nil && err == nil {
			t.Fatal("no recording and no error")
		}
		if err != nil {
			return
		}
		var again memory
		write(t, &again, rec.Header, withoutWall(rec.Entries))
		back, err := Read(&again)
		if err != nil || !reflect.DeepEqual(withoutWall(back.Entries), withoutWall(rec.Entries)) {
			t.Fatalf("written again: %v", err)
		}
	})
}

// FuzzBlock puts any bytes into a block whose seal fits, so that the fuzzer
// reaches what lies behind the check sums.
func FuzzBlock(f *testing.F) {
	file, _, seals := small(f)
	f.Add([]byte(nil), file[seals[0]:seals[1]])
	f.Add([]byte("h continues x\nh device d\n"), []byte("w 0 - \\0a\ne - 12 mark \n"))
	f.Fuzz(func(t *testing.T, head, body []byte) {
		header := []byte(magic + version + "\n")
		block, err := appendHeader(nil, testHeader())
		if err != nil {
			t.Fatal(err)
		}
		if len(head) == 0 {
			header = block
		}
		var out memory
		w := &Writer{f: &out, header: testHeader(), every: 1, sum: newSum()}
		w.add(append(header, head...))
		if err := w.seal(); err != nil {
			t.Fatal(err)
		}
		w.add(body)
		if err := w.seal(); err != nil {
			t.Fatal(err)
		}
		rec, err := Read(&out)
		if err != nil {
			return
		}
		for i, e := range rec.Entries {
			line := appendEntry(nil, e)
			if !bytes.Contains(body, line) {
				t.Fatalf("entry %d is written %q, which is not in %q", i, line, body)
			}
		}
	})
}
