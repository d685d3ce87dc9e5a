package main

import (
	"bytes"
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"sync"
	"time"

	"ionfall/internal/store"
)

// cost is what a pair of points took in one of the two ways.
type cost struct{ CPU, Wall float64 } // [s]

// pair is two points run as separate processes and as a scan of two.
type pair struct {
	Points   [2]int
	Separate cost
	Together cost
	Same     int // of the points, those with the bits of the scan
}

const pairsFile = "pairs.json"

// measurePairs runs the pairs that are left, each in both ways, which way first in turn.
func (b *bench) measurePairs(ctx context.Context) error {
	pairs, err := load[[]pair](b.dir, pairsFile)
	if err != nil {
		return err
	}
	half := b.points() / 2
	for k := len(pairs); k < len(b.firsts); k++ {
		p := pair{Points: [2]int{b.firsts[k], (b.firsts[k]-1+half)%b.points() + 1}}
		fmt.Fprintf(os.Stderr, "points %d and %d by themselves\n", p.Points[0], p.Points[1])
		ways := []func(context.Context, *pair) error{b.separate, b.together}
		for i := range ways {
			if err := ways[(i+k)%2](ctx, &p); err != nil {
				return err
			}
		}
		pairs = append(pairs, p)
		if err := keep(b.dir, pairsFile, pairs); err != nil {
			return err
		}
	}
	return nil
}

// separate runs the points of a pair as two single-threaded processes at once.
func (b *bench) separate(ctx context.Context, p *pair) error {
	var both sync.WaitGroup
	var costs [2]cost
	var errs [2]error
	begin := time.Now()
	for i, number := range p.Points {
		out := filepath.Join(b.dir, fmt.Sprintf("alone-%d", number))
		if err := removeRun(out); err != nil {
			return err
		}
		input := filepath.Join(b.folder.PointDir(number), "input.yaml")
		both.Go(func() {
			costs[i], errs[i] = b.process(ctx, []string{"GOMAXPROCS=1"}, "run", input, "--out", out,
				"--cores", "1", "--quiet")
		})
	}
	both.Wait()
	p.Separate = cost{costs[0].CPU + costs[1].CPU, time.Since(begin).Seconds()}
	if err := errors.Join(errs[:]...); err != nil {
		return err
	}
	p.Same = 0
	for _, number := range p.Points {
		same, err := b.sameBits(number, filepath.Join(b.dir, fmt.Sprintf("alone-%d", number)))
		if err != nil {
			return err
		}
		if same {
			p.Same++
		}
	}
	return nil
}

// together runs the same points, and no others, as a scan: the part of the plan with every half-th
// point.
func (b *bench) together(ctx context.Context, p *pair) error {
	half := b.points() / 2
	out := filepath.Join(b.dir, fmt.Sprintf("pair-%d", p.Points[0]))
	if err := os.RemoveAll(out); err != nil {
		return err
	}
	var err error
	p.Together, err = b.process(ctx, nil, "scan", "run", b.planFile(), "--out", out, "--cores", "2",
		"--shard", fmt.Sprintf("%d/%d", (p.Points[0]-1)%half+1, half), "--quiet")
	return err
}

// process runs the program and returns what it took.
func (b *bench) process(ctx context.Context, environment []string, args ...string) (cost, error) {
	c := exec.CommandContext(ctx, b.program, args...)
	c.Env = append(os.Environ(), environment...)
	begin := time.Now()
	out, err := c.CombinedOutput()
	var exit *exec.ExitError
	if errors.As(err, &exit) && exit.ExitCode() == 3 { // done, with the verdict fail
		err = nil
	}
	if err != nil {
		return cost{}, fmt.Errorf("ionfall %s: %w\n%s", args[0], err, out)
	}
	used := c.ProcessState.UserTime() + c.ProcessState.SystemTime()
	return cost{used.Seconds(), time.Since(begin).Seconds()}, nil
}

// removeRun removes a results folder that an interrupted measurement has left.
func removeRun(dir string) error {
	return errors.Join(os.RemoveAll(dir), os.RemoveAll(dir+".running"), os.RemoveAll(dir+".lock"))
}

// sameBits compares all tables and the results in the summary with those of the scan.
func (b *bench) sameBits(number int, dir string) (bool, error) {
	inScan := b.folder.PointDir(number)
	tables, err := filepath.Glob(filepath.Join(inScan, "*.parquet"))
	if err != nil || len(tables) == 0 {
		return false, fmt.Errorf("no tables in %s: %w", inScan, err)
	}
	for _, path := range tables {
		same, err := sameTable(path, filepath.Join(dir, filepath.Base(path)))
		if !same || err != nil {
			return false, err
		}
	}
	var texts [2][]byte
	for i, folder := range []string{inScan, dir} {
		s, err := store.ReadSummary(filepath.Join(folder, store.SummaryFile))
		if err != nil {
			return false, err
		}
		if texts[i], err = json.Marshal(s.Results); err != nil {
			return false, err
		}
	}
	return bytes.Equal(texts[0], texts[1]), nil
}

// sameTable compares all bits of two tables; what is noted beside them names the program.
func sameTable(a, b string) (bool, error) {
	want, err := store.ReadTable(a)
	if err != nil {
		return false, err
	}
	got, err := store.ReadTable(b)
	if err != nil || len(got.Columns) != len(want.Columns) {
		return false, err
	}
	for i := range want.Columns {
		x, y := &want.Columns[i], &got.Columns[i]
		if x.Name != y.Name || !slices.Equal(x.Int, y.Int) || !slices.Equal(x.Text, y.Text) ||
			!slices.EqualFunc(x.Float, y.Float, func(u, v float64) bool {
				return math.Float64bits(u) == math.Float64bits(v)
			}) {
			return false, nil
		}
	}
	return true, nil
}

// keep writes what is known so far.
func keep(dir, name string, v any) error {
	text, err := json.MarshalIndent(v, "", "  ")
	if err != nil {
		return err
	}
	return store.WriteFile(filepath.Join(dir, name), text)
}
