package service

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"log/slog"
	"net"
	"strings"
	"testing"
	"time"

	"github.com/prometheus/client_golang/prometheus"
	"github.com/prometheus/client_golang/prometheus/testutil"
	"google.golang.org/grpc"
	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/credentials/insecure"
	healthpb "google.golang.org/grpc/health/grpc_health_v1"
	"google.golang.org/grpc/status"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
)

var solveInfo = &grpc.UnaryServerInfo{FullMethod: pb.CorridorService_Solve_FullMethodName}

func logInto(b *bytes.Buffer) *slog.Logger {
	return slog.New(slog.NewTextHandler(b, &slog.HandlerOptions{Level: slog.LevelDebug}))
}

func TestAPanicBecomesInternalAndIsLogged(t *testing.T) {
	var log bytes.Buffer
	resp, err := recovered(logInto(&log))(context.Background(), nil, solveInfo, func(context.Context, any) (any, error) {
		panic("road closed")
	})
	if resp != nil || status.Code(err) != codes.Internal || reasonOf(err) != "INTERNAL_ERROR" {
		t.Errorf("got %v, %v", resp, err)
	}
	if strings.Contains(err.Error(), "road closed") {
		t.Errorf("the caller is told about the inside: %v", err)
	}
	if !strings.Contains(log.String(), "road closed") || !strings.Contains(log.String(), "server_test.go") {
		t.Errorf("the log does not tell where: %s", log.String())
	}
}

func TestAPanicInAStreamBecomesInternal(t *testing.T) {
	var log bytes.Buffer
	err := recoveredStream(logInto(&log))(nil, silentStream{}, &grpc.StreamServerInfo{FullMethod: "/x/Watch"}, func(any, grpc.ServerStream) error {
		panic("road closed")
	})
	if status.Code(err) != codes.Internal || !strings.Contains(log.String(), "/x/Watch") {
		t.Errorf("got %v, log %s", err, log.String())
	}
}

type silentStream struct{ grpc.ServerStream }

func (silentStream) Context() context.Context { return context.Background() }

// TestAnAnswerThatIsNoNumberIsWithheld: the guard behind the solver.
func TestAnAnswerThatIsNoNumberIsWithheld(t *testing.T) {
	zero := 0.0
	broken := &violations{}
	checkFinite(&pb.SolveResponse{Answers: []*pb.Answer{{Found: &pb.Answer_Grid{Grid: &pb.GridAnswer{FlowVehPerH: []float64{1, zero / zero}}}}}}, broken)
	if len(broken.list) != 1 || broken.list[0].field != "answers[0].grid.flow_veh_per_h[1]" {
		t.Fatalf("found %v", broken.list)
	}
	var log bytes.Buffer
	_, err := recovered(logInto(&log))(context.Background(), nil, solveInfo, func(context.Context, any) (any, error) {
		return nil, notFinite(broken)
	})
	if reasonOf(err) != "INTERNAL_ERROR" || !strings.Contains(log.String(), "answers[0].grid.flow_veh_per_h[1] is NaN") {
		t.Errorf("got %v, log %s", err, log.String())
	}
}

func TestLogsTellWhatHappenedButNotWhatWasAsked(t *testing.T) {
	refused := &violations{}
	refused.add("scenario.segments[0].name", pb.FieldReason_FIELD_REASON_UNIQUE, `"secret street"`, "another")
	for _, x := range []struct {
		name string
		err  error
		took time.Duration
		want []string
	}{
		{"fine", nil, 0, []string{"level=DEBUG", "code=OK", "interactions=7"}},
		{"slow", nil, 20 * time.Millisecond, []string{"level=WARN", "code=OK"}},
		{"refused", invalid(refused), 0, []string{"level=WARN", "code=InvalidArgument", "reason=INVALID_REQUEST"}},
		{"fault", internal(), 0, []string{"level=ERROR", "code=Internal", "reason=INTERNAL_ERROR"}},
	} {
		var log bytes.Buffer
		_, err := logged(logInto(&log), 10*time.Millisecond)(context.Background(), nil, solveInfo, func(context.Context, any) (any, error) {
			time.Sleep(x.took)
			return &pb.SolveResponse{Stats: &pb.SolveStats{Interactions: 7}}, x.err
		})
		if !errors.Is(err, x.err) {
			t.Errorf("%s: the error became %v", x.name, err)
		}
		for _, word := range append(x.want, "method=/roadswell.v1.CorridorService/Solve", "took=") {
			if !strings.Contains(log.String(), word) {
				t.Errorf("%s: %q is not in %s", x.name, word, log.String())
			}
		}
		if strings.Contains(log.String(), "secret") {
			t.Errorf("%s: the log quotes the request: %s", x.name, log.String())
		}
	}
}

func TestCallsAreCounted(t *testing.T) {
	registry := prometheus.NewRegistry()
	m, err := newMetrics(registry, "v0.0.0-test")
	if err != nil {
		t.Fatal(err)
	}
	count := m.measured()
	for range 3 {
		_, _ = count(context.Background(), nil, solveInfo, func(context.Context, any) (any, error) { return nil, tooLarge(5) })
	}
	_, _ = count(context.Background(), nil, solveInfo, func(context.Context, any) (any, error) {
		return &pb.SolveResponse{Stats: &pb.SolveStats{Interactions: 12, SolveTimeS: 0.5}}, nil
	})
	if got := testutil.ToFloat64(m.refusals.WithLabelValues("ANSWER_TOO_LARGE")); got != 3 {
		t.Errorf("%g refusals, want 3", got)
	}
	want := `
# HELP roadswell_solve_interactions Wave interactions of a solved scenario.
# TYPE roadswell_solve_interactions histogram
`
	for _, le := range []string{"10", "40", "160", "640", "2560", "10240", "40960", "163840", "655360", "2.62144e+06", "1.048576e+07", "+Inf"} {
		n := 1
		if le == "10" {
			n = 0
		}
		want += fmt.Sprintf("roadswell_solve_interactions_bucket{le=%q} %d\n", le, n)
	}
	want += "roadswell_solve_interactions_sum 12\nroadswell_solve_interactions_count 1\n"
	if err := testutil.GatherAndCompare(registry, strings.NewReader(want), "roadswell_solve_interactions"); err != nil {
		t.Error(err)
	}
	problems, err := testutil.GatherAndLint(registry)
	if err != nil || len(problems) > 0 {
		t.Errorf("lint: %v, %v", problems, err)
	}
	if _, err := newMetrics(registry, "again"); err == nil {
		t.Error("metrics were registered twice without a word")
	}
}

func TestLimitsThatMakeNoSense(t *testing.T) {
	if _, err := NewServer(Options{Limits: Limits{Items: -1}}); err == nil || !strings.Contains(err.Error(), "Items") {
		t.Errorf("a negative limit: %v", err)
	}
}

// TestStoppingIsBounded: an open health watch, which never ends by itself, must not hold up the server; and it sees
// that the server goes out of service.
func TestStoppingIsBounded(t *testing.T) {
	server, err := NewServer(Options{Logger: logInto(&bytes.Buffer{})})
	if err != nil {
		t.Fatal(err)
	}
	listener, err := net.Listen("tcp", "127.0.0.1:0")
	if err != nil {
		t.Fatal(err)
	}
	served := make(chan error, 1)
	go func() { served <- server.GRPC.Serve(listener) }()
	conn, err := grpc.NewClient(listener.Addr().String(), grpc.WithTransportCredentials(insecure.NewCredentials()))
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = conn.Close() }()
	watch, err := healthpb.NewHealthClient(conn).Watch(context.Background(), &healthpb.HealthCheckRequest{Service: pb.CorridorService_ServiceDesc.ServiceName})
	if err != nil {
		t.Fatal(err)
	}
	if first, err := watch.Recv(); err != nil || first.GetStatus() != healthpb.HealthCheckResponse_SERVING {
		t.Fatalf("health is %v, %v", first, err)
	}
	begin := time.Now()
	const grace = 200 * time.Millisecond
	server.Stop(grace)
	if took := time.Since(begin); took < grace || took > 10*grace {
		t.Errorf("stopping took %s with a grace time of %s", took, grace)
	}
	if last, err := watch.Recv(); err != nil || last.GetStatus() != healthpb.HealthCheckResponse_NOT_SERVING {
		t.Errorf("the watch saw %v, %v", last, err)
	}
	if err := <-served; err != nil {
		t.Errorf("serving ended with %v", err)
	}
}
