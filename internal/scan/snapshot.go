package scan

import (
	"context"
	"slices"
	"time"

	"ionfall/internal/progress"
)

// Snapshot is how far a scan is.
type Snapshot struct {
	Total, Done, Failed int
	Elsewhere           int // points at which other runners work
	Running             []RunningPoint
	Elapsed             time.Duration
	Left                Left
	Cores               int
	// Predicted is the whole time as foreseen after a tenth of the points; 0 if there was no such
	// moment.
	Predicted time.Duration
}

// RunningPoint is a run in progress.
type RunningPoint struct {
	Number int
	progress.Status
}

// Report is how a scan went.
type Report struct {
	Snapshot
	// Computed and Wrong count the points of this runner.
	Computed, Wrong int
	// Deadline says that Until ended it.
	Deadline bool
}

// renewTable writes the table, but not so often that it takes more than a twentieth of the time.
func (r *runner) renewTable(ctx context.Context) {
	r.mu.Lock()
	since := time.Since(r.written)
	if since < tableEvery || since < 20*r.writing {
		r.mu.Unlock()
		return
	}
	r.written = time.Now()
	r.mu.Unlock()
	begin := time.Now()
	if err := r.table.write(ctx, false); err != nil {
		// The folders of the points have it all; the table is written again.
		r.log.Warn("the table of points was not written", "error", err)
	}
	r.mu.Lock()
	r.writing = time.Since(begin)
	r.mu.Unlock()
}

// predict keeps what is foreseen when a tenth of the points is done. Called with the lock held.
func (r *runner) predict() {
	if r.report.Predicted > 0 || 10*r.report.Computed < r.report.Total {
		return
	}
	r.report.Predicted = time.Since(r.started) + r.left().Expected
}

// left predicts the time to the end. Called with the lock held.
func (r *runner) left() Left {
	var running []float64
	for i, s := range r.running {
		seconds := r.forecast.remaining(i, s.Elapsed.Seconds(), s.Remaining.Seconds())
		running = append(running, seconds)
	}
	slices.Sort(running)
	return r.forecast.left(r.todo, running, r.cores)
}

func (r *runner) snapshot() Snapshot {
	r.mu.Lock()
	defer r.mu.Unlock()
	s := Snapshot{
		Total: r.report.Total, Done: r.report.Done, Failed: r.report.Failed,
		Elsewhere: len(r.busy), Elapsed: time.Since(r.started), Cores: r.cores, Left: r.left(),
		Predicted: r.report.Predicted,
	}
	for i, status := range r.running {
		s.Running = append(s.Running,
			RunningPoint{Number: r.folder.Plan.Points[i].Number, Status: status})
	}
	slices.SortFunc(s.Running, func(a, b RunningPoint) int { return a.Number - b.Number })
	return s
}
