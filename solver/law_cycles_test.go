package solver_test

import (
	"math"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// TestCyclesAgreeWithQueues: on random corridors the cycles of each signal tile the solved time, what departs adds up to
// the count at the stop line, and the furthest back of queue is the greatest length of any of its queues.
func TestCyclesAgreeWithQueues(t *testing.T) {
	f := features{kinds: allKinds, segments: 3, signals: 3, bottlenecks: 1, steps: true, profile: true, queues: true, exit: true}
	onRandomCorridors(t, f, func(t testing.TB, s *solved) {
		for _, n := range s.Nodes() {
			if n.Kind == solver.SignalNode {
				s.cyclesAgree(t, n)
			}
		}
	})
}

func (s *solved) cyclesAgree(t testing.TB, n solver.NodeInfo) {
	t.Helper()
	cycles, err := s.Cycles(n.Name)
	if err != nil {
		t.Fatal(err)
	}
	end, departed, furthest := 0.0, 0.0, 0.0
	for _, c := range cycles {
		if c.Start != end || c.Green < c.Start || c.End < c.Green {
			t.Errorf("%s: cycle %+v begins where none has ended, at %g s", n.Name, c, end)
		}
		if c.Residual < 0 || c.Delay < 0 || c.BackOfQueue < 0 || c.Departed < -s.count || c.BackOfQueue > 0 && (c.BackOfQueueTime < c.Start || c.BackOfQueueTime > c.End) {
			t.Errorf("%s: %+v", n.Name, c)
		}
		end, departed, furthest = c.End, departed+c.Departed, math.Max(furthest, c.BackOfQueue)
	}
	if end != s.scenario.Horizon {
		t.Errorf("%s: cycles end at %g s", n.Name, end)
	}
	if passed := s.n(t, n.Place, end) - s.n(t, n.Place, 0); math.Abs(passed-departed) > float64(len(cycles)+1)*s.count {
		t.Errorf("%s: %g vehicles departed in cycles, %g passed", n.Name, departed, passed)
	}
	longest := 0.0
	queues, err := s.Queues(n.Name)
	if err != nil {
		t.Fatal(err)
	}
	for _, q := range queues {
		longest = math.Max(longest, q.PeakLength)
	}
	if math.Abs(longest-furthest) > 1e-9*(s.exit()-s.scenario.Origin) {
		t.Errorf("%s: a queue %g m long, but its back is at most %g m", n.Name, longest, furthest)
	}
}
