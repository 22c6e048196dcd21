package service

import (
	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
	"github.com/roadswell/roadswell/solver"
)

func (a *answerer) cycles(q *pb.CyclesQuestion) (*pb.Answer_Cycles, error) {
	out := &pb.CyclesAnswer{}
	for _, node := range a.askedNodes(q.GetSignals()) {
		if node.GetKind() != pb.NodeKind_NODE_KIND_SIGNAL {
			continue // of all nodes, where none is named
		}
		cycles, err := a.solution.Cycles(node.GetName())
		if err != nil {
			return nil, a.failed(err)
		}
		found := &pb.SignalCycles{Signal: node.GetName(), PlaceM: node.GetPlaceM()}
		for _, c := range cycles {
			found.Cycles = append(found.Cycles, cycle(c))
		}
		if err := a.spend(found); err != nil {
			return nil, err
		}
		out.Signals = append(out.Signals, found)
	}
	return &pb.Answer_Cycles{Cycles: out}, nil
}

func cycle(c solver.Cycle) *pb.Cycle {
	return &pb.Cycle{
		StartS: c.Start, GreenStartS: c.Green, GreenEndS: c.End, Complete: c.Complete,
		BackOfQueueM: c.BackOfQueue, BackOfQueueTimeS: present(c.BackOfQueueTime, c.BackOfQueue > 0),
		ResidualVehicles: present(c.Residual, c.Ended), DepartedVehicles: c.Departed, DelayVehicleH: vehicleHours(c.Delay),
	}
}
