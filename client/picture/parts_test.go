package picture

import (
	"image/color"
	"math"
	"math/rand/v2"
	"slices"
	"strings"
	"testing"

	"gonum.org/v1/plot"
	"gonum.org/v1/plot/vg"
)

// labOf converts an sRGB colour back, by the inverse of the formulas in ramp.go.
func labOf(c color.Color) lab {
	n := color.NRGBAModel.Convert(c).(color.NRGBA)
	linear := func(b uint8) float64 {
		v := float64(b) / 255
		if v <= 0.04045 {
			return v / 12.92
		}
		return math.Pow((v+0.055)/1.055, 2.4)
	}
	r, g, b := linear(n.R), linear(n.G), linear(n.B)
	f := func(t float64) float64 {
		if t > 216.0/24389 {
			return math.Cbrt(t)
		}
		return (t*24389/27 + 16) / 116
	}
	x := f((0.4124564*r + 0.3575761*g + 0.1804375*b) / 0.95047)
	y := f(0.2126729*r + 0.7151522*g + 0.0721750*b)
	z := f((0.0193339*r + 0.1191920*g + 0.9503041*b) / 1.08883)
	return lab{116*y - 16, 500 * (x - y), 200 * (y - z)}
}

// TestRampDarkensEvenly checks the two promises of Ramp: lightness falls from each 15th colour
// to the next, and before rounding to bytes all colours are equally far apart. That the
// rounding moves none of them far is TestRampStaysInsideSRGB.
func TestRampDarkensEvenly(t *testing.T) {
	const jump = 15
	course := evenSteps(smooth(rampCourse, 4000), rampSteps)
	var size []float64
	for i := 0; i+jump < rampSteps; i += jump {
		size = append(size, course[i].distance(course[i+jump]))
		if labOf(ramp()[i+jump]).l >= labOf(ramp()[i]).l-2 {
			t.Errorf("colour %d is hardly darker than colour %d", i+jump, i)
		}
	}
	if most, least := slices.Max(size), slices.Min(size); most > 1.03*least {
		t.Errorf("steps from %.2f to %.2f", least, most)
	}
}

// TestRampStaysInsideSRGB wants no colour cut off by the conversion.
func TestRampStaysInsideSRGB(t *testing.T) {
	for _, c := range evenSteps(smooth(rampCourse, 4000), rampSteps) {
		if d := labOf(c.rgb()).distance(c); d > 0.8 {
			t.Fatalf("%+v is shown %.2f away", c, d)
		}
	}
}

// TestRampEnds pins the special values.
func TestRampEnds(t *testing.T) {
	for share, want := range map[float64]float64{-1: 0, math.Inf(1): 1, 2: 1} {
		if Ramp(share) != Ramp(want) {
			t.Errorf("Ramp(%v) differs from Ramp(%v)", share, want)
		}
	}
	if Ramp(math.NaN()) != Ramp(0) || labOf(Ramp(0)).l < 95 {
		t.Error("the empty road must be nearly white")
	}
}

func lettered(ticks []plot.Tick) string {
	var words []string
	for _, t := range ticks {
		if !t.IsMinor() {
			words = append(words, t.Label)
		}
	}
	return strings.Join(words, " ")
}

// TestTicksReadWell lists axes from a second to a day and from a metre to a country.
func TestTicksReadWell(t *testing.T) {
	times := map[float64]string{
		0.001: "0.0000 0.0001 0.0002 0.0003 0.0004 0.0005 0.0006 0.0007 0.0008 0.0009 0.0010",
		1:     "0.0 0.1 0.2 0.3 0.4 0.5 0.6 0.7 0.8 0.9 1.0",
		90:    "0 10 20 30 40 50 60 70 80 90",
		600:   "0 60 120 180 240 300 360 420 480 540 600",
		900:   "0 2 4 6 8 10 12 14",
		7200:  "0 10 20 30 40 50 60 70 80 90 100 110 120",
		86400: "0 120 240 360 480 600 720 840 960 1080 1200 1320 1440",
	}
	for horizon, want := range times {
		ticks, _ := timeAxis(horizon)
		if got := lettered(ticks); got != want {
			t.Errorf("horizon %v s: %s", horizon, got)
		}
	}
	places := map[[2]float64]string{
		{0, 1}:           "0.0000 0.0001 0.0002 0.0003 0.0004 0.0005 0.0006 0.0007 0.0008 0.0009 0.0010",
		{-600, 400}:      "-0.6 -0.5 -0.4 -0.3 -0.2 -0.1 0.0 0.1 0.2 0.3 0.4",
		{0, 1200}:        "0.0 0.1 0.2 0.3 0.4 0.5 0.6 0.7 0.8 0.9 1.0 1.1 1.2",
		{120450, 123050}: "120.5 121.0 121.5 122.0 122.5 123.0",
		{0, 900e3}:       "0 100 200 300 400 500 600 700 800 900",
	}
	for ends, want := range places {
		ticks, _ := placeAxis(ends[0], ends[1])
		if got := lettered(ticks); got != want {
			t.Errorf("place %v m: %s", ends, got)
		}
	}
}

// TestTicksAreFewAndInside holds for extents of every size.
func TestTicksAreFewAndInside(t *testing.T) {
	random := rand.New(rand.NewPCG(1, 2))
	for range 2000 {
		low := (random.Float64() - 0.5) * 2e6
		high := low + math.Pow(10, -3+9*random.Float64())
		ticks, _ := placeAxis(low, high)
		n := 0
		for _, k := range ticks {
			if k.Value < low || k.Value > high {
				t.Fatalf("[%v, %v]: tick at %v", low, high, k.Value)
			}
			if !k.IsMinor() {
				n++
			}
		}
		if n < 2 || n > mostMajor+1 {
			t.Fatalf("[%v, %v]: %d numbers", low, high, n)
		}
	}
}

// TestClippingKeepsExactlyWhatIsInside compares with walking along random polylines: a point is
// on a clipped part just when it lies in the window.
func TestClippingKeepsExactlyWhatIsInside(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 4))
	w := window{0, 10, -5, 5}
	for range 500 {
		var path Path
		for range 6 {
			path = append(path, Point{random.Float64()*20 - 5, random.Float64()*20 - 10})
		}
		if got, want := length(w.clip(path)...), walked(w, path); math.Abs(got-want) > 0.02*(1+want) {
			t.Fatalf("%v: length %v, walked %v", path, got, want)
		}
	}
}

func length(paths ...Path) (sum float64) {
	for _, p := range paths {
		for i := 1; i < len(p); i++ {
			sum += math.Hypot(p[i].Time-p[i-1].Time, p[i].Place-p[i-1].Place)
		}
	}
	return sum
}

// walked is the length inside the window by small steps.
func walked(w window, path Path) (sum float64) {
	const steps = 2000
	for i := 1; i < len(path); i++ {
		whole := length(path[i-1 : i+1])
		for k := range steps {
			p := between(path[i-1], path[i], (float64(k)+0.5)/steps)
			if p.Time >= w.t0 && p.Time <= w.t1 && w.holds(p.Place) {
				sum += whole / steps
			}
		}
	}
	return sum
}

// TestClippingSpecialCases: inside stays as it is, a path that leaves and returns falls in
// two, borders belong to the window, single points and standing ones vanish.
func TestClippingSpecialCases(t *testing.T) {
	w := window{0, 10, 0, 10}
	for _, c := range []struct {
		path Path
		want []Path
	}{
		{nil, nil},
		{Path{{1, 1}}, nil},
		{Path{{1, 1}, {1, 1}}, nil},
		{Path{{1, 1}, {5, 5}, {5, 5}, {9, 1}}, []Path{{{1, 1}, {5, 5}}, {{5, 5}, {9, 1}}}},
		{Path{{0, 0}, {10, 0}}, []Path{{{0, 0}, {10, 0}}}},
		{Path{{5, 5}, {15, 5}, {15, 6}, {5, 6}}, []Path{{{5, 5}, {10, 5}}, {{10, 6}, {5, 6}}}},
		{Path{{-5, 20}, {20, 20}}, nil},
	} {
		got := w.clip(c.path)
		if !slices.EqualFunc(got, c.want, func(a, b Path) bool { return slices.Equal(a, b) }) {
			t.Errorf("%v: got %v, want %v", c.path, got, c.want)
		}
	}
}

// TestNamesKeepApartInOrderAndInside holds for random margins; names with room stay put.
func TestNamesKeepApartInOrderAndInside(t *testing.T) {
	random := rand.New(rand.NewPCG(5, 6))
	for range 500 {
		var wanted []vg.Length
		for range 1 + random.IntN(20) {
			wanted = append(wanted, vg.Length(random.Float64()*220))
		}
		slices.Sort(wanted)
		given := spread(wanted, 10, 0, 220)
		for i := range given {
			if given[i] < -1e-9 || given[i] > 220+1e-9 || (i > 0 && given[i]-given[i-1] < 10-1e-9) {
				t.Fatalf("%v gives %v", wanted, given)
			}
		}
	}
	roomy := []vg.Length{0, 10, 50, 220}
	if got := spread(roomy, 10, 0, 220); !slices.Equal(got, roomy) {
		t.Errorf("names with room moved to %v", got)
	}
}

// TestNearestSample compares with looking at every sample.
func TestNearestSample(t *testing.T) {
	samples := []float64{1, 2, 4, 8}
	for _, x := range centres(0, 12.1, 997) {
		want := outside
		if x >= 0.5 && x <= 10 {
			want = 0
			for i, s := range samples {
				if math.Abs(s-x) < math.Abs(samples[want]-x) {
					want = i
				}
			}
		}
		if got := nearestOne(samples, x); got != want {
			t.Fatalf("x = %v: sample %d, want %d", x, got, want)
		}
	}
	if nearestOne([]float64{3}, -1000) != 0 {
		t.Error("one sample must reach everywhere")
	}
}

// TestFieldWithoutVehiclesIsLight avoids dividing by the largest density, 0.
func TestFieldWithoutVehiclesIsLight(t *testing.T) {
	g := Field{Times: []float64{1}, Places: []float64{1}, Values: [][]float64{{0}}}
	for _, p := range g.raster(window{0, 2, 0, 2}).Pix {
		if p != 0 {
			t.Fatalf("pixel of colour %d", p)
		}
	}
}
