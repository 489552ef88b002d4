package queue

import (
	"fmt"
	"sync"
	"time"

	"github.com/nats-io/nats-server/v2/server"
	"github.com/nats-io/nats.go"
)

// startTime bounds how long the embedded server may take to come up; it
// takes milliseconds on an idle machine.
const startTime = 30 * time.Second

// Server is a queue server inside this process. It has no open port: only
// this process reaches it.
type Server struct {
	srv *server.Server
}

// Embed starts a server that keeps its queues in dir. What it keeps is
// transient: a run rebuilds its queue from the parts that are missing, so
// dir may be removed whenever no server runs on it.
func Embed(dir string) (*Server, error) {
	srv, err := server.NewServer(&server.Options{
		ServerName:             "betaloom",
		DontListen:             true,
		JetStream:              true,
		StoreDir:               dir,
		NoSigs:                 true,
		DisableJetStreamBanner: true,
	})
	if err != nil {
		return nil, fmt.Errorf("queue: %w", err)
	}
	var last complaint
	srv.SetLoggerV2(&last, false, false, false)
	srv.Start()
	if !last.fatal() && srv.ReadyForConnections(startTime) {
		return &Server{srv: srv}, nil
	}
	srv.Shutdown()
	srv.WaitForShutdown()
	return nil, fmt.Errorf("queue: the embedded server did not come up in %s: %s", dir, last.get())
}

// Connect connects to the server within the process.
func (s *Server) Connect() (*nats.Conn, error) {
	return connect("", nats.InProcessServer(s.srv))
}

// Close stops the server and waits for it.
func (s *Server) Close() {
	s.srv.Shutdown()
	s.srv.WaitForShutdown()
}

// Connect connects to the server at url, and again whenever the connection
// is lost.
func Connect(url string) (*nats.Conn, error) {
	return connect(url)
}

func connect(url string, more ...nats.Option) (*nats.Conn, error) {
	options := append([]nats.Option{nats.Name("betaloom"), nats.MaxReconnects(-1)}, more...)
	nc, err := nats.Connect(url, options...)
	if err != nil {
		return nil, fmt.Errorf("queue: %w", err)
	}
	return nc, nil
}

// complaint is a server's log that keeps the last error, which the server
// tells no one else, and whether it gave up over it.
type complaint struct {
	mu     sync.Mutex
	text   string
	gaveUp bool
}

func (c *complaint) Errorf(format string, a ...any) {
	c.mu.Lock()
	defer c.mu.Unlock()
	c.text = fmt.Sprintf(format, a...)
}

func (c *complaint) get() string {
	c.mu.Lock()
	defer c.mu.Unlock()
	if c.text == "" {
		return fmt.Sprintf("it was not ready within %s", startTime)
	}
	return c.text
}

func (c *complaint) Fatalf(format string, a ...any) {
	c.Errorf(format, a...)
	c.mu.Lock()
	defer c.mu.Unlock()
	c.gaveUp = true
}

func (c *complaint) fatal() bool {
	c.mu.Lock()
	defer c.mu.Unlock()
	return c.gaveUp
}

func (c *complaint) Noticef(string, ...any) {}
func (c *complaint) Warnf(string, ...any)   {}
func (c *complaint) Debugf(string, ...any)  {}
func (c *complaint) Tracef(string, ...any)  {}
