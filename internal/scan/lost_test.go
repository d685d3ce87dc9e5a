package scan

import (
	"context"
	"errors"
	"fmt"
	"math/rand/v2"
	"os"
	"os/exec"
	"path/filepath"
	"slices"
	"strconv"
	"strings"
	"sync"
	"testing"
	"time"

	"ionfall/internal/run"
	"ionfall/internal/store"
	"ionfall/internal/table"
)

const childVariable = "IONFALL_TEST_SCAN"

// TestMain lets the test binary be a runner that can be killed.
func TestMain(m *testing.M) {
	if dir := os.Getenv(childVariable); dir != "" {
		if err := runAsChild(dir); err != nil {
			fmt.Fprintln(os.Stderr, err)
			os.Exit(1)
		}
		os.Exit(0)
	}
	os.Exit(m.Run())
}

// often makes checkpoints frequent enough for runs of a tenth of a second.
const often = 15 * time.Millisecond

func runAsChild(dir string) error {
	p, err := Load(filepath.Join(dir, "..", "small.yaml"))
	if err != nil {
		return err
	}
	f, err := Open(context.Background(), p, dir)
	if err != nil {
		return err
	}
	_, err = f.Run(context.Background(), Options{Cores: 2, CheckpointEvery: often, Wait: true})
	return err
}

const six = `vary:
  gas.pressure: [50 Pa, 60 Pa]
  drive.tones.0.amplitude: {from: 150 V, to: 250 V, points: 3}
  numerics.periods: [30]
`

// open makes the folder of a plan beside it.
func open(t *testing.T, p *Plan, name string) *Folder {
	t.Helper()
	f, err := Open(context.Background(), p, filepath.Join(p.folder, name))
	if err != nil {
		t.Fatal(err)
	}
	return f
}

func work(t *testing.T, f *Folder, o Options) *Report {
	t.Helper()
	r, err := f.Run(context.Background(), o)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// tableText is the table on the disk without what the runs cost, with all bits of its numbers.
func tableText(t *testing.T, f *Folder) string {
	t.Helper()
	points, err := store.ReadTable(filepath.Join(f.Dir, "points.parquet"))
	if err != nil {
		t.Fatal(err)
	}
	var b strings.Builder
	for _, c := range points.Columns {
		if c.Name == "cpu_s" || c.Name == "wall_s" {
			continue
		}
		b.WriteString(c.Name)
		for i := range c.Len() {
			switch {
			case c.Float != nil:
				b.WriteString(" " + strconv.FormatFloat(c.Float[i], 'x', -1, 64))
			case c.Int != nil:
				b.WriteString(" " + strconv.FormatInt(c.Int[i], 10))
			default:
				b.WriteString(" " + strconv.Quote(c.Text[i]))
			}
		}
		b.WriteString("\n")
	}
	return b.String()
}

// Goal: kill -9 at any moment loses nothing and changes nothing, and a point run by itself gives
// the bits of the scan. Method: a runner is killed at 20 random moments; the table is compared with
// that of an undisturbed one.
func TestKilledScanHasTheSameTable(t *testing.T) {
	p := goodPlan(t, six)
	whole := open(t, p, "whole")
	begin := time.Now()
	work(t, whole, Options{Cores: 2, CheckpointEvery: often})
	took := time.Since(begin)
	want := tableText(t, whole)
	r := rand.New(rand.NewPCG(1, uint64(took)))
	f, resumed := open(t, p, "killed"), 0
	check := func() {
		work(t, f, Options{Cores: 2, CheckpointEvery: often})
		if got := tableText(t, f); got != want {
			t.Errorf("the table of the killed scan is\n%s\nwant\n%s", got, want)
		}
	}
	for k := range 20 {
		// Some die at the start of a scan, some near its end; one that is done is checked.
		if !killedWithin(t, f.Dir, time.Duration(r.Float64()*float64(took)/2)) {
			check()
			if err := os.RemoveAll(f.Dir); err != nil {
				t.Fatal(err)
			}
		}
		left, err := filepath.Glob(filepath.Join(f.Dir, pointsName, "*.running", store.CheckpointFile))
		if err != nil {
			t.Fatal(err)
		}
		resumed += len(left)
		path := filepath.Join(f.Dir, "points.parquet")
		if _, err := store.ReadTable(path); err != nil && !errors.Is(err, os.ErrNotExist) {
			t.Errorf("after kill %d: %v", k+1, err)
		}
	}
	f = open(t, p, "killed")
	check()
	t.Logf("20 kills left a point with a checkpoint %d times; a whole scan took %v", resumed, took)
	if resumed == 0 {
		t.Error("no kill left a run in the middle: the test shows nothing")
	}
	single(t, p, whole)
}

// killedWithin starts a runner and kills it after a time; false if it was done before.
func killedWithin(t *testing.T, dir string, after time.Duration) bool {
	t.Helper()
	c := exec.Command(os.Args[0])
	c.Env = append(os.Environ(), childVariable+"="+dir)
	if err := c.Start(); err != nil {
		t.Fatal(err)
	}
	time.Sleep(after)
	if err := c.Process.Kill(); err != nil && !errors.Is(err, os.ErrProcessDone) {
		t.Fatal(err)
	}
	return c.Wait() != nil
}

// single runs one point by itself.
func single(t *testing.T, p *Plan, f *Folder) {
	t.Helper()
	plan, err := run.Prepare(filepath.Join(f.PointDir(4), "input.yaml"))
	if err != nil {
		t.Fatal(err)
	}
	out := filepath.Join(p.folder, "single")
	alone, _, err := run.Run(context.Background(), plan, run.Options{Out: out, Cores: 2})
	if err != nil {
		t.Fatal(err)
	}
	inScan, err := store.ReadSummary(filepath.Join(f.PointDir(4), store.SummaryFile))
	if err != nil {
		t.Fatal(err)
	}
	a, errA := alone.Flatten()
	b, errB := inScan.Flatten()
	same := func(x, y store.Result) bool { // NaN is "no error"
		return fmt.Sprintf("%x", x) == fmt.Sprintf("%x", y)
	}
	if errA != nil || errB != nil || len(a) == 0 || !slices.EqualFunc(a, b, same) {
		t.Errorf("a point by itself gives %v, in the scan %v", a, b)
	}
}

// Goal: two runners on one folder share the points and compute none twice. Method: start both at
// once; the points that they computed add up.
func TestTwoRunnersShareTheWork(t *testing.T) {
	p := goodPlan(t, six)
	whole := open(t, p, "whole")
	work(t, whole, Options{Cores: 2})
	var reports [2]*Report
	var wait sync.WaitGroup
	for k := range reports {
		wait.Go(func() {
			f, err := Open(context.Background(), p, filepath.Join(p.folder, "shared"))
			if err == nil {
				reports[k], err = f.Run(context.Background(), Options{Cores: 1, Wait: true})
			}
			if err != nil {
				t.Error(err)
			}
		})
	}
	wait.Wait()
	if t.Failed() {
		return
	}
	a, b := reports[0], reports[1]
	if a.Computed+b.Computed != 6 || a.Computed == 0 || b.Computed == 0 ||
		a.Done != 6 || b.Done != 6 {
		t.Errorf("computed %d and %d, done %d and %d", a.Computed, b.Computed, a.Done, b.Done)
	}
	shared, err := Find(p, filepath.Join(p.folder, "shared"))
	if err != nil {
		t.Fatal(err)
	}
	if tableText(t, shared) != tableText(t, whole) {
		t.Error("the table of two runners differs from that of one")
	}
}

// Goal: a runner takes up what another leaves. Method: hold the claim of a point, give it up while
// the runner waits.
func TestRunnerWaitsForOthers(t *testing.T) {
	p := goodPlan(t, "vary: {gas.pressure: [50 Pa, 60 Pa]}\n")
	f := open(t, p, "scan")
	held, err := store.Take(f.PointDir(2))
	if err != nil {
		t.Fatal(err)
	}
	r := work(t, f, Options{Cores: 1, Shard: 1, Shards: 1})
	if r.Done != 1 || r.Elsewhere != 1 || f.State(2) != Running {
		t.Errorf("without waiting: %+v", r.Snapshot)
	}
	time.AfterFunc(300*time.Millisecond, func() {
		if err := held.Close(); err != nil {
			t.Error(err)
		}
	})
	if r := work(t, f, Options{Cores: 1, Wait: true}); r.Done != 2 || r.Computed != 1 {
		t.Errorf("with waiting: %+v", r)
	}
}

// Goal: shards are disjoint and together whole. Method: run all three.
func TestShards(t *testing.T) {
	p := goodPlan(t, "vary: {gap: {from: 15 mm, to: 25 mm, points: 5}}\n")
	f := open(t, p, "scan")
	for k, want := range []int{2, 2, 1} {
		r := work(t, f, Options{Cores: 2, Shard: k + 1, Shards: 3})
		if r.Computed != want || r.Total != want {
			t.Errorf("shard %d: computed %d of %d, want %d", k+1, r.Computed, r.Total, want)
		}
	}
	points, err := f.Collect(context.Background())
	if err != nil {
		t.Fatal(err)
	}
	status, err := points.Texts("status")
	if err != nil || slices.ContainsFunc(status, func(s string) bool { return s != Done }) {
		t.Errorf("status %v, %v", status, err)
	}
}

// Goal: a point that cannot be computed is recorded with its reason, the others are computed, and
// it is not tried again until asked. Method: a point whose numerics lose the plasma.
func TestFailingPoint(t *testing.T) {
	dir := t.TempDir()
	put(t, dir, "base.yaml", tiny)
	put(t, dir, "list.csv", "initial.density,numerics.steps_per_period,numerics.periods\n"+
		"8e14 /m3,480,24\n8e16 /m3,96,400\n")
	p, err := Load(put(t, dir, "small.yaml", "base: base.yaml\npoints: list.csv\n"))
	if err != nil {
		t.Fatal(err)
	}
	f := open(t, p, "scan")
	r := work(t, f, Options{Cores: 1})
	if r.Done != 1 || r.Failed != 1 || r.Wrong != 1 {
		t.Fatalf("got %+v", r)
	}
	points := readPoints(t, f)
	reason, err := points.Texts("reason")
	if err != nil || !strings.Contains(reason[1], "the numerics have done it") || reason[0] != "" {
		t.Errorf("reasons %q, %v", reason, err)
	}
	if r := work(t, f, Options{Cores: 1}); r.Wrong != 0 || r.Failed != 1 {
		t.Errorf("tried again without being asked: %+v", r)
	}
	if n, err := f.Retry(); n != 1 || err != nil {
		t.Errorf("%d failures forgotten, %v", n, err)
	}
	if r := work(t, f, Options{Cores: 1}); r.Wrong != 1 {
		t.Errorf("not tried again: %+v", r)
	}
}

func readPoints(t *testing.T, f *Folder) *table.Table {
	t.Helper()
	points, err := store.ReadTable(filepath.Join(f.Dir, "points.parquet"))
	if err != nil {
		t.Fatal(err)
	}
	return points
}

// Goal: at the deadline the scan stops with checkpoints, without an error, and was on its way to a
// coarse map. Method: points that take far longer than there is time.
func TestDeadline(t *testing.T) {
	p := goodPlan(t, "vary: {gap: {from: 15 mm, to: 25 mm, points: 5}, numerics.periods: [50000]}\n")
	if order := p.order(make([]float64, 5), true); !slices.Equal(order, []int{2, 0, 4, 1, 3}) {
		t.Errorf("order %v, want the middle, the ends, the rest", order)
	}
	f := open(t, p, "scan")
	var r *Report
	for wait := time.Second; wait < time.Minute && f.State(3) != Interrupted; wait *= 2 {
		// On a busy machine the first deadlines may pass before anything has begun.
		r = work(t, f, Options{Cores: 1, Until: time.Now().Add(wait)})
	}
	if !r.Deadline || r.Done != 0 || f.State(3) != Interrupted || f.State(1) != Waiting {
		t.Errorf("got %+v, states %s and %s", r, f.State(3), f.State(1))
	}
	if _, err := os.Stat(filepath.Join(f.PointDir(3)+".running", store.CheckpointFile)); err != nil {
		t.Errorf("no checkpoint: %v", err)
	}
}

// Goal: an interrupt ends the scan with an error that says how to go on. Method: cancel.
func TestInterrupt(t *testing.T) {
	p := goodPlan(t, six)
	f := open(t, p, "scan")
	ctx, cancel := context.WithCancel(context.Background())
	time.AfterFunc(200*time.Millisecond, cancel)
	if _, err := f.Run(ctx, Options{Cores: 1}); !errors.Is(err, ErrInterrupted) {
		t.Errorf("got %v", err)
	}
}

// Goal: a folder is not mixed up with another plan. Method: change the plan.
func TestOtherPlan(t *testing.T) {
	p := goodPlan(t, six)
	f := open(t, p, "scan")
	other := goodPlan(t, "vary: {gap: [1 cm]}\n")
	var wrong *OtherPlanError
	if _, err := Open(context.Background(), other, f.Dir); !errors.As(err, &wrong) {
		t.Errorf("got %v", err)
	}
	kept, err := Load(f.Dir)
	if err != nil {
		t.Fatal(err)
	}
	if kept.Fingerprint() != p.Fingerprint() {
		t.Error("the plan that the folder keeps has other points")
	}
	if _, err := Find(p, p.folder); err == nil || !strings.Contains(err.Error(), "no scan was begun") {
		t.Errorf("got %v", err)
	}
}
