package solver_test

import (
	"context"
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
	"github.com/roadswell/roadswell/solver/internal/reference"
)

// reproductions of /tmp/solver_bugs.md R1..R5; copy into solver/ and run: go test ./solver -run TestR -v

func rp(a, b, ka, kb float64) solver.ProfilePiece {
	return solver.ProfilePiece{Start: a, End: b, StartDensity: ka, EndDensity: kb}
}

func rLeast(t *testing.T, s solver.Scenario, law reference.Law) {
	t.Helper()
	sol, err := solver.Solve(context.Background(), s, solver.Budget{})
	if err != nil {
		t.Fatal(err)
	}
	so := asSolved(s, sol)
	h := reference.LaxHopf{Law: law, Profile: s.Initial.Profile}
	worst, wx, wt := 0.0, 0.0, 0.0
	for range 20000 {
		x, tt := so.inside(h)
		if d := math.Abs(so.n(t, x, tt) - h.Count(x, tt)); d > worst {
			worst, wx, wt = d, x, tt
		}
	}
	if worst > so.count {
		t.Errorf("N off by %.3g at (%.9g, %.9g)", worst, wx, wt)
		for _, f := range sol.Fronts() {
			t.Logf("%d %v seg %d birth %v end %v %v into %d", f.ID, f.Kind, f.Segment, f.Birth, f.End, f.EndsBy, f.Into)
		}
	}
}

func roads(r solver.Relation, lengths ...float64) []solver.Segment {
	var out []solver.Segment
	for _, l := range lengths {
		out = append(out, solver.Segment{Length: l, Relation: r})
	}
	return out
}

func TestR1StandingShockOnAJoinLeavesItsSegment(t *testing.T) {
	g, _ := solver.Greenshields(24.875, 0.15000000000000002)
	s := solver.Scenario{Origin: -250, Horizon: 450, Segments: roads(g, 200, 850, 1337.5), Entry: solver.Entry{Demand: solver.Schedule{{Rate: 0.9094921875000003}}}}
	s.Initial.Profile = []solver.ProfilePiece{rp(-250, -130, 0.05625000000000001, 0.05625000000000001), rp(-130, -90, 0.05625000000000001, 0), rp(-90, -70, 0.11250000000000002, 0.11250000000000002), rp(-70, -50, 0.018750000000000003, 0.09375000000000001), rp(-50, 2137.5, 0.09375000000000001, 0.09375000000000001)}
	rLeast(t, s, reference.GreenshieldsLaw(24.875, 0.15000000000000002))
	sol, _ := solver.Solve(context.Background(), s, solver.Budget{})
	for _, f := range sol.Fronts() {
		if f.Segment == 1 && math.Min(f.Birth.Place, f.End.Place) < -50.001 {
			t.Errorf("front %d of segment [-50, 800] runs from %v to %v", f.ID, f.Birth, f.End)
		}
	}
}

func TestR3NarrowSteepRamp(t *testing.T) {
	g, _ := solver.Greenshields(24.013614760231043, 3*0.1221602733985076)
	s := solver.Scenario{Origin: 253.942114475901, Horizon: 3.429219128167478, Segments: roads(g, 5214.724239876359)}
	s.Initial.Profile = []solver.ProfilePiece{rp(253.942114475901, 4832.605056892726, 0, 0), rp(4832.605056892726, 5087.118585716365, 0.22, 0.22), rp(5087.118585716365, 5087.231572560613, 0.1563685407868027, 0.29168188967698605), rp(5087.231572560613, 5468.66635435226, 0, 0)}
	rLeast(t, s, reference.GreenshieldsLaw(24.013614760231043, 3*0.1221602733985076))
}

func TestR4TriangleOfDensityMeetsAJam(t *testing.T) {
	q, _ := solver.QuadraticFree(14.75, 13.274999999999999, 0.020625, 0.1375)
	s := solver.Scenario{Origin: 500, Horizon: 121.5, Segments: roads(q.Lanes(2), 200, 687.5, 1337.5, 1012.5, 525)}
	s.Initial.Profile = []solver.ProfilePiece{rp(500, 600, 0, 0), rp(600, 700, 0.24, 0.24), rp(700, 837.5, 0, 0), rp(837.5, 1043.75, 0, 0.1375), rp(1043.75, 4262.5, 0, 0)}
	rLeast(t, s, reference.QuadraticFreeLaw(14.75, 13.274999999999999, 0.020625, 0.1375).Lanes(2))
}

func TestR5RampOfThreeMillimetres(t *testing.T) {
	g, _ := solver.Greenshields(8.440249542567956, 0.13411844317909438)
	s := solver.Scenario{Origin: 449.4939641966903, Horizon: 3.6686126058783115, Segments: roads(g, 4513.537129296904)}
	s.Initial.Profile = []solver.ProfilePiece{rp(449.4939641966903, 3080.19958169779, 0, 0), rp(3080.19958169779, 3358.672040974302, .021, .021), rp(3358.672040974302, 3358.6753225227044, .0046, .12), rp(3358.6753225227044, 4963.031093261595, 0, 0)}
	rLeast(t, s, reference.GreenshieldsLaw(8.440249542567956, 0.13411844317909438))
}
