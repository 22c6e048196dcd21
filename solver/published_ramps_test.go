package solver_test

import (
	"fmt"
	"math/rand/v2"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// Under the linear speed-density law the wave speed c = vf (1 - 2k/kj) obeys c_t + c c_x = 0, and every density
// keeps its wave speed. So (Whitham 1974, Linear and Nonlinear Waves, ch. 2):
//
//   - a ramp from kL up to kR > kL over a width W focuses at tb = W/(cL-cR), at xL + cL tb;
//   - a shock from kL to kR moves at s = (cL+cR)/2; a whole rising profile that has become one shock lies at
//     X + s t, where X is the centre of its rise, the mean of x weighted by dk ("equal areas": as many vehicles
//     on either side of X as a step there would have moved). For one ramp X is its middle.

// rampRoad is one ramp that starts at place 0, on a road long enough for three breaking times.
func rampRoad(r solver.Relation, kL, kR, width float64) (scenario solver.Scenario, breaking float64) {
	breaking = width / (r.WaveSpeed(kL) - r.WaveSpeed(kR))
	reach := 4 * r.FreeSpeed() * breaking
	return openRoad(r, 3*breaking, flat(-reach, 0, kL), ramp(0, width, kL, kR), flat(width, width+reach, kR)), breaking
}

// checkRamp checks place and time of birth, the profile before, and the path after.
func checkRamp(t *testing.T, vf, kj, kL, kR, width float64) {
	t.Helper()
	r := greenshields(t, vf, kj)
	scenario, tb := rampRoad(r, kL, kR, width)
	s := answerOf(t, scenario)
	cL, cR := vf*(1-2*kL/kj), vf*(1-2*kR/kj)
	length := width + vf*tb
	f := shockBorn(t, s, cL*tb, tb, length, tb)
	for _, u := range []float64{0.25, 0.5, 0.875} {
		c, time := cL+u*(cR-cL), 0.75*tb
		agreeOn(t, "density in the ramp", at(t, s, u*width+c*time, time).Up.Density, kL+u*(kR-kL), kj)
		later := tb * (1 + 2*u)
		agreeOn(t, "path", f.Position(later), width/2+(cL+cR)/2*later, length)
		agreeOn(t, "speed", f.Speed(later), (cL+cR)/2, vf)
	}
	if before, after := countShocks(s, tb*(1-1e-9)), countShocks(s, 2*tb); before != 0 || after != 1 {
		t.Errorf("%d shocks before and %d after the ramp has focused", before, after)
	}
}

func TestRampOfAnyDensitiesOverAnyWidth(t *testing.T) {
	const vf, kj = 100 * kmh, 150 * perKm
	for _, c := range []struct{ kL, kR, width float64 }{
		{0, 150, 1000}, {0, 1, 1}, {149, 150, 5000}, {30, 31, 250}, {74, 76, 40}, {0, 75, 0.5}, {75, 150, 300},
		{60, 90, 1000}, {20, 20.1, 100}, {1, 149, 12345},
	} {
		t.Run(fmt.Sprintf("%g to %g veh per km over %g m", c.kL, c.kR, c.width), func(t *testing.T) {
			checkRamp(t, vf, kj, c.kL*perKm, c.kR*perKm, c.width)
		})
	}
}

func TestRampOfAnyDensitiesOverAnyWidthAtRandom(t *testing.T) {
	const seed = 20261201
	random := rand.New(rand.NewPCG(seed, 1))
	for i := range 300 {
		vf, kj := 5+35*random.Float64(), 0.05+0.8*random.Float64()
		kL := 0.97 * kj * random.Float64()
		kR := min(kj, kL+0.02*kj+(kj-kL)*random.Float64())
		checkRamp(t, vf, kj, kL, kR, 1+3000*random.Float64()*random.Float64())
		if t.Failed() {
			t.Fatalf("seed %d, profile %d: vf %g kj %g, %g to %g", seed, i, vf, kj, kL, kR)
		}
	}
}

// rise is a part of a rising profile that has become, or will become, one shock.
type rise struct {
	kL, kR float64
	centre float64 // of the rise: mean of x weighted by dk
}

func (r rise) place(vf, kj, t float64) float64 { return r.centre + vf*(1-(r.kL+r.kR)/kj)*t }

// and is the rise of two neighbours together.
func (r rise) and(o rise) rise {
	return rise{r.kL, o.kR, (r.centre*(r.kR-r.kL) + o.centre*(o.kR-o.kL)) / (o.kR - r.kL)}
}

// meets is when the shocks of two neighbouring rises are at the same place.
func (r rise) meets(o rise, vf, kj float64) float64 {
	return (o.centre - r.centre) / (vf * (o.kR - r.kL) / kj)
}

// mergeNext joins the two neighbours that meet first and returns when and where.
func mergeNext(rises []rise, vf, kj float64) (after []rise, time, place float64) {
	first := 0
	for i := 1; i+1 < len(rises); i++ {
		if rises[i].meets(rises[i+1], vf, kj) < rises[first].meets(rises[first+1], vf, kj) {
			first = i
		}
	}
	time = rises[first].meets(rises[first+1], vf, kj)
	place = rises[first].place(vf, kj, time)
	after = append(append([]rise{}, rises[:first]...), rises[first].and(rises[first+1]))
	return append(after, rises[first+2:]...), time, place
}

// staircase is a random profile of ramps with level stretches between them, so long that every ramp focuses
// before its shock meets another.
func staircase(random *rand.Rand, vf, kj float64, ramps int) (profile []solver.ProfilePiece, rises []rise, breaking float64) {
	levels := make([]float64, ramps+1)
	levels[0] = 0.2 * kj * random.Float64()
	for i := 1; i <= ramps; i++ {
		levels[i] = levels[i-1] + (kj-levels[i-1])*(0.1+0.4*random.Float64())
	}
	const longest = 200.0
	x := 0.0
	profile = append(profile, flat(-60000, 0, levels[0]))
	for i := range ramps {
		width := longest * (0.2 + 0.8*random.Float64())
		time := width / (2 * vf * (levels[i+1] - levels[i]) / kj)
		profile = append(profile, ramp(x, x+width, levels[i], levels[i+1]))
		rises = append(rises, rise{levels[i], levels[i+1], x + width/2})
		x += width
		gap := 4 * longest * (5 + 5*random.Float64())
		profile = append(profile, flat(x, x+gap, levels[i+1]))
		x += gap
		breaking = max(breaking, time)
	}
	profile[len(profile)-1].End = 90000
	return profile, rises, breaking
}

func TestShocksOfSeveralRampsMerge(t *testing.T) {
	const seed, horizon = 20261202, 2000.0
	random := rand.New(rand.NewPCG(seed, 2))
	profiles := 0
	for range 200 {
		vf, kj := 10+30*random.Float64(), 0.1+0.4*random.Float64()
		profile, rises, breaking := staircase(random, vf, kj, 2+random.IntN(4))
		if _, first, _ := mergeNext(rises, vf, kj); first < breaking {
			continue // a shock would run into a ramp that still focuses: another test
		}
		profiles++
		s := answerOf(t, openRoad(greenshields(t, vf, kj), horizon, profile...))
		checkMerging(t, s, rises, vf, kj, breaking, horizon)
		if t.Failed() {
			t.Fatalf("seed %d, profile %d: vf %g, kj %g, %+v", seed, profiles, vf, kj, profile)
		}
	}
	if profiles < 50 {
		t.Errorf("only %d profiles tested", profiles)
	}
}

// checkMerging looks half-way between each meeting and the next, and at each meeting, until the horizon.
func checkMerging(t *testing.T, s *solver.Solution, rises []rise, vf, kj, now, horizon float64) {
	t.Helper()
	for len(rises) > 1 {
		after, time, place := mergeNext(rises, vf, kj)
		checkRises(t, s, rises, vf, kj, (now+min(time, horizon))/2)
		if time > horizon {
			return
		}
		shockBorn(t, s, place, time, 10000, 1000)
		rises, now = after, time
	}
	checkRises(t, s, rises, vf, kj, (now+horizon)/2)
}

// checkRises compares the shocks of a solution with those of the rises, one by one.
func checkRises(t *testing.T, s *solver.Solution, rises []rise, vf, kj, time float64) {
	t.Helper()
	if n := countShocks(s, time); n != len(rises) {
		t.Errorf("%d shocks at %g s, want %d", n, time, len(rises))
	}
	for _, r := range rises {
		f := jumpBetween(t, s, time, r.kL, r.kR)
		agreeOn(t, "place", f.Position(time), r.place(vf, kj, time), 1000)
	}
}
