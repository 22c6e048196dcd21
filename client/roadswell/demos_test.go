package main

import (
	"bytes"
	"os"
	"path/filepath"
	"testing"

	"google.golang.org/protobuf/encoding/protojson"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
)

const demos = "../../testdata/demo/"

// demo reads one of the demos.
func demo(t *testing.T, name string) *pb.SolveRequest {
	t.Helper()
	text, err := os.ReadFile(demos + name)
	if err != nil {
		t.Fatal(err)
	}
	req := &pb.SolveRequest{}
	if err := protojson.Unmarshal(text, req); err != nil {
		t.Fatal(err)
	}
	return req
}

// solveText solves a scenario file through the program and reads the JSON that it prints.
func solveText(t *testing.T, text []byte) *pb.SolveResponse {
	t.Helper()
	printed, err := command(string(text), "solve", "-", "--json")
	if err != nil {
		t.Fatal(err)
	}
	out := &pb.SolveResponse{}
	if err := protojson.Unmarshal([]byte(printed), out); err != nil {
		t.Fatal(err)
	}
	return out
}

// solveDemo solves a demo with the program's own questions in place of the file's.
func solveDemo(t *testing.T, name string) *pb.SolveResponse {
	t.Helper()
	req := demo(t, name)
	req.Questions = nil
	text, err := protojson.Marshal(req)
	if err != nil {
		t.Fatal(err)
	}
	out := solveText(t, text)
	if len(out.GetAnswers()) != reportQuestions {
		t.Fatalf("%d answers, want %d", len(out.GetAnswers()), reportQuestions)
	}
	return out
}

func queuesOf(t *testing.T, out *pb.SolveResponse, node string) []*pb.Queue {
	t.Helper()
	for _, n := range out.GetAnswers()[queuesQuestion].GetQueues().GetNodes() {
		if n.GetNode() == node {
			return n.GetQueues()
		}
	}
	t.Fatalf("no node %q", node)
	return nil
}

// balanced: what was there and what came is what left and what is there, on every stretch.
func balanced(t *testing.T, out *pb.SolveResponse) {
	t.Helper()
	totals := out.GetAnswers()[totalsQuestion].GetTotals().GetTotals()[0]
	for _, s := range append(totals.GetSegments(), totals.GetCorridor()) {
		gap := s.GetInitialVehicles() + s.GetEnteredVehicles() - s.GetLeftVehicles() - s.GetStoredVehicles()
		if gap > 1e-6 || gap < -1e-6 {
			t.Errorf("%s: %g vehicles are missing", s.GetName(), gap)
		}
	}
}

// TestTheExpresswayDemo: the queue of the incident grows back through its segment; the lane drop's queue spreads over the
// segments upstream; both clear.
func TestTheExpresswayDemo(t *testing.T) {
	out := solveDemo(t, "expressway.json")
	balanced(t, out)
	incident := queuesOf(t, out, "incident")
	if len(incident) != 1 || incident[0].GetStartS() != 1800 || incident[0].GetPeakLengthM() < 1000 || incident[0].ClearedS == nil {
		t.Errorf("queue of the incident: %v", incident)
	}
	drop := queuesOf(t, out, "join Long Barn/Quarry Bridge")
	if len(drop) != 1 || drop[0].GetPeakLengthM() < 2600 || drop[0].ClearedS == nil || drop[0].GetClearedS() < incident[0].GetClearedS() {
		t.Errorf("queue of the lane drop: %v", drop)
	}
	trips := out.GetAnswers()[travelTimesQuestion].GetTravelTimes().GetTrips()
	if first := trips[0]; first.GetDelayS() > 1e-6 {
		t.Errorf("the first trip is delayed by %g s", first.GetDelayS())
	}
}

// TestTailsAreDrawnAsFarAsTheyReach: the path of the tail that goes into the picture must reach as far back as the queue
// is said to, over all the segments it spreads through.
func TestTailsAreDrawnAsFarAsTheyReach(t *testing.T) {
	for _, name := range []string{"expressway.json", "arterial.json"} {
		req := &pb.SolveRequest{Questions: []*pb.Question{{Ask: &pb.Question_Queues{Queues: &pb.QueuesQuestion{WithPaths: true}}}}}
		req.Scenario = demo(t, name).GetScenario()
		text, err := protojson.Marshal(req)
		if err != nil {
			t.Fatal(err)
		}
		out := solveText(t, text)
		for _, n := range out.GetAnswers()[0].GetQueues().GetNodes() {
			for _, q := range n.GetQueues() {
				furthest := n.GetPlaceM()
				for _, x := range q.GetTail().GetPlacesM() {
					furthest = min(furthest, x)
				}
				if gap := n.GetPlaceM() - q.GetPeakLengthM() - furthest; gap > 1 || gap < -1 {
					t.Errorf("%s: the queue of %s reaches %g m, its tail path %g m", name, n.GetNode(), n.GetPlaceM()-q.GetPeakLengthM(), furthest)
				}
			}
		}
	}
}

// TestTheArterialDemo: one approach is oversaturated and keeps a queue from cycle to cycle, the others clear theirs.
func TestTheArterialDemo(t *testing.T) {
	out := solveDemo(t, "arterial.json")
	balanced(t, out)
	for _, node := range []string{"Ropewalk", "Cooper Street", "Tidemill"} {
		for _, q := range queuesOf(t, out, node) {
			if q.GetClearedS()-q.GetStartS() > 80 {
				t.Errorf("%s: a queue stands for more than a cycle: %v", node, q)
			}
		}
	}
	longest := 0.0
	for _, q := range queuesOf(t, out, "Harbour Ring") {
		end := 800.0
		if q.ClearedS != nil {
			end = q.GetClearedS()
		}
		longest = max(longest, end-q.GetStartS())
	}
	if longest < 5*80 {
		t.Errorf("the queue at Harbour Ring stands for %g s at most, want five cycles or more", longest)
	}
}

func TestPicturesOfTheDemos(t *testing.T) {
	for _, name := range []string{"expressway.json", "arterial.json"} {
		dir := t.TempDir()
		svg, png := filepath.Join(dir, "x.svg"), filepath.Join(dir, "x.PNG")
		if _, err := command("", "solve", demos+name, "--picture", svg, "--picture", png); err != nil {
			t.Fatal(err)
		}
		for picture, mark := range map[string]string{svg: "<svg", png: "\x89PNG"} {
			text, err := os.ReadFile(picture)
			if err != nil || !bytes.Contains(text[:min(len(text), 400)], []byte(mark)) || len(text) < 10_000 {
				t.Errorf("%s of %s: %d bytes, %v", picture, name, len(text), err)
			}
		}
	}
}
