package scan

import (
	"context"
	"errors"
	"fmt"
	"maps"
	"math"
	"path/filepath"
	"slices"
	"sync"

	"ionfall/internal/store"
	"ionfall/internal/table"
)

// collector makes the table of points. Whole results do not change, so each is read once.
type collector struct {
	folder *Folder
	mu     sync.Mutex
	known  map[int]*outcome
}

// outcome is what the results of a point say.
type outcome struct {
	verdict   string
	results   []store.Result
	cpu, wall float64
}

func newCollector(f *Folder) *collector {
	return &collector{folder: f, known: map[int]*outcome{}}
}

// outcome reads the results of a point that is done.
func (c *collector) outcome(number int) (*outcome, error) {
	c.mu.Lock()
	o := c.known[number]
	c.mu.Unlock()
	if o != nil {
		return o, nil
	}
	dir, whole, err := store.Locate(c.folder.PointDir(number))
	if err == nil && !whole {
		err = fmt.Errorf("%s is not whole", dir)
	}
	if err != nil {
		return nil, err
	}
	s, err := store.ReadSummary(filepath.Join(dir, store.SummaryFile))
	if err != nil {
		return nil, err
	}
	o = &outcome{
		verdict: s.Verdict, cpu: number64(s.Provenance["cpu_s"]),
		wall: number64(s.Provenance["wall_s"]),
	}
	if o.results, err = s.Flatten(); err != nil {
		return nil, err
	}
	c.mu.Lock()
	c.known[number] = o
	c.mu.Unlock()
	return o, nil
}

func number64(v any) float64 {
	f, ok := v.(float64)
	if !ok {
		return math.NaN()
	}
	return f
}

// Table is the table of points as the folders say now. Everything in it but the cost follows from
// the plan alone.
func (f *Folder) Table() (*table.Table, error) { return newCollector(f).table() }

func (c *collector) table() (*table.Table, error) {
	points := c.folder.Plan.Points
	n := len(points)
	numbers := make([]int64, n)
	status, verdict, reason := make([]string, n), make([]string, n), make([]string, n)
	cpu, wall := make([]float64, n), make([]float64, n)
	outcomes := make([]*outcome, n)
	units := map[string]string{}
	for i, p := range points {
		numbers[i], status[i] = int64(p.Number), c.folder.State(p.Number)
		cpu[i], wall[i] = math.NaN(), math.NaN()
		switch status[i] {
		case Failed:
			reason[i] = c.folder.failure(p.Number)
		case Done:
			o, err := c.outcome(p.Number)
			if err != nil {
				return nil, err
			}
			outcomes[i], verdict[i], cpu[i], wall[i] = o, o.verdict, o.cpu, o.wall
			for _, r := range o.results {
				units[r.Path] = r.Unit
			}
		}
	}
	t := table.New(pointsName, "one row a point of the scan")
	t.AddInt("point", "", "its number", numbers)
	c.addAxes(t)
	t.AddText("status", "waiting, running, interrupted, done or failed", status)
	t.AddText("verdict", "of the trust checks: ok, warn or fail; empty where there is none", verdict)
	addResults(t, units, outcomes)
	t.AddFloat("cpu_s", "s", "processor time", cpu)
	t.AddFloat("wall_s", "s", "time from start to end", wall)
	t.AddText("reason", "why the point cannot be computed", reason)
	return t, nil
}

func (c *collector) addAxes(t *table.Table) {
	points := c.folder.Plan.Points
	for k, a := range c.folder.Plan.Axes {
		texts, values := make([]string, len(points)), make([]float64, len(points))
		for i, p := range points {
			texts[i], values[i] = p.Texts[k], p.Values[k]
		}
		if a.Text {
			t.AddText(a.Path, "input that varies", texts)
		} else {
			t.AddFloat(a.Column(), a.Unit, "input that varies", values)
		}
	}
}

// addResults adds every result that any point has.
func addResults(t *table.Table, units map[string]string, outcomes []*outcome) {
	value, se := map[string][]float64{}, map[string][]float64{}
	for path := range units {
		value[path], se[path] = missing(len(outcomes)), missing(len(outcomes))
	}
	for i, o := range outcomes {
		if o == nil {
			continue
		}
		for _, r := range o.results {
			value[r.Path][i], se[r.Path][i] = r.Value.Value, r.SE
		}
	}
	for _, path := range slices.Sorted(maps.Keys(units)) {
		t.AddEstimate(path, units[path], "result of the point", value[path], se[path])
	}
}

func missing(n int) []float64 {
	v := make([]float64, n)
	for i := range v {
		v[i] = math.NaN()
	}
	return v
}

// write renews points.parquet. Unless it must, it leaves that to another process that is about it.
func (c *collector) write(ctx context.Context, must bool) error {
	path := filepath.Join(c.folder.Dir, pointsName+".parquet")
	var release func() error
	var err error
	if must {
		release, err = claim(ctx, path)
	} else {
		release, err = store.Claim(path)
		if errors.Is(err, store.ErrLocked) {
			return nil
		}
	}
	if err != nil {
		return err
	}
	t, err := c.table()
	if err == nil {
		err = store.WriteTable(c.folder.Dir, t, map[string]string{
			"points_sha256": c.folder.Plan.Fingerprint(),
		})
	}
	return errors.Join(err, release())
}

// Collect renews points.parquet from the folders of the points, whoever computed them.
func (f *Folder) Collect(ctx context.Context) (*table.Table, error) {
	c := newCollector(f)
	if err := c.write(ctx, true); err != nil {
		return nil, err
	}
	return c.table()
}
