package scan

import (
	"context"
	"errors"
	"fmt"
	"io/fs"
	"log/slog"
	"os"
	"runtime"
	"runtime/debug"
	"sync"
	"syscall"
	"time"

	"ionfall/internal/progress"
	"ionfall/internal/run"
	"ionfall/internal/store"
)

// Options are what the caller decides about how a scan is carried out. None changes its results.
type Options struct {
	Cores  int       // 0 for all
	Until  time.Time // the zero time for no deadline
	Shard  int       // this runner takes the points Shard, Shard+Shards ..., from 1
	Shards int       // 0 or 1 for all points
	// Wait for points at which other runners work, to take them up if those die.
	Wait    bool
	Version string
	Log     *slog.Logger
	// Progress is called about every second.
	Progress        func(Snapshot)
	CheckpointEvery time.Duration
}

// ErrInterrupted says that a scan was told to stop; checkpoints are written.
var ErrInterrupted = run.ErrInterrupted

// runner works through the points of a scan.
type runner struct {
	folder  *Folder
	options Options
	cores   int
	plans   []*run.Plan
	table   *collector
	log     *slog.Logger

	mu       sync.Mutex
	todo     []int // indices of points, in order
	busy     []int // at which others work
	running  map[int]progress.Status
	forecast *forecast
	report   Report
	started  time.Time
	written  time.Time
	writing  time.Duration // that the table took
	stop     context.CancelFunc
	fatal    error
}

// Run works through the points until all are done or failed, ctx ends, or the deadline comes. An
// error that is about one point is recorded with it; one that is about the machine (a full disk)
// ends the scan, which can be continued.
func (f *Folder) Run(ctx context.Context, o Options) (*Report, error) {
	r := &runner{
		folder: f, options: o, cores: o.Cores, log: o.Log, table: newCollector(f),
		running: map[int]progress.Status{}, started: time.Now(),
	}
	if r.cores < 1 {
		r.cores = runtime.NumCPU()
	}
	if r.log == nil {
		r.log = slog.New(slog.DiscardHandler)
	}
	if err := r.prepare(); err != nil {
		return nil, err
	}
	ctx, r.stop = context.WithCancel(ctx)
	defer r.stop()
	whole := ctx
	if !o.Until.IsZero() {
		var cancel context.CancelFunc
		ctx, cancel = context.WithDeadline(ctx, o.Until)
		defer cancel()
	}
	r.work(ctx)
	r.report.Deadline = errors.Is(ctx.Err(), context.DeadlineExceeded)
	r.report.Snapshot = r.snapshot()
	err := r.fatal
	if err == nil && ctx.Err() != nil && !r.report.Deadline {
		err = fmt.Errorf("%w with %d of %d points done: the same command continues",
			ErrInterrupted, r.report.Done, r.report.Total)
	}
	// The table is worth a little patience even when the scan was interrupted.
	last, cancel := context.WithTimeout(context.WithoutCancel(whole), tablePatience)
	defer cancel()
	return &r.report, errors.Join(err, r.table.write(last, true))
}

const (
	// tablePatience is how long the last writing of the table waits for other runners.
	tablePatience = 30 * time.Second
	// tableEvery is the least time between two writings of the table.
	tableEvery = 5 * time.Second
	// lookEvery is how often points at which others work are looked at again.
	lookEvery = 2 * time.Second
	// showEvery is how often progress is told.
	showEvery = time.Second
)

// prepare checks the points once more, now with the gases, and puts them in order.
func (r *runner) prepare() error {
	p := r.folder.Plan
	plans, cost, err := p.prepare(r.mine)
	if err != nil {
		return err
	}
	r.plans, r.forecast = plans, newForecast(p, cost)
	for _, i := range p.order(cost, !r.options.Until.IsZero()) {
		number := p.Points[i].Number
		if !r.mine(p.Points[i]) {
			continue
		}
		r.report.Total++
		switch r.folder.State(number) {
		case Done:
			r.report.Done++
			if o, err := r.table.outcome(number); err == nil {
				r.forecast.add(i, o.wall)
			}
		case Failed:
			r.report.Failed++
		default:
			r.todo = append(r.todo, i)
		}
	}
	return nil
}

// mine reports whether a point is in this runner's part.
func (r *runner) mine(p Point) bool {
	n := r.options.Shards
	return n <= 1 || (p.Number-1)%n == r.options.Shard-1
}

// work lets the workers run to their end.
func (r *runner) work(ctx context.Context) {
	var workers, teller sync.WaitGroup
	for range r.cores {
		workers.Go(func() {
			// Each run is one thread's, so that its processor time can be told.
			runtime.LockOSThread()
			defer runtime.UnlockOSThread()
			r.worker(ctx)
		})
	}
	finished := make(chan struct{})
	teller.Go(func() {
		tick := time.NewTicker(showEvery)
		defer tick.Stop()
		for {
			select {
			case <-finished:
				return
			case <-tick.C:
				if r.options.Progress != nil {
					r.options.Progress(r.snapshot())
				}
			}
		}
	})
	workers.Wait()
	close(finished)
	teller.Wait()
}

// worker takes points until there are none.
func (r *runner) worker(ctx context.Context) {
	for ctx.Err() == nil {
		i, wait := r.next()
		switch {
		case i >= 0:
			r.carryOut(ctx, i)
		case !wait:
			return
		default:
			select {
			case <-ctx.Done():
			case <-time.After(lookEvery):
				r.lookAgain()
			}
		}
	}
}

// next returns the point to try now; if there is none, whether to wait for others.
func (r *runner) next() (i int, wait bool) {
	r.mu.Lock()
	defer r.mu.Unlock()
	if len(r.todo) > 0 {
		i = r.todo[0]
		r.todo = r.todo[1:]
		r.running[i] = progress.Status{Remaining: -1}
		return i, false
	}
	return -1, r.options.Wait && len(r.busy) > 0
}

// lookAgain puts the points of others back on the list.
func (r *runner) lookAgain() {
	r.mu.Lock()
	defer r.mu.Unlock()
	r.todo, r.busy = append(r.todo, r.busy...), nil
}

// carryOut runs a point and notes what came of it.
func (r *runner) carryOut(ctx context.Context, i int) {
	number := r.folder.Plan.Points[i].Number
	if r.folder.State(number) == Failed { // by another runner
		r.note(i, func() { r.report.Failed++ })
		return
	}
	summary, err := r.takeUp(ctx, i)
	switch {
	case err == nil:
		wall := number64(summary.Provenance["wall_s"])
		r.note(i, func() {
			r.report.Done++
			r.report.Computed++
			r.forecast.add(i, wall)
			r.predict()
		})
		r.renewTable(ctx)
	case errors.Is(err, store.ErrExists):
		r.note(i, func() { r.report.Done++ })
	case errors.Is(err, store.ErrLocked):
		r.note(i, func() { r.busy = append(r.busy, i) })
	case errors.Is(err, run.ErrInterrupted):
		r.note(i, func() { r.todo = append(r.todo, i) })
	case ofMachine(err):
		r.end(i, fmt.Errorf("point %d: %w (what is done is kept: the same command continues)",
			number, err))
	default:
		r.log.Warn("a point cannot be computed", "point", number, "error", err)
		if recordErr := r.folder.recordFailure(number, err, r.options.Version); recordErr != nil {
			r.end(i, recordErr)
			return
		}
		r.note(i, func() {
			r.report.Failed++
			r.report.Wrong++
		})
	}
}

// takeUp runs a point. A fault of the program in one point does not end the others.
func (r *runner) takeUp(ctx context.Context, i int) (s *store.Summary, err error) {
	defer func() {
		if fault := recover(); fault != nil {
			err = fmt.Errorf("this is a fault of the program: %v\n%s", fault, debug.Stack())
		}
	}()
	return run.TakeUp(ctx, r.plans[i], run.Options{
		Out: r.folder.PointDir(r.folder.Plan.Points[i].Number), Cores: 1, OwnThread: true,
		Version: r.options.Version, Log: r.log, CheckpointEvery: r.options.CheckpointEvery,
		Progress: func(s progress.Status) {
			r.mu.Lock()
			r.running[i] = s
			r.mu.Unlock()
		},
	})
}

// ofMachine tells an error of the machine from one of the point: no other point would fare better.
func ofMachine(err error) bool {
	var path *fs.PathError
	var link *os.LinkError
	var call syscall.Errno
	return errors.As(err, &path) || errors.As(err, &link) || errors.As(err, &call) ||
		errors.Is(err, store.ErrLostClaim)
}

// note ends the run of a point.
func (r *runner) note(i int, change func()) {
	r.mu.Lock()
	defer r.mu.Unlock()
	delete(r.running, i)
	change()
}

// end stops the scan.
func (r *runner) end(i int, err error) {
	r.note(i, func() { r.fatal = errors.Join(r.fatal, err) })
	r.stop()
}
