package service

import (
	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
	"github.com/roadswell/roadswell/solver"
)

func (a *answerer) queues(q *pb.QueuesQuestion) (*pb.Answer_Queues, error) {
	out := &pb.QueuesAnswer{}
	for _, node := range a.askedNodes(q.GetNodes()) {
		found, err := a.nodeQueues(q, node)
		if err != nil {
			return nil, err
		}
		if err := a.spend(found); err != nil {
			return nil, err
		}
		out.Nodes = append(out.Nodes, found)
	}
	return &pb.Answer_Queues{Queues: out}, nil
}

// askedNodes are the nodes of the given names, all of them where none is named.
func (a *answerer) askedNodes(names []string) []*pb.Node {
	if len(names) == 0 {
		return a.corridor.GetNodes()
	}
	byName := map[string]*pb.Node{}
	for _, n := range a.corridor.GetNodes() {
		byName[n.GetName()] = n
	}
	out := make([]*pb.Node, len(names))
	for i, name := range names {
		out[i] = byName[name]
	}
	return out
}

func (a *answerer) nodeQueues(q *pb.QueuesQuestion, node *pb.Node) (*pb.NodeQueues, error) {
	out := &pb.NodeQueues{Node: node.GetName(), PlaceM: node.GetPlaceM()}
	episodes, err := a.solution.Queues(node.GetName())
	if err != nil {
		return nil, a.failed(err)
	}
	for _, e := range episodes {
		out.Queues = append(out.Queues, queue(e, q))
	}
	for _, t := range q.GetTimesS() {
		extent, err := a.solution.QueueAt(node.GetName(), t)
		if err != nil {
			return nil, a.failed(err)
		}
		out.Extents = append(out.Extents, queueExtent(extent, t))
	}
	for _, x := range q.GetPlacesM() {
		t, reached, err := a.solution.QueueReaches(node.GetName(), x)
		if err != nil {
			return nil, a.failed(err)
		}
		out.Reaches = append(out.Reaches, &pb.QueueReach{PlaceM: x, TimeS: present(t, reached)})
	}
	return out, nil
}

// present is a number that is absent where it has no meaning.
func present(x float64, ok bool) *float64 {
	if !ok {
		return nil
	}
	return &x
}

func queue(e solver.Queue, q *pb.QueuesQuestion) *pb.Queue {
	out := &pb.Queue{
		StartS: e.Start, ClearedS: present(e.End, e.Cleared),
		PeakLengthM: e.PeakLength, PeakLengthTimeS: e.PeakLengthTime,
		PeakVehicles: e.PeakVehicles, PeakVehiclesTimeS: e.PeakVehiclesTime,
	}
	if q.GetWithPaths() {
		within := tolerance(q.PathToleranceM)
		out.Tail = path(e.TailPoints(within), within)
		for _, strip := range e.Strips(within) {
			out.Strips = append(out.Strips, &pb.StripPath{Tail: path(strip.Tail, within), Head: path(strip.Head, within)})
		}
	}
	return out
}

func queueExtent(e solver.QueueState, t float64) *pb.QueueExtent {
	out := &pb.QueueExtent{TimeS: t, Present: e.Present}
	if !e.Present {
		return out
	}
	out.TailM, out.HeadM = &e.Tail, &e.Head
	out.LengthM, out.Vehicles = e.Length, e.Vehicles
	for _, s := range e.Strips {
		out.Strips = append(out.Strips, &pb.QueueStrip{TailM: s.Tail, HeadM: s.Head, Vehicles: s.Vehicles})
	}
	return out
}
