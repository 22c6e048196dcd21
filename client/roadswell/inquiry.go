package main

import (
	"io"
	"math"

	"google.golang.org/protobuf/proto"

	"github.com/roadswell/roadswell/client/picture"
	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
)

// inquiry is the request that is sent: the file's, and after its questions the program's own.
type inquiry struct {
	request *pb.SolveRequest
	file    string
	asked   int // questions of the file; the program's own come after them
}

// The program's own questions, in this order. Those of the report are asked always, the others for a picture.
const (
	queuesQuestion = iota
	travelTimesQuestion
	totalsQuestion
	reportQuestions // how many the report needs
	gridQuestion    = iota - 1
	frontsQuestion
	trajectoriesQuestion
)

func newInquiry(file scenarioFile, o solveOptions) inquiry {
	a := inquiry{request: proto.CloneOf(file.request), file: file.name, asked: len(file.request.GetQuestions())}
	s := a.request.GetScenario()
	a.ask(&pb.Question{Ask: &pb.Question_Queues{Queues: &pb.QueuesQuestion{WithPaths: len(o.pictures) > 0}}})
	a.ask(&pb.Question{Ask: &pb.Question_TravelTimes{TravelTimes: &pb.TravelTimesQuestion{
		DeparturesS: departures(s.GetHorizonS(), o.every.Seconds()),
	}}})
	a.ask(&pb.Question{Ask: &pb.Question_Totals{Totals: &pb.TotalsQuestion{}}})
	if len(o.pictures) > 0 && exitPlace(s) > s.GetOriginM() && s.GetHorizonS() > 0 {
		a.askForPicture()
	}
	return a
}

func (a *inquiry) ask(q *pb.Question) { a.request.Questions = append(a.request.Questions, q) }

// own is the answer to one of the program's own questions; nil where it was not asked.
func (a inquiry) own(response *pb.SolveResponse, question int) *pb.Answer {
	i := a.asked + question
	if i >= len(response.GetAnswers()) {
		return nil
	}
	return response.GetAnswers()[i]
}

func (a inquiry) print(out io.Writer, response *pb.SolveResponse, asJSON bool) error {
	if asJSON {
		return a.printJSON(out, response)
	}
	_, err := io.WriteString(out, a.report(response))
	return err
}

// dozen is the number of departures that are reported unless the caller says how far apart they are.
const dozen = 12

// departures cover the horizon from its beginning on: as far apart as wanted, or a round time that gives about a dozen.
func departures(horizon, every float64) []float64 {
	if !(horizon > 0) || math.IsInf(horizon, 0) {
		return []float64{0} // the server says what is wrong with it
	}
	if every <= 0 {
		every = roundTime(horizon / dozen)
	}
	var out []float64
	for t := 0.0; t < horizon; t = float64(len(out)) * every {
		out = append(out, t)
	}
	return out
}

// roundTime is the greatest of the usual steps, s, that is not more than t; t itself where all are.
func roundTime(t float64) float64 {
	for _, step := range []float64{7200, 3600, 1800, 1200, 900, 600, 300, 120, 60, 30, 20, 15, 10, 5, 2, 1} {
		if step <= t {
			return step * math.Max(1, math.Floor(t/7200))
		}
	}
	return t
}

// How fine a picture is: the field in columns and rows, paths in metres, and about how many vehicles are traced.
const (
	fieldColumns = 700
	fieldRows    = 400
	pathWithinM  = 2.0
	traced       = 45
	tracedSpeed  = 20.0 // m/s, at which vehicles on the road at time 0 keep about the spacing of those that follow
)

func (a *inquiry) askForPicture() {
	within := pathWithinM
	times, places := extent(a.request.GetScenario()).Cells(fieldColumns, fieldRows)
	a.ask(&pb.Question{Ask: &pb.Question_Grid{Grid: &pb.GridQuestion{
		PlacesM: places, TimesS: times, Quantities: []pb.GridQuantity{pb.GridQuantity_GRID_QUANTITY_DENSITY},
	}}})
	a.ask(&pb.Question{Ask: &pb.Question_Fronts{Fronts: &pb.FrontsQuestion{PathToleranceM: &within}}})
	a.ask(&pb.Question{Ask: &pb.Question_Trajectories{Trajectories: &pb.TrajectoriesQuestion{
		Starts: starts(a.request.GetScenario()), PathToleranceM: &within,
	}}})
}

// extent is an empty picture of the scenario.
func extent(s *pb.Scenario) picture.Diagram {
	return picture.Diagram{Horizon: s.GetHorizonS(), Entry: s.GetOriginM(), Exit: exitPlace(s)}
}

func exitPlace(s *pb.Scenario) float64 {
	x := s.GetOriginM()
	for _, g := range s.GetSegments() {
		x += g.GetLengthM()
	}
	return x
}

// starts spread traced vehicles over the whole road at time 0 and over the entry.
func starts(s *pb.Scenario) []*pb.PlaceTime {
	var out []*pb.PlaceTime
	step, exit := s.GetHorizonS()/traced, exitPlace(s)
	spacing := math.Max(step*tracedSpeed, (exit-s.GetOriginM())/traced)
	for x := exit - spacing; x > s.GetOriginM() && len(out) < traced; x -= spacing {
		out = append(out, &pb.PlaceTime{PlaceM: x})
	}
	for i := range traced {
		out = append(out, &pb.PlaceTime{PlaceM: s.GetOriginM(), TimeS: step * float64(i)})
	}
	return out
}
