package picture

import (
	"errors"
	"fmt"
	"math"
	"strconv"
	"unicode"
	"unicode/utf8"
)

// Reach is the largest size that any time (s), place (m) or density (veh/km) may have. It
// is far beyond every road and keeps the arithmetic of the drawing from overflowing.
const Reach = 1e9

const (
	// leastExtent is the shortest axis that can be drawn, in s or m: one part in 10^12 of
	// Reach, which is still thousands of times the spacing of numbers near Reach.
	leastExtent = 1e-3
	// mostFaults ends the check, so that a field full of NaN gives a readable answer.
	mostFaults = 20
)

// FieldError names one fault of a [Diagram].
type FieldError struct {
	Field string // such as "Fronts[3].Path[0].Time"
	Rule  string // what must hold, such as "must be a finite number"
	Value string // what was given
}

// Error reads "picture: field rule, got value".
func (e *FieldError) Error() string {
	return fmt.Sprintf("picture: %s %s, got %s", e.Field, e.Rule, e.Value)
}

// Check returns nil when d can be drawn, and otherwise one [FieldError] for each fault,
// joined; after twenty faults it stops looking. Use [errors.As] to get at the first.
func (d Diagram) Check() error {
	var f faults
	d.checkExtent(&f)
	d.Density.check(&f)
	d.checkLines(&f)
	d.checkBars(&f)
	d.checkTexts(&f)
	return errors.Join(f...)
}

func (d Diagram) checkExtent(f *faults) {
	f.number("Horizon", d.Horizon)
	f.number("Entry", d.Entry)
	f.number("Exit", d.Exit)
	f.refuseIf(d.Horizon < leastExtent, "Horizon", "must be at least 0.001 s", d.Horizon)
	f.refuseIf(d.Exit-d.Entry < leastExtent, "Exit", "must be at least 0.001 m beyond Entry", d.Exit)
}

func (g Field) check(f *faults) {
	f.rising("Density.Times", g.Times)
	f.rising("Density.Places", g.Places)
	f.notNegative("Density.Maximum", g.Maximum)
	f.length("Density.Values", "one row for each of Density.Places", len(g.Values), len(g.Places))
	empty := (len(g.Times) == 0) != (len(g.Places) == 0)
	f.refuseIf(empty, "Density.Times", "must be empty only when Density.Places is", len(g.Times))
	for i, row := range g.Values {
		name := fmt.Sprintf("Density.Values[%d]", i)
		f.length(name, "one value for each of Density.Times", len(row), len(g.Times))
		g.checkRow(f, name, row)
	}
}

func (g Field) checkRow(f *faults, name string, row []float64) {
	for j, v := range row {
		if !(v >= 0 && v <= Reach) && !f.full() {
			f.notNegative(fmt.Sprintf("%s[%d]", name, j), v)
		}
	}
}

func (d Diagram) checkLines(f *faults) {
	for i, front := range d.Fronts {
		known := front.Kind >= Shock && front.Kind <= Edge
		f.refuseIf(!known, fmt.Sprintf("Fronts[%d].Kind", i), "must be Shock, Contact or Edge", int(front.Kind))
		f.path("Fronts", ".Path", i, front.Path)
	}
	for i, tail := range d.Tails {
		f.path("Tails", ".Path", i, tail.Path)
	}
	for i, path := range d.Trajectories {
		f.path("Trajectories", "", i, path)
	}
}

func (d Diagram) checkBars(f *faults) {
	for i, r := range d.Reds {
		f.period(fmt.Sprintf("Reds[%d]", i), r.Place, r.Start, r.End)
	}
	for i, r := range d.Restrictions {
		f.period(fmt.Sprintf("Restrictions[%d]", i), r.Place, r.Start, r.End)
	}
	for i, n := range d.Nodes {
		f.number(fmt.Sprintf("Nodes[%d].Place", i), n.Place)
	}
}

func (d Diagram) checkTexts(f *faults) {
	f.text("Title", d.Title)
	f.text("Subtitle", d.Subtitle)
	for i, t := range d.Tails {
		f.text(fmt.Sprintf("Tails[%d].Node", i), t.Node)
	}
	for i, r := range d.Restrictions {
		f.text(fmt.Sprintf("Restrictions[%d].Label", i), r.Label)
	}
	for i, n := range d.Nodes {
		f.text(fmt.Sprintf("Nodes[%d].Name", i), n.Name)
	}
}

// faults collects what is wrong, up to mostFaults.
type faults []error

func (f *faults) full() bool { return len(*f) >= mostFaults }

func (f *faults) refuseIf(wrong bool, field, rule string, value any) {
	if wrong && !f.full() {
		*f = append(*f, &FieldError{Field: field, Rule: rule, Value: fmt.Sprint(value)})
	}
}

func (f *faults) number(field string, v float64) {
	f.refuseIf(!(math.Abs(v) <= Reach), field, "must be a finite number of size at most 1e9", v)
}

func (f *faults) notNegative(field string, v float64) {
	f.refuseIf(!(v >= 0 && v <= Reach), field, "must be a finite number from 0 to 1e9", v)
}

func (f *faults) length(field, rule string, got, want int) {
	f.refuseIf(got != want, field, fmt.Sprintf("must have %s (%d)", rule, want), got)
}

func (f *faults) rising(field string, list []float64) {
	for i, v := range list {
		f.number(fmt.Sprintf("%s[%d]", field, i), v)
		late := i > 0 && v <= list[i-1]
		f.refuseIf(late, fmt.Sprintf("%s[%d]", field, i), "must be greater than the one before", v)
	}
}

func (f *faults) path(list, member string, i int, path Path) {
	for j, p := range path {
		if math.Abs(p.Time) <= Reach && math.Abs(p.Place) <= Reach {
			continue
		}
		name := fmt.Sprintf("%s[%d]%s[%d]", list, i, member, j)
		f.number(name+".Time", p.Time)
		f.number(name+".Place", p.Place)
	}
}

func (f *faults) period(field string, place, start, end float64) {
	f.number(field+".Place", place)
	f.number(field+".Start", start)
	f.number(field+".End", end)
	f.refuseIf(end < start, field+".End", "must not be before Start", end)
}

func (f *faults) text(field, s string) {
	f.refuseIf(!printable(s), field, "must be UTF-8 text without control characters", strconv.Quote(s))
}

// printable accepts what can stand in one line of an XML document.
func printable(s string) bool {
	for _, r := range s {
		if unicode.IsControl(r) || r == '\u2028' || r == '\u2029' || r == '\ufffe' || r == '\uffff' {
			return false
		}
	}
	return utf8.ValidString(s)
}
