package main

import (
	"bytes"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"os/exec"
	"path/filepath"
	"strings"
	"sync/atomic"

	"ionfall/internal/run"
	"ionfall/internal/scan"
	"ionfall/internal/store"
)

// launcher starts runs for the viewer, each as a process of its own that outlives it.
type launcher struct {
	folder  string
	program string
	busy    atomic.Bool
}

func newLauncher(folder string) (*launcher, error) {
	program, err := os.Executable()
	if err != nil {
		return nil, fmt.Errorf("finding this program, to start runs with: %w", err)
	}
	absolute, err := filepath.Abs(folder)
	if err != nil {
		return nil, err
	}
	return &launcher{folder: absolute, program: program}, nil
}

// Check returns what is wrong with an input, with its places.
func (l *launcher) Check(input []byte) error {
	if isPlan(input) {
		return l.checkPlan(input)
	}
	// Folders that the input names are relative to it, and it will lie in this one.
	_, err := run.PrepareBytes(filepath.Join(l.folder, "input.yaml"), input)
	return err
}

// isPlan tells the plan of a scan from the input of a run: only a plan has a base.
func isPlan(input []byte) bool {
	return bytes.HasPrefix(input, []byte("base:")) || bytes.Contains(input, []byte("\nbase:"))
}

// checkPlan reads a plan where it will lie, as what it names is relative to that.
func (l *launcher) checkPlan(input []byte) error {
	f, err := os.CreateTemp(l.folder, ".plan-*.yaml")
	if err != nil {
		return fmt.Errorf("checking the plan: %w", err)
	}
	_, err = f.Write(input)
	err = errors.Join(err, f.Close())
	if err == nil {
		_, err = scan.Load(f.Name())
	}
	if err != nil {
		text := strings.ReplaceAll(err.Error(), f.Name(), filepath.Join(l.folder, "plan.yaml"))
		err = errors.New(text)
	}
	return errors.Join(err, os.Remove(f.Name()))
}

// Start keeps the input beside the results that it will have and runs it.
func (l *launcher) Start(input []byte, name string) error {
	out := filepath.Join(l.folder, name)
	if _, _, err := store.Locate(out); err == nil {
		return fmt.Errorf("%s is there already, want another name", name)
	} else if !errors.Is(err, fs.ErrNotExist) {
		return err
	}
	if !l.busy.CompareAndSwap(false, true) {
		return errors.New("a run that was started here is still going: one at a time")
	}
	started := false
	defer func() {
		if !started {
			l.busy.Store(false)
		}
	}()
	file, err := l.keep(out+".yaml", input)
	if err != nil {
		return err
	}
	log, err := os.OpenFile(out+".log", os.O_CREATE|os.O_EXCL|os.O_WRONLY, 0o644)
	if err != nil {
		return errors.Join(fmt.Errorf("starting %s: %w", name, err), os.Remove(file))
	}
	args := []string{"run", file, "--out", out}
	if isPlan(input) {
		args = append([]string{"scan"}, args...)
	}
	child := exec.Command(l.program, args...)
	child.Dir, child.Stdout, child.Stderr = l.folder, log, log
	detach(child)
	err = errors.Join(child.Start(), log.Close())
	if err != nil {
		return fmt.Errorf("starting %s: %w", name, err)
	}
	started = true
	go func() {
		// How it ended stands in its log and its results.
		_ = child.Wait()
		l.busy.Store(false)
	}()
	return nil
}

// keep writes the input to a new file.
func (l *launcher) keep(path string, input []byte) (string, error) {
	f, err := os.OpenFile(path, os.O_CREATE|os.O_EXCL|os.O_WRONLY, 0o644)
	if errors.Is(err, fs.ErrExist) {
		return "", fmt.Errorf("%s is there already, want another name", filepath.Base(path))
	}
	if err != nil {
		return "", fmt.Errorf("keeping the input: %w", err)
	}
	_, err = f.Write(input)
	if err = errors.Join(err, f.Close()); err != nil {
		return "", fmt.Errorf("keeping the input: %w", err)
	}
	return path, nil
}
