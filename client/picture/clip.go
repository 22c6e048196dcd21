package picture

// window is the visible part of the time-space plane, in s and m.
type window struct{ t0, t1, x0, x1 float64 }

func (d Diagram) window() window { return window{0, d.Horizon, d.Entry, d.Exit} }

// holds tells whether a place is visible.
func (w window) holds(place float64) bool { return place >= w.x0 && place <= w.x1 }

// clip returns the parts of the path inside the window, each with at least two points.
func (w window) clip(path Path) []Path {
	var parts []Path
	joined := false // the last part may be continued by the next segment
	for i := 1; i < len(path); i++ {
		p, q, ok := w.segment(path[i-1], path[i])
		if !ok {
			joined = false
			continue
		}
		if !joined {
			parts = append(parts, Path{p})
		}
		last := len(parts) - 1
		parts[last] = append(parts[last], q)
		joined = q == path[i]
	}
	return parts
}

// clipAll clips each of the paths.
func (w window) clipAll(paths []Path) []Path {
	var parts []Path
	for _, p := range paths {
		parts = append(parts, w.clip(p)...)
	}
	return parts
}

// segment cuts one straight piece to the window (the method of Liang and Barsky, 1984:
// shrink the parameter range [a, b] by one border after another). A piece of no
// length, or one that only touches the window in a point, is not visible.
func (w window) segment(p, q Point) (from, to Point, visible bool) {
	dt, dx := q.Time-p.Time, q.Place-p.Place
	a, b := 0.0, 1.0
	borders := [4][2]float64{
		{-dt, p.Time - w.t0}, {dt, w.t1 - p.Time},
		{-dx, p.Place - w.x0}, {dx, w.x1 - p.Place},
	}
	for _, s := range borders {
		outward, room := s[0], s[1]
		switch {
		case outward == 0 && room < 0:
			return p, q, false
		case outward < 0:
			a = max(a, room/outward)
		case outward > 0:
			b = min(b, room/outward)
		}
	}
	return between(p, q, a), between(p, q, b), a < b && p != q
}

// between returns the point at share u of the way, the ends exactly at 0 and 1.
func between(p, q Point, u float64) Point {
	switch u {
	case 0:
		return p
	case 1:
		return q
	}
	return Point{p.Time + u*(q.Time-p.Time), p.Place + u*(q.Place-p.Place)}
}

// period cuts [start, end] to the time axis; false when nothing of it is visible.
func (w window) period(start, end float64) (float64, float64, bool) {
	start, end = max(start, w.t0), min(end, w.t1)
	return start, end, start < end
}
