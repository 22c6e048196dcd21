package solver

import (
	"math"
	"math/rand/v2"
	"testing"
)

// TestOnwardSpeedIsTheChordSlope: on a parabola the mean of the wave speeds on the two sides of a shock is the chord
// slope, and the slope of its path; for shocks between profiles, fans and uniform states, also across the critical
// density, where the pieces of the relation change.
func TestOnwardSpeedIsTheChordSlope(t *testing.T) {
	r, err := Greenshields(20, 0.12)
	if err != nil {
		t.Fatal(err)
	}
	seg := newSegment("road", 0, 1000, r.diagram)
	random := rand.New(rand.NewPCG(17, 18))
	side := func(k float64) region {
		piece := r.diagram.pieceBelow(k)
		p := &r.diagram.pieces[piece]
		g := region{k: k, c: p.waveSpeed(k), d: p.d, s: math.Inf(1), upLabel: k, downLabel: k, piece: int32(piece)}
		if random.IntN(2) == 0 {
			g.s = -math.Pow(10, 3+3*random.Float64()) // falling downstream: it spreads
			g.r = p.flow(k) - k*g.c
		} else {
			g.c, g.d, g.r = 0, 0, p.flow(k)
		}
		return g
	}
	curved := 0
	for range 2000 {
		ku := 0.12 * random.Float64()
		u, d := side(ku), side(ku+(0.12-ku)*random.Float64())
		if u.uniform() && d.uniform() {
			continue
		}
		curved++
		var p path
		p.begin(&u, &d, u.k, d.k, 0, &seg)
		T := 100 * random.Float64()
		X, speed := p.onward(T)
		secant := r.diagram.secant(int(p.upPiece), p.up.density(X, T), int(p.downPiece), p.down.density(X, T))
		if math.Abs(speed-secant) > 1e-9*20 {
			t.Fatalf("speed %.15g, chord slope %.15g (%+v)", speed, secant, p)
		}
		h := 1e-3
		before, _ := p.onward(T)
		after, _ := p.onward(T + h)
		_, later := p.onward(T + h)
		if mean := (after - before) / h; math.Abs(mean-0.5*(speed+later)) > 1e-6*20 {
			t.Fatalf("the path advances at %.12g, its speed is %.12g (%+v)", mean, 0.5*(speed+later), p)
		}
	}
	if curved < 1000 {
		t.Fatalf("only %d curved shocks were tried", curved)
	}
}

func TestPiecesOfOneCurve(t *testing.T) {
	parabola, err := Greenshields(20, 0.12)
	if err != nil {
		t.Fatal(err)
	}
	mixed, err := QuadraticFree(20, 12, 0.03, 0.12)
	if err != nil {
		t.Fatal(err)
	}
	for name, c := range map[string]struct {
		relation Relation
		want     bool
	}{"parabola": {parabola, true}, "parabola and line": {mixed, false}} {
		d := c.relation.Lanes(3).diagram
		if got := d.oneCurve(0, 1); got != c.want || d.oneCurve(1, 0) != c.want || !d.oneCurve(0, 0) || !d.oneCurve(1, 1) {
			t.Errorf("%s: its two pieces on one curve: %v, want %v", name, got, c.want)
		}
	}
}
