package main

import (
	"io"
	"log/slog"
	"net"

	"github.com/roadswell/roadswell/service"
)

func loopbackServer() (*service.Server, string, error) {
	server, err := service.NewServer(service.Options{Logger: slog.New(slog.NewTextHandler(io.Discard, nil))})
	if err != nil {
		return nil, "", err
	}
	listener, err := net.Listen("tcp", "127.0.0.1:0")
	if err != nil {
		return nil, "", err
	}
	go func() { _ = server.GRPC.Serve(listener) }() // ends with Stop
	return server, listener.Addr().String(), nil
}
