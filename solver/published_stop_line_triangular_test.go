package solver_test

import (
	"math/rand/v2"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// signalSchedule is a signal that begins with red, as what it lets pass.
func signalSchedule(cycle, red, saturation, horizon float64) solver.Schedule {
	var s solver.Schedule
	for begin := 0.0; begin < horizon; begin += cycle {
		s = append(s, from(begin, 0), from(begin+red, saturation))
	}
	return s
}

// triangularRoad is a triangular road with one node at place 0.
type triangularRoad struct {
	freeSpeed, wave, jam float64
	arrivals             float64
	length               float64 // upstream of the node
	horizon              float64
}

func (r triangularRoad) relation(t *testing.T) solver.Relation {
	return triangle(t, solver.TriangularParams{FreeSpeed: r.freeSpeed, WaveSpeed: r.wave, JamDensity: r.jam})
}

func (r triangularRoad) stopLine(service solver.Schedule) stopLine {
	return stopLine{r.arrivals, r.arrivals / r.freeSpeed, passings(r.arrivals, service, r.horizon), triangularCost{r.wave, r.jam}}
}

// fit makes the road a little longer than its queue.
func (r *triangularRoad) fit(service solver.Schedule, capacity float64) {
	line := r.stopLine(service)
	r.length = 1.3*line.reach(r.horizon, func(t float64) float64 {
		if tails, _ := line.strips(t, triangularCost{r.wave, r.jam}, capacity); len(tails) > 0 {
			return tails[0]
		}
		return 0
	}) + 50
}

// signal solves the road with a signal; its own schedule as a bottleneck must give the same, so either is used.
func (r triangularRoad) signal(t *testing.T, cycle, red float64) *solver.Solution {
	rel := r.relation(t)
	return answerOf(t, approach{rel, r.length, 200, r.arrivals, rel.Capacity(), redFirst(cycle, red), r.horizon}.scenario())
}

// bottleneck solves the road with a schedule of capacity.
func (r triangularRoad) bottleneck(t *testing.T, service solver.Schedule) *solver.Solution {
	s := approach{relation: r.relation(t), up: r.length, down: 200, arrivals: r.arrivals, horizon: r.horizon}.scenario()
	s.Signals = nil
	s.Bottlenecks = []solver.Bottleneck{{Name: "light", Capacity: service}}
	return answerOf(t, s)
}

// checkAgainst compares counts and strips of queue at random points.
func (r triangularRoad) checkAgainst(t *testing.T, s *solver.Solution, service solver.Schedule, random *rand.Rand) {
	t.Helper()
	line := r.stopLine(service)
	capacity := r.relation(t).Capacity()
	scale := r.jam*r.length + r.arrivals*r.horizon
	for range 40 {
		time, z := r.horizon*random.Float64(), r.length*random.Float64()*random.Float64()
		agreeOn(t, "count", at(t, s, -z, time).Count-at(t, s, 0, 0).Count, line.count(z, time), scale)
		tails, heads := line.strips(time, triangularCost{r.wave, r.jam}, capacity)
		q := must(s.QueueAt("light", time))(t)
		if q.Present != (len(tails) > 0) {
			t.Errorf("queue present at %g s: %v, want %v", time, q.Present, tails)
			continue
		}
		if len(tails) > 0 {
			agreeOn(t, "outermost tail", -q.Tail, tails[0], r.length)
			agreeOn(t, "innermost head", -q.Head, heads[len(heads)-1], r.length)
		}
	}
}

// TestClosureTriangular: a closure of any length T, from the theory of the triangle: the tail at speed
// v = q/(kj-k), the start wave at w meets it at w T/(w-v), the stop line clears at T C/(C-q), delay q T² C/(2(C-q)).
func TestClosureTriangular(t *testing.T) {
	const seed = 20261206
	random := rand.New(rand.NewPCG(seed, 6))
	for i := range 100 {
		r := triangularRoad{freeSpeed: 10 + 25*random.Float64(), wave: 3 + 4*random.Float64(), jam: 0.1 + 0.4*random.Float64()}
		capacity := r.jam / (1/r.freeSpeed + 1/r.wave)
		r.arrivals = capacity * (0.05 + 0.85*random.Float64())
		closed := 30 + 900*random.Float64()
		back := r.arrivals / (r.jam - r.arrivals/r.freeSpeed)
		meet := r.wave * closed / (r.wave - back)
		clear := closed * capacity / (capacity - r.arrivals)
		r.length, r.horizon = 1.5*back*meet, 1.2*clear
		s := r.bottleneck(t, solver.Schedule{from(0, 0), from(closed, capacity)})
		q := onlyQueue(t, s, "light")
		agree(t, "greatest length", q.PeakLength, back*meet)
		agree(t, "its time", q.PeakLengthTime, meet)
		agree(t, "end", q.End, meet)
		agree(t, "most vehicles", q.PeakVehicles, back*closed*r.jam)
		agree(t, "their time", q.PeakVehiclesTime, closed)
		agree(t, "tail at half time", -tailOf(t, s, "light", closed/2), back*closed/2)
		agree(t, "passed when it clears", passed(t, s, 0, 0, clear), r.arrivals*clear)
		agree(t, "total delay", totals(t, s, clear).Delay, r.arrivals*closed*clear/2)
		if t.Failed() {
			t.Fatalf("seed %d, road %d: %+v closed %g", seed, i, r, closed)
		}
	}
}

// stagedIncident is a random schedule: blocked in stages below the arrivals, then cleared, with half of them cleared
// by a stage that is below capacity too.
func stagedIncident(random *rand.Rand, arrivals, capacity float64) solver.Schedule {
	var s solver.Schedule
	time := 0.0
	for range 2 + random.IntN(4) {
		s = append(s, from(time, arrivals*0.95*random.Float64()*float64(random.IntN(4))/3))
		time += 60 + 600*random.Float64()
	}
	if random.IntN(2) == 0 {
		s = append(s, from(time, arrivals+(capacity-arrivals)*(0.2+0.6*random.Float64())))
		time += 300 * random.Float64()
	}
	return append(s, from(time, capacity))
}

func TestStagedIncidentTriangular(t *testing.T) {
	const seed = 20261207
	random := rand.New(rand.NewPCG(seed, 7))
	for i := range 150 {
		r := triangularRoad{freeSpeed: 10 + 25*random.Float64(), wave: 3 + 4*random.Float64(), jam: 0.1 + 0.4*random.Float64()}
		capacity := r.jam / (1/r.freeSpeed + 1/r.wave)
		r.arrivals = capacity * (0.1 + 0.7*random.Float64())
		service := stagedIncident(random, r.arrivals, capacity)
		clear, delay := clearing(passings(r.arrivals, service, 1e6), r.arrivals)
		r.horizon = 1.1 * clear
		r.fit(service, capacity)
		s := r.bottleneck(t, service)
		agree(t, "total delay", totals(t, s, clear).Delay, delay)
		agree(t, "passed when it clears", passed(t, s, 0, 0, clear), r.arrivals*clear)
		r.checkAgainst(t, s, service, random)
		if t.Failed() {
			t.Fatalf("seed %d, road %d: %+v %+v", seed, i, r, service)
		}
	}
}

// TestSignalTriangular: degree of saturation from 0.3 to 1.5, ten cycles, counts and strips of queue everywhere.
func TestSignalTriangular(t *testing.T) {
	const seed, cycles = 20261208, 10
	random := rand.New(rand.NewPCG(seed, 8))
	for i := range 150 {
		r := triangularRoad{freeSpeed: 10 + 10*random.Float64(), wave: 3 + 4*random.Float64(), jam: 0.1 + 0.4*random.Float64()}
		capacity := r.jam / (1/r.freeSpeed + 1/r.wave)
		cycle := 40 + 80*random.Float64()
		red := cycle * (0.2 + 0.6*random.Float64())
		degree := 0.3 + 1.2*random.Float64()
		r.arrivals = min(0.95, degree*(1-red/cycle)) * capacity
		r.horizon = cycles * cycle
		service := signalSchedule(cycle, red, capacity, r.horizon)
		r.fit(service, capacity)
		s := r.signal(t, cycle, red)
		r.checkAgainst(t, s, service, random)
		r.checkCycles(t, s, cycle, red, capacity)
		if t.Failed() {
			t.Fatalf("seed %d, road %d: %+v cycle %g red %g", seed, i, r, cycle, red)
		}
	}
}

// checkCycles checks an undersaturated signal, cycle by cycle: the queues as behind a closure, and the delay
// q r² C / (2 (C-q)) (uniform term of Webster 1958).
func (r triangularRoad) checkCycles(t *testing.T, s *solver.Solution, cycle, red, capacity float64) {
	t.Helper()
	clear := red * capacity / (capacity - r.arrivals)
	if clear >= cycle {
		return
	}
	back := r.arrivals / (r.jam - r.arrivals/r.freeSpeed)
	meet := r.wave * red / (r.wave - back)
	queues := must(s.Queues("light"))(t)
	for i := range int(r.horizon / cycle) {
		begin, end := float64(i)*cycle, min(float64(i+1)*cycle, r.horizon)
		agree(t, "delay", totals(t, s, end).Delay, float64(i+1)*r.arrivals*red*clear/2)
		agreeOn(t, "begins", queues[i].Start, begin, cycle)
		agree(t, "greatest length", queues[i].PeakLength, back*meet)
		agreeOn(t, "its time", queues[i].PeakLengthTime, begin+meet, r.horizon)
		agreeOn(t, "clears", queues[i].End, begin+meet, r.horizon)
		agree(t, "most vehicles", queues[i].PeakVehicles, back*red*r.jam)
	}
}

// A schedule may say the same twice: nothing happens at such a step.
func TestStepOfCapacityThatChangesNothing(t *testing.T) {
	r := triangularRoad{freeSpeed: 20, wave: 5, jam: 0.125, arrivals: 0.2, length: 2000, horizon: 600}
	once := r.bottleneck(t, solver.Schedule{from(0, 0), from(200, 0.5)})
	twice := r.bottleneck(t, solver.Schedule{from(0, 0), from(100, 0), from(200, 0.5)})
	for _, time := range []float64{50, 150, 210, 270} {
		want, got := must(once.QueueAt("light", time))(t), must(twice.QueueAt("light", time))(t)
		agreeOn(t, "tail", got.Tail, want.Tail, r.length)
		agreeOn(t, "head", got.Head, want.Head, r.length)
		agreeOn(t, "vehicles", got.Vehicles, want.Vehicles, r.jam*r.length)
	}
}
