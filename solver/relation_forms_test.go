package solver_test

import (
	"errors"
	"math"
	"strings"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// Any three of the four parameters of the triangle make the same relation: 0.125/(1/20 + 1/5) = 0.5.
func TestTriangularFromAnySufficientSet(t *testing.T) {
	all := solver.TriangularParams{FreeSpeed: 20, Capacity: 0.5, JamDensity: 0.125, WaveSpeed: 5}
	for name, without := range map[string]func(p *solver.TriangularParams){
		"all four":             func(*solver.TriangularParams) {},
		"without free speed":   func(p *solver.TriangularParams) { p.FreeSpeed = 0 },
		"without capacity":     func(p *solver.TriangularParams) { p.Capacity = 0 },
		"without jam density":  func(p *solver.TriangularParams) { p.JamDensity = 0 },
		"without wave speed":   func(p *solver.TriangularParams) { p.WaveSpeed = 0 },
		"all, to seven digits": func(p *solver.TriangularParams) { p.Capacity = 0.50000004 },
	} {
		p := all
		without(&p)
		r, given := triangle(t, p), p.Capacity
		if given == 0 {
			given = 0.5
		}
		critical, same := r.CriticalDensity()
		agree(t, name+": free speed", r.FreeSpeed(), 20)
		agree(t, name+": capacity", r.Capacity(), given)
		agree(t, name+": jam density", r.JamDensity(), 0.125)
		agree(t, name+": critical density", critical, given/20)
		agreeWithin(t, name+": wave speed", r.WaveSpeed(0.1), -5, 1e-6)
		if critical != same {
			t.Errorf("%s: a triangle has one critical density, not %g to %g", name, critical, same)
		}
	}
}

// A trapeze with the capacity of the whole triangle, to six digits, is the triangle.
func TestTrapezeWithTheTrianglesCapacityIsTheTriangle(t *testing.T) {
	for _, capacity := range []float64{0.5, 0.5 * (1 - 5e-7), 0.5 * (1 + 5e-7)} {
		r := must(solver.Trapezoidal(solver.TrapezoidalParams{FreeSpeed: 20, WaveSpeed: 5, JamDensity: 0.125, Capacity: capacity}))(t)
		least, greatest := r.CriticalDensity()
		agree(t, "capacity", r.Capacity(), capacity)
		agree(t, "critical density", least, capacity/20)
		if least != greatest {
			t.Errorf("capacity %g leaves a plateau from %g to %g", capacity, least, greatest)
		}
	}
	// 2e-6 below the apex is a plateau: from 0.499999/20 to 0.125 - 0.499999/5.
	r := must(solver.Trapezoidal(solver.TrapezoidalParams{FreeSpeed: 20, WaveSpeed: 5, JamDensity: 0.125, Capacity: 0.499999}))(t)
	least, greatest := r.CriticalDensity()
	agree(t, "plateau begins", least, 0.02499995)
	agree(t, "plateau ends", greatest, 0.0250002)
}

// Corners on one straight line are no corners.
func TestPiecewiseLinearWithCornersOnALine(t *testing.T) {
	point := func(k, q float64) solver.FlowPoint { return solver.FlowPoint{Density: k, Flow: q} }
	// 20 m/s up to 0.025 and -5 m/s from there on, each cut in three by points with rounded coordinates.
	r := throughStates(t, 0.125, point(0.0251/3, 20*0.0251/3), point(0.017, 0.34), point(0.025, 0.5), point(0.06, 0.325), point(0.1, 0.125))
	plain := triangle(t, solver.TriangularParams{FreeSpeed: 20, WaveSpeed: 5, JamDensity: 0.125})
	for i := range 101 {
		k := 0.125 * float64(i) / 100
		agreeOn(t, "flow", r.Flow(k), plain.Flow(k), 0.5)
	}
	// One contact between two states on the line, not one for each corner.
	s := answerOf(t, openRoad(r, 10, flat(0, 500, 0.07), flat(500, 1000, 0.115)))
	if fronts := s.Fronts(); len(fronts) != 1 || fronts[0].Kind != solver.Contact {
		t.Errorf("%d fronts, want one contact: %+v", len(fronts), fronts)
	}
}

// Every refusal of the forms: the field, the rule, the value and what would be accepted.
func TestFormsRefuse(t *testing.T) {
	triangular := func(p solver.TriangularParams) error { return second(solver.Triangular(p)) }
	trapezoidal := func(v, c, j, w float64) error {
		return second(solver.Trapezoidal(solver.TrapezoidalParams{FreeSpeed: v, Capacity: c, JamDensity: j, WaveSpeed: w}))
	}
	corners := func(kq ...float64) error {
		var out []solver.FlowPoint
		for i := 0; i < len(kq); i += 2 {
			out = append(out, solver.FlowPoint{Density: kq[i], Flow: kq[i+1]})
		}
		return second(solver.PiecewiseLinear(out))
	}
	nan, inf := math.NaN(), math.Inf(1)
	for _, c := range []struct {
		name  string
		err   error
		field string
		rule  solver.Rule
		value string
	}{
		{"two parameters", triangular(solver.TriangularParams{FreeSpeed: 20, WaveSpeed: 5}), "", solver.RuleRequired, "2"},
		{"none", triangular(solver.TriangularParams{}), "", solver.RuleRequired, "0"},
		{"a negative one", triangular(solver.TriangularParams{FreeSpeed: -20, WaveSpeed: 5, JamDensity: 0.1}), "FreeSpeed", solver.RulePositive, "-20"},
		{"not a number", triangular(solver.TriangularParams{FreeSpeed: 20, WaveSpeed: nan, JamDensity: 0.1}), "WaveSpeed", solver.RuleFinite, "NaN"},
		{"infinite", triangular(solver.TriangularParams{FreeSpeed: 20, WaveSpeed: 5, JamDensity: inf}), "JamDensity", solver.RuleFinite, "+Inf"},
		{"capacity beyond jam density", triangular(solver.TriangularParams{FreeSpeed: 20, Capacity: 2, JamDensity: 0.1}), "WaveSpeed", solver.RuleRange, ""},
		{"the same, from behind", triangular(solver.TriangularParams{WaveSpeed: 5, Capacity: 0.5, JamDensity: 0.1}), "FreeSpeed", solver.RuleRange, ""},
		{"four that contradict each other", triangular(solver.TriangularParams{FreeSpeed: 20, WaveSpeed: 5, JamDensity: 0.125, Capacity: 0.5001}), "Capacity", solver.RuleConflict, "0.5001"},
		{"a trapeze above its triangle", trapezoidal(20, 0.51, 0.125, 5), "Capacity", solver.RuleRange, "0.51"},
		{"a trapeze without capacity", trapezoidal(20, 0, 0.125, 5), "Capacity", solver.RulePositive, "0"},
		{"no free speed", second(solver.Greenshields(0, 0.125)), "FreeSpeed", solver.RulePositive, "0"},
		{"no jam density", second(solver.Greenshields(20, inf)), "JamDensity", solver.RuleFinite, "+Inf"},
		{"a critical speed below half", second(solver.QuadraticFree(20, 9.9, 0.025, 0.125)), "CriticalSpeed", solver.RuleConcave, "9.9"},
		{"a critical speed that is the free speed", second(solver.QuadraticFree(20, 20, 0.025, 0.125)), "CriticalSpeed", solver.RuleRange, "20"},
		{"critical beyond jam density", second(solver.QuadraticFree(20, 12, 0.125, 0.125)), "JamDensity", solver.RuleRange, "0.125"},
		{"no critical density", second(solver.QuadraticFree(20, 12, -1, 0.125)), "CriticalDensity", solver.RulePositive, "-1"},
		{"two corners", corners(0, 0, 0.125, 0), "", solver.RuleRequired, "2"},
		{"not from the origin", corners(0, 0.1, 0.025, 0.5, 0.125, 0), "[0]", solver.RuleRequired, "{0 0.1}"},
		{"not down to zero", corners(0, 0, 0.025, 0.5, 0.125, 0.1), "[2].Flow", solver.RuleRequired, "0.1"},
		{"corners out of order", corners(0, 0, 0.05, 0.5, 0.025, 0.6, 0.125, 0), "[2].Density", solver.RuleOrder, "0.025"},
		{"a negative flow", corners(0, 0, 0.025, -0.5, 0.125, 0), "[1].Flow", solver.RuleNotNegative, "-0.5"},
		{"a flow that is no number", corners(0, 0, 0.025, nan, 0.125, 0), "[1].Flow", solver.RuleFinite, "NaN"},
		{"a jam density without end", corners(0, 0, 0.025, 0.5, inf, 0), "[2].Density", solver.RuleFinite, "+Inf"},
		// slopes 10, 20, -8: the chain bends the wrong way at its second corner
		{"not concave on the free side", corners(0, 0, 0.025, 0.25, 0.05, 0.75, 0.14375, 0), "[1]", solver.RuleConcave, "{0.025 0.25}"},
		// slopes 20, -8, -2: at its third
		{"not concave on the congested side", corners(0, 0, 0.025, 0.5, 0.05, 0.3, 0.2, 0), "[2]", solver.RuleConcave, "{0.05 0.3}"},
	} {
		var e *solver.InvalidError
		if !errors.As(c.err, &e) {
			t.Errorf("%s: error %v, want an InvalidError", c.name, c.err)
			continue
		}
		if len(e.Violations) == 0 {
			t.Errorf("%s: no violations", c.name)
			continue
		}
		v := e.Violations[0]
		if len(e.Violations) != 1 || v.Field != c.field || v.Rule != c.rule || v.Value != c.value || v.Allowed == "" {
			t.Errorf("%s: %+v, want field %q, rule %s, value %q and what is allowed", c.name, e.Violations, c.field, c.rule, c.value)
		}
	}
}

func second[T any](_ T, err error) error { return err }

// A refusal of concavity says how the slope rises at the corner; all wrong corners are named at once.
func TestConcavityIsRefusedAtItsPlaces(t *testing.T) {
	point := func(k, q float64) solver.FlowPoint { return solver.FlowPoint{Density: k, Flow: q} }
	// slopes 10, 20, -10, -2: wrong at 0.025 and at 0.075
	_, err := solver.PiecewiseLinear([]solver.FlowPoint{point(0, 0), point(0.025, 0.25), point(0.05, 0.75), point(0.1, 0.25), point(0.225, 0)})
	var e *solver.InvalidError
	if !errors.As(err, &e) || len(e.Violations) != 2 {
		t.Fatalf("error %v, want two violations", err)
	}
	for i, want := range []struct{ field, slopes string }{{"[1]", "from 10 to 20 m/s"}, {"[3]", "from -10 to -2 m/s"}} {
		if v := e.Violations[i]; v.Rule != solver.RuleConcave || v.Field != want.field || !strings.Contains(v.Allowed, want.slopes) {
			t.Errorf("violation %+v, want %s at %s", v, want.slopes, want.field)
		}
	}
}

// All wrong parameters of a form are named at once.
func TestFormsNameAllThatIsWrong(t *testing.T) {
	_, err := solver.QuadraticFree(0, -1, math.NaN(), math.Inf(1))
	var e *solver.InvalidError
	if !errors.As(err, &e) || len(e.Violations) != 4 {
		t.Fatalf("error %v, want four violations", err)
	}
	for i, field := range []string{"FreeSpeed", "CriticalSpeed", "CriticalDensity", "JamDensity"} {
		if e.Violations[i].Field != field {
			t.Errorf("violation %d is of %s, want %s", i, e.Violations[i].Field, field)
		}
	}
}

func TestOnlyConstructedRelationsAreValid(t *testing.T) {
	if (solver.Relation{}).Valid() || !greenshields(t, 20, 0.125).Valid() {
		t.Error("the zero relation must not be valid, a constructed one must")
	}
	if r, err := solver.Greenshields(-1, 0.1); err == nil || r.Valid() {
		t.Error("a refused relation must not be valid")
	}
}

func TestLanesMustBePositive(t *testing.T) {
	r := greenshields(t, 20, 0.125)
	for _, n := range []float64{0, -1, math.NaN(), math.Inf(1)} {
		func() {
			defer func() {
				if recover() == nil {
					t.Errorf("%g lanes are accepted", n)
				}
			}()
			r.Lanes(n)
		}()
	}
}
