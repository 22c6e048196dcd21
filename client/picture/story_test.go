package picture_test

import (
	"flag"
	"io"
	"os"
	"path/filepath"
	"testing"

	"github.com/roadswell/roadswell/client/picture"
)

var out = flag.String("out", "", "folder to leave the pictures of the stories in, to be looked at")

// stories are the pictures that the tests of this package draw.
var stories = map[string]func() picture.Diagram{
	"expressway": expressway,
	"arterial":   arterial,
	"fans":       fans,
	"crowded":    crowded,
	"bare":       func() picture.Diagram { return picture.Diagram{Horizon: 60, Exit: 200} },
}

// expressway is 10 km with a lane drop at 8.2 km and an incident at 5.5 km, over two hours.
func expressway() picture.Diagram {
	const horizon, hour = 7200.0, 3600.0
	r := &road{
		free: 100 / 3.6, wave: 18 / 3.6, jam: []float64{0.39, 0.39, 0.26},
		node:   []float64{0, 5500, 8200, 10000},
		demand: steps(horizon, []float64{0, 1200, 3000, 4500}, []float64{3300, 4350, 3500, 2600}),
		capacity: func(node int, t float64) float64 {
			switch {
			case node == 1 && t >= 1800 && t < 2100:
				return 0
			case node == 1 && t >= 2100 && t < 3300:
				return 2600 / hour
			case node >= 2:
				return 3966 / hour
			}
			return 5949 / hour
		},
	}
	r.solve(horizon)
	d := r.diagram(horizon, 390, 600, 300)
	d.Title = "Commuter expressway, evening peak with an incident"
	d.Subtitle = "Demand 2 600 to 4 350 veh/h; lane drop 3 to 2; lanes reopened in stages from 30 to 55 min."
	d.Restrictions = []picture.Restriction{
		{Place: 5500, Start: 1800, End: 2100, Closed: true, Label: "all lanes closed"},
		{Place: 5500, Start: 2100, End: 3300, Label: "one lane open"},
	}
	d.Nodes = []picture.Node{{"Entry", 0}, {"Incident", 5500}, {"Lane drop 3 → 2", 8200}, {"Exit", 10000}}
	for link, name := range []string{"incident", "lane drop"} {
		for _, p := range r.tails(link, horizon, 15) {
			d.Tails = append(d.Tails, picture.Tail{Node: name, Path: p})
			d.Fronts = append(d.Fronts, picture.Front{Kind: picture.Shock, Path: p})
		}
	}
	for _, t := range []float64{2100, 3300} {
		d.Fronts = append(d.Fronts, picture.Front{Kind: picture.Contact, Path: r.waveFrom(1, t)})
	}
	for _, t := range []float64{1200, 3000, 4500} {
		d.Fronts = append(d.Fronts, picture.Front{Kind: picture.Contact, Path: picture.Path{{t, 0}, {t + 100, 100 * r.free}}})
	}
	d.Trajectories = r.vehicles(24, horizon, 4)
	return d
}

// arterial is 1.2 km with four signals, ten cycles of 90 s.
func arterial() picture.Diagram {
	const horizon, hour, cycle, green = 900.0, 3600.0, 90.0, 42.0
	offset := []float64{0, 18, 41, 55}
	isGreen := func(i int, t float64) bool {
		for t -= offset[i]; t < 0; t += cycle {
		}
		for ; t >= cycle; t -= cycle {
		}
		return t < green
	}
	r := &road{
		free: 50 / 3.6, wave: 20 / 3.6, jam: []float64{0.28, 0.28, 0.28, 0.28, 0.28},
		node:   []float64{0, 260, 520, 800, 1050, 1200},
		demand: steps(horizon, []float64{0, 180, 540}, []float64{1400, 1900, 1300}),
		capacity: func(node int, t float64) float64 {
			if node >= 1 && node <= 4 && !isGreen(node-1, t) {
				return 0
			}
			return 3800 / hour
		},
	}
	r.solve(horizon)
	d := r.diagram(horizon, 280, 900, 400)
	d.Title = "Four-signal arterial, ten cycles of 90 s"
	d.Subtitle = "Two lanes, 50 km/h, effective green 42 s; demand 1 300 to 1 900 veh/h."
	d.Nodes = []picture.Node{{"Mill Street", 260}, {"Station Road", 520}, {"Ferry Lane", 800}, {"North Bridge", 1050}}
	for i := range offset {
		for t := offset[i] + green - cycle; t < horizon; t += cycle {
			d.Reds = append(d.Reds, picture.Red{Place: r.node[i+1], Start: t, End: t + cycle - green})
			if start := t + cycle - green; start > 0 && start < horizon {
				d.Fronts = append(d.Fronts, picture.Front{Kind: picture.Contact, Path: r.waveFrom(i+1, start)})
			}
		}
		for _, p := range r.tails(i, horizon, 1) {
			d.Tails = append(d.Tails, picture.Tail{Node: d.Nodes[i].Name, Path: p})
			d.Fronts = append(d.Fronts, picture.Front{Kind: picture.Shock, Path: p})
		}
	}
	d.Trajectories = r.vehicles(40, horizon, 1)
	return d
}

// fans is a short Greenshields road whose reds send out fans of many edges.
func fans() picture.Diagram {
	d := picture.Diagram{
		Title:    "Fans behind three greens",
		Subtitle: "Edges of a polygonal relation with 90 pieces",
		Horizon:  240, Entry: -600, Exit: 400,
		Nodes: []picture.Node{{"Stop line", 0}},
	}
	d.Density.Times, d.Density.Places = d.Cells(480, 240)
	const free, jam = 14.0, 120.0
	for _, x := range d.Density.Places {
		row := make([]float64, len(d.Density.Times))
		for j, t := range d.Density.Times {
			row[j] = 20
			for _, start := range []float64{40, 120, 200} {
				if c := x / (t - start); t > start && c > -free && c < free {
					row[j] = jam / 2 * (1 - c/free)
				}
			}
		}
		d.Density.Values = append(d.Density.Values, row)
	}
	for _, start := range []float64{40, 120, 200} {
		d.Reds = append(d.Reds, picture.Red{Place: 0, Start: start - 30, End: start})
		for i := range 90 {
			c := free * (1 - 2*float64(i)/89)
			far := picture.Point{Time: start + 80, Place: 80 * c}
			d.Fronts = append(d.Fronts, picture.Front{Kind: picture.Edge, Path: picture.Path{{start, 0}, far}})
		}
	}
	return d
}

// crowded has more names than the margin holds, long words and everything at the borders.
func crowded() picture.Diagram {
	d := picture.Diagram{
		Title:    "A title that is far too long for the sheet, as titles that are put together by a program from many parts often are <&>",
		Subtitle: "Subtitle",
		Horizon:  86400, Entry: 120000, Exit: 138000,
	}
	for i := range 60 {
		d.Nodes = append(d.Nodes, picture.Node{Name: "Interchange " + string(rune('A'+i%26)) + " with a long name", Place: 120000 + 300*float64(i)*float64(i)/60})
	}
	for i := range 8 {
		start := 10000.0 * float64(i)
		d.Restrictions = append(d.Restrictions, picture.Restriction{Place: 120000 + 18000*float64(i%2), Start: start, End: start + 10000, Label: "night works, one lane closed, 60 km/h"})
	}
	d.Reds = []picture.Red{{Place: 138000, Start: -5, End: 1e8}}
	d.Density = picture.Field{Times: []float64{5}, Places: []float64{7}, Values: [][]float64{{200}}, Maximum: 150}
	return d
}

// steps is a demand in veh/s that takes a new value, given in veh/h, at each start.
func steps(_ float64, starts, values []float64) func(float64) float64 {
	return func(t float64) float64 {
		v := values[0]
		for i, s := range starts {
			if t >= s {
				v = values[i]
			}
		}
		return v / 3600
	}
}

// diagram samples the density of the road.
func (r *road) diagram(horizon, jam float64, columns, rows int) picture.Diagram {
	d := picture.Diagram{Horizon: horizon, Entry: r.node[0], Exit: r.node[len(r.node)-1]}
	d.Density.Maximum = jam
	d.Density.Times, d.Density.Places = d.Cells(columns, rows)
	for _, x := range d.Density.Places {
		row := make([]float64, columns)
		for j, t := range d.Density.Times {
			row[j] = max(r.density(x, t), 0)
		}
		d.Density.Values = append(d.Density.Values, row)
	}
	return d
}

// vehicles follows so many vehicles, evenly spaced by count.
func (r *road) vehicles(many int, horizon, step float64) (paths []picture.Path) {
	all := r.at(0, horizon)
	for i := range many {
		paths = append(paths, r.vehicle(all*(float64(i)+0.5)/float64(many), horizon, step))
	}
	return paths
}

// TestStoriesDraw draws every story and, with -out, leaves the files. Without it the PNG of
// one story is enough: both formats share all drawing code.
func TestStoriesDraw(t *testing.T) {
	for name, story := range stories {
		t.Run(name, func(t *testing.T) {
			d := story()
			keep(t, name+".svg", d.WriteSVG)
			if *out != "" || name == "arterial" {
				keep(t, name+".png", d.WritePNG)
			}
		})
	}
}

func keep(t *testing.T, name string, write func(w io.Writer) error) {
	t.Helper()
	w := io.Discard
	if *out != "" {
		f, err := os.Create(filepath.Join(*out, name))
		if err != nil {
			t.Fatal(err)
		}
		defer func() { _ = f.Close() }()
		w = f
	}
	if err := write(w); err != nil {
		t.Fatal(err)
	}
}
