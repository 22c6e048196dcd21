package service

import (
	"context"
	"errors"
	"os"
	"path/filepath"
	"testing"
	"time"

	"google.golang.org/protobuf/encoding/protojson"
	"google.golang.org/protobuf/proto"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
)

// slowest is far more than an input may take, machines under load included.
const slowest = 10 * time.Second

// fuzzLimits keep one input quick.
var fuzzLimits = Limits{Interactions: 20_000, SolutionBytes: 32 << 20, Items: 2000, AnswerBytes: 4 << 20, Time: 2 * time.Second}

// FuzzSolve sends whatever bytes are a message of the contract. No input may panic (nothing recovers here), outlive its
// time, be answered with a number that is none, or be refused without a reason.
func FuzzSolve(f *testing.F) {
	for _, text := range append(demoTexts(f), everything) {
		f.Add(wire(f, text))
	}
	corridor, err := NewCorridor(fuzzLimits)
	if err != nil {
		f.Fatal(err)
	}
	f.Fuzz(func(t *testing.T, message []byte) {
		req := &pb.SolveRequest{}
		if proto.Unmarshal(message, req) != nil {
			return // no message of the contract
		}
		if len(req.GetQuestions()) == 0 && len(message) < 1<<16 {
			askEverything(req)
		}
		begin := time.Now()
		out, err := corridor.Solve(context.Background(), req)
		if took := time.Since(begin); took > slowest {
			t.Errorf("took %s", took)
		}
		switch {
		case errors.Is(err, errFault):
			t.Errorf("%v", err)
		case err != nil && (reasonOf(err) == "" || reasonOf(err) == "INTERNAL_ERROR"):
			t.Errorf("refused without a reason: %v", err)
		case err == nil && len(out.GetAnswers()) != len(req.GetQuestions()):
			t.Errorf("%d answers to %d questions", len(out.GetAnswers()), len(req.GetQuestions()))
		}
	})
}

// askEverything adds a question of each kind, at places and times that exist whenever the scenario is sound.
func askEverything(req *pb.SolveRequest) {
	s := req.GetScenario()
	entry, exit := s.GetOriginM(), s.GetOriginM()
	for _, g := range s.GetSegments() {
		exit += g.GetLengthM()
	}
	end, middle := s.GetHorizonS(), entry+(exit-entry)/2
	points := []*pb.PlaceTime{{PlaceM: entry}, {PlaceM: middle, TimeS: end / 3}, {PlaceM: exit, TimeS: end}}
	places, times := []float64{entry, middle, exit}, []float64{0, end / 2, end}
	req.Questions = []*pb.Question{
		{Ask: &pb.Question_States{States: &pb.StatesQuestion{Points: points}}},
		{Ask: &pb.Question_Grid{Grid: &pb.GridQuestion{PlacesM: places, TimesS: times}}},
		{Ask: &pb.Question_Fronts{Fronts: &pb.FrontsQuestion{}}},
		{Ask: &pb.Question_Queues{Queues: &pb.QueuesQuestion{TimesS: times, PlacesM: places, WithPaths: true}}},
		{Ask: &pb.Question_Trajectories{Trajectories: &pb.TrajectoriesQuestion{Starts: points, PassingPlacesM: places}}},
		{Ask: &pb.Question_TravelTimes{TravelTimes: &pb.TravelTimesQuestion{DeparturesS: times}}},
		{Ask: &pb.Question_Characteristics{Characteristics: &pb.CharacteristicsQuestion{Starts: points}}},
		{Ask: &pb.Question_Totals{Totals: &pb.TotalsQuestion{TimesS: times}}},
		{Ask: &pb.Question_Cycles{Cycles: &pb.CyclesQuestion{}}},
	}
}

func demoTexts(t testing.TB) []string {
	t.Helper()
	names, err := filepath.Glob("../testdata/demo/*.json")
	if err != nil || len(names) == 0 {
		t.Fatalf("no demos: %v", err)
	}
	out := make([]string, len(names))
	for i, name := range names {
		text, err := os.ReadFile(name)
		if err != nil {
			t.Fatal(err)
		}
		out[i] = string(text)
	}
	return out
}

// wire is the binary form of a request without its questions.
func wire(t testing.TB, text string) []byte {
	t.Helper()
	req := &pb.SolveRequest{}
	if err := protojson.Unmarshal([]byte(text), req); err != nil {
		t.Fatal(err)
	}
	req.Questions = nil
	out, err := proto.Marshal(req)
	if err != nil {
		t.Fatal(err)
	}
	return out
}
