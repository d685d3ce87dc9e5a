package web

import (
	"encoding/json"
	"errors"
	"fmt"
	"net/http"

	"ionfall/internal/report"
)

// session trades the one-time token for a key.
func (s *Server) session(w http.ResponseWriter, r *http.Request) {
	var asked struct {
		Token string `json:"token"`
	}
	if err := readJSON(r, &asked); err != nil {
		fail(w, statusOf(err), err.Error())
		return
	}
	key, ok, err := s.door.enter(asked.Token)
	switch {
	case err != nil:
		fail(w, http.StatusInternalServerError, err.Error())
	case !ok:
		fail(w, http.StatusForbidden, "this address was used already, or is not the one that "+
			"ionfall view printed")
	default:
		writeJSON(w, map[string]any{
			"key": key, "version": s.options.Version, "runs": s.options.Launcher != nil,
			"colors": report.MapColors(128), "cautions": report.Cautions(), "kinds": kindList(),
		})
	}
}

// kindItem is a sort of figure.
type kindItem struct {
	ID    string `json:"id"`
	Title string `json:"title"`
	Group string `json:"group"`
}

func kindList() []kindItem {
	var list []kindItem
	for _, k := range report.Kinds() {
		list = append(list, kindItem{k.ID, k.Title, k.Group()})
	}
	return list
}

func (s *Server) invite(*http.Request) (any, error) {
	address, err := s.Address()
	return map[string]string{"address": address}, err
}

// listing is what there is to look at.
type listing struct {
	Items  []Item `json:"items"`
	More   bool   `json:"more"`
	Single string `json:"single"`
}

func (s *Server) list(*http.Request) (any, error) { return s.listing(), nil }

func (s *Server) listing() listing {
	items, more := s.catalog.items()
	for i := range items {
		s.catalog.describe(&items[i])
	}
	return listing{items, more, s.catalog.single}
}

// runs opens the runs that a request names.
func (s *Server) runs(r *http.Request) ([]*report.Run, error) {
	ids := r.URL.Query()["id"]
	if len(ids) == 0 || len(ids) > maxOverlay {
		return nil, &requestError{
			http.StatusBadRequest,
			fmt.Sprintf("%d runs, want 1 to %d", len(ids), maxOverlay),
		}
	}
	var list []*report.Run
	for _, id := range ids {
		item, err := s.catalog.find(id)
		if err != nil {
			return nil, err
		}
		if item.Kind != kindRun {
			return nil, &requestError{http.StatusBadRequest, id + " is no run"}
		}
		one, err := report.Open(item.dir)
		if err != nil {
			return nil, err
		}
		one.Dir = id
		list = append(list, one)
	}
	if err := report.Distinguish(list); err != nil {
		return nil, &requestError{http.StatusBadRequest, err.Error()}
	}
	return list, nil
}

// runView is all but the figures of one run.
type runView struct {
	ID      string        `json:"id"`
	Running bool          `json:"running"` // not finished
	Stopped bool          `json:"stopped"`
	State   any           `json:"state,omitempty"`
	Sheet   *report.Sheet `json:"sheet"`
}

func (s *Server) run(r *http.Request) (any, error) {
	runs, err := s.runs(r)
	if err != nil {
		return nil, err
	}
	sheet, err := report.NewSheet(runs[:1])
	if err != nil {
		return nil, err
	}
	v := runView{ID: runs[0].Dir, Running: !runs[0].Whole, Sheet: sheet}
	if v.Running {
		if item, err := s.catalog.find(v.ID); err == nil {
			v.State, v.Stopped = liveState(item.dir), item.Stopped
		}
	}
	return v, nil
}

// compare is the table of answers of several runs.
func (s *Server) compare(r *http.Request) (any, error) {
	runs, err := s.runs(r)
	if err != nil {
		return nil, err
	}
	return report.NewSheet(runs)
}

func (s *Server) figures(r *http.Request) (any, error) {
	runs, err := s.runs(r)
	if err != nil {
		return nil, err
	}
	kind, err := report.FindKind(r.URL.Query().Get("kind"))
	if err != nil {
		return nil, &requestError{http.StatusBadRequest, err.Error()}
	}
	return kind.Figures(runs, report.Select{})
}

// report is the page of the runs, to be kept.
func (s *Server) report(r *http.Request) (any, error) {
	runs, err := s.runs(r)
	if err != nil {
		return nil, err
	}
	page, err := report.Page(runs)
	return map[string]string{"page": string(page)}, err
}

// launch is an input to be checked or started.
type launch struct {
	Input string `json:"input"`
	Name  string `json:"name"`
}

var errNoRuns = &requestError{
	http.StatusForbidden,
	"this viewer only shows: ionfall view --allow-runs also starts simulations",
}

func (s *Server) check(r *http.Request) (any, error) {
	var asked launch
	if s.options.Launcher == nil {
		return nil, errNoRuns
	}
	if err := readJSON(r, &asked); err != nil {
		return nil, err
	}
	return map[string]string{"problem": problem(s.options.Launcher.Check([]byte(asked.Input)))}, nil
}

func (s *Server) start(r *http.Request) (any, error) {
	var asked launch
	if s.options.Launcher == nil {
		return nil, errNoRuns
	}
	if err := readJSON(r, &asked); err != nil {
		return nil, err
	}
	if !plainName(asked.Name) {
		return nil, &requestError{
			http.StatusBadRequest,
			"want a name of letters, digits, - and _, at most 60",
		}
	}
	if err := s.options.Launcher.Check([]byte(asked.Input)); err != nil {
		return map[string]string{"problem": problem(err)}, nil
	}
	err := s.options.Launcher.Start([]byte(asked.Input), asked.Name)
	return map[string]string{"problem": problem(err), "id": asked.Name}, nil
}

// plainName tells a name that can be that of a folder everywhere.
func plainName(name string) bool {
	if name == "" || len(name) > 60 {
		return false
	}
	for _, c := range name {
		letter := c >= 'a' && c <= 'z' || c >= 'A' && c <= 'Z'
		if !letter && (c < '0' || c > '9') && c != '-' && c != '_' {
			return false
		}
	}
	return name[0] != '-'
}

func problem(err error) string {
	if err == nil {
		return ""
	}
	return err.Error()
}

// events tells what changes, as server-sent events, until the page goes away.
func (s *Server) events(w http.ResponseWriter, r *http.Request) {
	if !s.door.knows(r.Header.Get("Authorization")) {
		fail(w, http.StatusUnauthorized, "open the address that ionfall view printed")
		return
	}
	if s.streams.Add(1) > maxStreams {
		s.streams.Add(-1)
		fail(w, http.StatusTooManyRequests, "too many pages watch this viewer")
		return
	}
	defer s.streams.Add(-1)
	w.Header().Set("Content-Type", "text/event-stream")
	err := s.stream(http.NewResponseController(w), w, r)
	if err != nil && !errors.Is(err, http.ErrAbortHandler) {
		return // the page has gone away
	}
}

func encode(v any) (string, error) {
	b, err := json.Marshal(v)
	return string(b), err
}
