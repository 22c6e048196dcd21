package service

import (
	"fmt"
	"math"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
	"github.com/roadswell/roadswell/solver"
)

// capacity converts a schedule of capacities.
func (c *converter) capacity(steps []*pb.CapacityStep, field string) solver.Schedule {
	out := make(solver.Schedule, 0, len(steps))
	for i, s := range steps {
		at := fmt.Sprintf("%s[%d]", field, i)
		piece := solver.SchedulePiece{Start: s.GetStartS()}
		switch limit := s.GetLimit().(type) {
		case *pb.CapacityStep_FlowVehPerH:
			piece.Rate = c.rate(limit.FlowVehPerH, at)
			end := c.stepEnd(i, len(steps), func(j int) float64 { return steps[j].GetStartS() })
			piece.Slope = c.slope(piece, s.EndFlowVehPerH, end, at)
		case *pb.CapacityStep_Unrestricted:
			piece.Rate = c.unrestricted(s, limit.Unrestricted, at)
		default:
			c.bad.required(at, "flow_veh_per_h (0 for a closure), or unrestricted: true")
		}
		out = append(out, piece)
	}
	return out
}

// unrestricted is the rate of a step without limit.
func (c *converter) unrestricted(s *pb.CapacityStep, yes bool, at string) float64 {
	if !yes {
		c.bad.add(at+".unrestricted", pb.FieldReason_FIELD_REASON_RANGE, "false", "true, or flow_veh_per_h in its place")
	}
	if s.EndFlowVehPerH != nil {
		c.bad.add(at+endFlow, pb.FieldReason_FIELD_REASON_CONFLICT, printNumber(s.GetEndFlowVehPerH()),
			"not together with unrestricted")
	}
	return math.Inf(1)
}

// demand converts a schedule of demands.
func (c *converter) demand(steps []*pb.DemandStep, field string) solver.Schedule {
	out := make(solver.Schedule, 0, len(steps))
	for i, s := range steps {
		at := fmt.Sprintf("%s[%d]", field, i)
		piece := solver.SchedulePiece{Start: s.GetStartS(), Rate: c.rate(s.GetFlowVehPerH(), at)}
		end := c.stepEnd(i, len(steps), func(j int) float64 { return steps[j].GetStartS() })
		piece.Slope = c.slope(piece, s.EndFlowVehPerH, end, at)
		out = append(out, piece)
	}
	return out
}

// rate converts the flow at the start of a step. The solver checks it too, but only on a road that is sound.
func (c *converter) rate(flow float64, at string) float64 {
	if flow < 0 {
		c.bad.add(at+startFlow, pb.FieldReason_FIELD_REASON_NOT_NEGATIVE, printNumber(flow), "0 or more")
	}
	return flowToSI(flow)
}

// stepEnd is when step i of n ends: when the next one starts, the last one at the horizon.
func (c *converter) stepEnd(i, n int, start func(int) float64) float64 {
	if i+1 < n {
		return start(i + 1)
	}
	return c.request.GetScenario().GetHorizonS()
}

// slope turns the flow wanted at the end of a step into a slope. Steps out of order are the solver's to report.
func (c *converter) slope(p solver.SchedulePiece, wanted *float64, end float64, at string) float64 {
	if wanted == nil {
		return 0
	}
	field := at + endFlow
	if *wanted < 0 {
		c.bad.add(field, pb.FieldReason_FIELD_REASON_NOT_NEGATIVE, printNumber(*wanted), "0 or more")
	}
	if horizon := c.request.GetScenario().GetHorizonS(); end == horizon && horizon > 0 && p.Start >= end {
		c.bad.add(field, pb.FieldReason_FIELD_REASON_CONFLICT, printNumber(*wanted),
			"absent: this step starts at or after the horizon, so it has no end")
	}
	slope := (flowToSI(*wanted) - p.Rate) / (end - p.Start)
	if !isFinite(slope) {
		return 0
	}
	for slope < 0 && *wanted >= 0 && p.Rate+slope*(end-p.Start) < 0 { // rounding must not take a rate below zero
		slope = math.Nextafter(slope, 0)
	}
	return slope
}
