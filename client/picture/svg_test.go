package picture_test

import (
	"bytes"
	"encoding/xml"
	"errors"
	"io"
	"slices"
	"strings"
	"testing"

	"github.com/roadswell/roadswell/client/picture"
)

// sheet is what an SVG file holds, read back by an XML parser.
type sheet struct {
	title  string
	words  []string
	paths  []string // the style of each path
	images []string
	bytes  int
}

func read(t *testing.T, d picture.Diagram) sheet {
	t.Helper()
	var file bytes.Buffer
	if err := d.WriteSVG(&file); err != nil {
		t.Fatal(err)
	}
	s := sheet{bytes: file.Len()}
	for in := xml.NewDecoder(&file); ; {
		token, err := in.Token()
		if errors.Is(err, io.EOF) {
			return s
		}
		if err != nil {
			t.Fatal(err)
		}
		if e, ok := token.(xml.StartElement); ok {
			s.add(t, in, e)
		}
	}
}

func (s *sheet) add(t *testing.T, in *xml.Decoder, e xml.StartElement) {
	switch e.Name.Local {
	case "text", "title":
		var words string
		if err := in.DecodeElement(&words, &e); err != nil {
			t.Fatal(err)
		}
		if e.Name.Local == "title" {
			s.title = words
			return
		}
		s.words = append(s.words, words)
	case "path":
		s.paths = append(s.paths, attribute(e, "style"))
	case "image":
		s.images = append(s.images, attribute(e, "href"))
	}
}

func attribute(e xml.StartElement, name string) string {
	for _, a := range e.Attr {
		if a.Name.Local == name {
			return a.Value
		}
	}
	return ""
}

// says tells whether the words stand on the sheet.
func (s sheet) says(words string) bool { return slices.Contains(s.words, words) }

// count is the number of paths whose style has every mark.
func (s sheet) count(marks ...string) int {
	n := 0
	for _, style := range s.paths {
		all := true
		for _, m := range marks {
			all = all && strings.Contains(style+";", m+";")
		}
		if all {
			n++
		}
	}
	return n
}

// The marks by which each kind of line is told from the others in the file. The canvas rounds
// see-through colours down, so that these differ by one from those in style.go.
var (
	shockMarks   = []string{"stroke:#16181D", "stroke-width:1.5"}
	tailMarks    = []string{"stroke:#D44500", "stroke-dasharray:6.5,4"}
	contactMarks = []string{"stroke:#555E6A", "stroke-width:0.6"}
	edgeMarks    = []string{"stroke:#555E6A", "stroke-width:0.5"}
	pathMarks    = []string{"stroke:#2B2E35", "stroke-width:0.55"}
	redMarks     = []string{"fill:#A50F2D"}
	closedMarks  = []string{"fill:#4A4D52"}
	hatchMarks   = []string{"stroke:#4A4D52", "stroke-width:0.7"}
	nodeMarks    = []string{"stroke:#3C4149"}
	leaderMarks  = []string{"stroke:#555B64", "stroke-width:0.45"}
)

// TestAxesNameQuantityAndUnit covers both time units and the direction of travel.
func TestAxesNameQuantityAndUnit(t *testing.T) {
	d := small()
	for _, c := range []struct {
		horizon float64
		caption string
	}{{600, "Time from start (s)"}, {601, "Time from start (min)"}} {
		d.Horizon = c.horizon
		s := read(t, d)
		for _, want := range []string{c.caption, "Place (km), direction of travel →", "Density, all lanes (veh/km)"} {
			if !s.says(want) {
				t.Errorf("horizon %v s: %q is missing in %q", c.horizon, want, s.words)
			}
		}
	}
}

// TestLegendListsEverythingOnce uses the diagram that has each kind of mark.
func TestLegendListsEverythingOnce(t *testing.T) {
	s := read(t, small())
	for _, want := range legendWords {
		n := 0
		for _, w := range s.words {
			if w == want {
				n++
			}
		}
		if n != 1 {
			t.Errorf("%q stands %d times", want, n)
		}
	}
}

var legendWords = []string{
	"Shock", "Contact", "Fan edge", "Tail of queue at Gate", "Vehicle trajectory",
	"Red at stop line", "Reduced capacity", "Closed",
}

// TestLegendLeavesOutWhatIsNotVisible moves the window away from every mark, then takes
// the marks away.
func TestLegendLeavesOutWhatIsNotVisible(t *testing.T) {
	away := small()
	away.Entry, away.Exit = 5000, 6000
	for name, d := range map[string]picture.Diagram{"away": away, "empty": {Horizon: 1, Exit: 1}} {
		s := read(t, d)
		for _, w := range append(legendWords, "Gate", "Works", "shut") {
			if s.says(w) {
				t.Errorf("%s: %q is there", name, w)
			}
		}
	}
}

// TestOnePolylineForEachLine counts; the legend adds one sample of each kind.
func TestOnePolylineForEachLine(t *testing.T) {
	s := read(t, small())
	for _, c := range []struct {
		name  string
		marks []string
		want  int
	}{
		{"shock", shockMarks, 2}, {"tail", tailMarks, 2}, {"contact", contactMarks, 2},
		{"edge", edgeMarks, 2}, {"trajectory", pathMarks, 2}, {"red", redMarks, 2},
		{"closure", closedMarks, 2}, {"restriction", hatchMarks, 2},
		{"node line", nodeMarks, 2}, {"leader", leaderMarks, 2},
	} {
		if got := s.count(c.marks...); got != c.want {
			t.Errorf("%s: %d paths, want %d", c.name, got, c.want)
		}
	}
}

// TestStoryCounts holds the arterial to its inputs: 40 vehicles, reds of four signals.
func TestStoryCounts(t *testing.T) {
	d := arterial()
	s := read(t, d)
	if got := s.count(pathMarks...); got != len(d.Trajectories)+1 {
		t.Errorf("%d trajectories, want %d", got-1, len(d.Trajectories))
	}
	if got := s.count(tailMarks...); got != len(d.Tails)+1 {
		t.Errorf("%d tails, want %d", got-1, len(d.Tails))
	}
	visible := 0
	for _, r := range d.Reds {
		if r.End > 0 && r.Start < d.Horizon {
			visible++
		}
	}
	if got := s.count(redMarks...); got != visible+1 {
		t.Errorf("%d reds, want %d", got-1, visible)
	}
	if !s.says("Tail of queue") {
		t.Error("tails of several nodes must not be named after one")
	}
}

// TestDensityIsOneRaster keeps the field out of the vector part, and the file small.
func TestDensityIsOneRaster(t *testing.T) {
	s := read(t, expressway())
	if len(s.images) != 2 { // the field and the colour bar
		t.Fatalf("%d images", len(s.images))
	}
	for _, href := range s.images {
		if !strings.HasPrefix(href, "data:image/png;base64,iVBOR") {
			t.Errorf("image starts %.40q", href)
		}
	}
	if s.bytes > 400_000 {
		t.Errorf("file of %d bytes", s.bytes)
	}
	if bare := read(t, picture.Diagram{Horizon: 1, Exit: 1}); len(bare.images) != 0 {
		t.Error("a diagram without density must have no colour bar")
	}
}

// TestColourBarOwnsUpToCutDensities wants the caption to say that colours end early.
func TestColourBarOwnsUpToCutDensities(t *testing.T) {
	d := small()
	d.Density.Maximum = 35
	if s := read(t, d); !s.says("Density, all lanes (veh/km); darkest: 35 and more") {
		t.Errorf("caption is missing in %q", s.words)
	}
}

// TestAdvisoryNoteIsOnEveryPicture includes the empty one.
func TestAdvisoryNoteIsOnEveryPicture(t *testing.T) {
	for name, story := range stories {
		words := strings.Join(read(t, story()).words, "\n")
		if !strings.Contains(words, "Advisory forecast") || !strings.Contains(words, "must not drive signals") {
			t.Errorf("%s has no advisory note", name)
		}
	}
}

// TestWordsAreEscapedNotInterpreted feeds the marks that the writer looks for.
func TestWordsAreEscapedNotInterpreted(t *testing.T) {
	d := small()
	d.Title = `<b>&"font-family:Liberation Sans;"`
	d.Nodes[0].Name = `xlink:href="data:image/jpg;`
	s := read(t, d)
	if !s.says(d.Title) || !s.says(d.Nodes[0].Name) {
		t.Errorf("words were changed: %q", s.words)
	}
	if s.title != "Time-space diagram: "+d.Title {
		t.Errorf("document title %q", s.title)
	}
}

// TestLongWordsAreCutWithAnEllipsis looks at the title of the crowded story.
func TestLongWordsAreCutWithAnEllipsis(t *testing.T) {
	s := read(t, crowded())
	if !strings.HasSuffix(s.words[0], "…") || !strings.HasPrefix(s.words[0], "A title that is far too long") {
		t.Errorf("title reads %q", s.words[0])
	}
	if !slices.ContainsFunc(s.words, func(w string) bool { return strings.HasSuffix(w, " more nodes") }) {
		t.Error("names that find no room must be counted")
	}
}
