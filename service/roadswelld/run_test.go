package main

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"flag"
	"fmt"
	"io"
	"net/http"
	"strings"
	"sync"
	"testing"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/credentials/insecure"
	healthpb "google.golang.org/grpc/health/grpc_health_v1"
	reflectionpb "google.golang.org/grpc/reflection/grpc_reflection_v1"
	"google.golang.org/grpc/status"
	"google.golang.org/protobuf/encoding/protojson"

	"github.com/roadswell/roadswell/client"
	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
)

// lines collects log lines and lets tests wait for one.
type lines struct {
	mu  sync.Mutex
	buf bytes.Buffer
}

func (l *lines) Write(p []byte) (int, error) {
	l.mu.Lock()
	defer l.mu.Unlock()
	return l.buf.Write(p)
}

// find returns the attributes of the line with the message, waiting for it.
func (l *lines) find(t *testing.T, message string) map[string]any {
	t.Helper()
	for end := time.Now().Add(10 * time.Second); time.Now().Before(end); time.Sleep(5 * time.Millisecond) {
		l.mu.Lock()
		text := l.buf.String()
		l.mu.Unlock()
		for line := range strings.Lines(text) {
			attrs := map[string]any{}
			if json.Unmarshal([]byte(line), &attrs) == nil && attrs["msg"] == message {
				return attrs
			}
		}
	}
	t.Fatalf("no line %q", message)
	return nil
}

// start runs the server on free ports; stop ends it and returns what run returned.
func start(t *testing.T, args ...string) (grpcAddress, metricsAddress string, stop func() error) {
	t.Helper()
	o, err := parse(append([]string{"-listen", "127.0.0.1:0", "-metrics", "127.0.0.1:0", "-grace", "300ms"}, args...), io.Discard)
	if err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithCancel(context.Background())
	log, ended := &lines{}, make(chan error, 1)
	go func() { ended <- run(ctx, o, log) }()
	serving := log.find(t, "serving")
	stop = sync.OnceValue(func() error {
		cancel()
		select {
		case err := <-ended:
			return err
		case <-time.After(10 * time.Second):
			return fmt.Errorf("run did not end")
		}
	})
	t.Cleanup(func() {
		if err := stop(); err != nil {
			t.Error(err)
		}
	})
	return serving["grpc"].(string), serving["metrics"].(string), stop
}

const road = `{"scenario": {"horizon_s": 600, "segments": [{"length_m": 1000, "relation": {"triangular": {
	"free_speed_km_per_h": 72, "capacity_veh_per_h": 1800, "wave_speed_km_per_h": 18}}}],
	"entry": {"demand": [{"flow_veh_per_h": 360}]}}, "questions": [{"totals": {}}]}`

func TestServesUntilToldToStop(t *testing.T) {
	address, metrics, stop := start(t)
	c, err := client.Dial(address)
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = c.Close() }()
	req := &pb.SolveRequest{}
	if err := protojson.Unmarshal([]byte(road), req); err != nil {
		t.Fatal(err)
	}
	out, err := c.Solve(context.Background(), req)
	if err != nil {
		t.Fatal(err)
	}
	if got := out.GetAnswers()[0].GetTotals().GetTotals()[0].GetCorridor().GetEnteredVehicles(); got < 59.9999 || got > 60.0001 {
		t.Errorf("%g vehicles entered, want 60", got)
	}
	req.Scenario.HorizonS = -1
	if _, err := c.Solve(context.Background(), req); err == nil {
		t.Error("a horizon below zero was accepted")
	}
	page := get(t, metrics)
	for _, line := range []string{
		`roadswell_solve_interactions_count 1`, `roadswell_solve_seconds_count 1`, `roadswell_refusals_total{reason="INVALID_REQUEST"} 1`,
		`roadswell_build_info{`, `grpc_server_handled_total{grpc_code="OK",grpc_method="Solve",grpc_service="roadswell.v1.CorridorService",grpc_type="unary"} 1`,
	} {
		if !strings.Contains(page, line) {
			t.Errorf("/metrics does not have %q", line)
		}
	}
	if err := stop(); err != nil {
		t.Errorf("stopped with %v", err)
	}
	if _, err := http.Get("http://" + metrics + "/metrics"); err == nil {
		t.Error("/metrics is still served")
	}
}

func get(t *testing.T, address string) string {
	t.Helper()
	resp, err := http.Get("http://" + address + "/metrics")
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = resp.Body.Close() }()
	page, err := io.ReadAll(resp.Body)
	if err != nil || resp.StatusCode != http.StatusOK {
		t.Fatalf("/metrics: %s, %v", resp.Status, err)
	}
	return string(page)
}

func dial(t *testing.T, address string) *grpc.ClientConn {
	t.Helper()
	conn, err := grpc.NewClient(address, grpc.WithTransportCredentials(insecure.NewCredentials()))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = conn.Close() })
	return conn
}

func TestAnOpenHealthWatchDoesNotHoldUpStopping(t *testing.T) {
	address, _, stop := start(t)
	watch, err := healthpb.NewHealthClient(dial(t, address)).Watch(context.Background(), &healthpb.HealthCheckRequest{})
	if err != nil {
		t.Fatal(err)
	}
	if first, err := watch.Recv(); err != nil || first.GetStatus() != healthpb.HealthCheckResponse_SERVING {
		t.Fatalf("health is %v, %v", first, err)
	}
	begin := time.Now()
	if err := stop(); err != nil {
		t.Fatal(err)
	}
	if took := time.Since(begin); took > 5*time.Second {
		t.Errorf("stopping took %s", took)
	}
}

// TestLogsNameTheirUnits: a bare number of nanoseconds says nothing to an operator.
func TestLogsNameTheirUnits(t *testing.T) {
	var log bytes.Buffer
	newLogger(options{}, &log).Info("stopping", "grace", 1500*time.Millisecond)
	if !strings.Contains(log.String(), `"grace":"1.5s"`) {
		t.Error(log.String())
	}
}

func TestHelpSaysWhatItIs(t *testing.T) {
	var help bytes.Buffer
	if _, err := parse([]string{"-help"}, &help); !errors.Is(err, flag.ErrHelp) {
		t.Errorf("asked for help: %v", err)
	}
	for _, says := range []string{"roadswell.v1.CorridorService", "advisory", "-listen"} {
		if !strings.Contains(help.String(), says) {
			t.Errorf("help does not say %q:\n%s", says, help.String())
		}
	}
}

func TestReflectionIsOffUnlessAskedFor(t *testing.T) {
	for _, on := range []bool{false, true} {
		var args []string
		if on {
			args = append(args, "-reflection")
		}
		address, _, _ := start(t, args...)
		stream, err := reflectionpb.NewServerReflectionClient(dial(t, address)).ServerReflectionInfo(context.Background())
		if err != nil {
			t.Fatal(err)
		}
		_ = stream.Send(&reflectionpb.ServerReflectionRequest{MessageRequest: &reflectionpb.ServerReflectionRequest_ListServices{}})
		out, err := stream.Recv()
		if on && (err != nil || !strings.Contains(out.String(), "roadswell.v1.CorridorService")) {
			t.Errorf("with reflection: %v, %v", out, err)
		}
		if !on && status.Code(err) != codes.Unimplemented {
			t.Errorf("without reflection: %v, %v", out, err)
		}
	}
}

func TestAPortThatIsTaken(t *testing.T) {
	address, metrics, _ := start(t)
	for _, o := range []options{
		{listen: address, grace: time.Second},
		{listen: "127.0.0.1:0", metrics: metrics, grace: time.Second},
	} {
		err := run(context.Background(), o, io.Discard)
		if err == nil || !strings.Contains(err.Error(), "address already in use") {
			t.Errorf("%+v: %v", o, err)
		}
	}
}

func TestOptionsThatCannotBeUsed(t *testing.T) {
	for _, x := range []struct{ args, says string }{
		{"-listen 0.0.0.0:7460", "plaintext"},
		{"-listen :7460", "loopback"},
		{"-listen localhost:7460", "loopback"},
		{"-listen 192.0.2.1:7460", "-listen"},
		{"-listen 7460", "host:port"},
		{"-metrics [::]:7461", "-metrics"},
		{"-grace 0s", "-grace"},
		{"-call-time -1s", "-call-time"},
		{"-interactions 0", "-interactions"},
		{"-bogus", "bogus"},
		{"surplus", "surplus"},
	} {
		if _, err := parse(strings.Fields(x.args), io.Discard); err == nil || !strings.Contains(err.Error(), x.says) {
			t.Errorf("%s: %v, want an error that says %q", x.args, err, x.says)
		}
	}
	for _, good := range []string{"", "-listen [::1]:0", "-listen 127.8.8.8:1", "-debug -reflection"} {
		if _, err := parse(strings.Fields(good), io.Discard); err != nil {
			t.Errorf("%q: %v", good, err)
		}
	}
}
