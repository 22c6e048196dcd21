package service

import (
	"math"
	"slices"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
	"github.com/roadswell/roadswell/solver"
)

var frontKinds = map[solver.FrontKind]pb.FrontKind{
	solver.Shock: pb.FrontKind_FRONT_KIND_SHOCK, solver.Contact: pb.FrontKind_FRONT_KIND_CONTACT,
	solver.Edge: pb.FrontKind_FRONT_KIND_EDGE,
}

var frontEnds = map[solver.FrontEnd]pb.FrontEnd{
	solver.AtHorizon: pb.FrontEnd_FRONT_END_AT_HORIZON, solver.Merged: pb.FrontEnd_FRONT_END_MERGED,
	solver.AtNode: pb.FrontEnd_FRONT_END_AT_NODE,
}

func (a *answerer) fronts(q *pb.FrontsQuestion) (*pb.Answer_Fronts, error) {
	out := &pb.FrontsAnswer{}
	for _, f := range a.solution.Fronts() {
		if len(q.GetKinds()) > 0 && !slices.Contains(q.GetKinds(), frontKinds[f.Kind]) {
			continue
		}
		found := a.front(f, tolerance(q.PathToleranceM))
		if err := a.spend(found); err != nil {
			return nil, err
		}
		out.Fronts = append(out.Fronts, found)
	}
	return &pb.Answer_Fronts{Fronts: out}, nil
}

func (a *answerer) front(f solver.Front, within float64) *pb.Front {
	out := &pb.Front{
		Id: int64(f.ID), Kind: frontKinds[f.Kind], Segment: a.corridor.GetStretches()[f.Segment].GetName(),
		Birth: point(f.Birth), End: point(f.End), EndsBy: frontEnds[f.EndsBy], Straight: f.Straight,
		AtBirth: sides(f, f.Birth.Time), AtEnd: sides(f, f.End.Time),
	}
	if f.EndsBy == solver.Merged && f.Into >= 0 {
		into := int64(f.Into)
		out.MergedInto = &into
	}
	if f.Straight {
		out.Path = path([]solver.Point{f.Birth, f.End}, 0)
	} else {
		out.Path = path(f.Points(within), within)
		law := f.Law()
		out.Law = &pb.FrontLaw{Upstream: profileLaw(law.Up), Downstream: profileLaw(law.Down)}
	}
	return out
}

func profileLaw(p solver.ProfileLaw) *pb.ProfileLaw {
	uniform := math.IsInf(p.Spread, 0)
	return &pb.ProfileLaw{
		DensityVehPerKm: densityFromSI(p.Density), WaveSpeedKmPerH: speedFromSI(p.WaveSpeed), PassingFlowVehPerH: flowFromSI(p.Passing),
		SpreadKm2PerVeh: present(spreadFromSI(p.Spread), !uniform), SpreadRateKm2PerVehH: present(spreadRateFromSI(p.Curvature), !uniform),
	}
}

func sides(f solver.Front, t float64) *pb.FrontSides {
	up, down := f.Sides(t)
	return &pb.FrontSides{Upstream: state(up), Downstream: state(down), FrontSpeedKmPerH: speedFromSI(f.Speed(t))}
}
