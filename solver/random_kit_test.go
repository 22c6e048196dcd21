package solver_test

import (
	"context"
	"errors"
	"flag"
	"fmt"
	"hash/fnv"
	"math"
	"math/rand/v2"
	"runtime"
	"strings"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// The seed of a failing corridor is in the failure message; go test -run TestName -corridor.seed=N draws that
// one alone, -corridor.count=N draws more of them.
var (
	onlySeed = flag.Uint64("corridor.seed", 0, "check only the random corridor of this seed")
	howMany  = flag.Int("corridor.count", 400, "how many random corridors each law is checked on")
)

// promised is the relative error that answers promise; counts are relative to the vehicles in the scenario.
const promised = 1e-9

// solved is a random corridor with its exact solution.
type solved struct {
	corridor
	*solver.Solution
	d     *rand.Rand // for the questions
	count float64    // tolerance on counts: promised, relative to the vehicles in the scenario
}

// mostRefused is the share of random corridors whose exact solution may leave the closed family. The generator
// keeps to what has a closed form, so it should be none; one in a hundred is tolerated.
const mostRefused = 0.01

// onRandomCorridors checks a law on many corridors, each law on seeds of its own.
func onRandomCorridors(t *testing.T, f features, law func(testing.TB, *solved)) {
	t.Helper()
	t.Parallel()
	first, count := seedsOf(t.Name()), *howMany
	if testing.Short() {
		count = max(1, count/10)
	}
	if *onlySeed != 0 {
		first, count = *onlySeed, 1
	}
	refused := 0
	for i := range count {
		seed := first + uint64(i)
		if !onCorridor(t, drawCorridor(seed, f), law) {
			refused++
		}
		if t.Failed() {
			t.Fatalf("corridor %d of %d, seed %d; repeat it alone with -corridor.seed=%d", i+1, count, seed, seed)
		}
	}
	t.Logf("%d corridors from seed %d, %d without closed form", count, first, refused)
	if float64(refused) > mostRefused*float64(count) {
		t.Errorf("%d of %d corridors are refused for want of a closed form", refused, count)
	}
}

func seedsOf(name string) uint64 {
	h := fnv.New32a()
	h.Write([]byte(name))
	return uint64(h.Sum32())
}

// onCorridor solves one corridor and checks the law; false where it has no closed form. A failure or panic
// shows the corridor and its picture.
func onCorridor(t testing.TB, c corridor, law func(testing.TB, *solved)) bool {
	t.Helper()
	var s *solved
	defer func() {
		if r := recover(); r != nil {
			buf := make([]byte, 4096)
			t.Fatalf("seed %d: panic: %v\n%s\n%s", c.seed, r, describe(&c), buf[:runtime.Stack(buf, false)])
		}
		if t.Failed() {
			t.Logf("%s\n%s", describe(&c), picture(s))
		}
	}()
	s, err := solveCorridor(c)
	var beyond *solver.ClosedFormError
	if errors.As(err, &beyond) {
		return false
	}
	if err != nil {
		t.Fatalf("seed %d: %v", c.seed, err)
	}
	law(t, s)
	return true
}

func solveCorridor(c corridor) (*solved, error) {
	solution, err := solver.Solve(context.Background(), c.scenario, solver.Budget{Interactions: 2_000_000})
	if err != nil {
		return nil, err
	}
	return &solved{corridor: c, Solution: solution, d: rand.New(rand.NewPCG(c.seed, 1)), count: promised * c.vehicles()}, nil
}

// sample asks for the state at a place and time that must be answered.
func (s *solved) sample(t testing.TB, x, time float64) solver.Sample {
	t.Helper()
	a, err := s.At(x, time)
	if err != nil {
		t.Fatalf("At(%g, %g): %v", x, time, err)
	}
	return a
}

// n is the count N(x, time).
func (s *solved) n(t testing.TB, x, time float64) float64 {
	t.Helper()
	return s.sample(t, x, time).Count
}

// somewhere and sometime draw a point of the corridor's time-space plane.
func (s *solved) somewhere() float64 {
	return s.scenario.Origin + s.d.Float64()*(s.exit()-s.scenario.Origin)
}
func (s *solved) sometime() float64 { return s.d.Float64() * s.scenario.Horizon }

// relationAt is the relation of the road at x.
func (s *solved) relationAt(x float64) solver.Relation {
	return s.scenario.Segments[s.segmentAt(x)].Relation
}

func (s *solved) fastest() float64 {
	v := 0.0
	for _, g := range s.scenario.Segments {
		v = math.Max(v, g.Relation.FreeSpeed())
	}
	return v
}

func (s *solved) densest() float64 {
	k := 0.0
	for _, g := range s.scenario.Segments {
		k = math.Max(k, g.Relation.JamDensity())
	}
	return k
}

// describe writes a corridor out so that a reader can type it in.
func describe(c *corridor) string {
	var b strings.Builder
	s := &c.scenario
	fmt.Fprintf(&b, "seed %d: origin %.17g, horizon %.17g\n", c.seed, s.Origin, s.Horizon)
	for i, g := range s.Segments {
		fmt.Fprintf(&b, "segment %s: length %.17g, %s %+v\n", g.Name, g.Length, c.specs[i].kind, c.specs[i])
	}
	fmt.Fprintf(&b, "bottlenecks %+v\nsignals %+v\nentry %+v\nexit %+v\ninitial %+v", s.Bottlenecks, s.Signals, s.Entry, s.Exit, s.Initial)
	return b.String()
}

// picture draws the density over the time-space plane: downstream at the top, time to the right, darker is
// denser.
func picture(s *solved) string {
	if s == nil || s.Solution == nil {
		return "(no solution)"
	}
	const rows, columns = 24, 72
	shades := []rune(" .:-=+*#%@")
	var b strings.Builder
	for row := range rows {
		x := s.exit() - (float64(row)+0.5)/rows*(s.exit()-s.scenario.Origin)
		kj := s.relationAt(x).JamDensity()
		fmt.Fprintf(&b, "%8.0f m |", x)
		for column := range columns {
			a, err := s.At(x, (float64(column)+0.5)/columns*s.scenario.Horizon)
			shade := '?'
			if i := int(a.Down.Density / kj * 9.999); err == nil && i >= 0 && i < len(shades) {
				shade = shades[i]
			}
			b.WriteRune(shade)
		}
		b.WriteString("|\n")
	}
	fmt.Fprintf(&b, "%10s 0%*s", "", columns+1, fmt.Sprintf("%g s", s.scenario.Horizon))
	return b.String()
}
