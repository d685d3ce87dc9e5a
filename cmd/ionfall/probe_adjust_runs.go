package main

import (
	"context"
	"crypto/sha256"
	"encoding/hex"
	"errors"
	"fmt"
	"path/filepath"
	"runtime"

	"golang.org/x/sync/errgroup"

	"ionfall/internal/probe"
	"ionfall/internal/run"
	"ionfall/internal/store"
)

// points is the folder of the runs.
func (a *adjustment) points() string { return a.out + ".points" }

// addedRounds of runs where the posterior lies, one more a round than there are free inputs.
const addedRounds = 1

// work runs the design, solves, adds runs where the posterior lies, and solves again.
func (a *adjustment) work(ctx context.Context, runs int, say func(string)) (
	*probe.Posterior, error,
) {
	var places [][]float64
	for i := range runs {
		places = append(places, probe.HaltonPlace(i+1, len(a.problem.Inputs)))
	}
	var posterior *probe.Posterior
	for round := range addedRounds + 1 {
		if err := a.runAll(ctx, places, say); err != nil {
			return nil, err
		}
		var err error
		if posterior, err = a.problem.Solve(); err != nil {
			return nil, err
		}
		if round < addedRounds {
			places = posterior.Places(len(a.problem.Inputs) + 1)
		}
	}
	return posterior, nil
}

// runAll simulates at the places, several at once with a core each: a run gives the same on one.
func (a *adjustment) runAll(ctx context.Context, places [][]float64, say func(string)) error {
	parallel := a.parallel
	if parallel == 0 {
		parallel = runtime.NumCPU()
	}
	first := len(a.problem.Points)
	points := make([]probe.Point, len(places))
	group, ctx := errgroup.WithContext(ctx)
	group.SetLimit(parallel)
	for i, place := range places {
		group.Go(func() error {
			done, err := a.runPoint(ctx, place)
			if err != nil {
				return err
			}
			points[i] = *done
			say(fmt.Sprintf("run %d done", first+i+1))
			return nil
		})
	}
	if err := group.Wait(); err != nil {
		return err
	}
	a.problem.Points = append(a.problem.Points, points...)
	return nil
}

// runPoint makes a run, goes on with it, or finds it again.
func (a *adjustment) runPoint(ctx context.Context, place []float64) (*probe.Point, error) {
	src, dir, err := a.inputAt(place)
	if err != nil {
		return nil, err
	}
	_, whole, err := store.Locate(dir)
	o := run.Options{Out: dir, Cores: 1, Version: a.version}
	switch {
	case err == nil && whole:
	case err == nil:
		_, _, err = run.Resume(ctx, dir, o)
	default:
		var plan *run.Plan
		if plan, err = run.PrepareBytes(a.caseFile, src); err == nil {
			_, _, err = run.Run(ctx, plan, o)
		}
	}
	if err == nil {
		var point *probe.Point
		if point, err = a.pointOf(dir, place); err == nil {
			return point, nil
		}
	}
	return nil, fmt.Errorf("%s: %w", dir, err)
}

// inputAt is the input of a run, and its folder: named after the input, so that a run is found
// again whatever it was made for.
func (a *adjustment) inputAt(place []float64) (src []byte, dir string, err error) {
	src, err = probe.With(a.resolved, a.problem.Inputs, a.problem.Values(place))
	if err != nil {
		return nil, "", err
	}
	sum := sha256.Sum256(src)
	return src, filepath.Join(a.points(), "run="+hex.EncodeToString(sum[:6])), nil
}

// pointOf reads what a run says about data and predictions.
func (a *adjustment) pointOf(dir string, place []float64) (*probe.Point, error) {
	r, err := openRun(dir)
	if err != nil {
		return nil, err
	}
	if r.summary.Verdict == store.Fail && !a.anyVerdict {
		return nil, errors.New("the run failed its own checks: narrow the priors, or look at it")
	}
	point := &probe.Point{Place: place}
	for i := range a.probes {
		one := &a.probes[i]
		s, err := r.at(probe.Place{Position: one.Position, Across: one.Across}, &one.Setup)
		if err != nil {
			return nil, err
		}
		// Data stand in the order of probes, and of adjustKeys within them.
		simulated := probe.Compare(one.result, s, &one.Setup).Simulated()
		for _, key := range one.adjusted {
			point.Simulated = append(point.Simulated, simulated[key])
		}
	}
	for _, q := range a.problem.Predicted {
		v, ok := r.summary.Lookup(q.Key)
		if !ok {
			return nil, fmt.Errorf("no result %s", q.Key)
		}
		point.Predicted = append(point.Predicted, probe.Quantity{Value: v.Value, SE: v.SE, Unit: v.Unit})
	}
	return point, nil
}
