package solver

import (
	"math"
	"math/rand/v2"
	"testing"
)

// The lesser of two schedules is the lesser at every time, also between where their slopes cross, and has no
// piece that begins where neither begins or crosses.
func TestLeastOfTwoSchedules(t *testing.T) {
	random := rand.New(rand.NewPCG(20270101, 3))
	crossings := 0
	for i := range 300 {
		a, b := drawSchedule(random), drawSchedule(random)
		both := least(a, b)
		unlimited := math.Inf(1)
		for range 50 {
			at := -150 + 600*random.Float64()
			got, want := slowRate(both, at, unlimited), math.Min(slowRate(a, at, unlimited), slowRate(b, at, unlimited))
			if !(math.Abs(got-want) <= 1e-12) && got != want {
				t.Errorf("at %g the lesser is %g, want %g", at, got, want)
			}
		}
		for j := 1; j < len(both); j++ {
			if !(both[j].Start > both[j-1].Start) {
				t.Errorf("piece %d begins at %g, not after the one before it", j, both[j].Start)
			}
		}
		crossings += len(both) - len(starts(a, b))
		if t.Failed() {
			t.Fatalf("pair %d: %+v\n%+v\nleast %+v", i, a, b, both)
		}
	}
	if crossings < 50 {
		t.Errorf("only %d crossings in 300 pairs: the draw has lost its bite", crossings)
	}
}

// starts are the times at which one of the schedules begins a piece.
func starts(schedules ...Schedule) map[float64]bool {
	out := map[float64]bool{}
	for _, s := range schedules {
		for _, p := range s {
			out[p.Start] = true
		}
	}
	return out
}

// By hand: 0.4 - 0.001 t meets 0.2 at 200 s and 0.1 + 0.0005 t at 200 s too, from then on they change places.
func TestLeastByHand(t *testing.T) {
	falling := Schedule{{Rate: 0.4, Slope: -0.001}}
	for _, c := range []struct {
		name string
		a, b Schedule
		want Schedule
	}{
		{"a slope falls through a step", falling, Schedule{{Rate: 0.2}}, Schedule{{Rate: 0.2}, {Start: 200, Rate: 0.2, Slope: -0.001}}},
		{"two slopes cross", falling, Schedule{{Rate: 0.1, Slope: 0.0005}}, Schedule{{Rate: 0.1, Slope: 0.0005}, {Start: 200, Rate: 0.2, Slope: -0.001}}},
		{"equal now, the falling one is less from now on", falling, Schedule{{Rate: 0.4}}, Schedule{{Rate: 0.4, Slope: -0.001}}},
		{"one begins later", Schedule{{Start: 50, Rate: 0.1}}, Schedule{{Rate: 0.2}}, Schedule{{Rate: 0.2}, {Start: 50, Rate: 0.1}}},
		{"unlimited in between", Schedule{{Rate: 0.1}, {Start: 50, Rate: math.Inf(1)}}, Schedule{{Start: 80, Rate: 0.3}},
			Schedule{{Rate: 0.1}, {Start: 50, Rate: math.Inf(1)}, {Start: 80, Rate: 0.3}}},
		{"nothing and something", nil, falling, falling},
		{"nothing twice", nil, nil, nil},
	} {
		for _, got := range []Schedule{least(c.a, c.b), least(c.b, c.a)} {
			if !alikePieces(got, c.want) {
				t.Errorf("%s: %+v, want %+v", c.name, got, c.want)
			}
		}
	}
}

func alikePieces(a, b Schedule) bool {
	if len(a) != len(b) {
		return false
	}
	for i := range a {
		same := a[i].Rate == b[i].Rate || math.Abs(a[i].Rate-b[i].Rate) <= 1e-15
		if !same || math.Abs(a[i].Start-b[i].Start) > 1e-9 || a[i].Slope != b[i].Slope {
			return false
		}
	}
	return true
}

// isGreen says by the plan's own words whether the signal is green: some cycle's window holds the time.
func isGreen(p Plan, t float64) bool {
	into := t
	if p.Cycle > 0 {
		into = math.Mod(math.Mod(t-p.Offset, p.Cycle)+p.Cycle, p.Cycle)
	}
	for _, w := range p.Greens {
		if into >= w.Start && into < w.End {
			return true
		}
	}
	return false
}

// nearSwitch says whether a time is too close to a switch to tell by rounded numbers.
func nearSwitch(p Plan, t float64) bool { return isGreen(p, t-1e-6) != isGreen(p, t+1e-6) }

func TestSignalPlansBecomeSchedules(t *testing.T) {
	for _, c := range []struct {
		name string
		plan Plan
	}{
		{"one green", Plan{Cycle: 60, Greens: []Window{{20, 50}}}},
		{"green over the cycle's end, told as two that touch", Plan{Cycle: 60, Greens: []Window{{0, 10}, {45, 60}}}},
		{"the same with roundings", Plan{Cycle: 90.1, Offset: 0.7, Greens: []Window{{0, 10.3}, {71.7, 90.1}}}},
		{"greens that touch within the cycle", Plan{Cycle: 60, Greens: []Window{{10, 20}, {20, 35}}}},
		{"green all the time", Plan{Cycle: 60, Greens: []Window{{0, 60}}}},
		{"a negative offset", Plan{Cycle: 60, Offset: -17, Greens: []Window{{20, 50}}}},
		{"a negative offset of many cycles", Plan{Cycle: 61.3, Offset: -1e4, Greens: []Window{{5, 30}, {40, 55}}}},
		{"an offset of many cycles", Plan{Cycle: 61.3, Offset: 1e4, Greens: []Window{{5, 30}, {40, 55}}}},
		{"a cycle longer than the horizon", Plan{Cycle: 5000, Offset: -4700, Greens: []Window{{0, 10}, {4800, 5000}}}},
		{"windows that do not repeat", Plan{Greens: []Window{{-50, 30}, {100, 130}, {130, 200}, {900, 2000}}}},
		{"never green", Plan{Cycle: 60}},
		{"never green, no cycle", Plan{}},
	} {
		g := Signal{SaturationFlow: 0.5, Plan: c.plan}
		const horizon = 1000.0
		s := g.schedule(horizon)
		for at := 0.0; at <= horizon; at += 0.25 {
			want := 0.0
			if isGreen(c.plan, at) {
				want = 0.5
			}
			if got := slowRate(s, at, math.Inf(1)); got != want && !nearSwitch(c.plan, at) {
				t.Errorf("%s: %g veh/s at %g s, want %g", c.name, got, at, want)
				break
			}
		}
	}
}

// Greens that touch leave no red between them, however the cycle rounds: between a green's start and the end of
// the one that touches it every piece is green.
func TestGreensThatTouchAreOneGreen(t *testing.T) {
	random := rand.New(rand.NewPCG(20270101, 4))
	for range 200 {
		cycle, offset := 30+100*random.Float64(), 2000*(random.Float64()-0.5)
		first, second := cycle*0.3*random.Float64(), cycle*(0.5+0.4*random.Float64())
		g := Signal{SaturationFlow: 0.5, Plan: Plan{Cycle: cycle, Offset: offset, Greens: []Window{{0, first}, {second, cycle}}}}
		s := g.schedule(2000)
		for i := 1; i+1 < len(s); i++ {
			if red := s[i+1].Start - s[i].Start; s[i].Rate == 0 && math.Abs(red-(second-first)) > 1e-9 {
				t.Fatalf("cycle %.17g, offset %.17g: a red of %g s, want %g", cycle, offset, red, second-first)
			}
		}
	}
}
