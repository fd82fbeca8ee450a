package mill

import "math"

// Document is another TOML text of this program, such as a bench plan, read
// key by key and with the same faults as a mill.toml. Take every key, then
// Close: a key that nobody took is refused.
type Document struct{ t *table }

// ReadDocument opens a text; what names its kind for a message. The error is a
// *ProfileError.
func ReadDocument(text []byte, what string) (*Document, error) {
	t, err := readTable(text, what)
	if err != nil {
		return nil, err
	}
	return &Document{t}, nil
}

// Has tells whether the key is there.
func (d *Document) Has(key string) bool { return d.t.has(key) }

// Text takes a text; "" when it is absent.
func (d *Document) Text(key string) string { return d.t.text(key) }

// NeedText takes a text that must be there.
func (d *Document) NeedText(key, hint string) string { return d.t.need(key, hint) }

// Word takes one of the words; "" when it is absent.
func (d *Document) Word(key string, words ...string) string { return oneOf(d.t, key, words...) }

// Number takes a bare number within the limits; 0 when it is absent.
func (d *Document) Number(key string, low, high float64) float64 { return d.t.number(key, low, high) }

// Whole takes a whole number within the limits; 0 when it is absent.
func (d *Document) Whole(key string, low, high int) int { return d.t.whole(key, low, high) }

// Signed takes a quantity of any sign; the zero value when it is absent.
func (d *Document) Signed(key string, dims ...Dim) Quantity { return d.t.signed(key, dims...) }

// SignedList takes a list of quantities of any sign.
func (d *Document) SignedList(key string, dims ...Dim) []Quantity {
	list := d.items(key)
	out := make([]Quantity, 0, len(list))
	for _, v := range list {
		out = append(out, d.t.parse(key, v, math.Inf(-1), dims...))
	}
	return out
}

// Words takes a list, each of them one of the words.
func (d *Document) Words(key string, words ...string) []string {
	var out []string
	for _, v := range d.items(key) {
		one := &table{faults: d.t.faults, path: d.t.path, values: map[string]any{key: v}}
		out = append(out, oneOf(one, key, words...))
	}
	return out
}

func (d *Document) items(key string) []any {
	v, ok := d.t.take(key)
	if !ok {
		return nil
	}
	list, ok := v.([]any)
	if !ok {
		d.t.faults.add(d.t.at(key), `write a list, such as ["0 psi", "150 psi"]`, "%s is not a list", kind(v))
	}
	return list
}

// Refuse notes a fault of a key that was taken.
func (d *Document) Refuse(key, hint, problem string, args ...any) {
	d.t.faults.add(d.t.at(key), hint, problem, args...)
}

// Close refuses the keys that nobody took. The error joins one *ProfileError
// for each fault, in line order.
func (d *Document) Close() error {
	d.t.rest()
	return d.t.faults.err()
}
