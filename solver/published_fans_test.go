package solver_test

import (
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// P16. Source: University of Western Australia, MATH3022 notes, "light change"; read at
// uwa-math3022.github.io/traffic/light-change.
func TestP16GreenLightBeforeAFullQueue(t *testing.T) {
	const vf, kj, tight = 60 * kmh, 120 * perKm, 1e-12
	s := answerOf(t, openRoad(greenshields(t, vf, kj), minute, flat(-1500, 0, kj), flat(0, 1500, 0)))
	for _, time := range []float64{1e-6, 5, minute} {
		for _, u := range []float64{-0.9, -0.5, 0, 0.3, 0.99} {
			x := u * vf * time
			agreeWithin(t, "density in the fan", at(t, s, x, time).Up.Density, kj/2*(1-u), tight*kj)
		}
		light := at(t, s, 0, time).Up
		agreeWithin(t, "speed at the light", light.Speed, vf/2, tight*vf)
		agreeWithin(t, "flow at the light", light.Flow, vf*kj/4, tight*vf*kj)
		agreeWithin(t, "density behind the fan", at(t, s, -vf*time-1, time).Up.Density, kj, tight*kj)
		agreeWithin(t, "density ahead of the fan", at(t, s, vf*time+1, time).Up.Density, 0, tight*kj)
	}
}

// P17. Source: Whitham 1974, Linear and Nonlinear Waves, section 3.1; Haberman, Mathematical Models (traffic flow).
func TestP17CarInsideTheFan(t *testing.T) {
	const vf, kj, back = 60 * kmh, 120 * perKm, 150.0
	s := answerOf(t, openRoad(greenshields(t, vf, kj), minute, flat(-1500, 0, kj), flat(0, 1500, 0)))
	car := trajectory(t, s, -back, 0)
	agree(t, "stands until the wave arrives [m]", car.Position(back/vf), -back)
	if moved := car.Position(back/vf+0.1) + back; !(moved > 0 && moved < 0.01) {
		t.Errorf("moved %g m in the first 0.1 s", moved)
	}
	for _, time := range []float64{10, 25, 36, 50} {
		agreeOn(t, "place [m]", car.Position(time), vf*time-2*math.Sqrt(back*vf*time), back)
	}
	agree(t, "place at 25 s [m]", car.Position(25), -250.0/3)
	agree(t, "crosses the line at [s]", passes(t, car, 0), 36)
	agree(t, "speed there [km/h]", at(t, s, 0, 36).Up.Speed/kmh, 30)
}

// P18 for n = 1, the linear law. Source: problem read at questioncove.com/updates/50e62799e4b04bcb15168014 (part a).
func TestP18CarInsideTheFanForTheLinearLaw(t *testing.T) {
	const v, back = 40 * mph, 0.25 * mile
	s := answerOf(t, openRoad(greenshields(t, v, 150*perMile), 100, flat(-mile, 0, 150*perMile), flat(0, 2*mile, 0)))
	agree(t, "crosses the line at [s]", passes(t, trajectory(t, s, -back, 0), 0), 90)
}

// P19. The light is red from time 0 to 30 s. Source: Lighthill & Whitham 1955, Proc. R. Soc. A 229, 317-345,
// part II; Whitham 1974, Linear and Nonlinear Waves, section 3.1.
func TestP19QueueTailThroughRedAndGreen(t *testing.T) {
	const vf, kj, k0, red = 60 * kmh, 120 * perKm, 30 * perKm, 30.0
	r := greenshields(t, vf, kj)
	s := answerOf(t, approach{r, 600, 600, r.Flow(k0), r.Capacity(), oneRed(red, hour), 3 * minute}.scenario())
	tail := func(green float64) float64 { return tailOf(t, s, "light", red+green) }
	agree(t, "at the end of red [m]", tail(0), -125)
	agree(t, "when the start wave arrives [m]", tail(10), -500.0/3)
	agree(t, "furthest back [m]", tail(22.5), -187.5)
	agree(t, "at 45 s [m]", tail(45), vf*0.5*45-2*vf*math.Sqrt(0.25*0.75*red*45))
	agreeWithin(t, "the same, as recomputed [m]", tail(45), -155.3301, 5e-5)
	q := onlyQueue(t, s, "light")
	agreeOn(t, "begins [s]", q.Start, 0, red)
	agree(t, "greatest length [m]", q.PeakLength, 187.5)
	agree(t, "its time after green [s]", q.PeakLengthTime-red, 22.5)
	agree(t, "clears after green [s]", q.End-red, 90)
	agree(t, "stop-line queue at the end of red [veh]", r.Flow(k0)*red-passed(t, s, 0, 0, red), 11.25)
	agree(t, "passed until it clears [veh]", passed(t, s, 0, 0, red+90), r.Flow(k0)*120)
}

// P19 with the stop line at the corridor's end: the excess of vehicle-hours is the delay of the point queue.
func TestP19StopLineDelay(t *testing.T) {
	const vf, kj, k0, red = 60 * kmh, 120 * perKm, 30 * perKm, 30.0
	r := greenshields(t, vf, kj)
	s := answerOf(t, approach{r, 600, 0, r.Flow(k0), r.Capacity(), oneRed(red, hour), 3 * minute}.scenario())
	for _, time := range []float64{red + 90, 3 * minute} {
		agree(t, "delay [veh s]", totals(t, s, time).VehicleTime-k0*600*time, 675)
	}
}

// P20. Source: problem read at answerhappy.com/viewtopic.php?t=173121 (text partly garbled; arrivals at half the
// jam density are inferred from its standing characteristics).
func TestP20ArrivalsAtHalfJamDensity(t *testing.T) {
	const vf, kj, length = 15.0, 0.12, 200.0
	scenario := openRoad(greenshields(t, vf, kj), 5*minute, flat(-2000, 0, kj/2), flat(0, 500, 0))
	scenario.Signals = []solver.Signal{{Name: "light", SaturationFlow: math.Inf(1), Plan: oneRed(0, hour)}}
	scenario.Initial.Queues = []solver.StandingQueue{{Node: "light", Length: length}}
	s := answerOf(t, scenario)
	agree(t, "tail at 10 s [m]", tailOf(t, s, "light", 10), -length-10*vf/2)
	agree(t, "tail when the start wave arrives [m]", tailOf(t, s, "light", 2*length/vf), -400)
	agree(t, "tail at 60 s [m]", tailOf(t, s, "light", minute), -600)
	for time := 30.0; time <= 300; time += 30 {
		agree(t, "square-root law [m]", tailOf(t, s, "light", time), -math.Sqrt(2*length*vf*time))
		agree(t, "front [m]", jumpNear(t, s, -500, time).Position(time), -math.Sqrt(2*length*vf*time))
	}
	if q := onlyQueue(t, s, "light"); q.Cleared {
		t.Errorf("the queue cleared at %g s", q.End)
	}
}

// P21. Source: Haberman, Mathematical Models (traffic flow); LeVeque 2002, Finite Volume Methods for Hyperbolic
// Problems, ch. 11.
func TestP21FiniteBlockOfStoppedCars(t *testing.T) {
	const vf, kj, length = 60 * kmh, 150 * perKm, 300.0
	s := answerOf(t, openRoad(greenshields(t, vf, kj), 100, flat(-100, 0, 0), flat(0, length, kj), flat(length, 3000, 0)))
	last := trajectory(t, s, 1e-9, 0)
	for _, time := range []float64{5, 18, 18.001, 30, 72, 100} {
		want := 0.0
		if time > length/vf {
			want = length + vf*time - 2*math.Sqrt(length*vf*time)
		}
		rear := jumpNear(t, s, want, time)
		agreeOn(t, "rear [m]", rear.Position(time), want, length)
		agreeOn(t, "last car [m]", last.Position(time), want, length)
		up, down := rear.Sides(time)
		agreeOn(t, "density behind the rear", up.Density, 0, kj)
		agree(t, "density ahead of the rear", down.Density, kj*math.Min(1, math.Sqrt(length/(vf*time))))
		agree(t, "cars on the road", totals(t, s, time).Stored, length*kj)
	}
	agree(t, "the last car passes the old front at [s]", passes(t, last, length), 72)
}
