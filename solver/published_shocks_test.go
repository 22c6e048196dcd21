package solver_test

import (
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// P01. The two states are measured ones: the relation is drawn through them.
// Source: Y. Jo, slides "Shock Wave in Traffic Flow" (class of 2011), example; read at
// scribd.com/presentation/450267499.
func TestP01ShockBetweenTwoMeasuredStates(t *testing.T) {
	const up, down = 30 * perMile, 100 * perMile
	r := throughStates(t, 300*perMile,
		solver.FlowPoint{Density: up, Flow: 1200 * perHour}, solver.FlowPoint{Density: down, Flow: 2000 * perHour})
	s := answerOf(t, openRoad(r, 10*minute, flat(-5*mile, 0, up), flat(0, 5*mile, down)))
	f := jumpBetween(t, s, 5*minute, up, down)
	agree(t, "speed [mi/h]", f.Speed(5*minute)/mph, 800.0/70)
	agreeWithin(t, "speed as published [mi/h]", f.Speed(5*minute)/mph, 11.4, 0.05)
	agree(t, "place after 6 min [mi]", f.Position(6*minute)/mile, 80.0/70)
	agree(t, "chord of the relation [mi/h]", r.ShockSpeed(up, down)/mph, 800.0/70)
}

// P02. Source: University of Western Australia, MATH3022 notes, traffic pages, "pile-up"; read at
// uwa-math3022.github.io/traffic/pile-up.
func TestP02PileUpUnderTheLinearLaw(t *testing.T) {
	const tight = 1e-12
	r := greenshields(t, 1, 1)
	s := answerOf(t, openRoad(r, 10, flat(-10, 0, 0.6), flat(0, 10, 0.8)))
	agreeWithin(t, "flow before", at(t, s, -8, 5).Up.Flow, 0.24, tight)
	agreeWithin(t, "flow behind", at(t, s, 2, 5).Up.Flow, 0.16, tight)
	agreeWithin(t, "wave speed before", r.WaveSpeed(0.6), -0.2, tight)
	agreeWithin(t, "wave speed behind", r.WaveSpeed(0.8), -0.6, tight)
	f := jumpBetween(t, s, 5, 0.6, 0.8)
	if f.Kind != solver.Shock || !f.Straight {
		t.Errorf("kind %v, straight %v; want a straight shock", f.Kind, f.Straight)
	}
	agreeWithin(t, "shock speed", f.Speed(5), -0.4, tight)
	agreeWithin(t, "shock place", f.Position(10), -4, 10*tight)
}

// P04. Source: math.stackexchange question mirrored at math.techqa.club/...-1637822 (inputs); LeVeque 2002,
// Finite Volume Methods for Hyperbolic Problems, ch. 11 (theory).
func TestP04StationaryShockAndTheReversedFan(t *testing.T) {
	const tight = 1e-12
	r := greenshields(t, 1, 1)
	s := answerOf(t, openRoad(r, 4, flat(-5, 0, 0.25), flat(0, 5, 0.75)))
	f := jumpBetween(t, s, 4, 0.25, 0.75)
	agreeWithin(t, "shock speed", f.Speed(2), 0, tight)
	agreeWithin(t, "shock place", f.Position(4), 0, tight)

	s = answerOf(t, openRoad(r, 4, flat(-5, 0, 0.75), flat(0, 5, 0.25)))
	for _, time := range []float64{0.5, 1, 4} {
		agreeWithin(t, "density at the old jump", at(t, s, 0, time).Up.Density, 0.5, tight)
		agreeWithin(t, "density at t/4", at(t, s, time/4, time).Up.Density, 0.375, tight)
		agreeWithin(t, "flow at the old jump", at(t, s, 0, time).Up.Flow, 0.25, tight)
		agreeWithin(t, "density at the fan's upstream edge", at(t, s, -time/2, time).Down.Density, 0.75, tight)
		agreeWithin(t, "density at the fan's downstream edge", at(t, s, time/2, time).Up.Density, 0.25, tight)
	}
	agreeWithin(t, "passed the old jump", passed(t, s, 0, 0, 4), 1, tight)
}

// P05. Source: R. Knobel, An Introduction to the Mathematical Theory of Waves (2000), traffic at a red light;
// read at 123dok.com/in/article/shock-wave-solution...10473798. The numbers are chosen here.
func TestP05StoppingWaveAtARedLight(t *testing.T) {
	const density = 30 * perKm
	r := greenshields(t, 60*kmh, 150*perKm)
	road := openRoad(r, minute, flat(-1*kilometre, 1*kilometre, density))
	red, closed := road, road
	red.Signals = []solver.Signal{{Name: "light", SaturationFlow: r.Capacity()}}
	closed.Bottlenecks = []solver.Bottleneck{{Name: "light", Capacity: always(0)}}
	for name, scenario := range map[string]solver.Scenario{"signal": red, "closure": closed} {
		t.Run(name, func(t *testing.T) {
			s := answerOf(t, scenario)
			agree(t, "wave [km/h]", jumpBetween(t, s, 20, density, 150*perKm).Speed(20)/kmh, -12)
			agree(t, "tail after 40 s [m]", tailOf(t, s, "light", 40), -400.0/3)
			agree(t, "stopped [veh]", must(s.QueueAt("light", 40))(t).Vehicles, 20)
			agree(t, "empty road begins [m]", jumpBetween(t, s, 20, 0, density).Position(20), 20*48*kmh)
		})
	}
}

// P06. Source: tutorbin.com question "15 points during morning peak hours..." (inputs).
func TestP06FullClosure(t *testing.T) {
	const density, jam = 5000.0 / 45 * perMile, 800 * perMile
	r := throughStates(t, jam, solver.FlowPoint{Density: density, Flow: 5000 * perHour})
	road := openRoad(r, 30*minute, flat(-6*mile, 1*mile, density))
	road.Bottlenecks = []solver.Bottleneck{{Name: "closure", Capacity: always(0)}}
	s := answerOf(t, road)
	const speed = -5000 / (800 - 5000.0/45)
	agree(t, "density [veh/mi]", at(t, s, -5*mile, minute).Up.Density/perMile, 5000.0/45)
	agree(t, "wave [mi/h]", jumpBetween(t, s, minute, density, jam).Speed(minute)/mph, speed)
	agreeWithin(t, "wave as recomputed [mi/h]", jumpBetween(t, s, minute, density, jam).Speed(minute)/mph, -7.258065, 1e-6)
	reached := must2(s.QueueReaches("closure", -0.5*mile))(t)
	agree(t, "half a mile of queue stands after [h]", reached/hour, 0.5/-speed)
	agree(t, "vehicles in it", must(s.QueueAt("closure", reached))(t).Vehicles, 400)
}

// P24. Source: LeVeque 2002, Finite Volume Methods for Hyperbolic Problems, ch. 11 (theory).
func TestP24TwoShocksMerge(t *testing.T) {
	s := answerOf(t, openRoad(greenshields(t, 1, 1), 4, flat(-4, 0, 0.1), flat(0, 1, 0.4), flat(1, 6, 0.8)))
	const time, place = 1 / 0.7, 0.5 / 0.7
	first, second := jumpBetween(t, s, 1, 0.1, 0.4), jumpBetween(t, s, 1, 0.4, 0.8)
	agree(t, "first speed", first.Speed(1), 0.5)
	agree(t, "second speed", second.Speed(1), -0.2)
	merged := jumpBetween(t, s, 3, 0.1, 0.8)
	for _, f := range []solver.Front{first, second} {
		agree(t, "time of meeting", f.End.Time, time)
		agree(t, "place of meeting", f.End.Place, place)
		if f.EndsBy != solver.Merged || f.Into != merged.ID {
			t.Errorf("front %d ends by %v into %d, want merged into %d", f.ID, f.EndsBy, f.Into, merged.ID)
		}
	}
	agree(t, "merged speed", merged.Speed(3), 0.1)
	agree(t, "merged place", merged.Position(3), place+0.1*(3-time))
	agreeWithin(t, "merged place as recomputed", merged.Position(3), 0.8714286, 5e-8)
}

// must2 passes on a time that must exist.
func must2(time float64, ok bool, err error) func(t *testing.T) float64 {
	return func(t *testing.T) float64 {
		t.Helper()
		if err != nil || !ok {
			t.Fatalf("no answer: %v, %v", ok, err)
		}
		return time
	}
}
