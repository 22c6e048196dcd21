package picture_test

import (
	"bytes"
	"encoding/binary"
	"errors"
	"image/color"
	"image/png"
	"io"
	"sync"
	"testing"

	"github.com/roadswell/roadswell/client/picture"
)

func bytesOf(t *testing.T, write func(io.Writer) error) []byte {
	t.Helper()
	var b bytes.Buffer
	if err := write(&b); err != nil {
		t.Error(err)
	}
	return b.Bytes()
}

// smallPNG is drawn once for all tests that look at it: under the race detector a PNG
// takes seconds.
var smallPNG = sync.OnceValue(func() []byte {
	var b bytes.Buffer
	if err := small().WritePNG(&b); err != nil {
		panic(err)
	}
	return b.Bytes()
})

// TestSameInputSameBytes draws each format twice, in goroutines at the same time.
func TestSameInputSameBytes(t *testing.T) {
	d := small()
	var all sync.WaitGroup
	var svg [2][]byte
	var png []byte
	for i := range svg {
		all.Go(func() { svg[i] = bytesOf(t, d.WriteSVG) })
	}
	all.Go(func() { png = bytesOf(t, d.WritePNG) })
	all.Wait()
	if !bytes.Equal(svg[0], svg[1]) || !bytes.Equal(png, smallPNG()) {
		t.Error("bytes differ")
	}
}

// TestInputIsOnlyRead draws and compares with a fresh copy.
func TestInputIsOnlyRead(t *testing.T) {
	d := crowded()
	bytesOf(t, d.WriteSVG)
	if !bytes.Equal(bytesOf(t, d.WriteSVG), bytesOf(t, crowded().WriteSVG)) {
		t.Error("drawing changed the diagram")
	}
}

// TestPNGHasItsSizeInPixelsAndOnPaper reads the header and the pHYs chunk.
func TestPNGHasItsSizeInPixelsAndOnPaper(t *testing.T) {
	file := smallPNG()
	img, err := png.Decode(bytes.NewReader(file)) // checks the sums of all chunks too
	if err != nil {
		t.Fatal(err)
	}
	if s := img.Bounds().Size(); s.X != 1890 || s.Y != 1181 {
		t.Errorf("%v pixels", s)
	}
	at := bytes.Index(file, []byte("pHYs"))
	if at < 0 {
		t.Fatal("no pHYs chunk")
	}
	perMetre := binary.BigEndian.Uint32(file[at+4:])
	if width := float64(img.Bounds().Dx()) / float64(perMetre); width < 0.2399 || width > 0.2401 {
		t.Errorf("%.4f m wide on paper", width)
	}
}

// TestPNGShowsTheFieldTheRightWayUp compares two far points of the plane: upstream early is
// light, downstream late is dark.
func TestPNGShowsTheFieldTheRightWayUp(t *testing.T) {
	d := picture.Diagram{Horizon: 100, Exit: 1000}
	d.Density = picture.Field{
		Times: []float64{25, 75}, Places: []float64{250, 750}, Values: [][]float64{{0, 50}, {25, 100}},
	}
	img, err := png.Decode(bytes.NewReader(bytesOf(t, d.WritePNG)))
	if err != nil {
		t.Fatal(err)
	}
	left, right, top, bottom := 500, 1300, 250, 850 // pixels well inside each quarter
	for _, c := range []struct {
		x, y  int
		share float64
	}{{left, bottom, 0}, {right, bottom, 0.5}, {left, top, 0.25}, {right, top, 1}} {
		got := color.NRGBAModel.Convert(img.At(c.x, c.y))
		if got != picture.Ramp(c.share) {
			t.Errorf("pixel (%d, %d) is %v, want %v", c.x, c.y, got, picture.Ramp(c.share))
		}
	}
}

type broken struct{}

var errBroken = errors.New("disk full")

func (broken) Write([]byte) (int, error) { return 0, errBroken }

// TestWriterErrorsAreReturned keeps a full disk from passing for a picture.
func TestWriterErrorsAreReturned(t *testing.T) {
	for _, err := range []error{small().WriteSVG(broken{}), small().WritePNG(broken{})} {
		if !errors.Is(err, errBroken) {
			t.Errorf("got %v", err)
		}
	}
}

// FuzzAnyNumbers asserts that a diagram is either refused or drawn, never a panic.
func FuzzAnyNumbers(f *testing.F) {
	f.Add(300.0, 0.0, 1000.0, 50.0, 500.0, 100.0, "Gate")
	f.Add(1e-3, 1e9-1e-3, 1e9, -1e9, 1e9, 1e9, "→ Ω \u00a0")
	f.Add(1e9, -1e9, 1e9, 0.0, 0.0, 0.0, "")
	f.Fuzz(func(t *testing.T, horizon, entry, exit, time, place, density float64, words string) {
		d := small()
		d.Horizon, d.Entry, d.Exit, d.Title = horizon, entry, exit, words
		d.Density.Values[0][0], d.Density.Maximum = density, density/2
		d.Fronts[0].Path = append(d.Fronts[0].Path, picture.Point{Time: time, Place: place})
		d.Reds[0].End, d.Restrictions[1].Place, d.Restrictions[1].Label = time, place, words
		d.Nodes[0] = picture.Node{Name: words, Place: place}
		refused := d.Check() != nil
		if err := d.WriteSVG(io.Discard); (err != nil) != refused {
			t.Errorf("Check refuses: %v; WriteSVG says %v", refused, err)
		}
	})
}

// BenchmarkWrite draws the arterial story.
func BenchmarkWrite(b *testing.B) {
	d := arterial()
	for name, write := range map[string]func(io.Writer) error{"svg": d.WriteSVG, "png": d.WritePNG} {
		b.Run(name, func(b *testing.B) {
			for b.Loop() {
				if err := write(io.Discard); err != nil {
					b.Fatal(err)
				}
			}
		})
	}
}
