package solver

import (
	"math"
	"math/big"
	"math/rand/v2"
	"testing"
)

// parabolaTest draws shocks on the parabola of a road with free-flow speed 20 m/s and jam density 0.12 veh/m.
type parabolaTest struct {
	seg    segment
	random *rand.Rand
}

func newParabolaTest(t *testing.T) *parabolaTest {
	t.Helper()
	r, err := Greenshields(20, 0.12)
	if err != nil {
		t.Fatal(err)
	}
	return &parabolaTest{newSegment("road", 0, 1000, r.diagram), rand.New(rand.NewPCG(17, 18))}
}

// side is a uniform state or a spreading profile, from next to a fan's apex to nearly flat.
func (p *parabolaTest) side(k float64) region {
	d := p.seg.diagram
	piece := d.pieceBelow(k)
	law := &d.pieces[piece]
	if p.random.IntN(3) == 0 {
		return region{k: k, s: math.Inf(1), r: law.flow(k), upLabel: k, downLabel: k, piece: int32(piece)}
	}
	c := law.waveSpeed(k)
	s := -math.Pow(10, 7*p.random.Float64()-1)
	return region{k: k, c: c, d: law.d, s: s, r: law.flow(k) - k*c, upLabel: k, downLabel: k, piece: int32(piece)}
}

// shock between two sides of which at least one is a profile.
func (p *parabolaTest) shock() path {
	for {
		ku := 0.12 * p.random.Float64()
		u, d := p.side(ku), p.side(ku+(0.12-ku)*math.Pow(10, -6*p.random.Float64()))
		if u.uniform() && d.uniform() {
			continue
		}
		var out path
		out.begin(&u, &d, u.k, d.k, 0, &p.seg)
		return out
	}
}

// exactCount is the count on one side of a shock at (X, T) in 300 binary digits, from nothing but its density and
// spread at birth and the parabola q = 20 k (1 - k/0.12).
func (p *parabolaTest) exactCount(l *local, X, T float64) *big.Float {
	num := func(x float64) *big.Float { return new(big.Float).SetPrec(300).SetFloat64(x) }
	mul := func(a, b *big.Float) *big.Float { return new(big.Float).SetPrec(300).Mul(a, b) }
	sub := func(a, b *big.Float) *big.Float { return new(big.Float).SetPrec(300).Sub(a, b) }
	curvature := num(p.seg.diagram.pieces[0].d)
	k := num(l.k)
	wave := new(big.Float).SetPrec(300).Add(num(p.seg.diagram.freeSpeed), mul(curvature, k))
	passing := mul(num(-0.5), mul(curvature, mul(k, k))) // q - k c
	xi := sub(num(X), mul(wave, num(T)))
	count := sub(mul(passing, num(T)), mul(k, xi))
	if l.uniform() {
		return count
	}
	spread := new(big.Float).SetPrec(300).Add(num(l.s), mul(curvature, num(T)))
	bulge := new(big.Float).SetPrec(300).Quo(mul(num(0.5), mul(xi, xi)), spread)
	return sub(count, bulge)
}

// TestShockOnOneCurveIsWhereCountsAgree: to rounding, also when its sides have spread a million times and its jump is a
// millionth of the density.
func TestShockOnOneCurveIsWhereCountsAgree(t *testing.T) {
	p := newParabolaTest(t)
	for range 5000 {
		shock := p.shock()
		T := math.Pow(10, 6*p.random.Float64()-3)
		X, speed := shock.onward(T)
		if X != shock.offset(T) {
			t.Fatalf("offset %g, onward %g", shock.offset(T), X)
		}
		difference, _ := new(big.Float).Sub(p.exactCount(&shock.up, X, T), p.exactCount(&shock.down, X, T)).Float64()
		jump := (shock.down.k - shock.up.k) * math.Sqrt(1/((1+shock.upRate*T)*(1+shock.downRate*T)))
		// A rounding of the wave speeds is carried for the time T, and grows with the profile of the other side.
		if off, scale := difference/jump, 20*T; math.Abs(off) > 4e-15*scale {
			t.Fatalf("at T = %g the shock is off by %g m of %g (%+v)", T, off, scale, shock)
		}
		h := 1e-4 * T
		before, _ := shock.onward(T - h)
		after, _ := shock.onward(T + h)
		if mean := (after - before) / (2 * h); math.Abs(mean-speed) > 1e-7*20 {
			t.Fatalf("it advances at %.12g, its speed is %.12g (%+v)", mean, speed, shock)
		}
	}
}

// TestCrossingOnOneCurve: where a shock is said to cross a line it is on it, and before that it stays on one side.
func TestCrossingOnOneCurve(t *testing.T) {
	p := newParabolaTest(t)
	met, missed := 0, 0
	for range 20000 {
		shock := p.shock()
		const limit = 500.0
		// A line that the shock is on at some time, or another one, ahead of it or behind; every third a wave of a side.
		meet := limit * math.Pow(10, -4*p.random.Float64())
		x, v := shock.onward(meet)
		v += 10 * (2*p.random.Float64() - 1)
		along := neither
		l := line{x0: x, t0: meet, speed: v}
		wave := func(s side, g *local) { // that is there at the meeting
			dk := g.density(x, meet) - g.k
			along, l = s, line{x0: dk * g.s, speed: g.c + g.d*dk}
		}
		switch side := p.random.IntN(6); {
		case side == 0 && !shock.up.uniform():
			wave(upSide, &shock.up)
		case side == 1 && !shock.down.uniform():
			wave(downSide, &shock.down)
		case side == 2:
			l.x0 += 3000 * (2*p.random.Float64() - 1)
		}
		gap := func(T float64) float64 { return l.at(T) - shock.offset(T) }
		start := gap(0)
		if math.Abs(start) < 1e-9 {
			continue
		}
		got := shock.crossing(0, 0, l, along, math.Copysign(1, start), 0, limit, 0)
		end := min(got, limit)
		// Roundings of the line's place at birth are carried along.
		near := 1e-12 * (math.Abs(l.x0) + math.Abs(l.speed)*limit + 20*end)
		if got <= limit {
			met++
			if math.Abs(gap(got)) > near {
				t.Fatalf("crossing at %.17g, but the gap there is %g (%+v, %+v)", got, gap(got), l, shock)
			}
		} else {
			missed++
		}
		for i := 1; i < 200; i++ {
			if T := end * float64(i) / 200; gap(T)*math.Copysign(1, start) < -near {
				t.Fatalf("crossing at %.17g, but the gap has closed at %g: %g (%+v, along %d, %+v)", got, T, gap(T), l, along, shock)
			}
		}
	}
	if met < 5000 || missed < 1000 {
		t.Fatalf("%d met, %d did not: the test has lost its variety", met, missed)
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
