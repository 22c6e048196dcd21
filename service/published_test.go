package service_test

import (
	"context"
	"math"
	"os"
	"path/filepath"
	"testing"

	"google.golang.org/protobuf/encoding/protojson"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
	"github.com/roadswell/roadswell/service"
)

// The published cases as scenario files: read, sent by the client to a server, solved, and compared with what the
// sources say. The same cases (and more of them) are tests of package solver, in the same words.

const publishedFiles = "../testdata/published"

// publishedCase is one file and what must come of it.
type publishedCase struct {
	file string
	want []expectation
}

// expectation is one number in the answer to the question of a label. Exact values are checked to 1e-9 of
// themselves (of scale where the value is zero); published ones to the tolerance of their last printed digit.
type expectation struct {
	label, what string
	value       func(*pb.Answer) float64
	exact       float64
	scale       float64
	published   float64
	tolerance   float64 // of the published value; 0 where none is printed
}

func TestPublishedCasesThroughTheService(t *testing.T) {
	c := serve(t, service.Options{})
	for _, p := range publishedCases {
		t.Run(p.file, func(t *testing.T) {
			req := readRequest(t, p.file)
			out, err := c.Solve(context.Background(), req)
			if err != nil {
				t.Fatal(err)
			}
			if kind := out.GetCertificate().GetKind(); kind != pb.CertificateKind_CERTIFICATE_KIND_EXACT {
				t.Errorf("certificate %v, want exact", kind)
			}
			for _, e := range p.want {
				e.check(t, answerTo(t, out, e.label))
			}
		})
	}
}

// Each file is in the table, and each question of it is looked at.
func TestEveryPublishedFileIsChecked(t *testing.T) {
	files, err := filepath.Glob(filepath.Join(publishedFiles, "*.json"))
	if err != nil || len(files) < 15 {
		t.Fatalf("%d files (%v)", len(files), err)
	}
	asked := map[string]map[string]bool{}
	for _, p := range publishedCases {
		asked[p.file] = map[string]bool{}
		for _, e := range p.want {
			asked[p.file][e.label] = true
		}
	}
	for _, f := range files {
		name := filepath.Base(f)
		for _, q := range readRequest(t, name).GetQuestions() {
			if !asked[name][q.GetLabel()] {
				t.Errorf("%s: nothing checks the answer to %q", name, q.GetLabel())
			}
		}
	}
}

func readRequest(t *testing.T, file string) *pb.SolveRequest {
	t.Helper()
	text, err := os.ReadFile(filepath.Join(publishedFiles, file))
	if err != nil {
		t.Fatal(err)
	}
	out := &pb.SolveRequest{}
	if err := protojson.Unmarshal(text, out); err != nil {
		t.Fatalf("%s: %v", file, err)
	}
	return out
}

func answerTo(t *testing.T, r *pb.SolveResponse, label string) *pb.Answer {
	t.Helper()
	for _, a := range r.GetAnswers() {
		if a.GetLabel() == label {
			return a
		}
	}
	t.Fatalf("no answer to %q", label)
	return nil
}

func (e expectation) check(t *testing.T, a *pb.Answer) {
	t.Helper()
	got := e.value(a)
	scale := math.Max(e.scale, math.Abs(e.exact))
	if !(math.Abs(got-e.exact) <= 1e-9*scale) {
		t.Errorf("%s: %s = %.12g, want %.12g (off by %.2g)", e.label, e.what, got, e.exact, got-e.exact)
		return
	}
	t.Logf("%s: %s = %.12g, off by %.1e of itself", e.label, e.what, got, (got-e.exact)/scale)
	if e.tolerance > 0 && !(math.Abs(got-e.published) <= e.tolerance) {
		t.Errorf("%s: %s = %.12g, published %g", e.label, e.what, got, e.published)
	}
}

// What to look at in an answer.

func queueOf(value func(*pb.Queue) float64) func(*pb.Answer) float64 {
	return func(a *pb.Answer) float64 {
		return value(a.GetQueues().GetNodes()[0].GetQueues()[0])
	}
}

func extentOf(i int, value func(*pb.QueueExtent) float64) func(*pb.Answer) float64 {
	return func(a *pb.Answer) float64 { return value(a.GetQueues().GetNodes()[0].GetExtents()[i]) }
}

func totalsOf(i int, value func(*pb.Totals) float64) func(*pb.Answer) float64 {
	return func(a *pb.Answer) float64 { return value(a.GetTotals().GetTotals()[i]) }
}

func delayOf(i int) func(*pb.Answer) float64 {
	return totalsOf(i, func(x *pb.Totals) float64 { return x.GetCorridor().GetDelayVehicleH() })
}

func segmentDelayOf(i, segment int) func(*pb.Answer) float64 {
	return totalsOf(i, func(x *pb.Totals) float64 { return x.GetSegments()[segment].GetDelayVehicleH() })
}

func tripOf(i int, value func(*pb.Trip) float64) func(*pb.Answer) float64 {
	return func(a *pb.Answer) float64 { return value(a.GetTravelTimes().GetTrips()[i]) }
}

func frontOf(i int, value func(*pb.Front) float64) func(*pb.Answer) float64 {
	return func(a *pb.Answer) float64 { return value(a.GetFronts().GetFronts()[i]) }
}

func lastFront(value func(*pb.Front) float64) func(*pb.Answer) float64 {
	return func(a *pb.Answer) float64 {
		all := a.GetFronts().GetFronts()
		return value(all[len(all)-1])
	}
}

func upstreamOf(i int, value func(*pb.State) float64) func(*pb.Answer) float64 {
	return func(a *pb.Answer) float64 { return value(a.GetStates().GetPoints()[i].GetUpstream()) }
}

// passedBetween is the difference of the counts at two points.
func passedBetween(i, j int) func(*pb.Answer) float64 {
	return func(a *pb.Answer) float64 {
		p := a.GetStates().GetPoints()
		return p[j].GetCountVeh() - p[i].GetCountVeh()
	}
}

func passingOf(i int) func(*pb.Answer) float64 {
	return func(a *pb.Answer) float64 {
		return a.GetTrajectories().GetTrajectories()[0].GetPassings()[i].GetTimeS()
	}
}
