package service

import (
	"fmt"
	"time"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
)

// Limits bound what one call may ask for and cost. A limit of 0 means its default.
type Limits struct {
	// MessageBytes is the largest request taken in; default 4 MiB. The transport refuses more.
	MessageBytes int
	// Segments in a scenario; default 1,000.
	Segments int
	// Nodes (bottlenecks and signals) in a scenario; default 1,000.
	Nodes int
	// ListEntries in any one list inside a scenario (steps, greens, corners, profile pieces); default 20,000.
	ListEntries int
	// Questions in a request; default 100.
	Questions int
	// Items (points, grid points, departures, starts, node and time pairs) of all questions together; default
	// 500,000.
	Items int
	// AnswerBytes is the largest response; default 32 MiB.
	AnswerBytes int
	// Interactions is the largest number of wave interactions of one solve; default 5 million.
	Interactions int64
	// SolutionBytes is the largest solution; default 512 MiB.
	SolutionBytes int64
	// Time is the longest that a call may take, whatever deadline the caller set; default 30 s.
	Time time.Duration
}

// withDefaults fills in what was left at zero.
func (l Limits) withDefaults() Limits {
	orDefault(&l.MessageBytes, 4<<20)
	orDefault(&l.Segments, 1000)
	orDefault(&l.Nodes, 1000)
	orDefault(&l.ListEntries, 20_000)
	orDefault(&l.Questions, 100)
	orDefault(&l.Items, 500_000)
	orDefault(&l.AnswerBytes, 32<<20)
	orDefault(&l.Interactions, 5_000_000)
	orDefault(&l.SolutionBytes, 512<<20)
	orDefault(&l.Time, 30*time.Second)
	return l
}

func orDefault[T int | int64 | time.Duration](value *T, fallback T) {
	if *value == 0 {
		*value = fallback
	}
}

// validate names the limits that make no sense.
func (l Limits) validate() error {
	for _, f := range []struct {
		name  string
		value int64
	}{
		{"MessageBytes", int64(l.MessageBytes)}, {"Segments", int64(l.Segments)}, {"Nodes", int64(l.Nodes)},
		{"ListEntries", int64(l.ListEntries)}, {"Questions", int64(l.Questions)}, {"Items", int64(l.Items)},
		{"AnswerBytes", int64(l.AnswerBytes)}, {"Interactions", l.Interactions},
		{"SolutionBytes", l.SolutionBytes}, {"Time", int64(l.Time)},
	} {
		if f.value < 0 {
			return fmt.Errorf("service: limit %s is %d; it must be more than 0, or 0 for its default", f.name, f.value)
		}
	}
	return nil
}

// checkCounts refuses lists that are longer than the limits, before anything is converted.
func (l Limits) checkCounts(req *pb.SolveRequest, v *violations) {
	s := req.GetScenario()
	v.limit("scenario.segments", len(s.GetSegments()), l.Segments)
	v.limit("scenario.bottlenecks", len(s.GetBottlenecks()), l.Nodes)
	v.limit("scenario.signals", len(s.GetSignals()), l.Nodes)
	v.limit("questions", len(req.GetQuestions()), l.Questions)
	v.limit("scenario.entry.demand", len(s.GetEntry().GetDemand()), l.ListEntries)
	v.limit("scenario.exit.capacity", len(s.GetExit().GetCapacity()), l.ListEntries)
	v.limit("scenario.initial.profile", len(s.GetInitial().GetProfile()), l.ListEntries)
	v.limit("scenario.initial.standing_queues", len(s.GetInitial().GetStandingQueues()), l.Nodes)
	for i, seg := range s.GetSegments() {
		v.limit(fmt.Sprintf("scenario.segments[%d].relation.piecewise_linear.corners", i),
			len(seg.GetRelation().GetPiecewiseLinear().GetCorners()), l.ListEntries)
	}
	for i, b := range s.GetBottlenecks() {
		v.limit(fmt.Sprintf("scenario.bottlenecks[%d].capacity", i), len(b.GetCapacity()), l.ListEntries)
	}
	for i, g := range s.GetSignals() {
		v.limit(fmt.Sprintf("scenario.signals[%d].cycle.greens", i), len(g.GetCycle().GetGreens()), l.ListEntries)
		v.limit(fmt.Sprintf("scenario.signals[%d].windows.greens", i), len(g.GetWindows().GetGreens()), l.ListEntries)
	}
}
