package service

import (
	"context"
	"fmt"

	"google.golang.org/protobuf/proto"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
	"github.com/roadswell/roadswell/solver"
)

// answerer answers the questions of one call from one solution.
type answerer struct {
	ctx      context.Context // of the call; kept because an answerer lives no longer than its call
	request  *pb.SolveRequest
	solution *solver.Solution
	corridor *pb.Corridor
	spent    int // bytes of the response so far
	most     int // bytes that the response may have
}

func (a *answerer) answer(q *pb.Question) (*pb.Answer, error) {
	out := &pb.Answer{Label: q.GetLabel()}
	var err error
	switch x := q.GetAsk().(type) {
	case *pb.Question_States:
		out.Found, err = a.states(x.States)
	case *pb.Question_Grid:
		out.Found, err = a.grid(x.Grid)
	case *pb.Question_Fronts:
		out.Found, err = a.fronts(x.Fronts)
	case *pb.Question_Queues:
		out.Found, err = a.queues(x.Queues)
	case *pb.Question_Trajectories:
		out.Found, err = a.trajectories(x.Trajectories)
	case *pb.Question_TravelTimes:
		out.Found, err = a.travelTimes(x.TravelTimes)
	case *pb.Question_Characteristics:
		out.Found, err = a.characteristics(x.Characteristics)
	case *pb.Question_Totals:
		out.Found, err = a.totals(x.Totals)
	case *pb.Question_Cycles:
		out.Found, err = a.cycles(x.Cycles)
	}
	return out, err
}

// spend accounts for a part of the response, and gives up when it grows too large or the call is over.
func (a *answerer) spend(part proto.Message) error { return a.spendBytes(proto.Size(part)) }

func (a *answerer) spendBytes(n int) error {
	if err := a.ctx.Err(); err != nil {
		return refuse(a.request, err)
	}
	if a.spent += n; a.spent > a.most {
		return tooLarge(a.most)
	}
	return nil
}

// failed maps an error of the solution's questions. What a caller can get wrong was checked before.
func (a *answerer) failed(err error) error { return refuse(a.request, err) }

// notFinite is the last line of defence: an answer is withheld rather than sent with a number that is none.
func notFinite(broken *violations) error {
	return fmt.Errorf("answer withheld: %s is %s: %w", broken.list[0].field, broken.list[0].value, errFault)
}

func state(s solver.State) *pb.State {
	return &pb.State{
		DensityVehPerKm: densityFromSI(s.Density), FlowVehPerH: flowFromSI(s.Flow), SpeedKmPerH: speedFromSI(s.Speed),
		Congested: s.Congested,
	}
}

func point(p solver.Point) *pb.PlaceTime { return &pb.PlaceTime{PlaceM: p.Place, TimeS: p.Time} }

// path converts points that stand for a line to within the tolerance.
func path(points []solver.Point, tolerance float64) *pb.Path {
	out := &pb.Path{
		TimesS: make([]float64, len(points)), PlacesM: make([]float64, len(points)), ToleranceM: tolerance,
	}
	for i, p := range points {
		out.TimesS[i], out.PlacesM[i] = p.Time, p.Place
	}
	return out
}

// times are those asked for, or the fallback.
func times(asked []float64, fallback float64) []float64 {
	if len(asked) == 0 {
		return []float64{fallback}
	}
	return asked
}
