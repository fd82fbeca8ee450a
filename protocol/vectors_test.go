package protocol_test

import (
	"io"
	"math"
	"testing"

	"tautramp/protocol"
	"tautramp/protocol/protocoltest"
)

func scan(r io.Reader, yield func(protocol.Line)) error {
	s := protocol.NewScanner(r)
	for s.Scan() {
		yield(s.Line())
	}
	return s.Err()
}

func feed(r io.Reader, yield func(protocol.Line)) error {
	var a protocol.Assembler
	buf := make([]byte, 7)
	for {
		n, err := r.Read(buf)
		a.Feed(buf[:n], yield)
		if err == io.EOF {
			a.Flush(yield)
			return nil
		}
		if err != nil {
			return err
		}
	}
}

func own() protocoltest.Implementation {
	return protocoltest.Implementation{
		Decode:       scan,
		Encode:       func(r protocol.Record) ([]byte, error) { return protocol.Append(nil, r) },
		ReadCommand:  protocol.ParseCommand,
		WriteCommand: func(c protocol.Command) ([]byte, error) { return protocol.AppendCommand(nil, c) },
	}
}

func TestVectors(t *testing.T) { protocoltest.Run(t, own()) }

func TestVectorsThroughTheAssembler(t *testing.T) {
	protocoltest.Run(t, protocoltest.Implementation{Decode: feed})
}

// The expected values are computed with exact fractions by the generator from
// the definitions named there. One rounding of the scale, one of the factor,
// one of the product and one of the sum: 4 half units in the last place.
func TestValueVectors(t *testing.T) {
	v, err := protocoltest.Load()
	if err != nil {
		t.Fatal(err)
	}
	near := func(got, want float64) bool { return math.Abs(got-want) <= 4*0x1p-53*math.Abs(want) }
	for _, v := range v.Values {
		if got := protocol.ToSI(v.Chan, v.Count); !near(got, v.SI) {
			t.Errorf("%s: %.17g, want %.17g", v.Name, got, v.SI)
		}
		if got := protocol.LeastSI(v.Chan); !near(got, v.LeastSI) {
			t.Errorf("%s: least step %.17g, want %.17g", v.Name, got, v.LeastSI)
		}
	}
}
