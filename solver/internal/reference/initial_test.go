package reference

import (
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// TestStandingQueueReachesThroughSegments: 100 vehicles behind a bottleneck that passes 0.2 veh/s stand at the
// congested density of that flow in each segment's own relation, and there are 100 of them.
func TestStandingQueueReachesThroughSegments(t *testing.T) {
	pairs := lawPairs(t)
	s := solver.Scenario{
		Origin:      1000,
		Segments:    []solver.Segment{{Name: "a", Length: 2000, Relation: pairs[2].solver}, {Name: "b", Length: 700, Relation: pairs[0].solver}},
		Bottlenecks: []solver.Bottleneck{{Name: "works", Place: 3500, Capacity: steps(0, 0.2)}},
		Initial:     solver.Initial{BackgroundFlow: 0.1, Queues: []solver.StandingQueue{{Node: "works", Vehicles: 100}}},
	}
	profile := InitialProfile(&s)
	n := 0.0
	for _, p := range profile {
		if p.StartDensity > 0.05 {
			n += vehiclesIn(p, p.Start, p.End)
			if r := s.Segments[min(1, int(p.Start/3000))].Relation; math.Abs(r.Flow(p.StartDensity)-0.2) > 1e-14 {
				t.Errorf("density %g at %g carries %g", p.StartDensity, p.Start, r.Flow(p.StartDensity))
			}
		}
	}
	if math.Abs(n-100) > 1e-11 {
		t.Errorf("%.15g vehicles stand in the queue, want 100", n)
	}
	if first, last := profile[0], profile[len(profile)-1]; first.Start != 1000 || last.End != 3700 {
		t.Errorf("the profile covers [%g, %g]", first.Start, last.End)
	}
}

// TestGreensAreWhereThePlanIsGreen: the list of greens and the question "is it green now" agree everywhere.
func TestGreensAreWhereThePlanIsGreen(t *testing.T) {
	plan := solver.Plan{Cycle: 90, Offset: -137, Greens: []solver.Window{{Start: 0, End: 20}, {Start: 50, End: 90}}}
	greens := Greens(plan, 1000)
	for x := 0.25; x < 1000; x += 0.5 {
		listed := false
		for _, w := range greens {
			listed = listed || x >= w.Start && x < w.End
		}
		if listed != GreenAt(plan, x) {
			t.Fatalf("at %g s: listed as green %v, green %v", x, listed, GreenAt(plan, x))
		}
	}
}
