package main

import (
	"encoding/json"
	"os"
	"strings"
	"testing"
)

// street is a scenario that can be solved; the tests spoil parts of it.
const street = `{
  "scenario": {
    "segments": [
      {"name": "Mill Street", "length_m": 900, "lanes": 2,
       "relation": {"triangular": {"free_speed_km_per_h": 54, "capacity_veh_per_h": 1800, "wave_speed_km_per_h": 18}}}
    ],
    "entry": {"demand": [{"flow_veh_per_h": 600}], "excess": "EXCESS_DEMAND_WAITS"},
    "horizon_s": 600
  },
  "questions": [{"label": "states", "states": {"points": [{"place_m": 450, "time_s": 60}]}}]
}
`

// spoilt is the street with one text in place of others.
func spoilt(changes ...string) string { return strings.NewReplacer(changes...).Replace(street) }

// TestFilesThatCannotBeRead: each message says where, what is there and what is allowed.
func TestFilesThatCannotBeRead(t *testing.T) {
	for _, x := range []struct {
		name, text string
		want       string // all that is said, after the name of the file
	}{
		{"nothing", "", `: the file is empty; expected: {"scenario": {...}}`},
		{"white space", " \n\t", `: the file is empty; expected: {"scenario": {...}}`},
		{"a comma forgotten", spoilt(`900,`, `900`), `:4:47: not JSON: invalid character '"' after object key:value pair`},
		{"an end forgotten", strings.TrimSuffix(street, "}\n"), `:11:1: not JSON: unexpected end of JSON input`},
		{"a number that JSON has not", spoilt("900", "NaN"), `:4:43: not JSON: invalid character 'N' looking for beginning of value`},
		{"a comment", "// Mill Street\n" + street, `:1:1: not JSON: invalid character '/' looking for beginning of value`},
		{"more after the end", street + "}", `:12:1: not JSON: invalid character '}' after top-level value`},
		{"a list", "[]", `:1:1: the file is a list; expected: an object, {...}`},
		{"null", "null", `:1:1: the file is null; expected: an object, {...}`},
		{"a scenario without its frame", `{"horizon_s": 5}`, `:1:2: unknown field "horizon_s"; expected: scenario, questions`},
		{"a name misspelt", spoilt("length_m", "lenght_m"), `:4:31: unknown field "lenght_m"; expected: name, length_m, lanes, relation`},
		{"a value misspelt", spoilt("EXCESS_DEMAND_WAITS", "waits"), `:7:62: excess is "waits"; expected: EXCESS_DEMAND_WAITS, EXCESS_DEMAND_TURNS_AWAY`},
		{"a text for a number", spoilt("900", `"long"`), `:4:43: length_m is "long"; expected: a number`},
		{"a number out of all bounds", spoilt("900", "1e400"), `:4:43: length_m is 1e400; expected: a number of at most 1.8e308 in size`},
		{"a number for a text", spoilt(`"Mill Street"`, "7"), `:4:16: name is 7; expected: a text in quotation marks`},
		{"an object for a list", spoilt(`[{"flow_veh_per_h": 600}]`, `{"flow_veh_per_h": 600}`), `:7:25: demand is an object; expected: a list, [...]`},
		{"a list for an object", spoilt(`{"demand"`, `[{"demand"`, `WAITS"}`, `WAITS"}]`), `:7:14: entry is a list; expected: an object, {...}`},
		{"two relations", spoilt(`{"triangular": {`, `{"greenshields": {}, "triangular": {`), `:5:41: field triangular beside greenshields; expected: only one of triangular, trapezoidal, greenshields, piecewise_linear, quadratic_free`},
		{"a field twice", spoilt(`"lanes": 2`, `"lanes": 2, "lanes": 3`), `:4:60: duplicate field "lanes"`},
		{"no scenario", `{"questions": []}`, `: scenario is missing; expected: {"scenario": {...}}`},
	} {
		name := file(t, x.text)
		_, err := readScenario(name, nil)
		if err == nil || strings.TrimPrefix(err.Error(), name) != x.want {
			t.Errorf("%s: got\n%v\nwant\n%s%s", x.name, err, name, x.want)
		}
	}
}

// TestEverySlipIsToldAtOnce, in the order of the file.
func TestEverySlipIsToldAtOnce(t *testing.T) {
	name := file(t, spoilt("length_m", "length", `"lanes": 2`, `"lanes": true`, "EXCESS_DEMAND_WAITS", "WAITS", "horizon_s", "horizon", "place_m", "km"))
	_, err := readScenario(name, nil)
	if err == nil {
		t.Fatal("accepted")
	}
	lines := strings.Split(strings.ReplaceAll(err.Error(), name, ""), "\n")
	want := []string{":4:31: unknown field \"length\"", ":4:55: lanes is true", ":7:62: excess is \"WAITS\"", ":8:5: unknown field \"horizon\"", ":10:60: unknown field \"km\""}
	if len(lines) != len(want) {
		t.Fatalf("%d lines, want %d: %v", len(lines), len(want), err)
	}
	for i := range want {
		if !strings.HasPrefix(lines[i], want[i]) {
			t.Errorf("got %q, want %q", lines[i], want[i])
		}
	}
	many := file(t, `{`+strings.Repeat(`"x": 1, `, slipsListed+2)+`"y": 1}`)
	if _, err := readScenario(many, nil); err == nil || !strings.HasSuffix(err.Error(), "and 3 more") {
		t.Errorf("a file in another format: %v", err)
	}
}

// TestWhatTheServerSaysStandsAtItsLine, in the order of the file.
func TestWhatTheServerSaysStandsAtItsLine(t *testing.T) {
	name := file(t, spoilt("900", "-900", "600}]", "-600}]", `"lanes": 2`, `"lanes": 0`, `"time_s": 60`, `"time_s": 601`))
	_, err := command("", "solve", name)
	if err == nil {
		t.Fatal("accepted")
	}
	var got []string
	for line := range strings.SplitSeq(err.Error(), "\n") {
		line, _, _ = strings.Cut(strings.TrimPrefix(line, name), "; expected: ")
		got = append(got, line)
	}
	want := []string{
		":4:31: scenario.segments[0].length_m is -900", ":4:49: scenario.segments[0].lanes is 0",
		":7:27: scenario.entry.demand[0].flow_veh_per_h is -600", ":10:76: questions[0].states.points[0].time_s is 601",
	}
	if strings.Join(got, "\n") != strings.Join(want, "\n") {
		t.Errorf("got %q, want %q", got, want)
	}
}

// TestFilesThatAreAccepted: both spellings of names, a byte order mark, line ends of another system, values that are null.
func TestFilesThatAreAccepted(t *testing.T) {
	for name, text := range map[string]string{
		"as it is": street, "camel case": spoilt("length_m", "lengthM", "horizon_s", "horizonS"), "a byte order mark": "\uFEFF" + street,
		"line ends": strings.ReplaceAll(street, "\n", "\r\n"), "null": spoilt(`"lanes": 2`, `"lanes": null`, `"relation": {`, `"relation": {"greenshields": null, `),
		"a number as a text": spoilt("900", `"900"`), "a value by its number": spoilt(`"EXCESS_DEMAND_WAITS"`, "1"),
	} {
		if _, err := readScenario(file(t, text), nil); err != nil {
			t.Errorf("%s: %v", name, err)
		}
	}
}

func TestFieldsAreFoundWhereTheyStand(t *testing.T) {
	o, err := outlineOf([]byte(street))
	if err != nil {
		t.Fatal(err)
	}
	for path, stands := range map[string]string{
		"scenario.horizon_s":                   `"horizon_s"`,
		"scenario.segments[0]":                 `{"name"`,
		"scenario.segments[0].length_m":        `"length_m"`,
		"scenario.segments[0].relation.x.y":    `"relation"`,
		"scenario.segments[7].length_m":        `"segments"`,
		"questions[0].states.points[0].time_s": `"time_s"`,
		"scenario.exit.capacity[2]":            `"scenario"`,
		"nowhere":                              "{",
	} {
		if got := street[o.find(path):]; !strings.HasPrefix(got, stands) {
			t.Errorf("%s stands at %.20q, want %s", path, got, stands)
		}
	}
}

// FuzzOutline: whatever is JSON has an outline, and every value stands where its text begins.
func FuzzOutline(f *testing.F) {
	for _, seed := range []string{street, `[1, "a:b,[", {"": null}, true, []]`, `{"a": {"b": [-1e9, "\u0022"]}}`, "nul"} {
		f.Add(seed)
	}
	f.Fuzz(func(t *testing.T, text string) {
		o, err := outlineOf([]byte(text))
		if json.Valid([]byte(text)) != (err == nil) {
			t.Fatalf("%q: %v", text, err)
		}
		if err == nil {
			checkOutline(t, text, o)
		}
	})
}

func checkOutline(t *testing.T, text string, o *outline) {
	t.Helper()
	first := text[o.at]
	if o.kind != 0 && first != byte(o.kind) || o.kind == 0 && strings.IndexByte(`"-0123456789tfn`, first) < 0 {
		t.Errorf("%q: a value at %d, %q", text, o.at, text[o.at:])
	}
	for _, m := range o.members {
		if text[m.at] != '"' {
			t.Errorf("%q: a name at %d, %q", text, m.at, text[m.at:])
		}
		checkOutline(t, text, m.value)
	}
	for _, item := range o.items {
		checkOutline(t, text, item)
	}
}

// TestTheDemosAreSpeltRight reads them as any user's file.
func TestTheDemosAreSpeltRight(t *testing.T) {
	entries, err := os.ReadDir(demos)
	if err != nil || len(entries) == 0 {
		t.Fatalf("%d demos, %v", len(entries), err)
	}
	for _, e := range entries {
		if _, err := readScenario(demos+e.Name(), nil); err != nil {
			t.Error(err)
		}
	}
}
