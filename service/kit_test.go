package service_test

import (
	"context"
	"io"
	"log/slog"
	"net"
	"testing"
	"time"

	"google.golang.org/grpc/test/bufconn"
	"google.golang.org/protobuf/encoding/protojson"

	"github.com/roadswell/roadswell/client"
	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
	"github.com/roadswell/roadswell/service"
)

// quiet drops the lines of servers under test.
func quiet() *slog.Logger { return slog.New(slog.NewTextHandler(io.Discard, nil)) }

// serve starts a server inside the process and returns a client of it.
func serve(t testing.TB, o service.Options) *client.Client {
	t.Helper()
	if o.Logger == nil {
		o.Logger = quiet()
	}
	server, err := service.NewServer(o)
	if err != nil {
		t.Fatal(err)
	}
	return serveThrough(t, server)
}

func serveThrough(t testing.TB, server *service.Server) *client.Client {
	t.Helper()
	pipe := bufconn.Listen(1 << 20)
	done := make(chan error, 1)
	go func() { done <- server.GRPC.Serve(pipe) }()
	c, err := client.Dial("inside", client.WithDialer(func(ctx context.Context, _ string) (net.Conn, error) {
		return pipe.DialContext(ctx)
	}))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() {
		if err := c.Close(); err != nil {
			t.Error(err)
		}
		server.Stop(5 * time.Second)
		if err := <-done; err != nil {
			t.Error(err)
		}
	})
	return c
}

// request reads a request in the JSON form of the contract.
func request(t testing.TB, text string) *pb.SolveRequest {
	t.Helper()
	out := &pb.SolveRequest{}
	if err := protojson.Unmarshal([]byte(text), out); err != nil {
		t.Fatalf("%v in\n%s", err, text)
	}
	return out
}

// closure is a road of 5 km with a triangular relation (72 km/h, 1,800 veh/h, backward wave 18 km/h, so 125 veh/km
// jam density and 25 veh/km critical) on which 900 veh/h (12.5 veh/km) meet a closure at 4 km from 600 s to 900 s.
const closure = `{"scenario": {
	"segments": [{"name": "road", "length_m": 5000, "relation": {"triangular": {
		"free_speed_km_per_h": 72, "capacity_veh_per_h": 1800, "wave_speed_km_per_h": 18}}}],
	"bottlenecks": [{"name": "closure", "place_m": 4000, "capacity": [
		{"start_s": 600, "flow_veh_per_h": 0}, {"start_s": 900, "unrestricted": true}]}],
	"entry": {"demand": [{"start_s": 0, "flow_veh_per_h": 900}]},
	"initial": {"background_flow_veh_per_h": 900},
	"horizon_s": 3600
}}`
