package run

import (
	"context"
	"errors"
	"fmt"
	"log/slog"
	"math"
	"path/filepath"
	"runtime"
	"time"

	"ionfall/internal/config"
	"ionfall/internal/progress"
	"ionfall/internal/store"
)

// Options are what the caller decides about a run, none of which changes its results, but for
// Accuracy and Budget.
type Options struct {
	Out      string // the results folder; "" for Base/<name of the case>, with -2, -3 ... if it exists
	Base     string // "" for "results"
	Cores    int    // 0 for all
	Progress func(progress.Status)
	Log      *slog.Logger
	Accuracy *config.Accuracy // instead of the input's; for continuing a finished run
	Budget   *config.Budget   // instead of the input's, counted from the start of the run
	Version  string
	// CheckpointEvery is the time between checkpoints; 0 for a few minutes.
	CheckpointEvery time.Duration
	// OwnThread says that the caller has locked its goroutine to a thread and asks for one core:
	// processor time is then that of the thread, where the system tells it, so that several
	// runs in one process do not pay for each other.
	OwnThread bool
}

func (o Options) cores() int {
	if o.Cores > 0 {
		return o.Cores
	}
	return runtime.NumCPU()
}

func (o Options) version() string {
	if o.Version == "" {
		return "unknown"
	}
	return o.Version
}

func (o Options) log() *slog.Logger {
	if o.Log == nil {
		return slog.New(slog.DiscardHandler)
	}
	return o.Log
}

func (o Options) checkpointEvery() time.Duration {
	if o.CheckpointEvery > 0 {
		return o.CheckpointEvery
	}
	return checkpointEvery
}

// Run carries out a plan and returns the summary and the folder it is in. When ctx ends, a
// checkpoint is written and the error is ErrInterrupted.
func Run(ctx context.Context, p *Plan, o Options) (*store.Summary, string, error) {
	folder, err := createFolder(p, o)
	if err != nil {
		return nil, "", err
	}
	m := newMachine(p, folder, o)
	if err := m.open(); err != nil {
		return nil, folder.Dir(), errors.Join(err, folder.Close())
	}
	return m.finish(ctx)
}

func createFolder(p *Plan, o Options) (*store.Run, error) {
	if o.Out != "" {
		return store.Create(o.Out)
	}
	base := o.Base
	if base == "" {
		base = "results"
	}
	return store.CreateNext(filepath.Join(base, p.Name))
}

// open starts a new run: the input is kept first of all.
func (m *machine) open() error {
	if err := m.folder.WriteFile("input.yaml", m.plan.Input); err != nil {
		return err
	}
	if err := m.begin(); err != nil {
		return err
	}
	if err := m.plan.writeTrace(m.folder); err != nil {
		return err
	}
	if m.fixedLength() {
		m.decideFixed()
	}
	return m.save()
}

// Resume continues a run that was interrupted, or a finished one to smaller errors or with a larger
// budget. dir may be given with or without the suffix of a run in progress.
func Resume(ctx context.Context, dir string, o Options) (*store.Summary, string, error) {
	folder, err := store.Reopen(dir)
	if err != nil {
		return nil, dir, err
	}
	m, err := restore(folder, o)
	if err != nil {
		return nil, folder.Dir(), errors.Join(err, folder.Close())
	}
	if err := m.reopen(); err != nil {
		return nil, folder.Dir(), errors.Join(err, folder.Close())
	}
	return m.finish(ctx)
}

// reopen applies new wishes; a finished run needs one.
func (m *machine) reopen() error {
	c := &m.control
	if a := m.options.Accuracy; a != nil {
		m.plan.Case.Accuracy = *a
	}
	if c.Stage != StageDone {
		return nil
	}
	if m.fixedLength() {
		return fmt.Errorf("%s is a finished run of fixed length: nothing is left to do",
			m.folder.Dir())
	}
	if m.options.Accuracy == nil && m.options.Budget == nil && !c.Spent {
		return fmt.Errorf("%s is finished and as accurate as was asked for: "+
			"give an accuracy to go on to, as in: ionfall resume --accuracy 0.5%% %s",
			m.folder.Dir(), m.folder.Dir())
	}
	c.Stage, c.StagePeriods = StageAveraging, c.Averaged.Periods
	c.Reached, c.Spent = false, false
	return nil
}

// finish runs to the end and writes the results.
func (m *machine) finish(ctx context.Context) (*store.Summary, string, error) {
	dir := m.folder.Dir()
	if err := m.loop(ctx); err != nil {
		return nil, dir, errors.Join(err, m.folder.Close())
	}
	m.clock()
	if err := m.writeResolved(); err != nil {
		return nil, dir, errors.Join(err, m.folder.Close())
	}
	s, err := m.write()
	if err != nil {
		return nil, dir, errors.Join(
			fmt.Errorf("%w (the run is kept in %s.running: make room and continue with: "+
				"ionfall resume %s)", err, dir, dir), m.folder.Close())
	}
	return s, dir, m.targetError()
}

// writeResolved writes the input with everything filled in: run again, it gives the same bits.
func (m *machine) writeResolved() error {
	c := *m.plan.Case
	n := m.control.Numerics
	c.Numerics.Cells, c.Numerics.StepsPerPeriod = n.Cells, n.StepsPerPeriod
	c.Numerics.ParticlesPerCell, c.Numerics.Scheme = n.ParticlesPerCell, n.Scheme
	c.Numerics.IonSubsteps = n.IonSubsteps
	c.Gas.Library = m.plan.resolvedLibrary()
	text, err := c.Resolved()
	if err != nil {
		return err
	}
	return m.folder.WriteFile("resolved.yaml", text)
}

// Line is one thing that a description of a plan tells.
type Line struct {
	Name string `json:"name"`
	Text string `json:"text"`
}

// Description is what follows from an input without running it.
type Description struct {
	Lines    []Line   `json:"lines"`
	Numerics Numerics `json:"numerics"`
}

// nominalSpeed is the particle moves a second and core assumed for the expected time; bench/
// measures it.
const nominalSpeed = 2.5e8

// Describe derives everything but running: numbers that follow from the input, the numerics that
// would be chosen for the expected plasma and why, memory, and expected time.
func (p *Plan) Describe() (*Description, error) {
	q, e := p.firstGuess()
	n, why := p.choose(q, finalQuality)
	s, err := p.assemble(n, 1)
	if err != nil {
		return nil, err
	}
	d := &Description{Numerics: n}
	add := func(name, text string, args ...any) {
		d.Lines = append(d.Lines, Line{name, fmt.Sprintf(text, args...)})
	}
	dx, dt := p.Case.Gap/float64(n.Cells), p.period()/float64(n.StepsPerPeriod)
	add("gas density", "%.4g /m3", p.gasDensity())
	add("fundamental", "%.6g MHz, period %.4g ns", p.Case.Drive.Fundamental()/1e6, 1e9*p.period())
	d.Lines = append(d.Lines, p.circuitLines()...)
	add("expected plasma", "density %.2g /m3, electron temperature %.2g eV, sheath %.2g mm, "+
		"ion flux %.2g /m2/s (homogeneous model, within a factor of 3 or so)",
		q.Density, q.ElectronEV, 1e3*q.Sheath, e.IonFlux)
	add("Debye length", "%.3g mm, cell size over it %.2g", 1e3*q.debye(), dx/q.debye())
	add("plasma frequency", "%.3g rad/s, times the time step %.2g", q.frequency(), q.frequency()*dt)
	for _, sp := range s.Species() {
		add("collisions of "+sp.Name, "%.3g candidates a move", sp.Collisions.CandidateRate())
	}
	for _, reason := range why {
		add("chosen", "%s", reason)
	}
	if !p.fixed() {
		add("chosen", "after a pilot run has measured the plasma, these are chosen anew")
	}
	particles := float64(2 * n.Cells * n.ParticlesPerCell)
	add("particles", "%.3g at the start, %.3g in a Debye length", particles,
		particles/2/p.Case.Gap*q.debye())
	grid := 8 * float64(n.Cells*diagnosticsArrays)
	add("memory", "%.0f MB", (particles*40+grid)/1e6+20)
	moves, periods := p.expectedMoves(n, q, e)
	add("expected time", "%.2g s of processor time, for about %.0f periods (to a factor of 3)",
		moves/nominalSpeed, periods)
	return d, nil
}

// diagnosticsArrays is about how many values a cell takes in the recorder.
const diagnosticsArrays = 64 * 40

func (p *Plan) fixed() bool { return p.Case.Numerics.Periods > 0 }

// expectedMoves estimates the particle moves and periods of the whole run.
func (p *Plan) expectedMoves(n Numerics, q plasma, e estimate) (moves, periods float64) {
	perPeriod := float64(n.Cells*n.ParticlesPerCell*n.StepsPerPeriod) *
		(1 + 1/float64(n.IonSubsteps))
	if p.fixed() {
		return perPeriod * float64(p.Case.Numerics.Periods), float64(p.Case.Numerics.Periods)
	}
	residence := 0.6 * q.Density * p.Case.Gap / (2 * e.IonFlux) / p.period()
	want := math.Min(p.Case.Accuracy.IonEnergy, p.Case.Accuracy.IonFlux)
	hits := 1 / (want * want) // impacts that an error of that size takes
	perHit := 2 * residence / float64(n.Cells*n.ParticlesPerCell)
	periods = 2*leastSettling + math.Max(p.leastLives()*residence, hits*perHit)
	return perPeriod * periods * 1.2, periods
}
