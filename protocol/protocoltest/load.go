package protocoltest

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"

	"tautramp/protocol"
)

// Vectors are the files of testdata/protocol, read.
type Vectors struct {
	Decode   []DecodeVector
	Encode   []EncodeVector
	Commands []CommandVector
	Values   []ValueVector
}

// DecodeVector is a device stream and the lines that must come of it.
type DecodeVector struct {
	Name    string
	Clauses []string // clauses of SPEC.md that it shows at work
	Stream  []byte
	Lines   []DecodeLine
}

// DecodeLine is one expected line: a record, or a class and its clause.
type DecodeLine struct {
	Number int
	Offset int64
	Record protocol.Record // nil: refused
	Class  protocol.Class
	Clause string
}

// EncodeVector is a record and its bytes, or the class of its refusal.
type EncodeVector struct {
	Name    string
	Clauses []string
	Record  protocol.Record
	Line    []byte
	Class   protocol.Class // "" when it can be written
}

// CommandVector is a command and its bytes; Way is "both", "read" or "write".
// Where Class is set, Command holds the answer's verb and token (reading) or
// the fields that cannot be written.
type CommandVector struct {
	Name    string
	Clauses []string
	Way     string
	Command protocol.Command
	Line    []byte
	Class   protocol.Class
	Clause  string
}

// ValueVector is a channel, a count and its value.
type ValueVector struct {
	Name    string
	Clauses []string
	Chan    protocol.Chan
	Count   int32
	SI      float64 // SPEC 6.3
	LeastSI float64 // one least step
}

// Load reads testdata/protocol of the module that the working directory lies
// in, as it does in any test.
func Load() (*Vectors, error) {
	dir, err := os.Getwd()
	if err != nil {
		return nil, err
	}
	for {
		_, err := os.Stat(filepath.Join(dir, "go.mod"))
		if err == nil {
			return LoadFS(os.DirFS(filepath.Join(dir, "testdata", "protocol")))
		}
		if !errors.Is(err, fs.ErrNotExist) || filepath.Dir(dir) == dir {
			return nil, fmt.Errorf("no module above the working directory: %w", err)
		}
		dir = filepath.Dir(dir)
	}
}

// LoadFS reads the four files from a directory.
func LoadFS(dir fs.FS) (*Vectors, error) {
	v := new(Vectors)
	return v, errors.Join(
		load(dir, "decode.json", &v.Decode, decodeRow.vector),
		load(dir, "encode.json", &v.Encode, encodeRow.vector),
		load(dir, "commands.json", &v.Commands, commandRow.vector),
		load(dir, "values.json", &v.Values, valueRow.vector),
	)
}

func load[Row, Vector any](dir fs.FS, name string, into *[]Vector, convert func(Row) (Vector, error)) error {
	data, err := fs.ReadFile(dir, name)
	if err != nil {
		return err
	}
	strict := json.NewDecoder(bytes.NewReader(data))
	strict.DisallowUnknownFields()
	var rows []Row
	if err := strict.Decode(&rows); err != nil {
		return fmt.Errorf("%s: %w", name, err)
	}
	if len(rows) == 0 {
		return fmt.Errorf("%s: no vectors", name)
	}
	for i, row := range rows {
		vector, err := convert(row)
		if err != nil {
			return fmt.Errorf("%s: vector %d: %w", name, i+1, err)
		}
		*into = append(*into, vector)
	}
	return nil
}

// octets is a string of the files: each character is one byte.
type octets []byte

func (o *octets) UnmarshalJSON(data []byte) error {
	var s string
	if err := json.Unmarshal(data, &s); err != nil {
		return err
	}
	for _, r := range s {
		if r > 0xff {
			return fmt.Errorf("character %q is not one byte", r)
		}
		*o = append(*o, byte(r))
	}
	return nil
}
