package client_test

import (
	"context"
	"errors"
	"fmt"
	"io"
	"log/slog"
	"net"
	"time"

	"google.golang.org/grpc/test/bufconn"

	"github.com/roadswell/roadswell/client"
	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
	"github.com/roadswell/roadswell/service"
)

// dial stands for client.Dial("127.0.0.1:7460") in these examples: it starts a server inside the process, so that they
// run anywhere. Call stop when done.
func dial(opts ...client.Option) (c *client.Client, stop func()) {
	server, err := service.NewServer(service.Options{Logger: slog.New(slog.NewTextHandler(io.Discard, nil))})
	if err != nil {
		panic(err)
	}
	pipe := bufconn.Listen(1 << 20)
	go func() { _ = server.GRPC.Serve(pipe) }()
	c, err = client.Dial("inside", append(opts, client.WithDialer(func(ctx context.Context, _ string) (net.Conn, error) {
		return pipe.DialContext(ctx)
	}))...)
	if err != nil {
		panic(err)
	}
	return c, func() { _ = c.Close(); server.Stop(time.Second) }
}

// road is 5 km of one lane with a triangular relation: 72 km/h, 1,800 veh/h, backward wave 18 km/h. 900 veh/h flow in.
func road() *pb.Scenario {
	free, capacity, wave, demand := 72.0, 1800.0, 18.0, 900.0
	return &pb.Scenario{
		Segments: []*pb.Segment{{Name: "road", LengthM: 5000, Relation: &pb.FlowDensityRelation{
			Form: &pb.FlowDensityRelation_Triangular{Triangular: &pb.TriangularRelation{
				FreeSpeedKmPerH: &free, CapacityVehPerH: &capacity, WaveSpeedKmPerH: &wave,
			}},
		}}},
		Entry:    &pb.Entry{Demand: []*pb.DemandStep{{FlowVehPerH: demand}}},
		Initial:  &pb.InitialTraffic{BackgroundFlowVehPerH: &demand},
		HorizonS: 3600,
	}
}

// closed is the road with a closure at 4 km from 600 s to 900 s.
func closed() *pb.Scenario {
	s := road()
	s.Bottlenecks = []*pb.Bottleneck{{Name: "closure", PlaceM: 4000, Capacity: []*pb.CapacityStep{
		{StartS: 600, Limit: &pb.CapacityStep_FlowVehPerH{FlowVehPerH: 0}},
		{StartS: 900, Limit: &pb.CapacityStep_Unrestricted{Unrestricted: true}},
	}}}
	return s
}

// How far back does the queue of a closure of five minutes reach, and when has it cleared?
func ExampleClient_Solve_queues() {
	c, stop := dial()
	defer stop()

	response, err := c.Solve(context.Background(), &pb.SolveRequest{
		Scenario:  closed(),
		Questions: []*pb.Question{{Ask: &pb.Question_Queues{Queues: &pb.QueuesQuestion{Nodes: []string{"closure"}}}}},
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, q := range response.GetAnswers()[0].GetQueues().GetNodes()[0].GetQueues() {
		fmt.Printf("from %.0f s to %.0f s, at most %.0f m at %.0f s\n", q.GetStartS(), q.GetClearedS(), q.GetPeakLengthM(), q.GetPeakLengthTimeS())
	}
	fmt.Println(response.GetAdvisory())
	// Output:
	// from 600 s to 1140 s, at most 1200 m at 1140 s
	// Advisory forecast of a kinematic-wave traffic model, not an observation of the road. Local codes and standards and the judgement of licensed engineers take precedence.
}

// How long will a trip take that starts at 700 s?
func ExampleClient_Solve_travelTimes() {
	c, stop := dial()
	defer stop()

	response, err := c.Solve(context.Background(), &pb.SolveRequest{
		Scenario: closed(),
		Questions: []*pb.Question{{Ask: &pb.Question_TravelTimes{TravelTimes: &pb.TravelTimesQuestion{
			DeparturesS: []float64{0, 700, 3500},
		}}}},
	})
	if err != nil {
		fmt.Println(err)
		return
	}
	for _, trip := range response.GetAnswers()[0].GetTravelTimes().GetTrips() {
		if !trip.GetArrived() {
			fmt.Printf("%.0f s: not there by the horizon\n", trip.GetDepartureS())
			continue
		}
		fmt.Printf("%.0f s: %.0f s, of which %.0f s delay\n", trip.GetDepartureS(), trip.GetTravelTimeS(), trip.GetDelayS())
	}
	// Output:
	// 0 s: 250 s, of which 0 s delay
	// 700 s: 400 s, of which 150 s delay
	// 3500 s: not there by the horizon
}

// What cannot be accepted comes back all at once, a field at a time.
func ExampleError() {
	c, stop := dial()
	defer stop()

	scenario := road()
	scenario.Segments[0].LengthM = -5
	scenario.Entry.Demand[0].FlowVehPerH = -900
	_, err := c.Solve(context.Background(), &pb.SolveRequest{Scenario: scenario, Questions: []*pb.Question{{}}})

	var refused *client.Error
	if errors.As(err, &refused) && refused.Reason == client.ReasonInvalidRequest {
		for _, f := range refused.Fields {
			fmt.Println(f.Field, f.Reason)
		}
	}
	// Output:
	// scenario.entry.demand[0].flow_veh_per_h NOT_NEGATIVE
	// scenario.segments[0].length_m RANGE
	// questions[0] REQUIRED
}

// errors.As reaches a single field, too.
func ExampleFieldError() {
	c, stop := dial()
	defer stop()

	_, err := c.Solve(context.Background(), &pb.SolveRequest{
		Scenario:  road(),
		Questions: []*pb.Question{{Ask: &pb.Question_Queues{Queues: &pb.QueuesQuestion{Nodes: []string{"bridge"}}}}},
	})
	var field *client.FieldError
	if errors.As(err, &field) {
		fmt.Println(field)
	}
	// Output:
	// questions[0].queues.nodes[0] is "bridge"; expected: a node of the corridor: "entry", "exit"
}
