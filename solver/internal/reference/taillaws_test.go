package reference

import (
	"math"
	"testing"
)

// TestRedGreenNumbers: 60 km/h, 120 and 30 veh/km, red 30 s (checks.md P19, closed form; the numbers there were
// verified with an independent Lax-Hopf minimisation).
func TestRedGreenNumbers(t *testing.T) {
	r := RedGreen{FreeSpeed: 60 / 3.6, JamDensity: 0.12, Arriving: 0.03, Red: 30}
	furthestAt, furthest := r.Furthest()
	for name, v := range map[string][2]float64{
		"start wave meets tail": {r.Meets(), 10},
		"where":                 {r.Tail(10), -500.0 / 3},
		"furthest at":           {furthestAt, 22.5},
		"furthest":              {furthest, -187.5},
		"tail there":            {r.Tail(22.5), -187.5},
		"tail at 45 s":          {r.Tail(45), 750*0.5 - 1000.0/30*math.Sqrt(0.1875*30*45)},
		"clears":                {r.Clears(), 90},
		"tail at clearing":      {r.Tail(90), 0},
	} {
		if math.Abs(v[0]-v[1]) > 1e-11 {
			t.Errorf("%s = %.12g, want %.12g", name, v[0], v[1])
		}
	}
	if x := r.Tail(45); math.Abs(x+155.3301) > 5e-5 {
		t.Errorf("tail at 45 s = %g m, printed as -155.3301", x)
	}
}

// TestRedGreenIsContinuous: the shock's straight part and its square-root part meet.
func TestRedGreenIsContinuous(t *testing.T) {
	r := RedGreen{FreeSpeed: 14, JamDensity: 0.15, Arriving: 0.05, Red: 40}
	before, after := r.Tail(r.Meets()*(1-1e-15)), r.Tail(r.Meets()*(1+1e-15))
	if math.Abs(before-after) > 1e-10 {
		t.Errorf("tail jumps from %g to %g", before, after)
	}
}
