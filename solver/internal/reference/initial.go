package reference

import (
	"math"
	"slices"

	"github.com/roadswell/roadswell/solver"
)

// InitialProfile is the density at time 0 over the whole corridor, standing queues laid over the background.
func InitialProfile(s *solver.Scenario) []solver.ProfilePiece {
	profile := background(s)
	for _, q := range s.Initial.Queues {
		for _, p := range standing(s, q) {
			profile = overlay(profile, p)
		}
	}
	return profile
}

func background(s *solver.Scenario) []solver.ProfilePiece {
	if len(s.Initial.Profile) > 0 {
		return slices.Clone(s.Initial.Profile)
	}
	var out []solver.ProfilePiece
	for i, g := range s.Segments {
		k := 0.0
		if s.Initial.BackgroundFlow > 0 {
			k = g.Relation.FreeDensity(s.Initial.BackgroundFlow)
		}
		from := segmentStart(s, i)
		out = append(out, solver.ProfilePiece{Start: from, End: segmentStart(s, i+1), StartDensity: k, EndDensity: k})
	}
	return out
}

// segmentStart is the place where segment i begins; with i = number of segments, the corridor's end.
func segmentStart(s *solver.Scenario, i int) float64 {
	x := s.Origin
	for _, g := range s.Segments[:i] {
		x += g.Length
	}
	return x
}

// overlay lays one piece over the profile.
func overlay(profile []solver.ProfilePiece, top solver.ProfilePiece) []solver.ProfilePiece {
	var out []solver.ProfilePiece
	for _, p := range profile {
		out = appendPart(out, p, p.Start, math.Min(p.End, top.Start))
		out = appendPart(out, p, math.Max(p.Start, top.End), p.End)
	}
	out = append(out, top)
	slices.SortFunc(out, func(a, b solver.ProfilePiece) int { return int(math.Copysign(1, a.Start-b.Start)) })
	return out
}

func appendPart(out []solver.ProfilePiece, p solver.ProfilePiece, from, to float64) []solver.ProfilePiece {
	if from >= to {
		return out
	}
	part := solver.ProfilePiece{Start: from, End: to, StartDensity: densityIn(p, from), EndDensity: densityIn(p, to)}
	return append(out, part)
}

// standing walks upstream from the queue's node until its vehicles or its length are used up, one uniform
// piece a segment.
func standing(s *solver.Scenario, q solver.StandingQueue) []solver.ProfilePiece {
	place, flow := heldBy(s, q.Node)
	left := q.Vehicles + q.Length // exactly one of them is given
	var out []solver.ProfilePiece
	for i := len(s.Segments) - 1; i >= 0 && left > 0; i-- {
		from, to := segmentStart(s, i), math.Min(place, segmentStart(s, i+1))
		if from >= to {
			continue
		}
		k := congestedAt(s.Segments[i].Relation, flow)
		perMetre := 1.0
		if q.Vehicles > 0 {
			perMetre = k
		}
		length := math.Min(to-from, left/perMetre)
		left -= length * perMetre
		out = append(out, solver.ProfilePiece{Start: to - length, End: to, StartDensity: k, EndDensity: k})
	}
	return out
}

// heldBy is the place of a node and the flow that it lets pass behind a standing queue at time 0.
func heldBy(s *solver.Scenario, node string) (place, flow float64) {
	end := segmentStart(s, len(s.Segments))
	if node == solver.ExitName {
		return end, lets(s, end, meanRate(s.Exit.Capacity, math.Inf(1), 0, 0))
	}
	for _, g := range s.Signals {
		if g.Name == node {
			return g.Place, 0
		}
	}
	for _, b := range s.Bottlenecks {
		if b.Name == node {
			return b.Place, lets(s, b.Place, meanRate(b.Capacity, math.Inf(1), 0, 0))
		}
	}
	return joinHolds(s, node)
}

func joinHolds(s *solver.Scenario, node string) (place, flow float64) {
	for i := 1; i < len(s.Segments); i++ {
		if "join "+s.Segments[i-1].Name+"/"+s.Segments[i].Name == node {
			x := segmentStart(s, i)
			return x, lets(s, x, math.Inf(1))
		}
	}
	return math.NaN(), math.NaN()
}

// lets is the least of a capacity and of what the roads on both sides of a place carry.
func lets(s *solver.Scenario, place, capacity float64) float64 {
	for i, g := range s.Segments {
		if segmentStart(s, i) <= place && place <= segmentStart(s, i+1) {
			capacity = math.Min(capacity, g.Relation.Capacity())
		}
	}
	return capacity
}

// congestedAt finds the congested density that carries a flow, by bisection.
func congestedAt(r solver.Relation, flow float64) float64 {
	_, lo := r.CriticalDensity()
	hi := r.JamDensity()
	if flow <= 0 {
		return hi
	}
	for range 60 {
		if middle := (lo + hi) / 2; r.Flow(middle) > flow {
			lo = middle
		} else {
			hi = middle
		}
	}
	return (lo + hi) / 2
}
