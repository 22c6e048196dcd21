package solver_test

import (
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// stopLineAtEntry is a signal at the corridor's entry, red first in each cycle: all who wait do so outside, as
// the point queue (D/D/1) of the textbooks.
func stopLineAtEntry(t *testing.T, arrivals, saturation, cycle, red, horizon float64) solver.Scenario {
	r := triangle(t, solver.TriangularParams{FreeSpeed: 50 * kmh, Capacity: saturation, WaveSpeed: 18 * kmh})
	a := approach{r, 0, kilometre, arrivals, saturation, redFirst(cycle, red), horizon}
	return a.scenario()
}

// P11. Source: Fundamentals of Transportation (Wikibooks), Traffic Signals, solution; read in a copy. The source
// rounds the arrivals to 0.138 veh/s, which costs up to 0.7 %.
func TestP11DeterministicSignalQueue(t *testing.T) {
	const cycle, red, arrivals, saturation = 100.0, 70.0, 500 * perHour, 3000 * perHour
	s := answerOf(t, stopLineAtEntry(t, arrivals, saturation, cycle, red, 3*cycle))
	for begin := 0.0; begin < 3*cycle; begin += cycle {
		const clear = 84.0
		agreeOn(t, "the queue clears [veh]", totals(t, s, begin+clear).Waiting, 0, 10)
		agree(t, "one second before [veh]", totals(t, s, begin+clear-1).Waiting, 2500*perHour)
		agree(t, "largest queue [veh]", totals(t, s, begin+red).Waiting, 175.0/18)
		agreeWithin(t, "the same, as published [veh]", totals(t, s, begin+red).Waiting, 9.66, 0.007*9.66)
		agree(t, "entered by then [veh]", totals(t, s, begin+clear).Entered, arrivals*(begin+clear))
		delay := totals(t, s, begin+cycle).WaitingTime - totals(t, s, begin).WaitingTime
		agree(t, "delay [veh s]", delay, 1225.0/3)
		agreeWithin(t, "the same, as published [veh s]", delay, 406, 0.007*406)
		agree(t, "delay [s/veh]", delay/(arrivals*cycle), 29.4)
		agreeWithin(t, "the same, as published [s/veh]", delay/(arrivals*cycle), 29.41, 0.007*29.41)
		// The wait falls from 70 s: who comes x after red has begun has x/6 s of service ahead of the rest of red.
		for _, x := range []float64{1e-3, red / 2, red} {
			wait := must(s.TravelTime(0, kilometre, begin+x))(t).WaitOutside
			agree(t, "wait [s]", wait, red-x+x*arrivals/saturation)
		}
		agreeOn(t, "last to wait [s]", must(s.TravelTime(0, kilometre, begin+clear))(t).WaitOutside, 0, red)
	}
}

// P11 with the queue on the road: the delay is the same, the queue is longer.
func TestP11DeterministicSignalQueueOnTheRoad(t *testing.T) {
	const cycle, red, arrivals, saturation = 100.0, 70.0, 500 * perHour, 3000 * perHour
	scenario := stopLineAtEntry(t, arrivals, saturation, cycle, red, 3*cycle)
	scenario.Origin = -kilometre
	scenario.Segments[0].Length = 2 * kilometre
	s := answerOf(t, scenario)
	for n := 1.0; n <= 3; n++ {
		agree(t, "delay [veh s]", totals(t, s, n*cycle).Delay, n*1225/3)
		clear := (n-1)*cycle + 84
		agree(t, "passed when the stop line clears [veh]", passed(t, s, 0, 0, clear), arrivals*clear)
		agree(t, "flow just before [veh/h]", at(t, s, 0, clear-0.1).Up.Flow/perHour, 3000)
		agree(t, "flow just after [veh/h]", at(t, s, 0, clear+0.1).Up.Flow/perHour, 500)
	}
}

// P12. Source: inputs read at staging.sidebar.io/lugar/50246593. A minute of road separates signal and work area.
func TestP12SignalWithADownstreamRestriction(t *testing.T) {
	const cycle, red, arrivals, between = 60.0, 30.0, 20 * perMinute, 900.0
	r := triangle(t, solver.TriangularParams{FreeSpeed: 15, Capacity: 1, WaveSpeed: 5})
	scenario := approach{r, 600, between + 300, arrivals, 1, redFirst(cycle, red), 12 * cycle}.scenario()
	scenario.Segments = []solver.Segment{
		{Name: "approach", Length: 600, Relation: r},
		{Name: "after the light", Length: between, Relation: r},
		{Name: "after the works", Length: 300, Relation: r},
	}
	scenario.Bottlenecks = []solver.Bottleneck{{Name: "works", Place: between, Capacity: always(arrivals)}}
	s := answerOf(t, scenario)
	for n := 1.0; n <= 10; n++ {
		light := totals(t, s, n*cycle).Segments[0].Delay
		works := totals(t, s, n*cycle+minute+red).Segments[1].Delay
		agree(t, "delay at the light [s/veh]", light/(n*20), 11.25)
		agree(t, "delay at the works [s/veh]", works/(n*20), 18.75)
		begin := (n - 1) * cycle
		agree(t, "queue at the end of red [veh]", arrivals*(begin+red)-passed(t, s, 0, 0, begin+red), 10)
		agree(t, "cleared 15 s after green [veh]", passed(t, s, 0, 0, begin+red+15), arrivals*(begin+red+15))
		// The minute of road shifts what the light has let pass to the works.
		queue := func(time float64) float64 {
			return passed(t, s, 0, 0, time) - passed(t, s, between, minute, time+minute)
		}
		agreeOn(t, "no queue at the works when green begins [veh]", queue(begin+red), 0, 10)
		agree(t, "queue at the works 15 s later [veh]", queue(begin+red+15), 10)
		agree(t, "and at the end of green [veh]", queue(begin+cycle), 10)
	}
}

// delayAtCapacity is the delay in one cycle when arrivals are just what the green can pass.
func delayAtCapacity(t *testing.T, arrivals, saturation, red float64) (delay, cycle float64) {
	cycle = red / (1 - arrivals/saturation)
	s := answerOf(t, stopLineAtEntry(t, arrivals, saturation, cycle, red, 2*cycle))
	agreeOn(t, "the queue has just gone [veh]", totals(t, s, cycle).Waiting, 0, arrivals*red)
	return totals(t, s, cycle).WaitingTime, cycle
}

// P13: which arrivals give the stated delay? Source: solution page admin.japansake.or.jp/tareasenos/23897556 of an
// end-of-chapter problem of Mannering & Washburn, Principles of Highway Engineering and Traffic Analysis.
func TestP13InverseSignalProblem(t *testing.T) {
	const red, saturation, wanted = 30.0, 1000 * perHour, 83.33
	lo, hi := 100*perHour, 900*perHour
	for range 45 {
		middle := (lo + hi) / 2
		if delay, _ := delayAtCapacity(t, middle, saturation, red); delay < wanted {
			lo = middle
		} else {
			hi = middle
		}
	}
	// delay = red²/2 * q s/(s-q)
	agree(t, "arrivals [veh/h]", lo/perHour, wanted/(red*red/2)*saturation/(wanted/(red*red/2)+saturation)*hour)
	agreeWithin(t, "arrivals as published [veh/h]", lo/perHour, 400, 0.05)
	delay, cycle := delayAtCapacity(t, 400*perHour, saturation, red)
	agree(t, "delay at 400 veh/h [veh s]", delay, 250.0/3)
	agree(t, "cycle [s]", cycle, 50)
	agree(t, "green share", 1-red/cycle, 0.4)
}

// P14. Source: overflow-delay term as in Roess, Prassas & McShane, Traffic Engineering; its behaviour near X = 1 is
// discussed in NPTEL 105101008 "Delay A", point 6 (read at archive.nptel.ac.in/.../572_Delay_A/point6).
func TestP14OversaturatedSignal(t *testing.T) {
	const cycle, green, span, arrivals, saturation = 60.0, 30.0, 15 * minute, 1000 * perHour, 1800 * perHour
	s := answerOf(t, stopLineAtEntry(t, arrivals, saturation, cycle, cycle-green, span))
	end := totals(t, s, span)
	const degree = arrivals * cycle / (saturation * green)
	const perVehicle = 0.5*cycle*(1-green/cycle) + 0.5*span*(degree-1)
	agree(t, "uniform and overflow delay [s/veh]", perVehicle, 65)
	agree(t, "residual queue [veh]", end.Waiting, 25)
	agree(t, "waiting [veh s]", end.WaitingTime, 14625)
	agree(t, "waiting [s/veh discharged]", end.WaitingTime/end.Entered, perVehicle)
	for n := 1.0; n <= 15; n++ {
		agree(t, "residual queue after each cycle [veh]", totals(t, s, n*cycle).Waiting, n*cycle*arrivals-n*green*saturation)
	}
}

// P14 with the queue on the road: counted at the stop line, it is the same.
func TestP14OversaturatedSignalOnTheRoad(t *testing.T) {
	const cycle, green, span, arrivals, saturation = 60.0, 30.0, 15 * minute, 1000 * perHour, 1800 * perHour
	scenario := stopLineAtEntry(t, arrivals, saturation, cycle, cycle-green, span)
	scenario.Origin = -2 * kilometre
	scenario.Segments[0].Length = 3 * kilometre
	s := answerOf(t, scenario)
	queue := func(time float64) float64 { return arrivals*time - passed(t, s, 0, 0, time) }
	waited := 0.0
	for time := 0.0; time < span; time += 30 { // the count queue is straight between switches
		waited += 30 * (queue(time) + queue(time+30)) / 2
	}
	agree(t, "waiting [veh s]", waited, 14625)
	agree(t, "residual queue [veh]", queue(span), 25)
	// In the first cycle discharge just catches the tail before the next red: flow at capacity is not a queue.
	queues := must(s.Queues("light"))(t)
	if last := queues[len(queues)-1]; len(queues) != 2 || last.Cleared || last.Start != cycle {
		t.Errorf("want a queue in the first cycle and another that never clears: %+v", queues)
	}
}
