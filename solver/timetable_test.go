package solver

import (
	"math"
	"math/rand/v2"
	"sort"
	"testing"
)

// slowRate is the schedule's rate at a time, read off by going through all pieces.
func slowRate(s Schedule, t, before float64) float64 {
	rate := before
	for _, p := range s {
		if p.Start <= t {
			rate = p.Rate
			if p.Slope != 0 {
				rate += p.Slope * (t - p.Start)
			}
		}
	}
	return rate
}

// spans are the times in [0, until] at which a schedule may jump, with 0 and until.
func spans(s Schedule, until float64) []float64 {
	out := []float64{0, until}
	for _, p := range s {
		if p.Start > 0 && p.Start < until {
			out = append(out, p.Start)
		}
	}
	sort.Float64s(out)
	return out
}

// slowTotal integrates the rate from 0: the midpoint rule between the jumps, exact for what is linear there.
func slowTotal(s Schedule, until float64) float64 {
	sum, marks := 0.0, spans(s, until)
	for i := 1; i < len(marks); i++ {
		const parts = 7
		h := (marks[i] - marks[i-1]) / parts
		for j := range parts {
			sum += h * slowRate(s, marks[i-1]+(float64(j)+0.5)*h, 0)
		}
	}
	return sum
}

// slowMoment integrates the total from 0: Simpson's rule between the jumps, exact for what is quadratic there.
func slowMoment(s Schedule, until float64) float64 {
	sum, marks := 0.0, spans(s, until)
	for i := 1; i < len(marks); i++ {
		a, b := marks[i-1], marks[i]
		sum += (b - a) / 6 * (slowTotal(s, a) + 4*slowTotal(s, 0.5*(a+b)) + slowTotal(s, b))
	}
	return sum
}

// drawSchedule draws one to six pieces, from well before 0 on, half of them linear; rates stay above 0 for 500 s.
func drawSchedule(random *rand.Rand) Schedule {
	var s Schedule
	start := -120 + 200*random.Float64()
	for range 1 + random.IntN(6) {
		p := SchedulePiece{Start: start, Rate: 0.3 + 0.7*random.Float64()}
		if random.IntN(2) == 0 {
			p.Slope = (random.Float64() - 0.3) * 1e-3
		}
		s = append(s, p)
		start += 5 + 90*random.Float64()
	}
	return s
}

func near(t *testing.T, what string, got, want float64) {
	t.Helper()
	if !(math.Abs(got-want) <= 1e-9*math.Abs(want)) {
		t.Errorf("%s = %.15g, want %.15g", what, got, want)
	}
}

func TestTimetableTotalsAreIntegrals(t *testing.T) {
	random := rand.New(rand.NewPCG(20270101, 1))
	for i := range 200 {
		s := drawSchedule(random)
		table := newTimetable(s, 0, 0)
		for range 5 {
			at := 400 * random.Float64()
			near(t, "total", table.total(at), slowTotal(s, at))
			near(t, "moment", table.moment(at), slowMoment(s, at))
		}
		if t.Failed() {
			t.Fatalf("schedule %d: %+v", i, s)
		}
	}
}

// By hand: 0.5 veh/s from -20 s on, falling by 0.01 veh/s² from 10 s on, 0.3 veh/s from 30 s on.
//
//	total(10) = 5; total(30) = 5 + 20 (0.5 + 0.3)/2 = 13; total(50) = 13 + 20*0.3 = 19
//	moment(10) = 10*5/2 = 25
//	moment(30) = 25 + 5*20 + 0.5*20²/2 - 0.01*20³/6 = 25 + 100 + 100 - 40/3
//	moment(50) = moment(30) + 13*20 + 0.3*20²/2 = moment(30) + 320
func TestTimetableByHand(t *testing.T) {
	table := newTimetable(Schedule{{Start: -20, Rate: 0.5}, {Start: 10, Rate: 0.5, Slope: -0.01}, {Start: 30, Rate: 0.3}}, 0, 0)
	for _, c := range []struct{ at, total, moment float64 }{
		{10, 5, 25}, {30, 13, 225 - 40.0/3}, {50, 19, 545 - 40.0/3},
	} {
		near(t, "total", table.total(c.at), c.total)
		near(t, "moment", table.moment(c.at), c.moment)
	}
	if table.total(0) != 0 || table.moment(0) != 0 {
		t.Errorf("at time 0 the total is %g and the moment %g, want 0", table.total(0), table.moment(0))
	}
}

// A schedule that has not begun yet has the rate before it, but adds nothing to the total.
func TestTimetableBeforeItsFirstPiece(t *testing.T) {
	table := newTimetable(Schedule{{Start: 40, Rate: 0.5}}, math.Inf(1), 0)
	if l := table.law(0); !math.IsInf(l.value, 1) || l.slope != 0 {
		t.Errorf("law before the first piece = %+v, want unrestricted", l)
	}
	if table.total(40) != 0 || table.moment(40) != 0 {
		t.Errorf("before the first piece total %g, moment %g, want 0", table.total(40), table.moment(40))
	}
	near(t, "total after it began", table.total(44), 0.5*4)
	near(t, "moment after it began", table.moment(44), 0.5*4*4/2)
}

// law and next, asked as the loop does, against the pieces read off one by one.
func TestTimetableFollowsTheLoop(t *testing.T) {
	random := rand.New(rand.NewPCG(20270101, 2))
	for i := range 200 {
		s := drawSchedule(random)
		before := random.Float64()
		table := newTimetable(s, before, 0)
		for now := 0.0; now < 400; now += 40 * random.Float64() {
			near(t, "rate", table.law(now).value, slowRate(s, now, before))
			near(t, "a little later", table.law(now).value+table.law(now).slope*1e-3, slowRate(s, now+1e-3, before))
			next := math.Inf(1)
			for _, p := range s {
				if p.Start > now {
					next = math.Min(next, p.Start)
				}
			}
			if got := table.next(); got != next {
				t.Errorf("next after %g = %g, want %g", now, got, next)
			}
		}
		if t.Failed() {
			t.Fatalf("schedule %d: %+v", i, s)
		}
	}
}

// What is unlimited stays so, whatever the time, and its end is an event like any other.
func TestTimetableOfAnUnlimitedCapacity(t *testing.T) {
	table := newTimetable(Schedule{{Start: -5, Rate: 0.5}, {Start: 0, Rate: math.Inf(1)}, {Start: 60, Rate: 0}}, math.Inf(1), 1e-9)
	for _, now := range []float64{0, 30, math.Nextafter(60, 0)} {
		if l := table.law(now); !math.IsInf(l.value, 1) || l.slope != 0 {
			t.Errorf("law at %g = %+v, want unlimited", now, l)
		}
		if next := table.next(); next != 60 {
			t.Errorf("next after %g = %g, want 60", now, next)
		}
	}
	if l, next := table.law(60), table.next(); l != (law{}) || !math.IsInf(next, 1) {
		t.Errorf("closed: law %+v, next %g", l, next)
	}
}

// Pieces too short to tell their ends apart are left out; what begins a hair after 0 begins at 0.
func TestTimetableLeavesOutWhatIsTooShort(t *testing.T) {
	table := newTimetable(Schedule{{Start: 0, Rate: 1}, {Start: 1e-10, Rate: 2}, {Start: 10, Rate: 3}, {Start: 10 + 1e-10, Rate: 4}}, 0, 1e-9)
	if l, next := table.law(0), table.next(); l.value != 2 || next != 10+1e-10 {
		t.Errorf("rate %g until %.12g, want 2 until 10 and a hair", l.value, next)
	}
	if l, next := table.law(11), table.next(); l.value != 4 || !math.IsInf(next, 1) {
		t.Errorf("rate %g until %g, want 4 for ever", l.value, next)
	}
}

// An empty schedule is what was before it.
func TestEmptyTimetable(t *testing.T) {
	table := newTimetable(nil, math.Inf(1), 1e-9)
	if l := table.law(5); !math.IsInf(l.value, 1) || !math.IsInf(table.next(), 1) {
		t.Errorf("law %+v, next %g", l, table.next())
	}
	if table.total(5) != 0 || table.moment(5) != 0 {
		t.Errorf("total %g, moment %g, want 0", table.total(5), table.moment(5))
	}
}
