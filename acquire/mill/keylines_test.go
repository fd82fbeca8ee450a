package mill

import "testing"

func TestKeyLinesSeeThroughTOML(t *testing.T) {
	const text = `top = 1 # line 1
"quoted key" = '[not.a.table]'
dotted . key = "a # b" # c

[table]
long = """
[no.table]
fake = 1 \""" still
"""""
literal = '''
fake = 2'''
list = [ # a comment with ]
  1,
  "]",
]
inline = { a = 1, b = { c = 2 } }

[[entry]]
x = 1
[entry.sub]
y = 2
[[entry]]
x = 3
[[entry.deep]]
z = 4
[[entry.deep]]
z = 5
[table.under]
w = 6`
	lines := keyLines(text)
	for path, want := range map[string]int{
		"top":              1,
		"quoted key":       2,
		"dotted.key":       3,
		"table":            5,
		"table.long":       6,
		"table.literal":    10,
		"table.list":       12,
		"table.inline":     16,
		"table.inline.b.c": 16, // that of the key around it
		"entry":            18,
		"entry.0":          18,
		"entry.0.x":        19,
		"entry.0.sub":      20,
		"entry.0.sub.y":    21,
		"entry.1":          22,
		"entry.1.x":        23,
		"entry.1.deep.0.z": 25,
		"entry.1.deep.1.z": 27,
		"entry.1.missing":  22,
		"table.under":      28,
		"table.under.w":    29,
		"fake":             0,
		"table.fake":       5, // nowhere: the table's
		"nowhere.at.all":   0,
		"":                 0,
	} {
		if got := lineOf(lines, path); got != want {
			t.Errorf("%s: line %d, want %d", path, got, want)
		}
	}
}

// The scan runs only on what the decoder accepted, but must end on anything.
func FuzzKeyLines(f *testing.F) {
	for _, s := range []string{good, "[", "[[", "a", "a=", "a='", "a=\"\\", "a=[{", "'", "=", "\"\"\"", "[[a]]\n[a.b", "a.b.\n"} {
		f.Add(s)
	}
	f.Fuzz(func(_ *testing.T, text string) { keyLines(text) })
}
