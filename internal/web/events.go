package web

import (
	"fmt"
	"io"
	"net/http"
	"os"
	"path/filepath"
	"time"

	"ionfall/internal/report"
)

// watched is what a change of the results shows in.
type watched struct {
	running bool
	stopped bool
	points  int
	stamp   time.Time // of the files that say how far it is
}

// stream sends the list whenever something in it has changed, and the state of running runs.
func (s *Server) stream(c *http.ResponseController, w io.Writer, r *http.Request) error {
	tick := time.NewTicker(watchEvery)
	defer tick.Stop()
	var last map[string]watched
	quiet := 0
	for {
		now := s.look()
		if last == nil || !sameLook(last, now) {
			text, err := encode(s.listing())
			if err != nil {
				return err
			}
			if err := send(c, w, "list", text); err != nil {
				return err
			}
			last, quiet = now, 0
		} else if quiet++; quiet%15 == 0 {
			// So that either side notices when the other is gone.
			if err := send(c, w, "still", "{}"); err != nil {
				return err
			}
		}
		select {
		case <-r.Context().Done():
			return nil
		case <-tick.C:
		}
	}
}

func send(c *http.ResponseController, w io.Writer, event, data string) error {
	if err := c.SetWriteDeadline(time.Now().Add(headerTime)); err != nil {
		return err
	}
	if _, err := fmt.Fprintf(w, "event: %s\ndata: %s\n\n", event, data); err != nil {
		return err
	}
	return c.Flush()
}

// look notes what would change the list.
func (s *Server) look() map[string]watched {
	items, _ := s.catalog.items()
	seen := map[string]watched{}
	for _, item := range items {
		seen[item.ID] = lookAt(item)
	}
	return seen
}

func lookAt(item Item) watched {
	w := watched{running: item.Running, stopped: item.Stopped}
	names := []string{filepath.Join(item.dir, "summary.json")}
	if item.Running || item.Stopped {
		names = []string{filepath.Join(item.dir+runningSuffix, "state.json")}
	}
	if item.Kind == kindScan {
		names = []string{filepath.Join(item.dir, report.PointsTable)}
		w.points = len(pointsOf(item))
	}
	for _, name := range names {
		if info, err := os.Stat(name); err == nil {
			w.stamp = info.ModTime()
		}
	}
	return w
}

func sameLook(a, b map[string]watched) bool {
	if len(a) != len(b) {
		return false
	}
	for id, w := range b {
		if was, ok := a[id]; !ok || was != w {
			return false
		}
	}
	return true
}
