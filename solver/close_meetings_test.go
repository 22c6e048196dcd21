package solver_test

import (
	"context"
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
	"github.com/roadswell/roadswell/solver/internal/reference"
)

// closeMeeting is a road on which waves meet so closely that random corridors show it once in thousands, with the law
// by which the least count checks the answer.
type closeMeeting struct {
	name     string
	relation solver.Relation
	law      reference.Law
	scenario solver.Scenario
}

func closeMeetings(t *testing.T) []closeMeeting {
	t.Helper()
	const lanes = 2
	parabola := func(vf, kj float64) (solver.Relation, reference.Law) {
		r, err := solver.Greenshields(vf, kj)
		if err != nil {
			t.Fatal(err)
		}
		return r, reference.GreenshieldsLaw(vf, kj)
	}
	mixed := func(vf, vc, kc, kj float64) (solver.Relation, reference.Law) {
		r, err := solver.QuadraticFree(vf, vc, kc, kj)
		if err != nil {
			t.Fatal(err)
		}
		return r, reference.QuadraticFreeLaw(vf, vc, kc, kj)
	}
	piece := func(from, to, a, b float64) solver.ProfilePiece {
		return solver.ProfilePiece{Start: from, End: to, StartDensity: a, EndDensity: b}
	}
	var out []closeMeeting
	add := func(name string, origin, horizon float64, r solver.Relation, law reference.Law, profile ...solver.ProfilePiece) {
		s := solver.Scenario{Origin: origin, Horizon: horizon, Initial: solver.Initial{Profile: profile}}
		s.Segments = []solver.Segment{{Length: profile[len(profile)-1].End - origin, Relation: r}}
		out = append(out, closeMeeting{name, r, law, s})
	}

	r, law := parabola(24.013614760231043, 3*0.1221602733985076)
	add("a steep ramp of a few centimetres between two jumps", 253.942114475901, 3.429219128167478, r, law,
		piece(253.942114475901, 4832.605056892726, 0, 0), piece(4832.605056892726, 5087.118585716365, 0.22, 0.22),
		piece(5087.118585716365, 5087.231572560613, 0.1563685407868027, 0.29168188967698605), piece(5087.231572560613, 5468.66635435226, 0, 0))
	r, law = parabola(8.440249542567956, 0.13411844317909438)
	add("a ramp of three millimetres", 449.4939641966903, 3.6686126058783115, r, law,
		piece(449.4939641966903, 3080.19958169779, 0, 0), piece(3080.19958169779, 3358.672040974302, 0.021, 0.021),
		piece(3358.672040974302, 3358.6753225227044, 0.0046, 0.12), piece(3358.6753225227044, 4963.031093261595, 0, 0))

	r, law = mixed(14.75, 13.275, 0.020625, 0.1375)
	add("two of three fronts that meet go on along one line", 500, 121.5, r.Lanes(lanes), law.Lanes(lanes),
		piece(500, 600, 0, 0), piece(600, 700, 0.24, 0.24), piece(700, 837.5, 0, 0), piece(837.5, 1043.75, 0, 0.1375), piece(1043.75, 4262.5, 0, 0))

	r, law = mixed(34.6875, 23.125, 0.04625, 0.23125)
	add("a shock vanishes as both its sides are used up", 0, 60, r, law,
		piece(0, 800, 0.0925, 0.0925), piece(800, 1600, 0.0925, 0), piece(1600, 2400, 0.0925, 0), piece(2400, 4000, 0, 0))
	r, law = mixed(34.921875, 23.125, 0.04625, 0.23125)
	add("fan and ramp beside a shock are used up at once", -1000, 60, r, law,
		piece(-1000, 520.3125, 0.1175, 0.1175), piece(520.3125, 809.375, 0, 0.0925), piece(809.375, 1098.4375, 0.125625, 0.0925), piece(1098.4375, 3000, 0, 0))

	r, law = parabola(24.875, 0.15000000000000002)
	add("a shock comes to rest on a join and is started again", -250, 450, r, law,
		piece(-250, -130, 0.05625000000000001, 0.05625000000000001), piece(-130, -90, 0.05625000000000001, 0), piece(-90, -70, 0.11250000000000002, 0.11250000000000002),
		piece(-70, -50, 0.018750000000000003, 0.09375000000000001), piece(-50, 2137.5, 0.09375000000000001, 0.09375000000000001))
	last := &out[len(out)-1].scenario
	last.Segments = []solver.Segment{{Name: "a", Length: 200, Relation: r}, {Name: "b", Length: 850, Relation: r}, {Name: "c", Length: 1337.5, Relation: r}}
	last.Entry.Demand = solver.Schedule{{Rate: 0.9094921875000003}}
	return out
}

// TestCloseMeetings: the count is the least one everywhere, and no front leaves its segment.
func TestCloseMeetings(t *testing.T) {
	for _, c := range closeMeetings(t) {
		t.Run(c.name, func(t *testing.T) {
			solution, err := solver.Solve(context.Background(), c.scenario, solver.Budget{})
			if err != nil {
				t.Fatal(err)
			}
			s := asSolved(c.scenario, solution)
			least := reference.LaxHopf{Law: c.law, Profile: c.scenario.Initial.Profile}
			for range 5000 {
				x, at := s.inside(least)
				if got, want := s.n(t, x, at), least.Count(x, at); math.Abs(got-want) > s.count {
					t.Fatalf("N(%.12g, %.12g) = %.15g, least count %.15g", x, at, got, want)
				}
			}
			s.frontsStayInTheirSegments(t)
		})
	}
}

func (s *solved) frontsStayInTheirSegments(t *testing.T) {
	t.Helper()
	for _, f := range s.Fronts() {
		start := s.scenario.Origin
		for _, g := range s.scenario.Segments[:f.Segment] {
			start += g.Length
		}
		end := start + s.scenario.Segments[f.Segment].Length
		for _, p := range [2]solver.Point{f.Birth, f.End} {
			if p.Place < start-1e-6 || p.Place > end+1e-6 {
				t.Errorf("front %d of the segment from %g to %g m is at %v", f.ID, start, end, p)
			}
		}
	}
}
