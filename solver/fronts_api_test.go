package solver_test

import (
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// redThenGreen is a signal at 1024 m of the linear law (16 m/s, 0.125 veh/m), red for 60 s, 0.03125 veh/m arriving.
// The tail starts back at 16 (1 - (0.03125+0.125)/0.125) = -4 m/s; the first wave of the green, at -16 m/s from
// 60 s, meets it when 4 t = 16 (t-60): at 80 s and 704 m. From there, with tau the time since green, it is between
// waves of 8 m/s and of the fan's (x-1024)/tau, so that dx/dtau = (8 + (x-1024)/tau)/2 and
//
//	x = 1024 + 8 tau - 480 sqrt(tau/20).
func redThenGreen(t *testing.T) *solver.Solution {
	t.Helper()
	return answerOf(t, solver.Scenario{Segments: []solver.Segment{bentRoad(t, 2048)}, Horizon: 200,
		Signals: []solver.Signal{light("light", 1024, 60, 1000)},
		Entry:   solver.Entry{Demand: rates(0, 0.375)}, Initial: solver.Initial{BackgroundFlow: 0.375}})
}

func tailAfterGreen(time float64) float64 {
	tau := time - 60
	return 1024 + 8*tau - 480*math.Sqrt(tau/20)
}

// twoRamps is a shock with a profile on both sides, neither of which is a fan: 0.02 to 0.04 and 0.08 to 0.06 veh/m.
// Under the linear law waves keep their speed, so that on each side c(x, t) = (c0 + b x)/(1 + b t), x from the jump.
func twoRamps(t *testing.T) *solver.Solution {
	t.Helper()
	return answerOf(t, openRoad(bentRoad(t, 1).Relation, 15, ramp(0, 500, 0.02, 0.04), ramp(500, 1000, 0.08, 0.06)))
}

// shortGreen is a jam behind a light that is green for 0.05 s: the red's shock starts within a very young fan. With tau
// the time since green dx/dtau = (-16 + (x-1024)/tau)/2, so x = 1024 - 16 tau + 16 sqrt(0.05 tau): a square root.
func shortGreen(t *testing.T) *solver.Solution {
	t.Helper()
	return answerOf(t, solver.Scenario{Segments: []solver.Segment{bentRoad(t, 2048)}, Horizon: 50,
		Signals: []solver.Signal{light("light", 1024, 0, 0.05)},
		Initial: solver.Initial{Queues: []solver.StandingQueue{{Node: "light", Length: 1024}}}})
}

// curvedFront is the one curved front of a solution that is born at about that time.
func curvedFront(t *testing.T, s *solver.Solution, born float64) solver.Front {
	t.Helper()
	var found []solver.Front
	for _, f := range s.Fronts() {
		if !f.Straight && math.Abs(f.Birth.Time-born) < 1e-6 {
			found = append(found, f)
		}
	}
	if len(found) != 1 {
		t.Fatalf("%d curved fronts born at %g s, want one", len(found), born)
	}
	return found[0]
}

// upstreamOf is the one curved front of a solution that ends upstream of x.
func upstreamOf(t *testing.T, s *solver.Solution, x float64) solver.Front {
	t.Helper()
	var found []solver.Front
	for _, f := range s.Fronts() {
		if !f.Straight && f.End.Place < x {
			found = append(found, f)
		}
	}
	if len(found) != 1 {
		t.Fatalf("%d curved fronts end upstream of %g m, want one", len(found), x)
	}
	return found[0]
}

// over calls f at n times spread over the life of a front, its ends left out.
func over(front solver.Front, n int, f func(time float64)) {
	for i := 1; i < n; i++ {
		f(front.Birth.Time + (front.End.Time-front.Birth.Time)*float64(i)/float64(n))
	}
}

func TestSquareRootTailIsAFront(t *testing.T) {
	f := curvedFront(t, redThenGreen(t), 80)
	agree(t, "birth", f.Birth.Place, 704)
	if f.Kind != solver.Shock || f.EndsBy != solver.AtHorizon || f.Into != -1 {
		t.Errorf("front %+v, want a shock up to the horizon", f)
	}
	over(f, 50, func(time float64) {
		agree(t, "place", f.Position(time), tailAfterGreen(time))
		agreeOn(t, "speed", f.Speed(time), 8-240/math.Sqrt(20*(time-60)), 16)
		up, down := f.Sides(time)
		agree(t, "density upstream", up.Density, 0.03125)
		// of the fan: 16 (1 - 16 k) = (x - 1024)/tau
		agree(t, "density downstream", down.Density, (1-(tailAfterGreen(time)-1024)/(time-60)/16)/16)
	})
}

// eachCurved runs a check on the curved fronts of the three scenarios.
func eachCurved(t *testing.T, check func(t *testing.T, f solver.Front)) {
	for name, s := range map[string]*solver.Solution{
		"signal under the linear law": redThenGreen(t), "two ramps": twoRamps(t), "a green of a moment": shortGreen(t),
	} {
		t.Run(name, func(t *testing.T) {
			curved := 0
			for _, f := range s.Fronts() {
				if !f.Straight && f.End.Time > f.Birth.Time {
					curved++
					check(t, f)
				}
			}
			if curved == 0 {
				t.Error("no curved front")
			}
		})
	}
}

// The law of a curved front: at its places the counts of both sides are equal, upstream of them that of the upstream
// side is less, downstream more.
func TestFrontsFulfilTheirLaw(t *testing.T) {
	eachCurved(t, func(t *testing.T, f solver.Front) {
		l := f.Law()
		if l.Straight {
			t.Fatalf("front %d is curved, its law straight", f.ID)
		}
		over(f, 100, func(time float64) {
			X, T := f.Position(time)-f.Birth.Place, time-f.Birth.Time
			difference := func(X float64) float64 { return l.Up.Count(X, T) - l.Down.Count(X, T) }
			agreeOn(t, "difference of the counts", difference(X), 0, 0.125*(math.Abs(X)+16*T))
			if step := 1e-3 * T; !(difference(X-step) < 0 && difference(X+step) > 0) {
				t.Errorf("front %d at %g s: the difference of the counts does not rise", f.ID, time)
			}
		})
	})
}

func TestStraightFrontsFulfilTheirLaw(t *testing.T) {
	straight := 0
	for _, s := range []*solver.Solution{redThenGreen(t), twoRamps(t)} {
		for _, f := range s.Fronts() {
			if !f.Straight {
				continue
			}
			straight++
			l := f.Law()
			over(f, 4, func(time float64) {
				agree(t, "place", f.Position(time), f.Birth.Place+l.Speed*(time-f.Birth.Time))
				agreeOn(t, "speed", f.Speed(time), l.Speed, 16)
			})
			if !l.Straight {
				t.Errorf("front %d is straight, its law is not", f.ID)
			}
		}
	}
	if straight < 5 {
		t.Errorf("only %d straight fronts", straight)
	}
}

// Speed is the derivative of Position. The central difference over 2h is off by h² x”'/6 and that over 4h by four
// times that, so the two differ by three times the error of the first, to higher order; places carry 1e-13 of
// the road's length, which the difference divides by h.
func TestSpeedIsTheDerivativeOfPosition(t *testing.T) {
	eachCurved(t, func(t *testing.T, f solver.Front) {
		over(f, 40, func(time float64) {
			h := 0.002 * math.Min(time-f.Birth.Time, f.End.Time-time)
			central := func(h float64) float64 { return (f.Position(time+h) - f.Position(time-h)) / (2 * h) }
			bound := math.Abs(central(2*h)-central(h)) + 1e-13*2048/h
			agreeWithin(t, "speed", f.Speed(time), central(h), bound)
			if bound > 1e-3*16 {
				t.Errorf("a bound of %g m/s shows nothing", bound)
			}
		})
	})
}

// Rankine-Hugoniot: the speed is the slope of the chord between the states on both sides.
func TestSpeedIsTheChordBetweenTheSides(t *testing.T) {
	eachCurved(t, func(t *testing.T, f solver.Front) {
		over(f, 40, func(time float64) {
			up, down := f.Sides(time)
			agreeOn(t, "speed", f.Speed(time), (down.Flow-up.Flow)/(down.Density-up.Density), 16)
		})
	})
}

// Both sides of the two ramps are those of the waves that arrive there, whose speeds the linear law keeps.
func TestSidesOfAShockBetweenTwoProfiles(t *testing.T) {
	f := curvedFront(t, twoRamps(t), 0)
	over(f, 20, func(time float64) {
		up, down := f.Sides(time)
		side := func(k0, k1, at float64) float64 { // k0 at the jump, k1 at the distance at
			c0, c1 := 16-256*k0, 16-256*k1
			b := (c1 - c0) / at
			c := (c0 + b*(f.Position(time)-500)) / (1 + b*time)
			return (16 - c) / 256
		}
		agree(t, "density upstream", up.Density, side(0.04, 0.02, -500))
		agree(t, "density downstream", down.Density, side(0.08, 0.06, 500))
	})
}

// Before its birth and after its end a front is where it was born and where it ended.
func TestFrontsAreAskedWithinTheirLife(t *testing.T) {
	f := curvedFront(t, redThenGreen(t), 80)
	agree(t, "place before its birth", f.Position(0), 704)
	agree(t, "place after its end", f.Position(1e6), tailAfterGreen(200))
	agreeOn(t, "speed after its end", f.Speed(1e6), f.Speed(200), 16)
}

// At 80 s the tail and the first wave of the green are used up and one shock is born: both point to it.
func TestMergedFrontsPointToWhatTheyBecame(t *testing.T) {
	s := redThenGreen(t)
	heir := curvedFront(t, s, 80)
	merged := 0
	for _, f := range s.Fronts() {
		switch {
		case f.EndsBy == solver.Merged && math.Abs(f.End.Time-80) < 1e-6:
			merged++
			if f.Into != heir.ID {
				t.Errorf("front %d merges into %d, want %d", f.ID, f.Into, heir.ID)
			}
			agree(t, "place", f.End.Place, 704)
		case f.EndsBy != solver.Merged && f.Into != -1:
			t.Errorf("front %d ends by %v, yet points to %d", f.ID, f.EndsBy, f.Into)
		}
	}
	if merged != 2 {
		t.Errorf("%d fronts end where the tail meets the first wave, want two", merged)
	}
}

// What a meeting leaves is between the outermost of what met: on each side the successor has the state of one of them.
func TestTheSuccessorIsBetweenWhatMet(t *testing.T) {
	onRandomCorridors(t, anything, func(t testing.TB, s *solved) {
		fronts := s.Fronts()
		met := map[int][]solver.Front{}
		for _, f := range fronts {
			if f.Into >= 0 {
				met[f.Into] = append(met[f.Into], f)
			}
		}
		for id, group := range met {
			heir := fronts[id]
			up, down := heir.Sides(heir.Birth.Time)
			foundUp, foundDown := false, false
			for _, f := range group {
				a, b := f.Sides(f.End.Time)
				foundUp = foundUp || math.Abs(a.Density-up.Density) <= nearlyTheSame*s.densest()
				foundDown = foundDown || math.Abs(b.Density-down.Density) <= nearlyTheSame*s.densest()
				if heir.ID <= f.ID || heir.Segment != f.Segment {
					t.Errorf("front %d on segment %d merges into %d on segment %d", f.ID, f.Segment, heir.ID, heir.Segment)
				}
			}
			if !foundUp || !foundDown {
				t.Errorf("front %d, born at %+v between %g and %g veh/m, is no successor of %+v", id, heir.Birth, up.Density, down.Density, group)
			}
		}
	})
}

// nearlyTheSame is how close two densities at the place of a meeting must be, relative to jam density: the density
// within a fan a second old moves by 1/16 of jam density with each metre, and its fronts' places are good to some 1e-9 m.
const nearlyTheSame = 1e-7
