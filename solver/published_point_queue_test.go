package solver_test

import (
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// pointQueue is a bottleneck that is seen as a deterministic queue (D/D/1): arrivals and service as rates over
// time, both from time 0. It is posed to the solver twice: with the bottleneck at the corridor's entry, where all
// wait outside, one behind the other in no space at all; and with the bottleneck on a road, where the queue reaches
// back. Delay, clearing time and vehicles affected are the same (Newell 1993, Transp. Res. B 27, 281-287).
type pointQueue struct {
	arrivals, service solver.Schedule
	horizon           float64
}

// queueFacts are what is known of it, in seconds and vehicles.
type queueFacts struct {
	queue    map[float64]float64 // vehicles waiting, by time
	clears   float64
	affected float64             // arrivals until it clears
	total    float64             // delay of all together [veh s]
	waits    map[float64]float64 // wait of the vehicle that arrives at a time
}

// roadFor is a road that neither arrivals nor service ever fill.
func (p pointQueue) roadFor(t *testing.T) solver.Relation {
	most := 0.0
	for _, s := range append(append(solver.Schedule{}, p.arrivals...), p.service...) {
		if !math.IsInf(s.Rate, 1) {
			most = max(most, s.Rate)
		}
	}
	return triangle(t, solver.TriangularParams{FreeSpeed: 90 * kmh, Capacity: 1.25 * most, WaveSpeed: 18 * kmh})
}

func (p pointQueue) check(t *testing.T, f queueFacts) {
	t.Helper()
	t.Run("waiting at the entry", func(t *testing.T) { p.checkAtEntry(t, f) })
	t.Run("waiting on the road", func(t *testing.T) { p.checkOnRoad(t, f) })
}

func (p pointQueue) atEntry(t *testing.T) *solver.Solution {
	t.Helper()
	return answerOf(t, solver.Scenario{
		Segments:    []solver.Segment{{Name: "road", Length: 900, Relation: p.roadFor(t)}},
		Bottlenecks: []solver.Bottleneck{{Name: "bottleneck", Capacity: p.service}},
		Entry:       solver.Entry{Demand: p.arrivals},
		Horizon:     p.horizon,
	})
}

func (p pointQueue) checkAtEntry(t *testing.T, f queueFacts) {
	t.Helper()
	s := p.atEntry(t)
	for time, queue := range f.queue {
		agreeOn(t, "waiting [veh]", totals(t, s, time).Waiting, queue, f.affected)
	}
	end := totals(t, s, f.clears)
	agreeOn(t, "clears [veh]", end.Waiting, 0, f.affected)
	agree(t, "affected [veh]", end.Entered, f.affected)
	agree(t, "total [veh min]", end.WaitingTime/minute, f.total/minute)
	agree(t, "total later [veh min]", totals(t, s, p.horizon).WaitingTime/minute, f.total/minute)
	agree(t, "average [min]", end.WaitingTime/end.Entered/minute, f.total/f.affected/minute)
	if q := totals(t, s, 0.999*f.clears).Waiting; q < 1e-6*f.affected {
		t.Errorf("cleared too early: %g veh are left at 0.999 of the clearing time", q)
	}
	for time, wait := range f.waits {
		agreeOn(t, "wait [s]", must(s.TravelTime(0, 900, time))(t).WaitOutside, wait, f.clears)
	}
}

// travelled is the free-flow time from the entry to the bottleneck of checkOnRoad: half an hour.
const travelled, reachBack = 30 * minute, 45 * kilometre

// later is a schedule as it is seen half an hour down the road.
func later(s solver.Schedule) solver.Schedule {
	out := append(solver.Schedule{}, s...)
	for i := range out {
		out[i].Start += travelled
	}
	return out
}

func (p pointQueue) onRoad(t *testing.T) *solver.Solution {
	t.Helper()
	return answerOf(t, solver.Scenario{
		Origin:      -reachBack,
		Segments:    []solver.Segment{{Name: "road", Length: reachBack + kilometre, Relation: p.roadFor(t)}},
		Bottlenecks: []solver.Bottleneck{{Name: "bottleneck", Capacity: later(p.service)}},
		Entry:       solver.Entry{Demand: p.arrivals},
		Initial:     solver.Initial{BackgroundFlow: p.arrivals[0].Rate},
		Horizon:     p.horizon + travelled,
	})
}

func (p pointQueue) checkOnRoad(t *testing.T, f queueFacts) {
	t.Helper()
	s := p.onRoad(t)
	for time, queue := range f.queue {
		agreeOn(t, "queue counted at the bottleneck [veh]", p.counted(t, s, time), queue, f.affected)
	}
	q := onlyQueue(t, s, "bottleneck")
	agree(t, "clears [s]", q.End-travelled, f.clears)
	agree(t, "affected [veh]", passed(t, s, 0, travelled, q.End), f.affected)
	agree(t, "total [veh min]", totals(t, s, q.End).Delay/minute, f.total/minute)
	agree(t, "total later [veh min]", totals(t, s, p.horizon+travelled).Delay/minute, f.total/minute)
	for time, wait := range f.waits {
		agreeOn(t, "wait [s]", must(s.TravelTime(-reachBack, kilometre, time))(t).Delay, wait, f.clears)
	}
}

// counted is what has entered the road and is not past the bottleneck half an hour later.
func (p pointQueue) counted(t *testing.T, s *solver.Solution, time float64) float64 {
	t.Helper()
	return passed(t, s, -reachBack, 0, time) - passed(t, s, 0, travelled, time+travelled)
}

// schedule is one of alternating starts and rates, the units given by the caller.
func schedule(timeUnit, rateUnit float64, startsAndRates ...float64) solver.Schedule {
	var s solver.Schedule
	for i := 0; i < len(startsAndRates); i += 2 {
		s = append(s, from(startsAndRates[i]*timeUnit, startsAndRates[i+1]*rateUnit))
	}
	return s
}
