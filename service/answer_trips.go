package service

import (
	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
	"github.com/roadswell/roadswell/solver"
)

func (a *answerer) trajectories(q *pb.TrajectoriesQuestion) (*pb.Answer_Trajectories, error) {
	out := &pb.TrajectoriesAnswer{}
	within := tolerance(q.PathToleranceM)
	for _, start := range q.GetStarts() {
		tr, err := a.solution.Trajectory(start.GetPlaceM(), start.GetTimeS())
		if err != nil {
			return nil, a.failed(err)
		}
		found := &pb.Trajectory{Start: start, End: point(tr.End), LeftCorridor: tr.Left, Path: path(tr.Points(within), within)}
		for _, x := range q.GetPassingPlacesM() {
			t, passes := tr.PassingTime(x)
			found.Passings = append(found.Passings, &pb.Passing{PlaceM: x, TimeS: present(t, passes)})
		}
		if err := a.spend(found); err != nil {
			return nil, err
		}
		out.Trajectories = append(out.Trajectories, found)
	}
	return &pb.Answer_Trajectories{Trajectories: out}, nil
}

func (a *answerer) travelTimes(q *pb.TravelTimesQuestion) (*pb.Answer_TravelTimes, error) {
	out := &pb.TravelTimesAnswer{FromM: a.corridor.GetEntryM(), ToM: a.corridor.GetExitM()}
	if q.FromM != nil {
		out.FromM = q.GetFromM()
	}
	if q.ToM != nil {
		out.ToM = q.GetToM()
	}
	for _, departure := range q.GetDeparturesS() {
		tt, err := a.solution.TravelTime(out.FromM, out.ToM, departure)
		if err != nil {
			return nil, a.failed(err)
		}
		found := trip(tt, departure)
		instantaneous, moves, err := a.solution.InstantaneousTravelTime(out.FromM, out.ToM, departure)
		if err != nil {
			return nil, a.failed(err)
		}
		found.InstantaneousTimeS = present(instantaneous, moves)
		if err := a.spend(found); err != nil {
			return nil, err
		}
		out.Trips = append(out.Trips, found)
	}
	return &pb.Answer_TravelTimes{TravelTimes: out}, nil
}

func trip(tt solver.TravelTime, departure float64) *pb.Trip {
	return &pb.Trip{
		DepartureS: departure, Arrived: tt.Arrived, ArrivalS: present(tt.Arrival, tt.Arrived),
		TravelTimeS: present(tt.Duration, tt.Arrived), WaitingOutsideS: present(tt.WaitOutside, tt.Arrived),
		FreeFlowTimeS: tt.FreeFlow, DelayS: present(tt.Delay, tt.Arrived),
	}
}

func (a *answerer) characteristics(q *pb.CharacteristicsQuestion) (*pb.Answer_Characteristics, error) {
	out := &pb.CharacteristicsAnswer{}
	for _, start := range q.GetStarts() {
		c, err := a.solution.Characteristic(start.GetPlaceM(), start.GetTimeS())
		if err != nil {
			return nil, a.failed(err)
		}
		found := &pb.Characteristic{Path: path(c.Points, 0), EndsBy: frontEnds[c.EndsBy]}
		if err := a.spend(found); err != nil {
			return nil, err
		}
		out.Characteristics = append(out.Characteristics, found)
	}
	return &pb.Answer_Characteristics{Characteristics: out}, nil
}
