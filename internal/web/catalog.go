package web

import (
	"errors"
	"fmt"
	"net/http"
	"os"
	"path"
	"path/filepath"
	"slices"
	"strings"

	"ionfall/internal/report"
	"ionfall/internal/store"
)

// The kinds of items.
const (
	kindRun  = "run"
	kindScan = "scan"
)

const (
	runningSuffix = ".running"
	pointsFolder  = "points"
)

// Item is something to look at.
type Item struct {
	ID      string `json:"id"` // path below the viewed folder, with /
	Kind    string `json:"kind"`
	Running bool   `json:"running"`
	Stopped bool   `json:"stopped,omitempty"` // before its end, and nobody works on it
	Verdict string `json:"verdict,omitempty"`
	Title   string `json:"title,omitempty"`
	State   any    `json:"state,omitempty"`
	Points  int    `json:"points,omitempty"`

	dir string
}

// ErrNotFolder says that there is nothing to view in a file.
var ErrNotFolder = errors.New("is a file, want a results folder or a folder of them")

// ErrOneResult says that new runs have no place.
var ErrOneResult = errors.New("is one result: to start runs, view the folder that it is in")

// catalog finds results below a folder.
type catalog struct {
	root   string
	single string // the ID where the folder itself is a result, else ""
}

func newCatalog(dir string) (*catalog, error) {
	root, err := filepath.Abs(dir)
	if err != nil {
		return nil, err
	}
	c := &catalog{root: root}
	if report.IsRun(root) || report.IsScan(root) {
		c.root = filepath.Dir(root)
		c.single = strings.TrimSuffix(filepath.Base(root), runningSuffix)
		return c, nil
	}
	info, err := os.Stat(root)
	if err != nil {
		return nil, err
	}
	if !info.IsDir() {
		return nil, fmt.Errorf("%s %w", dir, ErrNotFolder)
	}
	return c, nil
}

// items lists the results, without the points of scans; more says that there are others.
func (c *catalog) items() (list []Item, more bool) {
	if c.single != "" {
		if item, ok := c.at(c.single); ok {
			list = append(list, item)
		}
		return list, false
	}
	c.search("", 1, &list)
	if len(list) > maxItems {
		return list[:maxItems], true
	}
	return list, false
}

// search looks into a folder below the root. Links are not followed: what they lead to may lie
// elsewhere.
func (c *catalog) search(below string, depth int, list *[]Item) {
	entries, err := os.ReadDir(filepath.Join(c.root, filepath.FromSlash(below)))
	if err != nil {
		return // it went away or may not be read; the others can be shown
	}
	seen := map[string]bool{}
	for _, e := range entries {
		if !e.IsDir() || strings.HasPrefix(e.Name(), ".") || len(*list) > maxItems {
			continue
		}
		id := path.Join(below, strings.TrimSuffix(e.Name(), runningSuffix))
		if seen[id] {
			continue
		}
		seen[id] = true
		if item, ok := c.at(id); ok {
			*list = append(*list, item)
			continue
		}
		if depth < maxDepth {
			c.search(id, depth+1, list)
		}
	}
}

// at is the result with an ID that the catalog itself made.
func (c *catalog) at(id string) (Item, bool) {
	dir := filepath.Join(c.root, filepath.FromSlash(id))
	switch {
	case report.IsScan(dir):
		return Item{ID: id, Kind: kindScan, dir: dir}, true
	case report.IsRun(dir):
		_, whole, err := store.Locate(dir)
		item := Item{ID: id, Kind: kindRun, Running: err == nil && !whole, dir: dir}
		if item.Running && !claimed(dir) {
			item.Running, item.Stopped = false, true
		}
		return item, err == nil
	}
	return Item{}, false
}

// claimed tells whether a process says that it works on a run.
func claimed(dir string) bool {
	_, err := os.Stat(dir + ".lock")
	return err == nil
}

// find looks an ID of a request up. It is compared with those of the list and never used as a
// path before that; the points of a scan are looked up in its folder.
func (c *catalog) find(id string) (Item, error) {
	list, _ := c.items()
	for _, item := range list {
		if item.ID == id {
			return item, nil
		}
		if item.Kind != kindScan || !strings.HasPrefix(id, item.ID+"/") {
			continue
		}
		for _, p := range pointsOf(item) {
			if p == id {
				if point, ok := c.at(p); ok {
					return point, nil
				}
			}
		}
	}
	return Item{}, &requestError{http.StatusNotFound, "no such results"}
}

// pointsOf lists the IDs of the points of a scan.
func pointsOf(scan Item) []string {
	entries, err := os.ReadDir(filepath.Join(scan.dir, pointsFolder))
	if err != nil {
		return nil // none yet
	}
	var list []string
	for _, e := range entries {
		if e.IsDir() {
			name := strings.TrimSuffix(e.Name(), runningSuffix)
			list = append(list, path.Join(scan.ID, pointsFolder, name))
		}
	}
	return slices.Compact(list)
}

// describe adds what the list shows of an item.
func (c *catalog) describe(item *Item) {
	if item.Kind == kindScan {
		item.Points = len(pointsOf(*item))
		item.Title = path.Base(item.ID)
		return
	}
	r, err := report.Open(item.dir)
	if err != nil {
		item.Verdict, item.Title = "unreadable", err.Error()
		return
	}
	item.Verdict, item.Title = r.Verdict(), r.Title()
	if item.Stopped {
		item.Verdict = "stopped"
	}
	if item.Running || item.Stopped {
		item.State = liveState(item.dir)
	}
}

// liveState is the progress of a run, nil when there is none to read at the moment.
func liveState(dir string) any {
	folder, _, err := store.Locate(dir)
	if err != nil {
		return nil
	}
	var state map[string]any
	if err := store.ReadJSON(filepath.Join(folder, "state.json"), &state); err != nil {
		return nil
	}
	return state
}
