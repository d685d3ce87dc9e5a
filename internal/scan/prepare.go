package scan

import (
	"errors"
	"fmt"
	"path/filepath"

	"go.yaml.in/yaml/v4"

	"ionfall/internal/inputerr"
	"ionfall/internal/run"
)

// Prepare checks all points with the data of their gases. It returns, with them, the processor time
// that each is expected to take [s].
func (p *Plan) Prepare() ([]*run.Plan, []float64, error) {
	plans, cost := make([]*run.Plan, len(p.Points)), make([]float64, len(p.Points))
	for i, point := range p.Points {
		prepared, err := run.PrepareBytes(filepath.Join(p.folder, pointName(point.Number)+".yaml"),
			point.Input)
		if err != nil {
			return nil, nil, p.blame(err, point)
		}
		plans[i], cost[i] = prepared, prepared.ExpectedCPU()
	}
	return plans, cost, nil
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
