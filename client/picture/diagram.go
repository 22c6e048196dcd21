package picture

// Diagram is everything one picture shows. The zero value is not drawable: Horizon and
// Exit must be set. Every list may be empty.
//
// All numbers must be finite and at most [Reach] in size.
type Diagram struct {
	// Title is the headline; empty leaves it out. Control characters are refused in
	// every text. A text too long for its place is cut and ends in an ellipsis.
	Title string
	// Subtitle is a second, smaller line: scenario, relation, certificate. Empty leaves it out.
	Subtitle string

	// Horizon is the end of the time axis in s; the axis starts at 0. At least 0.001 s.
	// Up to ten minutes the axis reads in seconds, beyond that in minutes.
	Horizon float64
	// Entry and Exit are the ends of the place axis in m, growing with the
	// direction of travel. Exit lies at least 0.001 m beyond Entry.
	Entry, Exit float64

	// Density is the colour field. Its zero value leaves the field and its colour bar out.
	Density Field
	// Fronts are the shocks, contacts and fan edges.
	Fronts []Front
	// Tails are the upstream ends of queues.
	Tails []Tail
	// Trajectories are the paths of single vehicles.
	Trajectories []Path
	// Reds are the periods in which a signal holds traffic at its stop line.
	Reds []Red
	// Restrictions are incidents, works and closures.
	Restrictions []Restriction
	// Nodes are the places named at the right-hand margin.
	Nodes []Node
}

// Field is a density sampled on a rectangular grid. Each sample colours the part of the
// plane that is nearest to it, out to half a grid step beyond the outermost samples; a
// single row or column colours the whole extent in that direction.
type Field struct {
	// Times are the instants of the columns in s, strictly increasing.
	Times []float64
	// Places are the positions of the rows in m, strictly increasing.
	Places []float64
	// Values are the densities in veh/km, not negative: Values[i][j] is at Places[i] and
	// Times[j].
	Values [][]float64
	// Maximum is the density in veh/km that gets the darkest colour, usually the greatest
	// jam density of the corridor. 0 means the largest of Values. Values above it are drawn
	// in the darkest colour, and the colour bar says so.
	Maximum float64
}

// Point is an event in the time-space plane.
type Point struct {
	Time  float64 // s from the start
	Place float64 // m, growing with the direction of travel
}

// Path is a polyline through the time-space plane. Fewer than two points draw nothing.
type Path []Point

// FrontKind tells what a front separates.
type FrontKind int

// The kinds of front. The zero FrontKind is none of them and is refused.
const (
	// Shock is a jump from lower to higher density in the direction of travel.
	Shock FrontKind = iota + 1
	// Contact is a jump that travels unchanged between states of one straight branch.
	Contact
	// Edge is the first or last characteristic of a fan.
	Edge
)

// Front is the course of one front.
type Front struct {
	Kind FrontKind
	Path Path
}

// Tail is the course of the upstream end of a queue.
type Tail struct {
	// Node names the node where the queue formed; may be empty. When all tails
	// of a diagram share one node, the legend names it.
	Node string
	Path Path
}

// Red is one period of red at a stop line.
type Red struct {
	Place float64 // m
	Start float64 // s
	End   float64 // s, not before Start
}

// Restriction is a period of reduced capacity at one place.
type Restriction struct {
	Place float64 // m
	Start float64 // s
	End   float64 // s, not before Start
	// Closed says that nothing passes at all.
	Closed bool
	// Label is written beside the bar, such as "one of three lanes blocked"; may be empty.
	Label string
}

// Node is a named place: a signal, a lane drop, a ramp.
type Node struct {
	Name  string
	Place float64 // m
}

// Cells returns the instants (s) and places (m) at the centres of a regular grid of
// columns by rows over the extent of d, ready for [Field]. About 700 by 400 looks
// sharp at the printed size; more than 1400 by 760 is finer than the picture. Counts below 1 give empty lists.
func (d Diagram) Cells(columns, rows int) (times, places []float64) {
	return centres(0, d.Horizon, columns), centres(d.Entry, d.Exit, rows)
}

// centres cuts [low, high] into n equal cells and returns their midpoints.
func centres(low, high float64, n int) []float64 {
	var mid []float64
	for i := range n {
		mid = append(mid, low+(high-low)*(float64(i)+0.5)/float64(n))
	}
	return mid
}
