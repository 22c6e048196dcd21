package solver

import "math"

// Point is a point of the time-space plane.
type Point struct {
	Place float64 // [m]
	Time  float64 // [s]
}

// maxHalvings bounds how finely a curved path is cut into straight pieces.
const maxHalvings = 16

// appendArc appends points of the path after time a up to and including b, such that straight lines between
// them stay within tolerance [m] of the path. A path between two events bends to one side only, so its middle
// is at least three quarters as far from the chord as any of its points (an arc of a conic); the test asks for
// half of the tolerance there.
func appendArc(points []Point, path func(t float64) float64, a, b, tolerance float64) []Point {
	return halve(points, path, Point{path(a), a}, Point{path(b), b}, tolerance, maxHalvings)
}

func halve(points []Point, path func(t float64) float64, a, b Point, tolerance float64, depth int) []Point {
	t := 0.5 * (a.Time + b.Time)
	m := Point{path(t), t}
	if depth == 0 || math.Abs(m.Place-0.5*(a.Place+b.Place)) <= 0.5*tolerance && flat(path, a, m, b, tolerance) {
		return append(points, b)
	}
	points = halve(points, path, a, m, tolerance, depth-1)
	return halve(points, path, m, b, tolerance, depth-1)
}

// flat looks at the quarter points as well: an arc that starts with a very different slope (a square root at
// its origin) is not judged by its middle alone.
func flat(path func(t float64) float64, a, m, b Point, tolerance float64) bool {
	q, r := 0.5*(a.Time+m.Time), 0.5*(m.Time+b.Time)
	return math.Abs(path(q)-0.75*a.Place-0.25*b.Place) <= 0.5*tolerance &&
		math.Abs(path(r)-0.25*a.Place-0.75*b.Place) <= 0.5*tolerance
}
