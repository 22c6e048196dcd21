package solver_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// linearRoad is a road under the linear speed-density law with one node at place 0.
type linearRoad struct {
	freeSpeed, jam  float64
	density         float64 // of arrivals, less than half of the jam density
	length, horizon float64
}

func (r linearRoad) arrivals() float64 { return r.freeSpeed * r.density * (1 - r.density/r.jam) }
func (r linearRoad) capacity() float64 { return r.freeSpeed * r.jam / 4 }

func (r linearRoad) stopLine(service solver.Schedule) stopLine {
	return stopLine{r.arrivals(), r.density, passings(r.arrivals(), service, r.horizon), linearCost{r.freeSpeed, r.jam}}
}

// fit makes the road a little longer than its queue.
func (r *linearRoad) fit(service solver.Schedule) {
	line := r.stopLine(service)
	longest := r.freeSpeed * r.horizon
	r.length = 1.3*line.reach(r.horizon, func(t float64) float64 { return line.tail(t, longest) }) + 50
}

// solve poses the road with a schedule of capacity; down is the length of road behind the node.
func (r linearRoad) solve(t *testing.T, service solver.Schedule, down float64) *solver.Solution {
	s := approach{relation: greenshields(t, r.freeSpeed, r.jam), up: r.length, down: down,
		arrivals: r.arrivals(), horizon: r.horizon}.scenario()
	s.Signals = nil
	s.Bottlenecks = []solver.Bottleneck{{Name: "light", Capacity: service}}
	return answerOf(t, s)
}

// randomLinearRoad leaves length and horizon open.
func randomLinearRoad(random *rand.Rand) linearRoad {
	r := linearRoad{freeSpeed: 10 + 25*random.Float64(), jam: 0.1 + 0.4*random.Float64()}
	r.density = r.jam * (0.02 + 0.4*random.Float64())
	return r
}

// squareRootLaw is the tail behind a closure from time 0 to closed, after which the road is open: with a = k/kj,
// -a vf t until the start wave meets it a closed/(1-a) after reopening, then
// vf (1-2a) τ - 2 vf sqrt(a(1-a) closed τ), τ = t - closed.
// Source: Lighthill & Whitham 1955, Proc. R. Soc. A 229, 317-345, part II; Whitham 1974, section 3.1.
func (r linearRoad) squareRootLaw(closed, t float64) float64 {
	a, after := r.density/r.jam, t-closed
	if after <= a*closed/(1-a) {
		return -a * r.freeSpeed * t
	}
	return r.freeSpeed*(1-2*a)*after - 2*r.freeSpeed*math.Sqrt(a*(1-a)*closed*after)
}

func TestClosureUnderTheLinearLaw(t *testing.T) {
	const seed = 20261209
	random := rand.New(rand.NewPCG(seed, 9))
	for i := range 150 {
		r := randomLinearRoad(random)
		closed := 20 + 600*random.Float64()
		a := r.density / r.jam
		turn := a * (1 - a) * closed / ((1 - 2*a) * (1 - 2*a))
		furthest := r.freeSpeed * a * (1 - a) * closed / (1 - 2*a)
		clear := closed + 4*turn
		r.length, r.horizon = 1.2*furthest, 1.1*clear
		s := r.solve(t, solver.Schedule{from(0, 0), from(closed, r.capacity())}, 500)
		q := onlyQueue(t, s, "light")
		agree(t, "greatest length", q.PeakLength, furthest)
		agreeWithin(t, "its time", q.PeakLengthTime, closed+turn, 1e-9*clear)
		agree(t, "clears", q.End, clear)
		agree(t, "passed when it clears", passed(t, s, 0, 0, clear), r.arrivals()*clear)
		for range 10 {
			time := clear * random.Float64()
			agreeOn(t, "tail", tailOf(t, s, "light", time), r.squareRootLaw(closed, time), furthest)
		}
		ends := r.solve(t, solver.Schedule{from(0, 0), from(closed, r.capacity())}, 0)
		r.checkDelay(t, ends, r.arrivals()*closed*clear/2)
		if t.Failed() {
			t.Fatalf("seed %d, road %d: %+v closed %g", seed, i, r, closed)
		}
	}
}

// checkDelay compares the excess of vehicle time on a road that ends at the node with the delay of the point queue.
func (r linearRoad) checkDelay(t *testing.T, s *solver.Solution, delay float64) {
	t.Helper()
	undisturbed := r.density * r.length * r.horizon
	agreeOn(t, "delay", totals(t, s, r.horizon).VehicleTime-undisturbed, delay, undisturbed+delay)
}

// checkCycles compares each queue of an undersaturated signal with the square-root law.
func (r linearRoad) checkCycles(t *testing.T, s *solver.Solution, cycle, red float64) {
	t.Helper()
	a := r.density / r.jam
	turn := a * (1 - a) * red / ((1 - 2*a) * (1 - 2*a))
	if red+4*turn >= cycle {
		return
	}
	queues := must(s.Queues("light"))(t)
	for i, q := range queues[:int(r.horizon/cycle)] {
		begin := float64(i) * cycle
		agreeOn(t, "begins", q.Start, begin, cycle)
		agree(t, "greatest length", q.PeakLength, r.freeSpeed*a*(1-a)*red/(1-2*a))
		agreeOn(t, "its time", q.PeakLengthTime, begin+red+turn, r.horizon)
		agreeOn(t, "clears", q.End, begin+red+4*turn, r.horizon)
	}
}

// checkAgainst compares counts and the tail with those of the stop line at random points.
func (r linearRoad) checkAgainst(t *testing.T, s *solver.Solution, service solver.Schedule, random *rand.Rand) {
	t.Helper()
	line := r.stopLine(service)
	scale := r.jam*r.length + r.arrivals()*r.horizon
	for range 40 {
		time, z := r.horizon*random.Float64(), r.length*random.Float64()*random.Float64()
		agreeOn(t, "count", at(t, s, -z, time).Count-at(t, s, 0, 0).Count, line.count(z, time), scale)
		tail := line.tail(time, r.length)
		q := must(s.QueueAt("light", time))(t)
		if tail > 1e-6*r.length && !q.Present || tail == 0 && q.Present {
			t.Errorf("queue present at %g s: %v, want one of %g m", time, q.Present, tail)
		}
		if q.Present {
			agreeOn(t, "tail", -q.Tail, tail, r.length)
		}
	}
}

func TestStagedIncidentUnderTheLinearLaw(t *testing.T) {
	const seed = 20261210
	random := rand.New(rand.NewPCG(seed, 10))
	for i := range 150 {
		r := randomLinearRoad(random)
		service := stagedIncident(random, r.arrivals(), r.capacity())
		clear, delay := clearing(passings(r.arrivals(), service, 1e6), r.arrivals())
		r.horizon = 1.1 * clear
		r.fit(service)
		s := r.solve(t, service, 500)
		r.checkAgainst(t, s, service, random)
		queues := must(s.Queues("light"))(t)
		if last := queues[len(queues)-1]; !last.Cleared {
			t.Error("the queue has not cleared")
		} else {
			agree(t, "clears", last.End, clear)
		}
		r.checkDelay(t, r.solve(t, service, 0), delay)
		if t.Failed() {
			t.Fatalf("seed %d, road %d: %+v %+v", seed, i, r, service)
		}
	}
}

// TestSignalUnderTheLinearLaw: degree of saturation from 0.3 to 1.5, eight cycles.
func TestSignalUnderTheLinearLaw(t *testing.T) {
	const seed, cycles = 20261211, 8
	random := rand.New(rand.NewPCG(seed, 11))
	for i := range 150 {
		r := randomLinearRoad(random)
		cycle := 40 + 80*random.Float64()
		green := cycle * min(0.9, r.arrivals()/r.capacity()/(0.3+1.2*random.Float64()))
		r.horizon = cycles * cycle
		service := signalSchedule(cycle, cycle-green, r.capacity(), r.horizon)
		r.fit(service)
		s := answerOf(t, approach{greenshields(t, r.freeSpeed, r.jam), r.length, 200, r.arrivals(), math.Inf(1),
			redFirst(cycle, cycle-green), r.horizon}.scenario())
		r.checkAgainst(t, s, service, random)
		r.checkCycles(t, s, cycle, cycle-green)
		_, delay := clearing(passings(r.arrivals(), service, r.horizon), r.arrivals())
		r.checkDelay(t, r.solve(t, service, 0), delay)
		if t.Failed() {
			t.Fatalf("seed %d, road %d: %+v cycle %g green %g", seed, i, r, cycle, green)
		}
	}
}

// Behind an oversaturated signal the fans of two successive greens (starting C apart, g long) meet in a shock. From
// the end of the first green, at τ = g after it began, it is
//
//	x = -vf (τ - sqrt(g τ))               while the next red's jam is behind it,
//	x = -vf sqrt((1 - g/C) τ (τ - C))     from τ = C²/g on, between the two fans,
//
// so that it settles to the speed -vf sqrt(1 - g/C): the wave speed of the mean flow. (Both from
// dx/dt = mean of the two wave speeds, x/τ and -vf or x/(τ-C); derived here.)
func TestShockBetweenTheFansOfTwoGreens(t *testing.T) {
	const vf, kj, cycle, green = 60 * kmh, 120 * perKm, 60.0, 36.0
	r := linearRoad{freeSpeed: vf, jam: kj, density: 0.49 * kj, length: 20000, horizon: 16 * minute}
	s := answerOf(t, approach{greenshields(t, vf, kj), r.length, 500, r.arrivals(), math.Inf(1),
		redFirst(cycle, cycle-green), r.horizon}.scenario())
	begin := cycle - green + cycle // of the second green: the shock behind it meets no tail for a while
	for _, after := range []float64{40, 60, 80, 95} {
		want := -vf * (after - math.Sqrt(green*after))
		agree(t, "beside the jam [m]", jumpNear(t, s, want, begin+after).Position(begin+after), want)
	}
	for _, after := range []float64{101, 110, 120, 130} {
		want := -vf * math.Sqrt((1-green/cycle)*after*(after-cycle))
		agree(t, "between the fans [m]", jumpNear(t, s, want, begin+after).Position(begin+after), want)
	}
}
