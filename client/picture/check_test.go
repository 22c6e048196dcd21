package picture_test

import (
	"bytes"
	"errors"
	"math"
	"slices"
	"strings"
	"testing"

	"github.com/roadswell/roadswell/client/picture"
)

// small has a little of everything and no fault.
func small() picture.Diagram {
	return picture.Diagram{
		Title: "Small", Subtitle: "Everything once", Horizon: 300, Entry: 0, Exit: 1000,
		Density: picture.Field{
			Times: []float64{75, 225}, Places: []float64{250, 750},
			Values: [][]float64{{10, 20}, {30, 40}},
		},
		Fronts: []picture.Front{
			{picture.Shock, picture.Path{{0, 500}, {100, 100}}},
			{picture.Contact, picture.Path{{50, 500}, {100, 250}}},
			{picture.Edge, picture.Path{{60, 500}, {100, 400}}},
		},
		Tails:        []picture.Tail{{"Gate", picture.Path{{0, 500}, {100, 100}}}},
		Trajectories: []picture.Path{{{0, 0}, {80, 1000}}},
		Reds:         []picture.Red{{500, 0, 50}},
		Restrictions: []picture.Restriction{{800, 100, 200, true, "shut"}, {800, 200, 250, false, "one lane"}},
		Nodes:        []picture.Node{{"Gate", 500}, {"Works", 800}},
	}
}

var nan, inf = math.NaN(), math.Inf(1)

// faultyInputs spoils the small diagram in one way each; field is what the error must name.
var faultyInputs = []struct {
	field string
	spoil func(*picture.Diagram)
}{
	{"Horizon", func(d *picture.Diagram) { d.Horizon = nan }},
	{"Horizon", func(d *picture.Diagram) { d.Horizon = 0 }},
	{"Horizon", func(d *picture.Diagram) { d.Horizon = inf }},
	{"Entry", func(d *picture.Diagram) { d.Entry = nan }},
	{"Exit", func(d *picture.Diagram) { d.Exit = nan }},
	{"Exit", func(d *picture.Diagram) { d.Exit = d.Entry }},
	{"Density.Times", func(d *picture.Diagram) { d.Density.Times = nil; d.Density.Values = [][]float64{{}, {}} }},
	{"Density.Times[1]", func(d *picture.Diagram) { d.Density.Times[1] = nan }},
	{"Density.Times[1]", func(d *picture.Diagram) { d.Density.Times[1] = 75 }},
	{"Density.Places[0]", func(d *picture.Diagram) { d.Density.Places[0] = -inf }},
	{"Density.Places[1]", func(d *picture.Diagram) { d.Density.Places[1] = 0 }},
	{"Density.Values", func(d *picture.Diagram) { d.Density.Values = d.Density.Values[:1] }},
	{"Density.Values[1]", func(d *picture.Diagram) { d.Density.Values[1] = []float64{1, 2, 3} }},
	{"Density.Values[1][0]", func(d *picture.Diagram) { d.Density.Values[1][0] = nan }},
	{"Density.Values[0][1]", func(d *picture.Diagram) { d.Density.Values[0][1] = -1 }},
	{"Density.Maximum", func(d *picture.Diagram) { d.Density.Maximum = -1 }},
	{"Density.Maximum", func(d *picture.Diagram) { d.Density.Maximum = nan }},
	{"Fronts[1].Kind", func(d *picture.Diagram) { d.Fronts[1].Kind = 0 }},
	{"Fronts[1].Kind", func(d *picture.Diagram) { d.Fronts[1].Kind = 4 }},
	{"Fronts[2].Path[1].Time", func(d *picture.Diagram) { d.Fronts[2].Path[1].Time = nan }},
	{"Tails[0].Path[0].Place", func(d *picture.Diagram) { d.Tails[0].Path[0].Place = 2 * picture.Reach }},
	{"Trajectories[0][1].Place", func(d *picture.Diagram) { d.Trajectories[0][1].Place = inf }},
	{"Reds[0].Place", func(d *picture.Diagram) { d.Reds[0].Place = nan }},
	{"Reds[0].End", func(d *picture.Diagram) { d.Reds[0].End = -1 }},
	{"Restrictions[1].Start", func(d *picture.Diagram) { d.Restrictions[1].Start = nan }},
	{"Restrictions[0].End", func(d *picture.Diagram) { d.Restrictions[0].End = 99 }},
	{"Restrictions[0].Label", func(d *picture.Diagram) { d.Restrictions[0].Label = "two\nlines" }},
	{"Nodes[1].Place", func(d *picture.Diagram) { d.Nodes[1].Place = nan }},
	{"Nodes[0].Name", func(d *picture.Diagram) { d.Nodes[0].Name = "\x00" }},
	{"Tails[0].Node", func(d *picture.Diagram) { d.Tails[0].Node = "\x7f" }},
	{"Title", func(d *picture.Diagram) { d.Title = "\xff" }},
	{"Subtitle", func(d *picture.Diagram) { d.Subtitle = "\ufffe" }},
}

// TestEachFaultIsNamedAndNothingIsWritten goes through every rule.
func TestEachFaultIsNamedAndNothingIsWritten(t *testing.T) {
	for _, c := range faultyInputs {
		d := small()
		c.spoil(&d)
		var file bytes.Buffer
		for _, err := range []error{d.Check(), d.WriteSVG(&file), d.WritePNG(&file)} {
			var fault *picture.FieldError
			if !errors.As(err, &fault) || fault.Field != c.field {
				t.Errorf("%s: got %v", c.field, err)
			}
		}
		if file.Len() > 0 {
			t.Errorf("%s: %d bytes were written", c.field, file.Len())
		}
	}
}

// TestSoundInputPasses keeps the table above honest.
func TestSoundInputPasses(t *testing.T) {
	if err := small().Check(); err != nil {
		t.Error(err)
	}
}

// TestAllFaultsAtOnce wants each fault of one diagram in one error.
func TestAllFaultsAtOnce(t *testing.T) {
	d := small()
	d.Horizon, d.Nodes[0].Place, d.Reds[0].End = nan, inf, -5
	lines := strings.Split(d.Check().Error(), "\n")
	want := []string{
		"picture: Horizon must be a finite number of size at most 1e9, got NaN",
		"picture: Reds[0].End must not be before Start, got -5",
		"picture: Nodes[0].Place must be a finite number of size at most 1e9, got +Inf",
	}
	if !slices.Equal(lines, want) {
		t.Errorf("got %q", lines)
	}
}

// TestEndlessFaultsAreCutShort keeps a field of nothing but NaN from flooding the caller.
func TestEndlessFaultsAreCutShort(t *testing.T) {
	d := small()
	d.Density.Times, d.Density.Places = d.Cells(100, 100)
	d.Density.Values = slices.Repeat([][]float64{slices.Repeat([]float64{nan}, 100)}, 100)
	if n := strings.Count(d.Check().Error(), "\n") + 1; n != 20 {
		t.Errorf("%d faults, want 20", n)
	}
}
