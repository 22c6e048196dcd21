package client

import (
	"context"
	"sync"
	"time"

	"google.golang.org/grpc"

	pb "github.com/roadswell/roadswell/proto/roadswell/v1"
)

// Client calls a roadswell server. It is safe for concurrent use. Close it when it is no longer needed.
type Client struct {
	service pb.CorridorServiceClient
	conn    *grpc.ClientConn // nil where the connection is the caller's
	timeout time.Duration
	closing sync.Once
}

// New returns a client that uses a connection of the caller's, who keeps the duty to close it. Of the options only
// [WithTimeout] has an effect.
func New(conn grpc.ClientConnInterface, opts ...Option) *Client {
	s := newSettings(opts)
	return &Client{service: pb.NewCorridorServiceClient(conn), timeout: s.timeout}
}

// Solve solves the request's scenario and returns the answers to its questions, in their order. The call ends with
// the context's deadline; where it has none, with the client's timeout. The error is an *[Error].
//
// Solving changes nothing on the server, so Solve may be repeated; while the server cannot be reached it is, a few
// times, by itself.
func (c *Client) Solve(ctx context.Context, request *pb.SolveRequest) (*pb.SolveResponse, error) {
	if _, set := ctx.Deadline(); !set {
		var cancel context.CancelFunc
		ctx, cancel = context.WithTimeout(ctx, c.timeout)
		defer cancel()
	}
	response, err := c.service.Solve(ctx, request)
	if err != nil {
		return nil, fromStatus(err)
	}
	return response, nil
}

// Close ends the client's connection. Closing a second time does nothing.
func (c *Client) Close() error {
	var err error
	c.closing.Do(func() {
		if c.conn != nil {
			err = c.conn.Close()
		}
	})
	return err
}
