package scan

import (
	"context"
	"errors"
	"fmt"
	"math"
	"path/filepath"
	"slices"

	"ionfall/internal/store"
	"ionfall/internal/surrogate"
	"ionfall/internal/table"
)

// WindowOptions are what is asked of the search for an operating window.
type WindowOptions struct {
	Options
	Wants []Want
	// Best is the result to be made as large as the wants allow, with Smallest as small; "" for the
	// settings that are most surely in the window.
	Best     string
	Smallest bool
	// Probability with which the recommended settings are to meet the wants.
	Probability float64
	// Doubt is the part of the plan that may be on the wrong side of the boundary.
	Doubt float64
	// MostPoints ends the search, those of the plan included.
	MostPoints int
	// Untrusted points count, too: those whose verdict is fail.
	Untrusted bool
	// Tell is called after each round.
	Tell func(points int, doubt float64)
}

// Window is what a search has found.
type Window struct {
	Points    int     // with results that were used
	Left      int     // not used: failed or not trusted
	Doubt     float64 // part of the plan that is expected on the wrong side
	Share     float64 // part of the plan in the window
	Settled   bool    // Doubt is as small as was asked for
	Inside    bool    // the recommended settings meet the wants with the asked-for probability
	Certainty float64 // with which they do
	Settings  Point   // recommended, and run afresh
	Verdict   string  // of that run
	Results   []Confirmed
}

// Confirmed compares what was predicted for the recommended settings with a fresh run at them.
type Confirmed struct {
	Path      string
	Unit      string
	Predicted surrogate.Prediction
	Got       store.Value
	// Within says that they agree within 1.96 standard errors of both.
	Within bool
	// Met says that the fresh value meets the want; true where there is none.
	Met bool
}

// FindWindow runs the plan, then adds points where they decide most about the boundary of the
// window, until that is known or the points are spent; then runs the recommended settings.
func (f *Folder) FindWindow(ctx context.Context, o WindowOptions) (*Window, error) {
	release, err := store.Claim(filepath.Join(f.Dir, "window"))
	if err != nil {
		return nil, err
	}
	w, err := f.findWindow(ctx, o)
	return w, errors.Join(err, release())
}

func (f *Folder) findWindow(ctx context.Context, o WindowOptions) (*Window, error) {
	cube, err := f.Plan.cube()
	if err != nil {
		return nil, err
	}
	s := newSearch(o.Wants, len(cube))
	paths := []string{}
	for _, w := range o.Wants {
		paths = append(paths, w.Path)
	}
	best := -1
	if o.Best != "" {
		if best = slices.Index(paths, o.Best); best < 0 {
			best, s.extra = len(paths), 1
			paths = append(paths, o.Best)
		}
	}
	w := &Window{}
	for {
		if _, err := f.Run(ctx, o.Options); err != nil {
			return nil, err
		}
		known, left, err := f.observed(cube, paths, o.Untrusted)
		if err != nil {
			return nil, err
		}
		s.places = without(s.places, left)
		if len(known) < len(cube)+2 {
			return nil, tooFew(len(known), len(cube))
		}
		if err := s.fit(known); err != nil {
			return nil, err
		}
		w.Points, w.Left, w.Doubt = len(known), len(left), s.doubt()
		w.Settled = w.Doubt <= o.Doubt
		if o.Tell != nil {
			o.Tell(len(f.Plan.Points), w.Doubt)
		}
		room := o.MostPoints - len(f.Plan.Points)
		if w.Settled || room <= 0 {
			break
		}
		if err := f.addPlaces(cube, s.next(min(max(1, o.Cores), room))); err != nil {
			return nil, err
		}
	}
	if err := f.writeWindow(cube, s, paths); err != nil {
		return nil, err
	}
	return w, f.confirm(ctx, o, w, cube, s, paths, best)
}

// observed returns the results of the points that can be used, and the places of the others.
func (f *Folder) observed(cube []Axis, paths []string, untrusted bool) (
	known []observation, left [][]float64, err error,
) {
	c := newCollector(f)
	for _, point := range f.Plan.Points {
		u := placeIn(cube, point)
		if f.State(point.Number) != Done {
			left = append(left, u)
			continue
		}
		result, err := c.outcome(point.Number)
		if err != nil {
			return nil, nil, err
		}
		if result.verdict == store.Fail && !untrusted {
			left = append(left, u)
			continue
		}
		o := observation{u: u}
		for _, path := range paths {
			v, ok := result.lookup(path)
			if !ok {
				return nil, nil, fmt.Errorf("point %d has no result %s; it has %s", point.Number, path,
					result.paths())
			}
			o.value, o.err = append(o.value, v.Value), append(o.err, v.SE)
		}
		known = append(known, o)
	}
	return known, left, nil
}

func (o *outcome) lookup(path string) (store.Value, bool) {
	for _, r := range o.results {
		if r.Path == path {
			return r.Value, true
		}
	}
	return store.Value{}, false
}

// paths are some of the results, for a message.
func (o *outcome) paths() string {
	text := ""
	for i, r := range o.results {
		if i == 20 {
			return text + ", ..."
		}
		if i > 0 {
			text += ", "
		}
		text += r.Path
	}
	return text
}

// without leaves out places at which nothing can be learned.
func without(places, bad [][]float64) [][]float64 {
	return slices.DeleteFunc(slices.Clone(places), func(u []float64) bool {
		return slices.ContainsFunc(bad, func(b []float64) bool { return squared(u, b) < 1e-8 })
	})
}

// writeWindow keeps the probabilities and predictions as window.parquet.
func (f *Folder) writeWindow(cube []Axis, s *search, paths []string) error {
	t := table.New("window", "probability that the wants are met, by the settings")
	n := len(s.places)
	for k, a := range cube {
		v := make([]float64, n)
		for i, u := range s.places {
			v[i], _ = splitUnit(a.textAt(u[k]))
			if a.suffix == "%" {
				v[i] /= 100
			}
		}
		t.AddFloat(a.Column(), a.Unit, "input that varies", v)
	}
	probability := make([]float64, n)
	for i, u := range s.places {
		probability[i] = s.probability(u)
	}
	t.AddFloat("probability", "", "that all wants are met", probability)
	seen := map[string]bool{}
	for k, path := range paths {
		if seen[path] { // two wants of one result
			continue
		}
		seen[path] = true
		value, se := make([]float64, n), make([]float64, n)
		for i, u := range s.places {
			p := s.models[k].at(u)
			value[i], se[i] = p.Mean, p.StdErr
		}
		t.AddEstimate(path, table.UnitOf(path), "predicted from the points", value, se)
	}
	meta := map[string]string{}
	for k, w := range s.wants {
		meta[fmt.Sprintf("want_%d", k+1)] = w.String()
	}
	return store.WriteTable(f.Dir, t, meta)
}

// confirm runs the recommended settings and compares.
func (f *Folder) confirm(ctx context.Context, o WindowOptions, w *Window, cube []Axis, s *search,
	paths []string, best int,
) error {
	for _, u := range s.judges {
		if s.probability(u) > 0.5 {
			w.Share += 1 / float64(len(s.judges))
		}
	}
	u, inside := s.recommended(best, !o.Smallest, o.Probability)
	w.Inside = inside
	if err := f.addPlaces(cube, [][]float64{u}); err != nil {
		return err
	}
	w.Settings = f.Plan.Points[len(f.Plan.Points)-1]
	u = placeIn(cube, w.Settings) // as it is run, with rounded settings
	w.Certainty = s.probability(u)
	if _, err := f.Run(ctx, o.Options); err != nil {
		return err
	}
	if f.State(w.Settings.Number) != Done {
		return fmt.Errorf("the recommended settings could not be run: %s",
			f.failure(w.Settings.Number))
	}
	result, err := newCollector(f).outcome(w.Settings.Number)
	if err != nil {
		return err
	}
	w.Verdict = result.verdict
	for k, path := range paths {
		v, _ := result.lookup(path)
		c := Confirmed{
			Path: path, Unit: v.Unit, Predicted: s.models[k].at(u), Got: v,
			Met: k >= len(o.Wants) || o.Wants[k].Met(v.Value),
		}
		c.Within = math.Abs(v.Value-c.Predicted.Mean) <= 1.96*math.Hypot(v.SE, c.Predicted.StdErr)
		w.Results = append(w.Results, c)
	}
	return nil
}
