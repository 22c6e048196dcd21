package main

import (
	"fmt"
	"strings"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
)

// answerText is the answer to a question of the file.
func answerText(a *pb.Answer) string {
	switch found := a.GetFound().(type) {
	case *pb.Answer_Queues:
		return queuesText(found.Queues)
	case *pb.Answer_TravelTimes:
		return travelTimesText(found.TravelTimes)
	case *pb.Answer_Totals:
		return totalsText(found.Totals)
	case *pb.Answer_Cycles:
		return cyclesText(found.Cycles)
	case *pb.Answer_States:
		return statesText(found.States)
	case *pb.Answer_Grid:
		return fmt.Sprintf("  A grid of %d places and %d times: see it with --json.\n", len(found.Grid.GetPlacesM()), len(found.Grid.GetTimesS()))
	case *pb.Answer_Fronts:
		return frontsText(found.Fronts)
	case *pb.Answer_Trajectories:
		return trajectoriesText(found.Trajectories)
	case *pb.Answer_Characteristics:
		return characteristicsText(found.Characteristics)
	}
	return "  An answer that this version of the program cannot print: see it with --json.\n"
}

func cyclesText(a *pb.CyclesAnswer) string {
	var t table
	t.row("signal", "red", "green", "end", "back of queue", "at", "residual queue", "served", "departed", "delay veh-h")
	for _, s := range a.GetSignals() {
		for _, c := range s.GetCycles() {
			residual, served := none, "part of a cycle"
			if c.ResidualVehicles != nil {
				residual, served = grouped(c.GetResidualVehicles(), 1), "all"
			}
			if c.GetResidualVehicles() > 0 {
				served = "cycle failure"
			}
			t.row(s.GetSignal(), clock(c.GetStartS()), clock(c.GetGreenStartS()), clock(c.GetGreenEndS()), length(c.GetBackOfQueueM()),
				clockOr(c.BackOfQueueTimeS, none), residual, served, grouped(c.GetDepartedVehicles(), 1), grouped(c.GetDelayVehicleH(), 2))
		}
	}
	if len(t.rows) == 1 {
		return "  The scenario has no signals.\n"
	}
	return t.String()
}

func statesText(a *pb.StatesAnswer) string {
	var t table
	t.row("place", "time", "side", "veh/km", "veh/h", "km/h", "state", "count")
	for _, p := range a.GetPoints() {
		up, down := p.GetUpstream(), p.GetDownstream()
		if up.GetDensityVehPerKm() == down.GetDensityVehPerKm() && up.GetFlowVehPerH() == down.GetFlowVehPerH() {
			stateRow(&t, p, "both", up)
			continue
		}
		stateRow(&t, p, "upstream", up)
		stateRow(&t, p, "downstream", down)
	}
	return t.String()
}

func stateRow(t *table, p *pb.PointState, side string, s *pb.State) {
	branch := "free"
	if s.GetCongested() {
		branch = "congested"
	}
	t.row(place(p.GetAt().GetPlaceM()), clock(p.GetAt().GetTimeS()), side, grouped(s.GetDensityVehPerKm(), 2),
		grouped(s.GetFlowVehPerH(), 1), grouped(s.GetSpeedKmPerH(), 1), branch, grouped(p.GetCountVeh(), 1))
}

// frontsListed is how many fronts are listed; an arterial has thousands.
const frontsListed = 40

func frontsText(a *pb.FrontsAnswer) string {
	var t table
	t.row("front", "kind", "segment", "born", "at", "ends", "at", "by", "into")
	for i, f := range a.GetFronts() {
		if i == frontsListed {
			return t.String() + fmt.Sprintf("  and %d more: see them with --json.\n", len(a.GetFronts())-i)
		}
		into := none
		if f.MergedInto != nil {
			into = fmt.Sprint(f.GetMergedInto())
		}
		t.row(fmt.Sprint(f.GetId()), word(f.GetKind().String(), "FRONT_KIND_"), f.GetSegment(),
			place(f.GetBirth().GetPlaceM()), clock(f.GetBirth().GetTimeS()), place(f.GetEnd().GetPlaceM()), clock(f.GetEnd().GetTimeS()),
			word(f.GetEndsBy().String(), "FRONT_END_"), into)
	}
	return t.String()
}

// word makes the name of an enum value readable.
func word(name, prefix string) string {
	return strings.ToLower(strings.ReplaceAll(strings.TrimPrefix(name, prefix), "_", " "))
}

func trajectoriesText(a *pb.TrajectoriesAnswer) string {
	var t table
	t.row("from", "at", "to", "at", "left the corridor", "passes")
	for _, tr := range a.GetTrajectories() {
		left := "no"
		if tr.GetLeftCorridor() {
			left = "yes"
		}
		t.row(place(tr.GetStart().GetPlaceM()), clock(tr.GetStart().GetTimeS()), place(tr.GetEnd().GetPlaceM()),
			clock(tr.GetEnd().GetTimeS()), left, passings(tr.GetPassings()))
	}
	return t.String()
}

func passings(list []*pb.Passing) string {
	if len(list) == 0 {
		return none
	}
	words := make([]string, len(list))
	for i, p := range list {
		words[i] = place(p.GetPlaceM()) + " " + clockOr(p.TimeS, "never")
	}
	return strings.Join(words, ", ")
}

func characteristicsText(a *pb.CharacteristicsAnswer) string {
	var t table
	t.row("from", "at", "to", "at", "ends by")
	for _, c := range a.GetCharacteristics() {
		times, places := c.GetPath().GetTimesS(), c.GetPath().GetPlacesM()
		if len(times) == 0 || len(times) != len(places) {
			continue
		}
		last := len(times) - 1
		t.row(place(places[0]), clock(times[0]), place(places[last]), clock(times[last]), word(c.GetEndsBy().String(), "FRONT_END_"))
	}
	return t.String()
}
