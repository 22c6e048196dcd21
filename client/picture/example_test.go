package picture_test

import (
	"bytes"
	"errors"
	"fmt"
	"strings"

	"github.com/roadswell/roadswell/client/picture"
)

// A red of 45 s at a stop line, the queue behind it and one vehicle that has to wait.
func ExampleDiagram_WriteSVG() {
	d := picture.Diagram{
		Title:   "Stop line at Mill Street",
		Horizon: 120, Entry: 0, Exit: 500, // s, m, m
		Reds:  []picture.Red{{Place: 400, Start: 10, End: 55}},
		Nodes: []picture.Node{{Name: "Mill Street", Place: 400}},
		Tails: []picture.Tail{{Node: "Mill Street", Path: picture.Path{
			{Time: 10, Place: 400}, {Time: 75, Place: 290}, {Time: 90, Place: 400},
		}}},
		Trajectories: []picture.Path{{
			{Time: 0, Place: 100}, {Time: 19, Place: 385}, {Time: 58, Place: 385}, {Time: 66, Place: 500},
		}},
	}
	d.Density.Times, d.Density.Places = d.Cells(240, 100)
	for range d.Density.Places {
		d.Density.Values = append(d.Density.Values, make([]float64, 240)) // from the solver
	}
	var file bytes.Buffer
	if err := d.WriteSVG(&file); err != nil {
		fmt.Println(err)
		return
	}
	for _, words := range []string{"Red at stop line", "Tail of queue at Mill Street", "Shock"} {
		fmt.Printf("%s: %t\n", words, strings.Contains(file.String(), ">"+words+"<"))
	}
	// Output:
	// Red at stop line: true
	// Tail of queue at Mill Street: true
	// Shock: false
}

// What cannot be drawn truthfully is refused, fault by fault.
func ExampleDiagram_Check() {
	d := picture.Diagram{
		Horizon: 120, Entry: 500, Exit: 0,
		Reds: []picture.Red{{Place: 400, Start: 55, End: 10}},
	}
	err := d.Check()
	fmt.Println(err)
	var fault *picture.FieldError
	fmt.Println(errors.As(err, &fault), fault.Field)
	// Output:
	// picture: Exit must be at least 0.001 m beyond Entry, got 0
	// picture: Reds[0].End must not be before Start, got 10
	// true Exit
}
