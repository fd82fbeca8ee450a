package recording

import (
	"bytes"
	"errors"
	"strings"
	"testing"
)

// sealedFile is a file with these header lines and one block, every check sum
// fitting.
func sealedFile(t *testing.T, head, body string) []byte {
	t.Helper()
	var f memory
	w := &Writer{f: &f, header: testHeader(), every: 1, sum: newSum()}
	w.add([]byte(head))
	err := w.seal()
	w.add([]byte(body))
	if err := errors.Join(err, w.seal()); err != nil {
		t.Fatal(err)
	}
	return f.Bytes()
}

func goodHead(t *testing.T) string {
	t.Helper()
	h := testHeader()
	h.Profile = []byte(tinyProfile)
	head, err := appendHeader(nil, h)
	if err != nil {
		t.Fatal(err)
	}
	return string(head)
}

// A seal over a line that no writer of ours writes does not make it good.
func TestSealedLinesAreReadStrictly(t *testing.T) {
	for name, body := range map[string]string{
		"no tag":                       "x 0 1 val\n",
		"a header's tag":               "h factor 9\n",
		"an empty line":                "\n",
		"too few fields":               "w 0 1\n",
		"a device that is not there":   "w 2 1 val\n",
		"no device":                    "w - 1 val\n",
		"a device of two digits":       "w 00 1 val\n",
		"a time with a leading zero":   "w 0 01 val\n",
		"a time below zero":            "w 0 -1 val\n",
		"a time beyond 63 bits":        "w 0 9223372036854775808 val\n",
		"a time beyond 64 bits":        "w 0 99999999999999999999 val\n",
		"a byte that is not escaped":   "w 0 1 va\x01l\n",
		"a byte above ASCII":           "w 0 1 \xe9\n",
		"an escape that is not needed": "w 0 1 v\\61l\n",
		"an escape in upper case":      "w 0 1 \\0A\n",
		"half an escape":               "w 0 1 val\\0\n",
		"an event without a text":      "e 0 1 mark\n",
		"an event without a kind":      "e 0 1  x\n",
		"a kind in capitals":           "e 0 1 Mark x\n",
		"a CR before the LF":           "w 0 1 val\r\n",
	} {
		rec, err := Read(bytes.NewReader(sealedFile(t, goodHead(t), "w 0 1 good\n"+body)))
		var corrupt *CorruptError
		if !errors.As(err, &corrupt) || rec.Outcome != Corrupt || len(rec.Entries) != 0 || rec.Header.Band != "QW-6" {
			t.Errorf("%s: %v, %+v; want a corrupt file with its header", name, err, rec)
		}
	}
	rec, err := Read(bytes.NewReader(sealedFile(t, goodHead(t), "w 0 9223372036854775807 good\ne - - later-kind \n")))
	if err != nil || len(rec.Entries) != 2 {
		t.Errorf("%v, %+v; want both entries", err, rec)
	}
}

func TestHeadersAreReadStrictly(t *testing.T) {
	for name, change := range map[string]func(string) string{
		"said twice":           func(h string) string { return h + "h band QW-6\n" },
		"not said":             func(h string) string { return strings.Replace(h, "h band QW-6\n", "", 1) },
		"no plan":              func(h string) string { return strings.Replace(h, "h ramps 3\n", "", 1) },
		"a plan of words":      func(h string) string { return strings.Replace(h, "h ramps 3", "h ramps +3", 1) },
		"a factor of words":    func(h string) string { return strings.Replace(h, "h factor 1", "h factor one", 1) },
		"a factor of nothing":  func(h string) string { return strings.Replace(h, "h factor 1", "h factor NaN", 1) },
		"a start of words":     func(h string) string { return strings.Replace(h, "h started 2026", "h started today", 1) },
		"another source":       func(h string) string { return strings.Replace(h, "h source live", "h source heard", 1) },
		"no profile":           func(h string) string { return h[:strings.Index(h, "p [mill]")] },
		"an entry":             func(h string) string { return h + "w 0 1 val\n" },
		"a key without value":  func(h string) string { return h + "h later\n" },
		"a key in capitals":    func(h string) string { return h + "h Later x\n" },
		"a bad escape":         func(h string) string { return h + "h later \\zz\n" },
		"a bad profile escape": func(h string) string { return h + "p \\zz\n" },
	} {
		rec, err := Read(bytes.NewReader(sealedFile(t, change(goodHead(t)), "")))
		var corrupt *CorruptError
		if !errors.As(err, &corrupt) || corrupt.Offset != 0 || rec.Outcome != Corrupt || rec.Header.Program != "" {
			t.Errorf("%s: %v, %+v; want a corrupt file without a header", name, err, rec)
		}
	}
	later := strings.Replace(goodHead(t), "h band", "h later-key x\nh band", 1)
	if rec, err := Read(bytes.NewReader(sealedFile(t, later, ""))); err != nil || rec.Header.Band != "QW-6" {
		t.Errorf("a key of later: %v, %+v; want it passed over", err, rec)
	}
}

// An end record counts what is before it, directly after a seal.
func TestEndRecordsAreReadStrictly(t *testing.T) {
	end := func(before, record string) []byte {
		var f memory
		w := &Writer{f: &f, header: testHeader(), every: 1, sum: newSum()}
		w.add([]byte(goodHead(t)))
		err := w.seal()
		w.add([]byte("w 0 1 val\n"))
		err = errors.Join(err, w.seal())
		w.add([]byte(before + record))
		w.addSum()
		if err := errors.Join(err, w.flush()); err != nil {
			t.Fatal(err)
		}
		return f.Bytes()
	}
	if rec, err := Read(bytes.NewReader(end("", "end 2 1 "))); err != nil || rec.Outcome != Complete {
		t.Errorf("a good one: %v, %+v", err, rec)
	}
	for name, file := range map[string][]byte{
		"a block too few":        end("", "end 1 1 "),
		"an entry too many":      end("", "end 2 2 "),
		"no counts":              end("", "end "),
		"after an unsealed line": end("w 0 2 val\n", "end 2 1 "),
		"a seal out of number":   end("w 0 2 val\n", "seal 3 "),
	} {
		rec, err := Read(bytes.NewReader(file))
		var corrupt *CorruptError
		if !errors.As(err, &corrupt) || rec.Outcome != Corrupt || len(rec.Entries) != 1 {
			t.Errorf("%s: %v, %+v; want a corrupt file with one entry", name, err, rec)
		}
	}
}
