package solver_test

import (
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// approach is a homogeneous road with a signal at place 0, in steady arrivals before time 0.
type approach struct {
	relation   solver.Relation
	up, down   float64 // length of road upstream and downstream of the stop line
	arrivals   float64
	saturation float64
	plan       solver.Plan
	horizon    float64
}

func (a approach) scenario() solver.Scenario {
	return solver.Scenario{
		Origin:   -a.up,
		Segments: []solver.Segment{{Name: "approach", Length: a.up + a.down, Relation: a.relation}},
		Signals:  []solver.Signal{{Name: "light", SaturationFlow: a.saturation, Plan: a.plan}},
		Entry:    solver.Entry{Demand: always(a.arrivals)},
		Initial:  solver.Initial{BackgroundFlow: a.arrivals},
		Horizon:  a.horizon,
	}
}

// redFirst is a cycle that begins with red.
func redFirst(cycle, red float64) solver.Plan {
	return solver.Plan{Cycle: cycle, Greens: []solver.Window{{Start: red, End: cycle}}}
}

// oneRed is red from time 0 for a given time, then green.
func oneRed(red, horizon float64) solver.Plan {
	return solver.Plan{Greens: []solver.Window{{Start: red, End: red + horizon}}}
}

// P09. Source: end-of-chapter problem of Garber & Hoel, Traffic and Highway Engineering; inputs read at
// askfilo.com ...3334313230343833 and ...3336353735373838.
func TestP09OneRedOnAnApproach(t *testing.T) {
	const red, arriving, discharging = 30.0, 44 * perMile, 51 * perMile
	r := throughStates(t, 120*perMile, solver.FlowPoint{Density: arriving, Flow: 1760 * perHour},
		solver.FlowPoint{Density: discharging, Flow: 1950 * perHour})
	s := answerOf(t, approach{r, 3 * mile, mile, 1760 * perHour, 1950 * perHour, oneRed(red, hour), 400}.scenario())
	const stopping, starting, moving = 1760.0 / 76, 1950.0 / 69, 190.0 / 7
	agree(t, "stopping wave [mi/h]", jumpBetween(t, s, red, arriving, 120*perMile).Speed(red)/mph, -stopping)
	agree(t, "queue at the end of red [mi]", must(s.QueueAt("light", red))(t).Length/mile, stopping*red/hour)
	agreeWithin(t, "the same, as recomputed [ft]", must(s.QueueAt("light", red))(t).Length/foot, 1018.95, 0.005)
	agree(t, "starting wave [mi/h]", jumpBetween(t, s, 2*red, 120*perMile, discharging).Speed(2*red)/mph, -starting)
	q := onlyQueue(t, s, "light")
	const meet = red * stopping / (starting - stopping)
	agree(t, "waves meet after green [s]", q.PeakLengthTime-red, meet)
	agreeWithin(t, "the same, as recomputed [s]", q.PeakLengthTime-red, 136.1435, 5e-5)
	agree(t, "furthest back [mi]", q.PeakLength/mile, starting*meet/hour)
	agreeWithin(t, "the same, as recomputed [ft]", q.PeakLength/foot, 5643.05, 0.005)
	agree(t, "nothing denser than critical any more [s]", q.End-red, meet)
	last := jumpBetween(t, s, 200, arriving, discharging)
	agree(t, "last wave [mi/h]", last.Speed(200)/mph, moving)
	const clear = red * 1760 / (1950 - 1760)
	agree(t, "stop line clear after green [s]", passes(t, trajectory(t, s, -2*mile, red+clear-2*mile/(40*mph)), 0)-red, clear)
	agree(t, "the last wave passes the stop line [s]", meet+starting/moving*meet, clear)
	agree(t, "passed the stop line by then [veh]", passed(t, s, 0, 0, red+clear), 1760*perHour*(red+clear))
	agree(t, "flow just before [veh/h]", at(t, s, 0, red+clear-1).Up.Flow/perHour, 1950)
	agree(t, "flow just after [veh/h]", at(t, s, 0, red+clear+1).Up.Flow/perHour, 1760)
}

// P10. Source: Lighthill & Whitham 1955, Proc. R. Soc. A 229, 317-345, part II; the uniform-delay term of Webster
// 1958, Traffic Signal Settings.
func TestP10TriangularSignalCycle(t *testing.T) {
	const cycle, red, cycles = 90.0, 50.0, 5
	r := triangle(t, solver.TriangularParams{FreeSpeed: 50 * kmh, Capacity: 1800 * perHour, JamDensity: 150 * perKm})
	s := answerOf(t, approach{r, 500, 500, 600 * perHour, 1800 * perHour, redFirst(cycle, red), cycles*cycle + red/2}.scenario())
	queues := must(s.Queues("light"))(t)
	if len(queues) != cycles+1 {
		t.Fatalf("%d queues in %d cycles and a half", len(queues), cycles)
	}
	for i, q := range queues[:cycles] {
		begin := float64(i) * cycle
		agreeOn(t, "begins [s]", q.Start, begin, cycle)
		agree(t, "at the end of red [m]", -tailOf(t, s, "light", begin+red), 600.0/138*kmh*red)
		agree(t, "waves meet after green [s]", q.PeakLengthTime-begin-red, 19)
		agree(t, "furthest back [m]", q.PeakLength, 250.0/3)
		agree(t, "have stopped [veh]", q.PeakLength*150*perKm, 12.5)
		agree(t, "cleared after green [s]", q.End-begin-red, 19)
		agree(t, "most at once [veh]", q.PeakVehicles, 600.0/138*kmh*red*150*perKm)
		agree(t, "stop-line queue [veh]", 600*perHour*(begin+red)-passed(t, s, 0, 0, begin+red), 25.0/3)
		clear := begin + red + 25
		agree(t, "passed when the stop line clears [veh]", passed(t, s, 0, 0, clear), 600*perHour*clear)
		agree(t, "flow just before [veh/h]", at(t, s, 0, clear-0.1).Up.Flow/perHour, 1800)
		agree(t, "flow just after [veh/h]", at(t, s, 0, clear+0.1).Up.Flow/perHour, 600)
		agree(t, "delay [s/veh]", totals(t, s, begin+cycle).Delay/(600*perHour*(begin+cycle)), 125.0/6)
	}
}

// P15. Source: base saturation flow 1900 pc/h/ln and queue spacing 25 ft are defaults of the Highway Capacity
// Manual (from memory); the rest is theory.
func TestP15StartUpWaveFromHandbookValues(t *testing.T) {
	const spacing, headway = 25 * foot, hour / 1900
	r := triangle(t, solver.TriangularParams{FreeSpeed: 30 * mph, Capacity: 1900 * perHour, JamDensity: 1 / spacing})
	_, critical := r.CriticalDensity()
	agree(t, "critical density [veh/mi]", critical/perMile, 190.0/3)
	agree(t, "jam density [veh/mi]", r.JamDensity()/perMile, 211.2)
	scenario := approach{r, 500, 200, 0, r.Capacity(), oneRed(0, hour), minute}.scenario()
	scenario.Initial.Queues = []solver.StandingQueue{{Node: "light", Length: 400}}
	s := answerOf(t, scenario)
	wave := -must(s.QueueAt("light", 20))(t).Head / 20
	agree(t, "start-up wave [mi/h]", wave/mph, 1900/(211.2-190.0/3))
	agreeWithin(t, "the same, as recomputed [km/h]", wave/kmh, 20.679, 5e-4)
	if wave < 15*kmh || wave > 25*kmh {
		t.Errorf("start-up wave %g km/h is not plausible", wave/kmh)
	}
	agreeWithin(t, "per queued vehicle [s]", spacing/wave, 1.32656, 5e-6)
	for _, n := range []float64{1, 7, 20} {
		vehicle := trajectory(t, s, -n*spacing, 0)
		agreeOn(t, "still standing [m]", vehicle.Position(n*spacing/wave), -n*spacing, n*spacing)
		agree(t, "crosses the stop line [s]", passes(t, vehicle, 0), n*headway)
	}
}
