package solver_test

import (
	"fmt"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// One test for each convention about states, counts, trips and totals; those about queues are in
// conventions_queues_test.go, those about nodes in conventions_nodes_test.go.

// everyRelation runs a check on one relation of each kind, with numbers that do not come out even.
func everyRelation(t *testing.T, check func(t *testing.T, r solver.Relation)) {
	d := newDice(20270103)
	for _, kind := range allKinds {
		for i := range 4 {
			spec := d.relation(kind)
			t.Run(fmt.Sprintf("%v %d", kind, i), func(t *testing.T) {
				t.Logf("%+v", spec)
				check(t, spec.relation())
			})
		}
	}
}

// Congested is strictly denser than critical, or than the upper end of a plateau: flow at capacity is not.
func TestCongestedIsStrictlyDenserThanCritical(t *testing.T) {
	everyRelation(t, func(t *testing.T, r solver.Relation) {
		least, greatest := r.CriticalDensity()
		hair := 1e-6 * r.JamDensity()
		for _, c := range []struct {
			what      string
			density   float64
			congested bool
		}{
			{"empty", 0, false},
			{"a hair below critical", least - hair, false},
			{"the least critical density", least, false},
			{"between the two", (least + greatest) / 2, false},
			{"the greatest critical density", greatest, false},
			{"a hair above critical", greatest + hair, true},
			{"jam", r.JamDensity(), true},
		} {
			s := answerOf(t, openRoad(r, 10, flat(0, 1000, c.density)))
			for _, time := range []float64{0, 5} {
				if a := at(t, s, 500, time); a.Up.Congested != c.congested || a.Down.Congested != c.congested {
					t.Errorf("%s, %.9g veh/m at %g s: congested is %t and %t", c.what, c.density, time, a.Up.Congested, a.Down.Congested)
				}
			}
			if q := must(s.QueueAt(solver.ExitName, 5))(t); q.Present != c.congested {
				t.Errorf("%s, %.9g veh/m: a queue at the exit is %t", c.what, c.density, q.Present)
			}
		}
	})
}

// In a fan through the critical density the wave of that density is at capacity and not congested, on both of its sides; a
// metre upstream it is.
func TestTheCriticalWaveOfAFanIsNotCongested(t *testing.T) {
	s := redThenGreen(t)
	for _, time := range []float64{70, 100, 190} {
		a := at(t, s, 1024, time)
		agree(t, "flow at the light", a.Up.Flow, 0.5)
		if a.Up.Congested || a.Down.Congested {
			t.Errorf("at the light at %g s: %+v and %+v, want flow at capacity, not congested", time, a.Up, a.Down)
		}
		if b := at(t, s, 1023, time); !b.Up.Congested || at(t, s, 1025, time).Up.Congested {
			t.Errorf("a metre upstream at %g s: %+v, want congested; and not a metre downstream", time, b.Up)
		}
	}
}

// Demand exactly at capacity makes no queue: not at the entry, not at a join, not at a bottleneck or signal of just
// that capacity, not at the exit; all passes as it comes.
func TestDemandAtCapacityMakesNoQueue(t *testing.T) {
	everyRelation(t, func(t *testing.T, r solver.Relation) {
		c := r.Capacity()
		s := answerOf(t, solver.Scenario{
			Segments:    []solver.Segment{{Name: "one", Length: 500, Relation: r}, {Name: "other", Length: 500, Relation: r}},
			Bottlenecks: []solver.Bottleneck{{Name: "works", Place: 250, Capacity: always(c)}},
			Signals:     []solver.Signal{{Name: "light", Place: 750, SaturationFlow: c, Plan: solver.Plan{Cycle: 60, Greens: []solver.Window{{Start: 0, End: 60}}}}},
			Entry:       solver.Entry{Demand: always(c)},
			Exit:        solver.Exit{Capacity: always(c)},
			Horizon:     600,
		})
		for _, n := range s.Nodes() {
			if queues := must(s.Queues(n.Name))(t); len(queues) != 0 {
				t.Errorf("queues at %s: %+v", n.Name, queues)
			}
		}
		all := totals(t, s, 600)
		agree(t, "entered", all.Entered, 600*c)
		if all.Waiting != 0 || all.WaitingTime > exactness*600*600*c || all.TurnedAway != 0 {
			t.Errorf("%g wait, for %g veh s; %g are turned away", all.Waiting, all.WaitingTime, all.TurnedAway)
		}
	})
}

// rush is 1 veh/s for 100 s on a road of 1000 m that takes 0.5: 50 wait at 100 s, the last is in at 200 s and out at 300 s.
func rush(t *testing.T, excess solver.Excess) *solver.Solution {
	t.Helper()
	return answerOf(t, solver.Scenario{Segments: []solver.Segment{exactRoad(t, 1000)}, Horizon: 400,
		Entry: solver.Entry{Demand: rates(0, 1, 100, 0), Excess: excess}})
}

// Waiting outside is reported beside the delay and never in it. The triangle of waiting: 50 vehicles high, 200 s long.
func TestWaitingOutsideIsReportedBeside(t *testing.T) {
	s := rush(t, solver.Waits)
	peak := totals(t, s, 100)
	agree(t, "waiting at 100 s", peak.Waiting, 50)
	agree(t, "waited by 100 s", peak.WaitingTime, 2500)
	all := totals(t, s, 400)
	agree(t, "waited in all", all.WaitingTime, 5000)
	agree(t, "time on the road", all.VehicleTime, 100*100)
	agreeOn(t, "delay on the road", all.Delay, 0, all.VehicleTime)
	agreeOn(t, "still waiting", all.Waiting, 0, 100)
	// the 60th vehicle comes at 60 s and is in at 120 s
	trip := must(s.TravelTime(0, 1000, 60))(t)
	agree(t, "waits outside", trip.WaitOutside, 60)
	agree(t, "arrives", trip.Arrival, 220)
	agree(t, "on the road", trip.Duration, 100)
	agreeOn(t, "its delay", trip.Delay, 0, 100)
	if all.TurnedAway != 0 {
		t.Errorf("%g turned away where all wait", all.TurnedAway)
	}
}

// Demand that may be turned away is counted, and nobody waits.
func TestTurnedAwayDemandIsCounted(t *testing.T) {
	s := rush(t, solver.TurnsAway)
	for _, c := range []struct{ time, entered, away float64 }{{60, 30, 30}, {100, 50, 50}, {400, 50, 50}} {
		all := totals(t, s, c.time)
		agree(t, "entered", all.Entered, c.entered)
		agree(t, "turned away", all.TurnedAway, c.away)
		if all.Waiting != 0 || all.WaitingTime != 0 {
			t.Errorf("%g wait, for %g veh s", all.Waiting, all.WaitingTime)
		}
	}
	trip := must(s.TravelTime(0, 1000, 60))(t)
	agree(t, "arrives", trip.Arrival, 160)
	if trip.WaitOutside != 0 {
		t.Errorf("waits %g s", trip.WaitOutside)
	}
}

// The count at the entry is of the vehicles that have entered, not of those that came; at other nodes it is that of the
// upstream side, so that it is the flow out of the road before it.
func TestCountsAtNodes(t *testing.T) {
	s := rush(t, solver.Waits)
	agree(t, "at the entry at 60 s", at(t, s, 0, 60).Count, 30)
	agree(t, "at the entry at 300 s", at(t, s, 0, 300).Count, 100)
	agree(t, "at the exit at 160 s", at(t, s, 1000, 160).Count, 30)
	// a closure with 25 vehicles before it at time 0: none passes, and N at it stays at -25
	closed := answerOf(t, closedRoad(t, 300, solver.Bottleneck{Name: "works", Place: 1000, Capacity: rates(0, 0)}))
	a := at(t, closed, 1000, 200)
	agree(t, "at the closure", a.Count, -25)
	agree(t, "density before the closure", a.Up.Density, 0.15)
	if a.Down.Density != 0 || a.OnFront {
		t.Errorf("behind the closure %+v, on a front: %t", a.Down, a.OnFront)
	}
	agree(t, "50 m before it", at(t, closed, 950, 200).Count, -25+0.15*50)
}

// A question exactly on a front returns both sides and says so; a hair beside it, one.
func TestAQuestionOnAFrontReturnsBothSides(t *testing.T) {
	s := answerOf(t, closedRoad(t, 300, solver.Bottleneck{Name: "works", Place: 1000, Capacity: rates(0, 0)}))
	a := at(t, s, 980, 10)
	agree(t, "upstream of the tail", a.Up.Density, 0.025)
	agree(t, "downstream of the tail", a.Down.Density, 0.15)
	if !a.OnFront || a.Up.Congested || !a.Down.Congested {
		t.Errorf("on the tail: %+v", a)
	}
	for place, density := range map[float64]float64{979.999: 0.025, 980.001: 0.15} {
		b := at(t, s, place, 10)
		agree(t, "beside the tail", b.Up.Density, density)
		if b.OnFront || b.Up != b.Down {
			t.Errorf("beside the tail: %+v", b)
		}
	}
	// on the edge of a fan both sides have one density
	fan := answerOf(t, openRoad(bentRoad(t, 1).Relation, 30, flat(0, 512, 0.0625), flat(512, 1024, 0.03125)))
	for _, wave := range []float64{0, 8} {
		a := at(t, fan, 512+wave*20, 20)
		agree(t, "on the edge", a.Up.Density, (16-wave)/256)
		agree(t, "on its other side", a.Down.Density, (16-wave)/256)
		if !a.OnFront {
			t.Errorf("the edge of %g m/s is no front", wave)
		}
	}
	// a vehicle on a front is the one on its downstream side: the last that stands
	agree(t, "the vehicle on the tail", trajectory(t, s, 980, 10).Position(200), 980)
	agree(t, "one a metre behind", trajectory(t, s, 978, 10).Position(200), 978+10.0*4/24) // 10 and -2 m/s, 2 m apart: 1/6 s
}

// Delay is against the speed at density zero, segment by segment, also where nobody is held up: linear-law traffic of
// 0.03125 veh/m goes at 12 instead of 16 m/s.
func TestDelayRefersToTheSpeedOfAnEmptyRoad(t *testing.T) {
	curve, straight := bentRoad(t, 1024), exactRoad(t, 500)
	curve.Name, straight.Name = "curve", "straight"
	s := answerOf(t, solver.Scenario{Segments: []solver.Segment{curve, straight}, Horizon: 200,
		Entry: solver.Entry{Demand: rates(0, 0.375)}, Initial: solver.Initial{BackgroundFlow: 0.375}})
	trip := must(s.TravelTime(0, 1524, 10))(t)
	agree(t, "free flow", trip.FreeFlow, 1024.0/16+500.0/10)
	agree(t, "duration", trip.Duration, 1024.0/12+500.0/10)
	agree(t, "delay", trip.Delay, 1024.0/12-1024.0/16)
	// over 100 s: 0.03125*1024 vehicles at 1 - 12/16 of their time, none on the straight relation
	all := totals(t, s, 100)
	agree(t, "delay of all", all.Delay, 0.03125*1024*100/4)
	agreeOn(t, "delay on the straight relation", all.Segments[1].Delay, 0, all.VehicleTime)
}

// A trip that starts on an empty road gets the free-flow answer.
func TestATripOnAnEmptyRoadIsOfFreeFlow(t *testing.T) {
	everyRelation(t, func(t *testing.T, r solver.Relation) {
		s := answerOf(t, solver.Scenario{Segments: []solver.Segment{{Length: 1000, Relation: r}}, Horizon: 1000,
			Signals: []solver.Signal{light("light", 500, 0, 1000)}})
		for _, from := range []float64{0, 250} {
			trip := must(s.TravelTime(from, 1000, 20))(t)
			agree(t, "duration", trip.Duration, (1000-from)/r.FreeSpeed())
			agreeOn(t, "delay", trip.Delay, 0, trip.Duration)
			agree(t, "speed", at(t, s, 700, 20).Up.Speed, r.FreeSpeed())
			if !trip.Arrived || trip.WaitOutside != 0 {
				t.Errorf("trip %+v", trip)
			}
		}
	})
}

// A vehicle that has not arrived by the horizon is said to be under way, on the road or before it; nothing is forecast.
func TestATripThatHasNotArrivedSaysSo(t *testing.T) {
	s := answerOf(t, closedRoad(t, 300, solver.Bottleneck{Name: "works", Place: 1000, Capacity: rates(0, 0)}))
	// from 500 m: 10 t = 500 - 2 t, stands 416 2/3 m on for the rest; 2000 m would take 150 s
	trip := must(s.TravelTime(500, 2000, 0))(t)
	agree(t, "time", trip.Arrival, 300)
	agree(t, "duration so far", trip.Duration, 300)
	agree(t, "free-flow time of the whole", trip.FreeFlow, 150)
	agree(t, "delay so far", trip.Delay, 300-(500-500.0/6)/10)
	if trip.Arrived {
		t.Error("it has not arrived")
	}
	// 1 veh/s for 100 s, the road takes 0.5: the 90th is in at 180 s, after the horizon
	scenario := solver.Scenario{Segments: []solver.Segment{exactRoad(t, 1000)}, Horizon: 150, Entry: solver.Entry{Demand: rates(0, 1)}}
	outside := must(answerOf(t, scenario).TravelTime(0, 1000, 90))(t)
	agree(t, "waited so far", outside.WaitOutside, 60)
	if outside.Arrived || outside.Arrival != 150 || outside.Duration != 0 || outside.Delay != 0 {
		t.Errorf("trip %+v, want one that waits outside at 150 s", outside)
	}
}
