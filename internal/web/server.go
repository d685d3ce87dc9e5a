package web

import (
	"context"
	"errors"
	"fmt"
	"net"
	"net/http"
	"sync/atomic"
	"time"
)

// Launcher starts simulations for the page.
type Launcher interface {
	// Check returns what is wrong with an input, as the command line would say it.
	Check(input []byte) error
	// Start begins a run, or a scan, with the input in a folder of that name below the viewed one
	// and returns when it has begun.
	Start(input []byte, name string) error
}

// Options are what the caller decides.
type Options struct {
	Port     int      // 0 for a free one
	Launcher Launcher // nil forbids runs
	Version  string
}

// Server is a viewer that listens.
type Server struct {
	listener net.Listener
	options  Options
	catalog  *catalog
	door     *door
	hosts    [2]string // what the Host header may be
	streams  atomic.Int32
	http     *http.Server
}

// New starts to listen for a viewer of the results in dir: a run, a scan, or a folder of them.
func New(dir string, o Options) (*Server, error) {
	c, err := newCatalog(dir)
	if err != nil {
		return nil, err
	}
	if o.Launcher != nil && c.single != "" {
		return nil, fmt.Errorf("%s %w", dir, ErrOneResult)
	}
	// The address is given, not the name: a name could be bound to another interface.
	l, err := net.Listen("tcp4", fmt.Sprintf("127.0.0.1:%d", o.Port))
	if err != nil {
		return nil, fmt.Errorf("listening for the viewer: %w", err)
	}
	port := l.Addr().(*net.TCPAddr).Port
	s := &Server{
		listener: l, options: o, catalog: c, door: newDoor(),
		hosts: [2]string{fmt.Sprintf("127.0.0.1:%d", port), fmt.Sprintf("localhost:%d", port)},
	}
	s.http = &http.Server{
		Handler: s.guard(s.routes()), ReadHeaderTimeout: headerTime, ReadTimeout: headerTime,
		IdleTimeout: time.Minute, MaxHeaderBytes: maxHeader,
	}
	return s, nil
}

// Address is where the page is, with a token that works once.
func (s *Server) Address() (string, error) {
	token, err := s.door.invite()
	if err != nil {
		return "", err
	}
	return "http://" + s.hosts[0] + "/#token=" + token, nil
}

// Serve answers until ctx ends.
func (s *Server) Serve(ctx context.Context) error {
	done := make(chan error, 1)
	s.http.BaseContext = func(net.Listener) context.Context { return ctx }
	go func() { done <- s.http.Serve(s.listener) }()
	select {
	case err := <-done:
		return fmt.Errorf("viewer: %w", err)
	case <-ctx.Done():
	}
	if err := s.http.Close(); err != nil {
		return fmt.Errorf("closing the viewer: %w", err)
	}
	if err := <-done; !errors.Is(err, http.ErrServerClosed) {
		return fmt.Errorf("viewer: %w", err)
	}
	return nil
}

// routes are all addresses. What is not here does not exist.
func (s *Server) routes() http.Handler {
	m := http.NewServeMux()
	m.HandleFunc("GET /{$}", s.asset("index.html", "text/html; charset=utf-8"))
	m.HandleFunc("GET /app.css", s.asset("app.css", "text/css; charset=utf-8"))
	m.HandleFunc("GET /app.js", s.asset("app.js", "text/javascript; charset=utf-8"))
	m.HandleFunc("GET /draw.js", s.asset("draw.js", "text/javascript; charset=utf-8"))
	m.HandleFunc("GET /scan.js", s.asset("scan.js", "text/javascript; charset=utf-8"))
	m.HandleFunc("GET /start.js", s.asset("start.js", "text/javascript; charset=utf-8"))
	m.HandleFunc("POST /api/session", s.session)
	for pattern, f := range map[string]handler{
		"POST /api/invite": s.invite, "GET /api/list": s.list, "GET /api/run": s.run,
		"GET /api/figures": s.figures, "GET /api/compare": s.compare, "GET /api/scan": s.scan,
		"GET /api/report": s.report, "POST /api/check": s.check, "POST /api/start": s.start,
	} {
		m.HandleFunc(pattern, s.known(f))
	}
	m.HandleFunc("GET /api/events", s.events)
	return m
}
