package web

import (
	"embed"
	"encoding/json"
	"errors"
	"io/fs"
	"net/http"
	"strings"

	"ionfall/internal/inputerr"
	"ionfall/internal/report"
)

//go:embed assets
var assets embed.FS

// policy lets the page use its own files and nothing else.
const policy = "default-src 'none'; script-src 'self'; style-src 'self'; img-src 'self' data:; " +
	"connect-src 'self'; base-uri 'none'; form-action 'none'; frame-ancestors 'none'"

// guard refuses what no page of ours would send, and forbids browsers to do more than needed.
func (s *Server) guard(next http.Handler) http.Handler {
	return http.HandlerFunc(func(w http.ResponseWriter, r *http.Request) {
		h := w.Header()
		h.Set("Content-Security-Policy", policy)
		h.Set("X-Content-Type-Options", "nosniff")
		h.Set("Referrer-Policy", "no-referrer")
		h.Set("Cross-Origin-Opener-Policy", "same-origin")
		h.Set("Cross-Origin-Resource-Policy", "same-origin")
		h.Set("Cache-Control", "no-store")
		if r.Host != s.hosts[0] && r.Host != s.hosts[1] {
			fail(w, http.StatusMisdirectedRequest, "this viewer answers at "+s.hosts[0]+" only")
			return
		}
		if !s.ours(r) {
			fail(w, http.StatusForbidden, "requests of other sites are refused")
			return
		}
		r.Body = http.MaxBytesReader(w, r.Body, maxBody)
		next.ServeHTTP(w, r)
	})
}

// ours tells whether a browser sent the request for our page. What is no browser needs the key.
func (s *Server) ours(r *http.Request) bool {
	if origin := r.Header.Get("Origin"); origin != "" && origin != "http://"+r.Host {
		return false
	}
	switch r.Header.Get("Sec-Fetch-Site") {
	case "", "same-origin", "none":
		return true
	}
	// A link from elsewhere may open the page, which shows nothing without a token.
	return r.Method == http.MethodGet && r.URL.Path == "/" &&
		r.Header.Get("Sec-Fetch-Mode") == "navigate"
}

// handler answers a request of a known page with something for JSON.
type handler func(r *http.Request) (any, error)

// known lets only pages with a key in.
func (s *Server) known(f handler) http.HandlerFunc {
	return func(w http.ResponseWriter, r *http.Request) {
		if !s.door.knows(r.Header.Get("Authorization")) {
			fail(w, http.StatusUnauthorized, "open the address that ionfall view printed")
			return
		}
		if r.Method == http.MethodPost && r.Header.Get("Content-Type") != "application/json" {
			fail(w, http.StatusUnsupportedMediaType, "want JSON")
			return
		}
		v, err := f(r)
		if err != nil {
			fail(w, statusOf(err), err.Error())
			return
		}
		writeJSON(w, v)
	}
}

// requestError is the fault of the request.
type requestError struct {
	status int
	text   string
}

// Error returns the text.
func (e *requestError) Error() string { return e.text }

func statusOf(err error) int {
	var request *requestError
	var large *http.MaxBytesError
	var input *inputerr.Error
	switch {
	case errors.As(err, &request):
		return request.status
	case errors.As(err, &large):
		return http.StatusRequestEntityTooLarge
	case errors.As(err, &input):
		return http.StatusUnprocessableEntity
	case errors.Is(err, fs.ErrNotExist):
		return http.StatusNotFound
	}
	return http.StatusInternalServerError
}

func fail(w http.ResponseWriter, status int, text string) {
	w.Header().Set("Content-Type", "application/json")
	w.WriteHeader(status)
	// A client that has gone away needs no answer.
	_ = json.NewEncoder(w).Encode(map[string]string{"error": text})
}

func writeJSON(w http.ResponseWriter, v any) {
	data, err := json.Marshal(v)
	if err != nil {
		fail(w, http.StatusInternalServerError, err.Error())
		return
	}
	w.Header().Set("Content-Type", "application/json")
	_, _ = w.Write(data) // a client that has gone away needs no answer
}

// asset serves one of the files of the page. They hold no results and need no key.
func (s *Server) asset(name, kind string) http.HandlerFunc {
	data, err := assets.ReadFile("assets/" + name)
	if err != nil {
		panic("web: " + err.Error())
	}
	if name == "app.css" {
		data = append([]byte(report.Styles()), data...)
	}
	return func(w http.ResponseWriter, _ *http.Request) {
		w.Header().Set("Content-Type", kind)
		_, _ = w.Write(data) // a client that has gone away needs no answer
	}
}

// readJSON reads a small request.
func readJSON(r *http.Request, v any) error {
	d := json.NewDecoder(r.Body)
	d.DisallowUnknownFields()
	err := d.Decode(v)
	var large *http.MaxBytesError
	if err == nil || errors.As(err, &large) {
		return err
	}
	return &requestError{http.StatusBadRequest, "not the JSON that was expected: " +
		strings.TrimPrefix(err.Error(), "json: ")}
}
