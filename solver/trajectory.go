package solver

import (
	"fmt"
	"math"
	"sort"
)

// Trajectory is the path of a vehicle: a level curve of the count, in closed form between fronts. On an empty
// road it is that of a vehicle at free-flow speed.
type Trajectory struct {
	// Left is true where the vehicle left the corridor at the exit within the horizon.
	Left bool
	// End is the last point: where it left, or where it is at the horizon.
	End Point

	sol  *Solution
	legs []leg
}

// leg is the part of a trajectory within one region.
type leg struct {
	x, t   float64 // its beginning
	end    float64 // time of its end
	region int32
	speed  float64 // of a straight leg
	curved bool
	form   local // the region seen from the beginning
}

func (l *leg) place(t float64) float64 {
	T := t - l.t
	if !l.curved {
		return l.x + l.speed*T
	}
	passed := l.form.r * T
	if passed <= 0 {
		return l.x + l.form.c*T
	}
	// xi²/(2s) + k xi = r T: the root at which the density, the square root here, is positive.
	k := l.form.k
	return l.x + l.form.c*T + 2*passed/(k+math.Sqrt(max(0, k*k+2*passed*l.form.gradient(T))))
}

// Trajectory follows the vehicle that is at place x at time t until it leaves the corridor or the solved time
// ends. On a front it is the vehicle on its downstream side. Errors: *[InvalidError] outside the corridor or
// the solved time.
func (s *Solution) Trajectory(x, t float64) (Trajectory, error) {
	if err := s.checkPoint(x, t); err != nil {
		return Trajectory{}, err
	}
	tr := Trajectory{sol: s}
	_, region, _ := s.locate(x, t)
	n := len(s.nodes) - 1
	if x >= s.nodes[n].x-samePlace {
		tr.Left, tr.End = true, Point{x, t}
		return tr, nil
	}
	w := walker{sol: s, x: x, t: t, region: region}
	for w.t < s.horizon && !w.left {
		if len(tr.legs) > s.mostLegs() {
			return Trajectory{}, fmt.Errorf("solver: fault: the trajectory from (%g, %g) does not end", x, t)
		}
		tr.legs = append(tr.legs, w.step())
	}
	tr.Left, tr.End = w.left, Point{w.x, w.t}
	return tr, nil
}

// mostLegs is more than a trajectory can have: it crosses every front and node at most once, and ends a leg
// without that at most once for each region.
func (s *Solution) mostLegs() int { return len(s.fronts) + len(s.nodes) + 2*len(s.regions) + 8 }

// Position returns the vehicle's place at time t [m]; before its start and after its end the place there.
func (tr Trajectory) Position(t float64) float64 {
	i := sort.Search(len(tr.legs), func(i int) bool { return tr.legs[i].end >= t })
	if i == len(tr.legs) {
		return tr.End.Place
	}
	return tr.legs[i].place(max(t, tr.legs[i].t))
}

// PassingTime returns when the vehicle passes place x [s]; ok is false where it has not by the end, or started
// beyond x. For a place at which it stands for a while it is the time at which it arrives there.
func (tr Trajectory) PassingTime(x float64) (t float64, ok bool) {
	if math.IsNaN(x) || x > tr.End.Place+samePlace {
		return 0, false
	}
	if len(tr.legs) == 0 {
		return tr.End.Time, x >= tr.End.Place-samePlace
	}
	if x < tr.legs[0].x-samePlace {
		return 0, false
	}
	i := sort.Search(len(tr.legs), func(i int) bool { return tr.legs[i].place(tr.legs[i].end) >= x })
	if i == len(tr.legs) {
		return tr.End.Time, true
	}
	l := &tr.legs[i]
	if x <= l.x {
		return l.t, true
	}
	t = l.meets(line{x0: x, t0: l.t}, l.t, l.end, 0)
	return min(t, l.end), true
}

// Points returns points of the path such that straight lines between them stay within tolerance [m] of it.
func (tr Trajectory) Points(tolerance float64) []Point {
	if len(tr.legs) == 0 {
		return []Point{tr.End}
	}
	points := []Point{{tr.legs[0].x, tr.legs[0].t}}
	for i := range tr.legs {
		l := &tr.legs[i]
		switch {
		case l.end <= l.t:
		case l.curved:
			points = appendArc(points, l.place, l.t, l.end, tolerance)
		default:
			points = append(points, Point{l.place(l.end), l.end})
		}
	}
	return points
}
