package solver_test

import (
	"math"
	"math/rand/v2"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// lawOfFlow is a relation together with its flow as the test writes it down [km/h, veh/km, veh/h].
type lawOfFlow struct {
	name     string
	relation func(*testing.T) solver.Relation
	jam      float64
	flow     func(k float64) float64
}

// lawsOfFlow is one relation of each kind.
var lawsOfFlow = []lawOfFlow{
	{"triangular", func(t *testing.T) solver.Relation {
		return triangle(t, solver.TriangularParams{FreeSpeed: 90 * kmh, WaveSpeed: 18 * kmh, JamDensity: 450 * perKm})
	}, 450, func(k float64) float64 { return min(90*k, 18*(450-k)) }},
	{"trapezoidal", func(t *testing.T) solver.Relation {
		return must(solver.Trapezoidal(solver.TrapezoidalParams{FreeSpeed: 90 * kmh, WaveSpeed: 18 * kmh,
			JamDensity: 450 * perKm, Capacity: 6000 * perHour}))(t)
	}, 450, func(k float64) float64 { return min(90*k, 6000, 18*(450-k)) }},
	{"linear speed-density", func(t *testing.T) solver.Relation { return greenshields(t, 100*kmh, 150*perKm) },
		150, func(k float64) float64 { return 100 * k * (1 - k/150) }},
	{"quadratic free branch", func(t *testing.T) solver.Relation {
		return must(solver.QuadraticFree(110*kmh, 80*kmh, 50*perKm, 300*perKm))(t)
	}, 300, func(k float64) float64 {
		if k < 50 {
			return (110 - 30*k/50) * k
		}
		return 4000 * (300 - k) / 250
	}},
	{"piecewise linear", func(t *testing.T) solver.Relation {
		return throughStates(t, 300*perKm, solver.FlowPoint{Density: 30 * perKm, Flow: 3000 * perHour},
			solver.FlowPoint{Density: 60 * perKm, Flow: 4800 * perHour}, solver.FlowPoint{Density: 150 * perKm, Flow: 3600 * perHour})
	}, 300, func(k float64) float64 {
		switch {
		case k < 30:
			return 100 * k
		case k < 60:
			return 3000 + 60*(k-30)
		case k < 150:
			return 4800 - 40.0/3*(k-60)
		}
		return 24 * (300 - k)
	}},
}

// A jump to a greater density stays one front and moves with the slope of the chord (jump condition).
func TestShockBetweenAnyTwoStatesOnEveryRelation(t *testing.T) {
	const seed = 20261205
	for i, law := range lawsOfFlow {
		t.Run(law.name, func(t *testing.T) {
			random := rand.New(rand.NewPCG(seed, uint64(i)))
			for range 200 {
				up := 0.98 * law.jam * random.Float64()
				down := up + (law.jam-up)*(0.01+0.99*random.Float64())
				law.checkJump(t, up, down)
				if t.Failed() {
					t.Fatalf("seed %d: from %g to %g veh/km", seed, up, down)
				}
			}
			law.checkJump(t, 0, law.jam)
			law.checkJump(t, 0, law.jam/2)
			law.checkJump(t, law.jam/3, law.jam)
		})
	}
}

func (l lawOfFlow) checkJump(t *testing.T, up, down float64) {
	t.Helper()
	r := l.relation(t)
	s := answerOf(t, openRoad(r, minute, flat(-2500, 0, up*perKm), flat(0, 2500, down*perKm)))
	want := (l.flow(down) - l.flow(up)) / (down - up)
	f := jumpBetween(t, s, minute, up*perKm, down*perKm)
	speed := max(math.Abs(want), r.FreeSpeed()/kmh)
	agreeOn(t, "speed [km/h]", f.Speed(minute/2)/kmh, want, speed)
	agreeOn(t, "chord [km/h]", r.ShockSpeed(up*perKm, down*perKm)/kmh, want, speed)
	agreeOn(t, "place [m]", f.Position(minute), want*kmh*minute, speed*kmh*minute)
	agreeOn(t, "flow before [veh/h]", at(t, s, -2450, minute/2).Up.Flow/perHour, l.flow(up), r.Capacity()/perHour)
	agreeOn(t, "flow behind [veh/h]", at(t, s, 2450, minute/2).Up.Flow/perHour, l.flow(down), r.Capacity()/perHour)
}
