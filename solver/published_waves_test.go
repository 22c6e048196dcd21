package solver_test

import (
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// accidentRoad is the road of P25: capacity 4000 veh/h with a recovery wave of 12.5 mi/h, an exit 5 miles
// upstream of an accident at place 0 that leaves 2000 veh/h until it is cleared.
func accidentRoad(t *testing.T, cleared float64) *solver.Solution {
	t.Helper()
	r := triangle(t, solver.TriangularParams{FreeSpeed: 50 * mph, Capacity: 4000 * perHour, WaveSpeed: 12.5 * mph})
	agree(t, "arriving [veh/mi]", r.FreeDensity(3000*perHour)/perMile, 60)
	agree(t, "queued [veh/mi]", r.CongestedDensity(2000*perHour)/perMile, 240)
	return answerOf(t, solver.Scenario{
		Origin:   -8 * mile,
		Segments: []solver.Segment{{Name: "road", Length: 9 * mile, Relation: r}},
		Bottlenecks: []solver.Bottleneck{{Name: "accident", Capacity: solver.Schedule{
			from(0, 2000*perHour), from(cleared, 4000*perHour)}}},
		Entry:   solver.Entry{Demand: always(3000 * perHour)},
		Initial: solver.Initial{BackgroundFlow: 3000 * perHour},
		Horizon: 2 * hour,
	})
}

// P25. Minutes from 08:00. Source: CIV ENG 376 homework 8 solution; read at coursehero.com/file/6879355.
func TestP25WhenMustTheAccidentBeCleared(t *testing.T) {
	const exit = -5 * mile
	s := accidentRoad(t, 30*minute)
	agree(t, "shock [mi/h]", jumpBetween(t, s, 20*minute, 60*perMile, 240*perMile).Speed(20*minute)/mph, -50.0/9)
	q := onlyQueue(t, s, "accident")
	agree(t, "cleared after 30 min, it just reaches the exit [mi]", q.PeakLength/mile, 5)
	agree(t, "at [min]", q.PeakLengthTime/minute, 54)
	agree(t, "recovery wave [mi/h]", must(s.QueueAt("accident", 42*minute))(t).Head/mile, -2.5)
	if time, ok, err := accidentRoad(t, 29.99*minute).QueueReaches("accident", exit); ok || err != nil {
		t.Errorf("cleared in time, it reaches the exit at %g min (%v)", time/minute, err)
	}
	late := accidentRoad(t, 31*minute)
	agree(t, "cleared late, it reaches the exit at [min]", must2(late.QueueReaches("accident", exit))(t)/minute, 54)
	agree(t, "and then goes on to [mi]", onlyQueue(t, late, "accident").PeakLength/mile, 5*31.0/30)
}

// P26. Source: homeworksource.com/p/999865 (I-90 problem).
func TestP26FullClosureOrPartialClosure(t *testing.T) {
	r := throughStates(t, 240*perMile, solver.FlowPoint{Density: 50 * perMile, Flow: 3000 * perHour},
		solver.FlowPoint{Density: 175 * perMile, Flow: 2100 * perHour})
	road := func(open, duration float64) *solver.Solution {
		s := openRoad(r, hour, flat(-12*mile, mile, 50*perMile))
		s.Bottlenecks = []solver.Bottleneck{{Name: "works", Capacity: solver.Schedule{from(0, open), from(duration, math.Inf(1))}}}
		return answerOf(t, s)
	}
	full, partial := road(0, 15*minute), road(2100*perHour, 40*minute)
	agree(t, "full closure, shock [mi/h]", jumpBetween(t, full, 9*minute, 50*perMile, 240*perMile).Speed(9*minute)/mph, -300.0/19)
	agree(t, "partial closure, shock [mi/h]", jumpBetween(t, partial, 9*minute, 50*perMile, 175*perMile).Speed(9*minute)/mph, -7.2)
	long := must(full.QueueAt("works", 15*minute))(t).Length
	longer := must(partial.QueueAt("works", 40*minute))(t).Length
	agree(t, "full closure, queue [mi]", long/mile, 75.0/19)
	agreeWithin(t, "the same, as published [mi]", long/mile, 3.95, 0.005)
	agree(t, "partial closure, queue [mi]", longer/mile, 4.8)
	agree(t, "speed in it [mi/h]", at(t, partial, -mile, 40*minute).Up.Speed/mph, 12)
	if long >= longer {
		t.Error("full closure has the longer queue")
	}
}

// P35. Source: Lighthill & Whitham 1955, Proc. R. Soc. A 229, 317-345; Newell 1993, A simplified theory of
// kinematic waves in highway traffic, I-III, Transp. Res. B 27.
func TestP35IncidentWithFullWavePattern(t *testing.T) {
	lane := triangle(t, solver.TriangularParams{FreeSpeed: 90 * kmh, WaveSpeed: 18 * kmh, JamDensity: 150 * perKm})
	s := answerOf(t, solver.Scenario{
		Origin:   -9 * kilometre,
		Segments: []solver.Segment{{Name: "road", Length: 12 * kilometre, Relation: lane.Lanes(3)}},
		Bottlenecks: []solver.Bottleneck{{Name: "incident", Capacity: solver.Schedule{
			from(0, 2250*perHour), from(20*minute, math.Inf(1))}}},
		Entry:   solver.Entry{Demand: always(4500 * perHour)},
		Initial: solver.Initial{BackgroundFlow: 4500 * perHour},
		Horizon: hour,
	})
	agree(t, "queued [veh/km]", at(t, s, -kilometre, 15*minute).Up.Density/perKm, 325)
	agree(t, "tail [km/h]", jumpBetween(t, s, 10*minute, 50*perKm, 325*perKm).Speed(10*minute)/kmh, -90.0/11)
	agree(t, "tail at 10 min [km]", tailOf(t, s, "incident", 10*minute)/kilometre, -15.0/11)
	agree(t, "tail at 20 min [km]", tailOf(t, s, "incident", 20*minute)/kilometre, -30.0/11)
	q := onlyQueue(t, s, "incident")
	agree(t, "recovery wave meets tail [min]", q.PeakLengthTime/minute, 110.0/3)
	agree(t, "where [km]", q.PeakLength/kilometre, 5)
	agree(t, "nothing denser than critical any more [min]", q.End/minute, 110.0/3)
	last := jumpBetween(t, s, 38*minute, 50*perKm, 75*perKm)
	agree(t, "last wave [km/h]", last.Speed(38*minute)/kmh, 90)
	agree(t, "last wave at 38 min [km]", last.Position(38*minute)/kilometre, -3)
	counted := func(time float64) float64 { return 4500*perHour*time - passed(t, s, 0, 0, time) }
	agree(t, "largest stop-line queue [veh]", counted(20*minute), 750)
	agreeOn(t, "free [veh]", counted(40*minute), 0, 3000)
	agree(t, "affected [veh]", passed(t, s, 0, 0, 40*minute), 3000)
	agree(t, "total delay [veh h]", totals(t, s, 40*minute).Delay/hour, 250)
	agree(t, "average [min]", totals(t, s, hour).Delay/3000/minute, 5)
	// Nine kilometres upstream is six minutes ahead in free flow.
	longest := must(s.TravelTime(-9*kilometre, 3*kilometre, 4*minute))(t)
	agree(t, "longest delay [min]", longest.Delay/minute, 10)
	agree(t, "the 750th vehicle passes at [min]", passes(t, trajectory(t, s, -9*kilometre, 4*minute), 0)/minute, 20)
}

// P36. Hours from the rise of demand. Source: theory as in P35; the 1200 veh/h/ln is that of Dixon, Hummer &
// Lorscheider, Transportation Research Record 1529 (1996), read at id.scribd.com/document/322880736.
func TestP36RuralWorkZoneWithADemandPulse(t *testing.T) {
	r := triangle(t, solver.TriangularParams{FreeSpeed: 100 * kmh, WaveSpeed: 20 * kmh, JamDensity: 300 * perKm})
	s := answerOf(t, solver.Scenario{
		Origin:      -5 * kilometre,
		Segments:    []solver.Segment{{Name: "road", Length: 6 * kilometre, Relation: r}},
		Bottlenecks: []solver.Bottleneck{{Name: "works", Capacity: always(1200 * perHour)}},
		Entry:       solver.Entry{Demand: schedule(hour, perHour, 0, 1500, 2, 900)},
		Initial:     solver.Initial{BackgroundFlow: 900 * perHour},
		Horizon:     5 * hour,
	})
	q := onlyQueue(t, s, "works")
	agree(t, "begins [h]", q.Start/hour, 0.05)
	agree(t, "queued [veh/km]", at(t, s, -kilometre, 1.5*hour).Up.Density/perKm, 240)
	agree(t, "tail [km/h]", jumpBetween(t, s, hour, 15*perKm, 240*perKm).Speed(hour)/kmh, -4.0/3)
	const meet = (5 + 200 + 4.0/60) / (100 + 4.0/3) // the fall of demand is at -5+100(t-2), the tail at -4/3(t-0.05)
	agree(t, "the fall of demand meets the tail [h]", q.PeakLengthTime/hour, meet)
	agreeWithin(t, "the same, as recomputed [h]", q.PeakLengthTime/hour, 2.023684, 5e-7)
	agree(t, "greatest length [km]", q.PeakLength/kilometre, 4.0/3*(meet-0.05))
	agreeWithin(t, "the same, as recomputed [km]", q.PeakLength/kilometre, 2.631579, 5e-7)
	agree(t, "on the way back [km/h]", jumpBetween(t, s, 3*hour, 9*perKm, 240*perKm).Speed(3*hour)/kmh, 300.0/231)
	agree(t, "clears [h]", q.End/hour, 4.05)
	for time, tail := range map[float64]float64{1: -1.266667, 3: -1.363636, 4: -0.064935} {
		agreeWithin(t, "tail as recomputed [km]", tailOf(t, s, "works", time*hour)/kilometre, tail, 5e-7)
	}
	counted := passed(t, s, -5*kilometre, 0, 2*hour) - passed(t, s, 0, 0.05*hour, 2.05*hour)
	agree(t, "largest stop-line queue [veh]", counted, 600)
	agree(t, "total delay [veh h]", totals(t, s, 4.05*hour).Delay/hour, 1200)
	agree(t, "affected [veh]", passed(t, s, 0, 0.05*hour, 4.05*hour), 4800)
	agree(t, "longest delay [min]", must(s.TravelTime(-5*kilometre, kilometre, 2*hour))(t).Delay/minute, 30)
}

// P37, the main line only: full ramp priority leaves it 3500 veh/h for 30 min and 4500 veh/h after. The ramp itself
// is not a node yet. Source: Daganzo, The cell transmission model, part II, Transp. Res. B 29 (1995), 79-93.
func TestP37MainLineBeforeAMergeWithRampPriority(t *testing.T) {
	r := triangle(t, solver.TriangularParams{FreeSpeed: 100 * kmh, WaveSpeed: 20 * kmh, JamDensity: 300 * perKm})
	s := answerOf(t, solver.Scenario{
		Origin:      -6 * kilometre,
		Segments:    []solver.Segment{{Name: "road", Length: 7 * kilometre, Relation: r}},
		Bottlenecks: []solver.Bottleneck{{Name: "merge", Capacity: schedule(minute, perHour, 0, 3500, 30, 4500)}},
		Entry:       solver.Entry{Demand: always(4000 * perHour)},
		Initial:     solver.Initial{BackgroundFlow: 4000 * perHour},
		Horizon:     90 * minute,
	})
	agree(t, "queued at first [veh/km]", at(t, s, -kilometre, 20*minute).Up.Density/perKm, 125)
	agree(t, "queued later [veh/km]", at(t, s, -kilometre, 40*minute).Up.Density/perKm, 75)
	agree(t, "tail [km/h]", jumpBetween(t, s, 20*minute, 40*perKm, 125*perKm).Speed(20*minute)/kmh, -100.0/17)
	agree(t, "tail at 30 min [km]", tailOf(t, s, "merge", 30*minute)/kilometre, -50.0/17)
	agree(t, "wave of the change [km/h]", jumpBetween(t, s, 35*minute, 125*perKm, 75*perKm).Speed(35*minute)/kmh, -20)
	q := onlyQueue(t, s, "merge")
	agree(t, "they meet [min]", q.PeakLengthTime/minute, 42.5)
	agree(t, "where [km]", q.PeakLength/kilometre, 25.0/6)
	agree(t, "on the way back [km/h]", jumpBetween(t, s, 50*minute, 40*perKm, 75*perKm).Speed(50*minute)/kmh, 100.0/7)
	agree(t, "clears [min]", q.End/minute, 60)
	agree(t, "largest stop-line queue [veh]", 2000-passed(t, s, 0, 0, 30*minute), 250)
	agree(t, "total delay [veh h]", totals(t, s, hour).Delay/hour, 125)
	agree(t, "average over the hour [min]", totals(t, s, hour).Delay/passed(t, s, 0, 0, hour)/minute, 1.875)
}
