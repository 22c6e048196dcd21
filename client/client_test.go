package client_test

import (
	"context"
	"errors"
	"net"
	"strings"
	"sync"
	"sync/atomic"
	"testing"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/codes"
	"google.golang.org/grpc/credentials"
	"google.golang.org/grpc/status"

	"github.com/roadswell/roadswell/client"
	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
)

func TestAddressesThatPlaintextMustNotReach(t *testing.T) {
	for _, address := range []string{"192.0.2.1:7460", "example.org:7460", "7460", "0.0.0.0:7460"} {
		if c, err := client.Dial(address); err == nil {
			_ = c.Close()
			t.Errorf("%q was accepted", address)
		} else if !strings.Contains(err.Error(), "loopback") {
			t.Errorf("%q: %v", address, err)
		}
	}
	for _, address := range []string{"", "127.0.0.1:1", "[::1]:1", "localhost:1"} {
		c, err := client.Dial(address)
		if err != nil {
			t.Errorf("%q: %v", address, err)
			continue
		}
		if err := errors.Join(c.Close(), c.Close()); err != nil {
			t.Errorf("%q: closing twice: %v", address, err)
		}
	}
	c, err := client.Dial("example.org:7460", client.WithCredentials(credentials.NewTLS(nil)))
	if err != nil {
		t.Errorf("with credentials: %v", err)
	} else if err := c.Close(); err != nil {
		t.Error(err)
	}
	if _, err := client.Dial("", client.WithTimeout(-1)); err == nil {
		t.Error("a timeout below zero was accepted")
	}
}

func TestManyGoroutinesShareAClient(t *testing.T) {
	c, stop := dial()
	defer stop()
	var wg sync.WaitGroup
	for range 16 {
		wg.Go(func() {
			out, err := c.Solve(context.Background(), &pb.SolveRequest{Scenario: closed(), Questions: []*pb.Question{
				{Ask: &pb.Question_Totals{Totals: &pb.TotalsQuestion{}}}}})
			if err != nil {
				t.Error(err)
				return
			}
			if got := out.GetAnswers()[0].GetTotals().GetTotals()[0].GetCorridor().GetDelayVehicleH(); got < 6.2499 || got > 6.2501 {
				t.Errorf("delay %g, want 6.25", got)
			}
		})
	}
	wg.Wait()
}

// script is a server that answers as it is told.
type script struct {
	pb.UnimplementedCorridorServiceServer
	calls atomic.Int32
	solve func(ctx context.Context, call int32) (*pb.SolveResponse, error)
}

func (s *script) Solve(ctx context.Context, _ *pb.SolveRequest) (*pb.SolveResponse, error) {
	return s.solve(ctx, s.calls.Add(1))
}

func play(t *testing.T, solve func(context.Context, int32) (*pb.SolveResponse, error), opts ...client.Option) (*client.Client, *script) {
	t.Helper()
	listener, err := net.Listen("tcp", "127.0.0.1:0")
	if err != nil {
		t.Fatal(err)
	}
	server, s := grpc.NewServer(), &script{solve: solve}
	pb.RegisterCorridorServiceServer(server, s)
	go func() { _ = server.Serve(listener) }()
	t.Cleanup(server.Stop)
	c, err := client.Dial(listener.Addr().String(), opts...)
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() { _ = c.Close() })
	return c, s
}

func TestACallIsRepeatedWhileTheServerCannotBeReached(t *testing.T) {
	c, s := play(t, func(_ context.Context, call int32) (*pb.SolveResponse, error) {
		if call < 3 {
			return nil, status.Error(codes.Unavailable, "starting")
		}
		return &pb.SolveResponse{Advisory: "here"}, nil
	})
	out, err := c.Solve(context.Background(), &pb.SolveRequest{})
	if err != nil || out.GetAdvisory() != "here" || s.calls.Load() != 3 {
		t.Errorf("got %v, %v after %d calls", out, err, s.calls.Load())
	}
}

func TestACallIsNotRepeatedWhenItIsRefused(t *testing.T) {
	c, s := play(t, func(context.Context, int32) (*pb.SolveResponse, error) {
		return nil, status.Error(codes.ResourceExhausted, "no")
	})
	_, err := c.Solve(context.Background(), &pb.SolveRequest{})
	var refused *client.Error
	if !errors.As(err, &refused) || refused.Code != codes.ResourceExhausted || refused.Reason != "" || s.calls.Load() != 1 {
		t.Errorf("got %v after %d calls", err, s.calls.Load())
	}
	if status.Code(err) != codes.ResourceExhausted || status.Convert(err).Message() != "no" {
		t.Errorf("the status did not come through: %v", status.Convert(err))
	}
}

func TestCallsWithoutADeadlineGetOne(t *testing.T) {
	c, _ := play(t, func(ctx context.Context, _ int32) (*pb.SolveResponse, error) {
		<-ctx.Done()
		return nil, ctx.Err()
	}, client.WithTimeout(50*time.Millisecond))
	begin := time.Now()
	_, err := c.Solve(context.Background(), &pb.SolveRequest{})
	if !errors.Is(err, context.DeadlineExceeded) || time.Since(begin) > 10*time.Second {
		t.Errorf("ended with %v after %s", err, time.Since(begin))
	}
}

func TestTheCallersDeadlineCounts(t *testing.T) {
	left := make(chan time.Duration, 1)
	c, _ := play(t, func(ctx context.Context, _ int32) (*pb.SolveResponse, error) {
		end, _ := ctx.Deadline()
		left <- time.Until(end)
		return &pb.SolveResponse{}, nil
	}, client.WithTimeout(time.Second))
	ctx, cancel := context.WithTimeout(context.Background(), time.Hour)
	defer cancel()
	if _, err := c.Solve(ctx, &pb.SolveRequest{}); err != nil {
		t.Fatal(err)
	}
	if got := <-left; got < 59*time.Minute {
		t.Errorf("the server saw a deadline in %s, want an hour", got)
	}
}

func TestAnswersLargerThanTheClientTakes(t *testing.T) {
	large := func(context.Context, int32) (*pb.SolveResponse, error) {
		return &pb.SolveResponse{Advisory: strings.Repeat("x", 5<<20)}, nil // more than the usual 4 MiB
	}
	c, _ := play(t, large)
	if _, err := c.Solve(context.Background(), &pb.SolveRequest{}); err != nil {
		t.Errorf("an answer of 5 MiB: %v", err)
	}
	c, _ = play(t, large, client.WithAnswerBytes(1<<20))
	if _, err := c.Solve(context.Background(), &pb.SolveRequest{}); status.Code(err) != codes.ResourceExhausted {
		t.Errorf("an answer of 5 MiB with a limit of 1 MiB: %v", err)
	}
}
