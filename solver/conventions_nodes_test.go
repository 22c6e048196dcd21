package solver_test

import (
	"errors"
	"testing"

	"github.com/roadswell/roadswell/solver"
)

// One test for each convention about standing queues, ties and the nodes at the corridor's ends.

// wideningRoad is a lane of exactRoad up to 600 m (0.15 veh/m in a jam), two to 1000 m (0.3), and three beyond; 0.125 veh/s are
// on it. A queue that lets 0.25 veh/s pass has 0.15 - 0.25/5 = 0.1 veh/m on one lane and 0.3 - 0.05 = 0.25 on two.
func wideningRoad(t *testing.T) solver.Scenario {
	t.Helper()
	one, two, three := exactRoad(t, 600), exactRoad(t, 400), exactRoad(t, 500)
	one.Name, two.Name, three.Name = "one", "two", "three"
	two.Relation, three.Relation = two.Relation.Lanes(2), three.Relation.Lanes(3)
	return solver.Scenario{Segments: []solver.Segment{one, two, three}, Horizon: 100,
		Bottlenecks: []solver.Bottleneck{{Name: "works", Place: 800, Capacity: rates(0, 0.25)}},
		Entry:       solver.Entry{Demand: rates(0, 0.125)}, Initial: solver.Initial{BackgroundFlow: 0.125}}
}

// A standing queue has jam density behind a signal, green or not, and behind a closure; behind another bottleneck the
// congested density of what that passes. It may reach over a join, and be given by length or by vehicles.
func TestStandingQueueDensities(t *testing.T) {
	for _, c := range []struct {
		name             string
		change           func(s *solver.Scenario)
		density1         float64 // on one lane
		density2         float64 // on two
		length, vehicles float64
	}{
		{"behind a bottleneck, on its own segment", nil, 0, 0.25, 160, 40},
		{"behind a bottleneck, over the join", nil, 0.1, 0.25, 500, 0.25*200 + 0.1*300},
		{"behind a closure", func(s *solver.Scenario) { s.Bottlenecks[0].Capacity[0].Rate = 0 }, 0.15, 0.3, 500, 0.3*200 + 0.15*300},
		{"behind a bottleneck that is a closure later", func(s *solver.Scenario) { s.Bottlenecks[0].Capacity = rates(-10, 0.25, 50, 0) }, 0.1, 0.25, 500, 0.25*200 + 0.1*300},
		{"behind a red signal", func(s *solver.Scenario) { toSignal(s, 50, 100) }, 0.15, 0.3, 500, 0.3*200 + 0.15*300},
		{"behind a green signal", func(s *solver.Scenario) { toSignal(s, 0, 100) }, 0.15, 0.3, 500, 0.3*200 + 0.15*300},
		{"behind a lane drop", func(s *solver.Scenario) {
			// from two lanes to one at 1000 m: 0.5 veh/s, so 0.3 - 0.1 on the two
			s.Segments[2].Relation = s.Segments[0].Relation
			s.Bottlenecks[0] = solver.Bottleneck{Name: "else", Place: 1200, Capacity: rates(0, infinite)}
		}, 0, 0.2, 100, 20},
	} {
		for _, byLength := range []bool{true, false} {
			s, node, place := wideningRoad(t), "works", 800.0
			if c.change != nil {
				c.change(&s)
			}
			if c.name == "behind a lane drop" {
				node, place = "join two/three", 1000
			}
			q := solver.StandingQueue{Node: node, Length: c.length}
			if !byLength {
				q = solver.StandingQueue{Node: node, Vehicles: c.vehicles}
			}
			s.Initial.Queues = []solver.StandingQueue{q}
			t.Run(c.name, func(t *testing.T) {
				solution := answerOf(t, s)
				stands(t, solution, node, 0, place-c.length, place, c.vehicles)
				agree(t, "density on two lanes", at(t, solution, place-10, 0).Up.Density, c.density2)
				if c.density1 > 0 {
					agree(t, "density on one lane", at(t, solution, 400, 0).Up.Density, c.density1)
				}
				agree(t, "density before its tail", at(t, solution, 290, 0).Up.Density, 0.0125)
			})
		}
	}
}

// toSignal puts a signal in the bottleneck's place, green from start to end.
func toSignal(s *solver.Scenario, start, end float64) {
	s.Signals = []solver.Signal{light("works", s.Bottlenecks[0].Place, start, end)}
	s.Bottlenecks = nil
}

// Where capacity and downstream supply are equal the node governs: the queue that forms is its own. The queue of the
// second node stands at time 0 from 1000 m back to the first at 500 m, with 0.1 veh/m for 0.25 veh/s.
func TestWhereCapacityEqualsSupplyTheNodeGoverns(t *testing.T) {
	scenario := func(capacity float64) solver.Scenario {
		return solver.Scenario{
			Segments:    []solver.Segment{exactRoad(t, 1500)},
			Bottlenecks: []solver.Bottleneck{{Name: "first", Place: 500, Capacity: rates(0, capacity)}, {Name: "second", Place: 1000, Capacity: rates(0, 0.25)}},
			Entry:       solver.Entry{Demand: rates(0, 0.375)},
			Initial:     solver.Initial{BackgroundFlow: 0.375, Queues: []solver.StandingQueue{{Node: "second", Length: 500}}},
			Horizon:     200,
		}
	}
	// 0.375 veh/s run into it: tail at -0.125/(0.1 - 0.0375) = -2 m/s
	tie := answerOf(t, scenario(0.25))
	stands(t, tie, "first", 100, 300, 500, 20)
	stands(t, tie, "second", 100, 500, 1000, 50)
	more := answerOf(t, scenario(0.26))
	noQueue(t, more, "first", 100)
	stands(t, more, "second", 100, 300, 1000, 70)
}

// Where demand and capacity, or demand and supply, are equal there is no queue, though the other side has one: 0.25 veh/s come
// to a queue of that flow, and stay in free flow.
func TestWhereDemandEqualsSupplyNoQueueForms(t *testing.T) {
	s := solver.Scenario{
		Segments:    []solver.Segment{exactRoad(t, 1500)},
		Bottlenecks: []solver.Bottleneck{{Name: "first", Place: 500, Capacity: rates(0, infinite)}, {Name: "second", Place: 1000, Capacity: rates(0, 0.25)}},
		Entry:       solver.Entry{Demand: rates(0, 0.25)},
		Initial:     solver.Initial{BackgroundFlow: 0.25, Queues: []solver.StandingQueue{{Node: "second", Length: 500}}},
		Horizon:     200,
	}
	solution := answerOf(t, s)
	noQueue(t, solution, "first", 150)
	stands(t, solution, "second", 150, 500, 1000, 50)
	agree(t, "density before it", at(t, solution, 490, 150).Down.Density, 0.025)
}

// A node at the entry takes its place: there is no road for a queue, what it holds back waits outside. The entry's
// own name is then that of no node.
func TestNodeAtTheEntry(t *testing.T) {
	s := answerOf(t, closedRoad(t, 300, solver.Bottleneck{Name: "gate", Place: 0, Capacity: rates(0, 0.125, 100, 0.5)}))
	first := s.Nodes()[0]
	if first != (solver.NodeInfo{Name: "gate", Kind: solver.BottleneckNode, Place: 0}) {
		t.Errorf("first node %+v", first)
	}
	if queues := must(s.Queues("gate"))(t); len(queues) != 0 {
		t.Errorf("queues at the gate: %+v", queues)
	}
	// 12.5 wait at 100 s; from then on they go at 0.5 - 0.25 veh/s, gone at 150 s
	all := totals(t, s, 100)
	agree(t, "waiting", all.Waiting, 12.5)
	agree(t, "entered", all.Entered, 12.5)
	agree(t, "waited in all", totals(t, s, 300).WaitingTime, 12.5*150/2)
	var e *solver.InvalidError
	if _, err := s.Queues(solver.EntryName); !errors.As(err, &e) || e.Violations[0].Rule != solver.RuleUnknown {
		t.Errorf("queues at the entry: %v, want an unknown node", err)
	}
}

// A node at the exit takes the exit's place, and its queue stands on the road before it.
func TestNodeAtTheExit(t *testing.T) {
	s := answerOf(t, closedRoad(t, 300, solver.Bottleneck{Name: "gate", Place: 2000, Capacity: rates(0, 0, 100, infinite)}))
	nodes := s.Nodes()
	if last := nodes[len(nodes)-1]; len(nodes) != 2 || last != (solver.NodeInfo{Name: "gate", Kind: solver.BottleneckNode, Place: 2000}) {
		t.Errorf("nodes %+v", nodes)
	}
	stands(t, s, "gate", 130, 1740, 1850, 16.5)
	agree(t, "left by 130 s", totals(t, s, 130).Left, 0.5*30)
}

// A bottleneck at the exit and the exit's own schedule hold both, each where it is the lesser. 0.5 veh/s come; the
// bottleneck passes 0.4 - 0.001 t, the exit 0.3, and 0.1 from 250 s on: 0.3 up to 100 s, the bottleneck's up to
// 250 s (0.15 then), 0.1 from then on. 30 + 150*(0.3 + 0.15)/2 = 63.75 have left by 250 s, 68.75 by 300 s.
func TestExitScheduleAndBottleneckThereCombine(t *testing.T) {
	s := answerOf(t, solver.Scenario{Segments: []solver.Segment{exactRoad(t, 2000)}, Horizon: 300,
		Bottlenecks: []solver.Bottleneck{{Name: "gate", Place: 2000, Capacity: solver.Schedule{{Rate: 0.4, Slope: -0.001}}}},
		Exit:        solver.Exit{Capacity: rates(0, 0.3, 250, 0.1)},
		Entry:       solver.Entry{Demand: rates(0, 0.5)}, Initial: solver.Initial{BackgroundFlow: 0.5}})
	for time, left := range map[float64]float64{50: 15, 100: 30, 200: 30 + 100*0.25, 250: 63.75, 300: 68.75} {
		agree(t, "left", totals(t, s, time).Left, left)
	}
	onlyQueue(t, s, "gate")
}

// Two places closer than a micrometre are one: a signal a hair off the join is the join.
func TestPlacesCloserThanAMicrometreAreOne(t *testing.T) {
	first, second := exactRoad(t, 0.1+0.2), exactRoad(t, 500) // 0.1 + 0.2 is not 0.3
	first.Name, second.Name = "first", "second"
	for _, place := range []float64{0.3, 0.3 + 5e-7, 0.3 - 5e-7} {
		s := answerOf(t, solver.Scenario{Segments: []solver.Segment{first, second}, Horizon: 100,
			Signals: []solver.Signal{light("light", place, 0, 50)}})
		if nodes := s.Nodes(); len(nodes) != 3 || nodes[1].Name != "light" || nodes[1].Kind != solver.SignalNode {
			t.Errorf("nodes %+v, want one at 0.3 m", nodes)
		}
	}
	var e *solver.InvalidError
	err := solver.Scenario{Segments: []solver.Segment{first, second}, Horizon: 100,
		Signals: []solver.Signal{light("light", 0.3+2e-6, 0, 50)}}.Validate()
	if !errors.As(err, &e) || e.Violations[0].Field != "Signals[0].Place" {
		t.Errorf("two micrometres off: %v, want a place that is too near", err)
	}
}
