package client

import (
	"context"
	"fmt"
	"net"
	"net/netip"
	"time"

	"google.golang.org/grpc"
	"google.golang.org/grpc/backoff"
	"google.golang.org/grpc/credentials"
	"google.golang.org/grpc/credentials/insecure"
	"google.golang.org/grpc/keepalive"
)

// DefaultAddress is where a server listens unless told otherwise.
const DefaultAddress = "127.0.0.1:7460"

// Option changes how a client connects or calls.
type Option func(*settings)

type settings struct {
	timeout     time.Duration
	answerBytes int
	credentials credentials.TransportCredentials
	dialer      func(context.Context, string) (net.Conn, error)
}

// Defaults: longer than a server's own limit of 30 s for a call, and larger than its limit of 32 MiB for an answer.
const (
	defaultTimeout     = 35 * time.Second
	defaultAnswerBytes = 40 << 20
)

func newSettings(opts []Option) settings {
	s := settings{timeout: defaultTimeout, answerBytes: defaultAnswerBytes}
	for _, o := range opts {
		o(&s)
	}
	return s
}

// WithTimeout sets the time after which calls without a deadline of their own end; 35 s by default. It must be more
// than 0.
func WithTimeout(d time.Duration) Option { return func(s *settings) { s.timeout = d } }

// WithAnswerBytes sets the largest answer that the client takes in; 40 MiB by default.
func WithAnswerBytes(n int) Option { return func(s *settings) { s.answerBytes = n } }

// WithCredentials secures the connection. Without it the client speaks plaintext, and to loopback addresses only.
func WithCredentials(c credentials.TransportCredentials) Option {
	return func(s *settings) { s.credentials = c }
}

// WithDialer makes connections through dial, for servers inside the process. Plaintext is then allowed whatever the
// address.
func WithDialer(dial func(ctx context.Context, address string) (net.Conn, error)) Option {
	return func(s *settings) { s.dialer = dial }
}

// keepaliveTime is how long a connection with calls under way may be silent before it is tested.
const keepaliveTime = 30 * time.Second

// retries: a call is repeated while the server cannot be reached, which is safe because Solve changes nothing.
const retries = `{"methodConfig": [{
	"name": [{"service": "roadswell.v1.CorridorService"}],
	"retryPolicy": {
		"maxAttempts": 4, "initialBackoff": "0.1s", "maxBackoff": "2s", "backoffMultiplier": 3,
		"retryableStatusCodes": ["UNAVAILABLE"]
	}
}]}`

// Dial returns a client of the server at address ("host:port"; "" means [DefaultAddress]). It does not wait for the
// connection, which is made with the first call. It fails where the address or an option makes no sense, and where
// plaintext would leave the machine.
func Dial(address string, opts ...Option) (*Client, error) {
	if address == "" {
		address = DefaultAddress
	}
	s := newSettings(opts)
	if s.timeout <= 0 || s.answerBytes <= 0 {
		return nil, fmt.Errorf("roadswell: timeout %s and answer size %d must be more than 0", s.timeout, s.answerBytes)
	}
	if s.credentials == nil && s.dialer == nil && !isLoopback(address) {
		return nil, fmt.Errorf("roadswell: %q is not a loopback address with a port (such as %s); use WithCredentials to reach other machines", address, DefaultAddress)
	}
	conn, err := grpc.NewClient(target(address, s), s.dialOptions()...)
	if err != nil {
		return nil, fmt.Errorf("roadswell: address %q: %w", address, err)
	}
	c := New(conn, opts...)
	c.conn = conn
	return c, nil
}

// target keeps name resolution away from addresses that only the dialer understands.
func target(address string, s settings) string {
	if s.dialer != nil {
		return "passthrough:///" + address
	}
	return "dns:///" + address
}

func (s settings) dialOptions() []grpc.DialOption {
	if s.credentials == nil {
		s.credentials = insecure.NewCredentials()
	}
	out := []grpc.DialOption{
		grpc.WithTransportCredentials(s.credentials),
		grpc.WithDefaultServiceConfig(retries),
		grpc.WithDefaultCallOptions(grpc.MaxCallRecvMsgSize(s.answerBytes)),
		grpc.WithKeepaliveParams(keepalive.ClientParameters{Time: keepaliveTime, Timeout: keepaliveTime / 3}),
		grpc.WithConnectParams(grpc.ConnectParams{Backoff: backoff.DefaultConfig, MinConnectTimeout: 5 * time.Second}),
		grpc.WithUserAgent("roadswell-go"),
	}
	if s.dialer != nil {
		out = append(out, grpc.WithContextDialer(s.dialer))
	}
	return out
}

func isLoopback(address string) bool {
	host, _, err := net.SplitHostPort(address)
	if err != nil {
		return false
	}
	ip, err := netip.ParseAddr(host)
	return host == "localhost" || (err == nil && ip.IsLoopback())
}
