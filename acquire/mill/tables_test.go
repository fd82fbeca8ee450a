package mill

import (
	"encoding/json"
	"errors"
	"reflect"
	"strings"
	"testing"
)

// overJSON is what a browser does to the tables.
func overJSON(t *testing.T, in Tables) Tables {
	t.Helper()
	text, err := json.Marshal(in)
	if err != nil {
		t.Fatal(err)
	}
	var out Tables
	if err := json.Unmarshal(text, &out); err != nil {
		t.Fatal(err)
	}
	return out
}

func TestTablesGiveTheSameProfileAgain(t *testing.T) {
	tables, err := ReadTables(Example())
	if err != nil {
		t.Fatal(err)
	}
	want, err := Parse(Example())
	if err != nil {
		t.Fatal(err)
	}
	for name, in := range map[string]Tables{"as read": tables, "through a browser": overJSON(t, tables)} {
		text, _ := in.Text()
		got, err := Parse(text)
		if err != nil {
			t.Fatalf("%s: %v\n%s", name, err, text)
		}
		if !reflect.DeepEqual(got, want) {
			t.Errorf("%s: another profile\n%s", name, text)
		}
	}
}

func TestEachLineOfTheTextHasItsPath(t *testing.T) {
	tables, err := ReadTables(Example())
	if err != nil {
		t.Fatal(err)
	}
	tables = overJSON(t, tables)
	tables["band"].([]any)[1].(map[string]any)["net_width"] = "44 parsec"
	text, paths := tables.Text()
	_, err = Parse(text)
	var bad *ProfileError
	if !errors.As(err, &bad) || paths[bad.Line] != "band.1.net_width" {
		t.Errorf("%v is at %q", err, paths[bad.Line])
	}
}

func TestTextOfAFormCannotBecomeAnotherKey(t *testing.T) {
	evil := "x\"\nsetting_limit = \"9 psi\" # \\ \u2028"
	text, _ := Tables{"mill": map[string]any{"name": evil, "a]b": 1.5}}.Text()
	again, err := ReadTables(text)
	if err != nil {
		t.Fatalf("%v\n%s", err, text)
	}
	if m := again["mill"].(map[string]any); m["name"] != evil || len(m) != 2 {
		t.Errorf("%q", m)
	}
	if strings.Count(string(text), "\n") != 5 {
		t.Errorf("%s", text)
	}
}
