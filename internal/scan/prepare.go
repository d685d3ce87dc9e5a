package scan

import (
	"errors"
	"fmt"
	"path/filepath"
	"runtime"

	"go.yaml.in/yaml/v4"
	"golang.org/x/sync/errgroup"

	"ionfall/internal/inputerr"
	"ionfall/internal/run"
)

// Prepare checks all points with the data of their gases. It returns, with them, the processor time
// that each is expected to take [s].
func (p *Plan) Prepare() ([]*run.Plan, []float64, error) {
	return p.prepare(func(Point) bool { return true })
}

// prepare does so for some of the points.
func (p *Plan) prepare(wanted func(Point) bool) ([]*run.Plan, []float64, error) {
	plans, cost := make([]*run.Plan, len(p.Points)), make([]float64, len(p.Points))
	errs := make([]error, len(p.Points))
	var group errgroup.Group
	group.SetLimit(runtime.NumCPU())
	for i, point := range p.Points {
		if !wanted(point) {
			continue
		}
		group.Go(func() error {
			prepared, err := run.PrepareBytes(
				filepath.Join(p.folder, pointName(point.Number)+".yaml"), point.Input)
			if err != nil {
				errs[i] = err
				return err
			}
			plans[i], cost[i] = prepared, prepared.ExpectedCPU()
			return nil
		})
	}
	if group.Wait() == nil {
		return plans, cost, nil
	}
	for i, err := range errs { // the first one, whichever came first
		if err != nil {
			return nil, nil, p.blame(err, p.Points[i])
		}
	}
	return nil, nil, errors.New("scan: a point cannot be prepared")
}

// blame gives an error about the input of a point its place in the plan.
func (p *Plan) blame(err error, point Point) error {
	var list inputerr.List
	if !errors.As(err, &list) {
		return fmt.Errorf("point %d: %w", point.Number, err)
	}
	nodes := make([]*yaml.Node, len(p.Axes))
	for i := range nodes {
		nodes[i] = &yaml.Node{}
	}
	return p.placed(list, point.Number, nodes)
}
