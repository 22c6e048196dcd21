package main

import (
	"context"
	"fmt"
	"log/slog"
	"net"
	"os"
	"time"

	"google.golang.org/grpc/test/bufconn"

	"github.com/roadswell/roadswell/client"
	"github.com/roadswell/roadswell/service"
)

// pipeBytes is the size of the pipe to the server inside the process.
const pipeBytes = 1 << 20

// connect returns a client of the server at the address, or of one inside this process where there is none. The
// caller calls the returned function when done.
func connect(address string) (*client.Client, func(), error) {
	if address != "" {
		c, err := client.Dial(address)
		if err != nil {
			return nil, nil, fmt.Errorf("--server is %q; expected: a loopback address with a port, such as %s (this version speaks plaintext and calls no other machine)",
				address, client.DefaultAddress)
		}
		return c, func() { _ = c.Close() }, nil
	}
	faults := slog.New(slog.NewTextHandler(os.Stderr, &slog.HandlerOptions{Level: slog.LevelError}))
	server, err := service.NewServer(service.Options{Version: version(), Logger: faults})
	if err != nil {
		return nil, nil, err
	}
	pipe := bufconn.Listen(pipeBytes)
	go func() { _ = server.GRPC.Serve(pipe) }() // ends with Stop
	c, err := client.Dial("inside", client.WithDialer(func(ctx context.Context, _ string) (net.Conn, error) {
		return pipe.DialContext(ctx)
	}))
	if err != nil {
		server.GRPC.Stop()
		return nil, nil, err
	}
	return c, func() { _ = c.Close(); server.Stop(time.Second) }, nil
}
