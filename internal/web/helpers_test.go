package web

import (
	"bytes"
	"context"
	"encoding/json"
	"io"
	"net/http"
	"path/filepath"
	"strings"
	"testing"

	"ionfall/internal/invented"
	"ionfall/internal/store"
)

// viewed is a viewer that serves until the test ends.
func viewed(t testing.TB, dir string, l Launcher) *Server {
	t.Helper()
	s, err := New(dir, Options{Launcher: l, Version: "test"})
	if err != nil {
		t.Fatal(err)
	}
	ctx, cancel := context.WithCancel(t.Context())
	done := make(chan error, 1)
	go func() { done <- s.Serve(ctx) }()
	t.Cleanup(func() {
		cancel()
		if err := <-done; err != nil {
			t.Errorf("serving: %v", err)
		}
	})
	return s
}

// results is a folder with a sound run, a failed one, and one in progress.
func results(t testing.TB) string {
	t.Helper()
	root := t.TempDir()
	for name, o := range map[string]invented.Options{
		"sound":  {Verdict: store.OK, Ions: []string{"Ar+"}},
		"failed": {Verdict: store.Fail, Ions: []string{"Ar+", "H3+", "H2+"}},
	} {
		if err := invented.Run(filepath.Join(root, name), o); err != nil {
			t.Fatal(err)
		}
	}
	run, err := invented.Running(filepath.Join(root, "going"), map[string]any{
		"stage": "settling", "periods": 12, "ion_mean_energy_eV": 21.5, "remaining_s": 100,
	})
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() {
		if err := run.Close(); err != nil {
			t.Error(err)
		}
	})
	return root
}

// answer is what came back.
type answer struct {
	status int
	body   string
	header http.Header
}

// ask sends a request as it is described.
func ask(t testing.TB, method, url, body string, header map[string]string) answer {
	t.Helper()
	r, err := http.NewRequestWithContext(t.Context(), method, url, strings.NewReader(body))
	if err != nil {
		t.Fatal(err)
	}
	for name, value := range header {
		if name == "Host" {
			r.Host = value
			continue
		}
		r.Header.Set(name, value)
	}
	response, err := http.DefaultTransport.RoundTrip(r)
	if err != nil {
		t.Fatal(err)
	}
	defer func() { _ = response.Body.Close() }()
	text, err := io.ReadAll(response.Body)
	if err != nil {
		t.Fatal(err)
	}
	return answer{response.StatusCode, string(text), response.Header}
}

// site is the address of a viewer without its token.
func site(s *Server) string { return "http://" + s.hosts[0] }

// keyOf enters and returns the header that lets in.
func keyOf(t testing.TB, s *Server) map[string]string {
	t.Helper()
	address, err := s.Address()
	if err != nil {
		t.Fatal(err)
	}
	_, token, _ := strings.Cut(address, "#token=")
	a := ask(t, "POST", site(s)+"/api/session", `{"token": "`+token+`"}`, nil)
	var v struct{ Key string }
	if err := json.Unmarshal([]byte(a.body), &v); err != nil || a.status != 200 {
		t.Fatalf("entering: %d %s", a.status, a.body)
	}
	return map[string]string{
		"Authorization": "Bearer " + v.Key, "Content-Type": "application/json",
	}
}

func with(header map[string]string, name, value string) map[string]string {
	more := map[string]string{name: value}
	for n, v := range header {
		if n != name {
			more[n] = v
		}
	}
	return more
}

// fakeLauncher notes what it is told.
type fakeLauncher struct{ started bytes.Buffer }

func (*fakeLauncher) Check(input []byte) error {
	if !bytes.Contains(input, []byte("gap")) {
		return &requestError{text: "input.yaml:1:1: want a gap"}
	}
	return nil
}

func (f *fakeLauncher) Start(input []byte, name string) error {
	f.started.WriteString(name + ":" + string(input))
	return nil
}
