package service

import (
	"errors"
	"fmt"
	"math"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
	"github.com/roadswell/roadswell/solver"
)

// converter turns the contract's scenario into the solver's and collects what is wrong on the way.
type converter struct {
	request *pb.SolveRequest
	bad     *violations
}

// scenario converts and validates. Where violations were collected, its result must not be solved.
func (c *converter) scenario() solver.Scenario {
	if c.request.GetScenario() == nil {
		c.bad.required("scenario", "a scenario")
		return solver.Scenario{}
	}
	in := c.request.GetScenario()
	s := solver.Scenario{
		Origin:      in.GetOriginM(),
		Segments:    c.segments(in.GetSegments()),
		Bottlenecks: c.bottlenecks(in.GetBottlenecks()),
		Signals:     c.signals(in.GetSignals()),
		Entry:       c.entry(in.GetEntry()),
		Exit:        solver.Exit{Capacity: c.capacity(in.GetExit().GetCapacity(), "scenario.exit.capacity")},
		Initial:     c.initial(in.GetInitial()),
		Horizon:     in.GetHorizonS(),
	}
	c.validate(s)
	return s
}

// validate adds what the solver finds wrong, in the contract's terms.
func (c *converter) validate(s solver.Scenario) {
	var invalid *solver.InvalidError
	if !errors.As(s.Validate(), &invalid) {
		return
	}
	for _, x := range invalid.Violations {
		field := scenarioField(c.request.GetScenario(), x.Field)
		c.bad.addUnlessKnown(field, string(x.Rule), valueAt(c.request, field), inContractUnits(x.Allowed, field))
	}
}

func (c *converter) segments(in []*pb.Segment) []solver.Segment {
	out := make([]solver.Segment, len(in))
	for i, s := range in {
		field := fmt.Sprintf("scenario.segments[%d]", i)
		out[i] = solver.Segment{Name: s.GetName(), Length: s.GetLengthM(), Relation: c.relation(s, field)}
	}
	return out
}

func (c *converter) bottlenecks(in []*pb.Bottleneck) []solver.Bottleneck {
	out := make([]solver.Bottleneck, len(in))
	for i, b := range in {
		field := fmt.Sprintf("scenario.bottlenecks[%d]", i)
		c.nodeName(b.GetName(), field)
		c.inCorridor(b.GetPlaceM(), field)
		if len(b.GetCapacity()) == 0 {
			c.bad.required(field+".capacity", "at least one step")
		}
		out[i] = solver.Bottleneck{Name: b.GetName(), Place: b.GetPlaceM(), Capacity: c.capacity(b.GetCapacity(), field+".capacity")}
	}
	return out
}

// nodeName keeps the names of the ends for the ends.
func (c *converter) nodeName(name, field string) {
	if name == solver.EntryName || name == solver.ExitName {
		c.bad.add(field+".name", pb.FieldReason_FIELD_REASON_UNIQUE, printText(name), "a name other than those of the corridor's ends")
	}
}

// samePlaceM is within which the solver takes two places for one (package solver, Conventions), m: a bottleneck at an
// exit whose place is a sum of lengths must not fall off the road by a rounding.
const samePlaceM = 1e-6

// inCorridor keeps bottlenecks and signals on the road, where it is known how far that reaches.
func (c *converter) inCorridor(place float64, field string) {
	on := questionChecker{bad: c.bad}
	on.corridor(c.request.GetScenario())
	on.forgive()
	if isFinite(place) && (place < on.entry-samePlaceM || place > on.exit+samePlaceM) {
		on.place(place, field+".place_m")
	}
}

func (c *converter) signals(in []*pb.Signal) []solver.Signal {
	out := make([]solver.Signal, len(in))
	for i, s := range in {
		field := fmt.Sprintf("scenario.signals[%d]", i)
		c.nodeName(s.GetName(), field)
		c.inCorridor(s.GetPlaceM(), field)
		flow := math.Inf(1)
		if s.SaturationFlowVehPerH != nil {
			flow = flowToSI(s.GetSaturationFlowVehPerH())
			if !(flow > 0) {
				c.bad.add(field+".saturation_flow_veh_per_h", pb.FieldReason_FIELD_REASON_POSITIVE,
					printNumber(s.GetSaturationFlowVehPerH()), "more than 0, or absent for the road's own capacity")
			}
		}
		out[i] = solver.Signal{Name: s.GetName(), Place: s.GetPlaceM(), SaturationFlow: flow, Plan: c.plan(s, field)}
	}
	return out
}

func (c *converter) plan(s *pb.Signal, field string) solver.Plan {
	switch p := s.GetPlan().(type) {
	case *pb.Signal_Cycle:
		if p.Cycle.GetCycleS() == 0 { // to the solver, no cycle at all
			c.bad.add(field+".cycle.cycle_s", pb.FieldReason_FIELD_REASON_POSITIVE, "0", "more than 0")
		}
		c.withinCycle(p.Cycle, field+".cycle")
		return solver.Plan{Cycle: p.Cycle.GetCycleS(), Offset: p.Cycle.GetOffsetS(), Greens: windows(p.Cycle.GetGreens())}
	case *pb.Signal_Windows:
		return solver.Plan{Greens: windows(p.Windows.GetGreens())}
	}
	c.bad.required(field, "a plan: cycle or windows")
	return solver.Plan{}
}

// withinCycle says how to give a green that runs over the end of the cycle.
func (c *converter) withinCycle(p *pb.CyclePlan, field string) {
	for i, w := range p.GetGreens() {
		if end := w.GetEndS(); p.GetCycleS() > 0 && end > p.GetCycleS() && isFinite(end) {
			c.bad.add(fmt.Sprintf("%s.greens[%d].end_s", field, i), pb.FieldReason_FIELD_REASON_RANGE, printNumber(end),
				fmt.Sprintf("at most the cycle length, %g s; split a green that runs over the end of the cycle in two, or shift the offset", p.GetCycleS()))
		}
	}
}

func windows(in []*pb.GreenWindow) []solver.Window {
	out := make([]solver.Window, len(in))
	for i, w := range in {
		out[i] = solver.Window{Start: w.GetStartS(), End: w.GetEndS()}
	}
	return out
}

func (c *converter) entry(in *pb.Entry) solver.Entry {
	out := solver.Entry{Demand: c.demand(in.GetDemand(), "scenario.entry.demand")}
	switch in.GetExcess() {
	case pb.ExcessDemand_EXCESS_DEMAND_UNSPECIFIED, pb.ExcessDemand_EXCESS_DEMAND_WAITS:
		out.Excess = solver.Waits
	case pb.ExcessDemand_EXCESS_DEMAND_TURNS_AWAY:
		out.Excess = solver.TurnsAway
	default:
		c.bad.add("scenario.entry.excess", pb.FieldReason_FIELD_REASON_UNKNOWN, fmt.Sprint(int32(in.GetExcess())),
			"EXCESS_DEMAND_WAITS or EXCESS_DEMAND_TURNS_AWAY")
	}
	return out
}

func (c *converter) initial(in *pb.InitialTraffic) solver.Initial {
	const field = "scenario.initial"
	if len(in.GetProfile()) > 0 && in.GetBackgroundFlowVehPerH() != 0 {
		c.bad.add(field+".background_flow_veh_per_h", pb.FieldReason_FIELD_REASON_CONFLICT,
			printNumber(in.GetBackgroundFlowVehPerH()), "absent, because a profile is given")
	}
	out := solver.Initial{BackgroundFlow: flowToSI(in.GetBackgroundFlowVehPerH())}
	for _, p := range in.GetProfile() {
		end := p.GetStartDensityVehPerKm()
		if p.EndDensityVehPerKm != nil {
			end = p.GetEndDensityVehPerKm()
		}
		out.Profile = append(out.Profile, solver.ProfilePiece{
			Start: p.GetStartM(), End: p.GetEndM(),
			StartDensity: densityToSI(p.GetStartDensityVehPerKm()), EndDensity: densityToSI(end),
		})
	}
	names := possibleNodes(c.request.GetScenario())[1:] // no queue stands on the road behind the entry
	for i, q := range in.GetStandingQueues() {
		at := fmt.Sprintf("%s.standing_queues[%d]", field, i)
		c.standingNode(q.GetNode(), names, at)
		out.Queues = append(out.Queues, c.standingQueue(q, at))
	}
	return out
}

// standingQueue checks the size itself, because to the solver a size of zero is one that was not given.
func (c *converter) standingQueue(q *pb.StandingQueue, field string) solver.StandingQueue {
	size, name := 0.0, ""
	switch x := q.GetSize().(type) {
	case *pb.StandingQueue_Vehicles:
		size, name = x.Vehicles, ".vehicles"
	case *pb.StandingQueue_LengthM:
		size, name = x.LengthM, ".length_m"
	default:
		c.bad.required(field, "vehicles or length_m")
	}
	if name != "" && !(size > 0) {
		c.bad.add(field+name, pb.FieldReason_FIELD_REASON_POSITIVE, printNumber(size), "more than 0")
	}
	return solver.StandingQueue{Node: q.GetNode(), Vehicles: q.GetVehicles(), Length: q.GetLengthM()}
}
