package service

import (
	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
	"github.com/roadswell/roadswell/solver"
)

// wholeName is the name of the whole corridor among totals.
const wholeName = "corridor"

func (a *answerer) totals(q *pb.TotalsQuestion) (*pb.Answer_Totals, error) {
	out := &pb.TotalsAnswer{}
	for _, t := range times(q.GetTimesS(), a.corridor.GetHorizonS()) {
		sums, err := a.solution.Totals(t)
		if err != nil {
			return nil, a.failed(err)
		}
		found := &pb.Totals{
			TimeS: t, Corridor: stretchTotals(sums.Totals, wholeName),
			WaitingVehicles: sums.Waiting, WaitingVehicleH: vehicleHours(sums.WaitingTime), TurnedAwayVehicles: sums.TurnedAway,
		}
		for i, s := range sums.Segments {
			found.Segments = append(found.Segments, stretchTotals(s, a.corridor.GetStretches()[i].GetName()))
		}
		if err := a.spend(found); err != nil {
			return nil, err
		}
		out.Totals = append(out.Totals, found)
	}
	return &pb.Answer_Totals{Totals: out}, nil
}

func stretchTotals(t solver.Totals, name string) *pb.StretchTotals {
	return &pb.StretchTotals{
		Name: name, TravelVehicleH: vehicleHours(t.VehicleTime), TravelVehicleKm: vehicleKm(t.VehicleDistance),
		DelayVehicleH: vehicleHours(t.Delay), InitialVehicles: t.Initial, EnteredVehicles: t.Entered,
		LeftVehicles: t.Left, StoredVehicles: t.Stored,
	}
}
