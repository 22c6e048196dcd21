package solver

// Scenario is everything that determines the traffic on a one-way corridor from time 0 to Horizon.
// The zero value is not valid; [Solve] and [Scenario.Validate] report all that is wrong at once.
type Scenario struct {
	// Origin is the place of the corridor's entry [m]. Places grow downstream.
	Origin float64
	// Segments are the stretches of road, upstream first; at least one.
	Segments []Segment
	// Bottlenecks restrict the flow at single places, in any order.
	Bottlenecks []Bottleneck
	// Signals are the traffic signals, in any order.
	Signals []Signal
	// Entry is the demand at the upstream end.
	Entry Entry
	// Exit is the downstream end.
	Exit Exit
	// Initial is the traffic at time 0.
	Initial Initial
	// Horizon is the time up to which the scenario is solved [s], greater than 0.
	Horizon float64
}

// Segment is a homogeneous stretch of road.
type Segment struct {
	// Name identifies the segment in answers; must be unique. May be empty: then "segment N", N counted from 1.
	Name string
	// Length [m], greater than 0.
	Length float64
	// Relation between flow and density of all lanes together (see [Relation.Lanes]).
	Relation Relation
}

// Bottleneck is a fixed place whose passing flow is at most Capacity: a lane closure, an incident, a work
// zone, a toll plaza. Capacity 0 is a closure, +Inf no restriction.
type Bottleneck struct {
	// Name identifies the bottleneck; must be unique among all nodes and not empty.
	Name string
	// Place [m], within the corridor; its two ends are allowed.
	Place float64
	// Capacity [veh/s] over time; unrestricted before the schedule's first piece.
	Capacity Schedule
}

// Signal is a traffic signal: the passing flow is 0 in red and at most SaturationFlow in effective green.
type Signal struct {
	// Name identifies the signal; must be unique among all nodes and not empty.
	Name string
	// Place of the stop line [m], within the corridor; its two ends are allowed.
	Place float64
	// SaturationFlow [veh/s] of all lanes, greater than 0; +Inf lets the road's own capacity govern.
	SaturationFlow float64
	// Plan says when it is green.
	Plan Plan
}

// Plan holds the effective greens of a signal.
type Plan struct {
	// Cycle length [s], long enough that all signals together switch at most 1,048,576 times within the horizon.
	// 0 means that Greens are explicit times that do not repeat.
	Cycle float64
	// Offset [s] is the time at which a cycle begins (any cycle; cycles extend in both directions). 0 without Cycle.
	Offset float64
	// Greens are the effective green windows [s], in rising order and not overlapping: within [0, Cycle]
	// relative to the cycle's beginning, or absolute scenario times without Cycle. No greens: always red.
	Greens []Window
}

// Window is a span of time [Start, End) in seconds, End after Start.
type Window struct {
	Start, End float64
}

// Entry is the corridor's upstream end.
type Entry struct {
	// Demand [veh/s] wishing to enter over time; 0 before the schedule's first piece.
	Demand Schedule
	// Excess says what becomes of demand that cannot enter at once.
	Excess Excess
}

// Excess is the fate of demand that cannot enter the corridor at once.
type Excess int

const (
	// Waits in an entry queue outside the corridor, first in, first out.
	Waits Excess = iota
	// TurnsAway means: does not come; it is counted.
	TurnsAway
)

// Exit is the corridor's downstream end.
type Exit struct {
	// Capacity [veh/s] of what follows downstream, over time; empty means free, and it is unrestricted
	// before the schedule's first piece.
	Capacity Schedule
}

// Schedule is a rate over time in pieces: steps (Slope 0) or linear pieces. Times must rise.
type Schedule []SchedulePiece

// SchedulePiece is the rate Rate + Slope*(t-Start) from Start until the next piece's Start (the last: for ever).
type SchedulePiece struct {
	// Start [s].
	Start float64
	// Rate at Start [veh/s].
	Rate float64
	// Slope of the rate [veh/s²]; 0 for a step.
	Slope float64
}

// Initial is the traffic at time 0: a background with standing queues laid over it.
type Initial struct {
	// Profile gives the background density in pieces that cover the corridor without gap or overlap, upstream
	// first. Empty: free flow at BackgroundFlow everywhere.
	Profile []ProfilePiece
	// BackgroundFlow [veh/s] of a free-flow background, used only without Profile; 0 is an empty road.
	BackgroundFlow float64
	// Queues stand behind named nodes, replacing the background there.
	Queues []StandingQueue
}

// ProfilePiece is a stretch of road over which the density of all lanes changes linearly.
type ProfilePiece struct {
	// Start and End place [m], End beyond Start.
	Start, End float64
	// StartDensity and EndDensity [veh/m], within [0, jam density].
	StartDensity, EndDensity float64
}

// StandingQueue is a queue that stands at time 0 from a node upstream. Behind a signal and behind a closed
// bottleneck it is at jam density; behind any other node it is at the congested density whose flow is what
// that node lets pass at time 0 (the least of its capacity and of what the roads on its two sides carry).
// It may reach through several segments, as far as each can carry more than the node passes.
type StandingQueue struct {
	// Node is the name of the node that holds it.
	Node string
	// Vehicles in the queue; exactly one of Vehicles and Length is greater than 0.
	Vehicles float64
	// Length of the queue [m].
	Length float64
}

// Names of the two end nodes where no bottleneck or signal stands there.
const (
	EntryName = "entry"
	ExitName  = "exit"
)
