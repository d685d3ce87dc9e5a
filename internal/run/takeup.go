package run

import (
	"bytes"
	"context"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"time"

	"ionfall/internal/store"
)

// TakeUp carries a plan out in the folder Options.Out, from its last checkpoint if there is one. It
// returns an error that is store.ErrExists when the results are whole already, and store.ErrLocked
// while another process works at them.
func TakeUp(ctx context.Context, p *Plan, o Options) (*store.Summary, error) {
	folder, err := store.Take(o.Out)
	if err != nil {
		return nil, err
	}
	m, err := takeUp(p, folder, o)
	if err != nil {
		return nil, errors.Join(err, folder.Close())
	}
	s, _, err := m.finish(ctx)
	return s, err
}

func takeUp(p *Plan, folder *store.Run, o Options) (*machine, error) {
	// A run that was killed before its first checkpoint has nothing to continue from.
	if _, err := os.Stat(folder.Path(store.CheckpointFile)); errors.Is(err, fs.ErrNotExist) {
		m := newMachine(p, folder, o)
		return m, m.open()
	}
	m, err := restore(folder, o)
	if err != nil {
		return nil, err
	}
	if !bytes.Equal(m.plan.Input, p.Input) {
		return nil, fmt.Errorf("%s was begun with another input: move it away to start anew",
			filepath.Dir(folder.Path(store.CheckpointFile)))
	}
	if m.control.Stage == StageDone {
		return m, nil // it was killed while the results were written
	}
	return m, m.reopen()
}

func newMachine(p *Plan, folder *store.Run, o Options) *machine {
	m := &machine{plan: p, options: o, folder: folder, started: time.Now()}
	m.cpuAtOpen = m.cpuSeconds()
	return m
}

// cpuSeconds returns the processor time used so far by what carries out the run [s].
func (m *machine) cpuSeconds() float64 {
	if m.options.OwnThread {
		return threadSeconds()
	}
	return cpuSeconds()
}

// ExpectedCPU returns about how much processor time the run will take [s], to a factor of 3: for
// comparing runs before any of them is made.
func (p *Plan) ExpectedCPU() float64 {
	q, e := p.firstGuess()
	n, _ := p.choose(q, finalQuality)
	moves, _ := p.expectedMoves(n, q, e)
	return moves / nominalSpeed
}
