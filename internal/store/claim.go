package store

import (
	"crypto/rand"
	"encoding/json"
	"errors"
	"fmt"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"time"
)

const (
	lockSuffix = ".lock"
	// renewEvery is how often an owner writes its claim anew.
	renewEvery = 15 * time.Second
	// voidAfter is the age at which a claim that cannot be judged otherwise is void: eight
	// renewals, so that a short outage of a network disk loses no claim.
	voidAfter = 2 * time.Minute
	// claimAttempts bounds the contest over void claims.
	claimAttempts = 8
	// voidInfix joins a claim and the token of the void claim that it is the right to remove.
	voidInfix = "-void-"
	// maxDismissals bounds how deep the right to remove a claim is itself left by the dead.
	maxDismissals = 3
)

// claim is what a lock file says about its owner.
type claim struct {
	PID     int    `json:"pid"`
	Host    string `json:"host"`
	Machine string `json:"machine"`
	Start   string `json:"start"`
	Token   string `json:"token"` // no two claims have the same
}

// lock is a claim that this process holds. Its file stays open: renewing it then reaches only its
// own file, not that of a process which took the folder over.
type lock struct {
	dir  string // what is claimed
	path string // the file that says so
	own  claim
	body []byte
	file *os.File
	stop chan struct{}
	done sync.WaitGroup
}

func newClaim() (claim, error) {
	host, err := os.Hostname()
	if err != nil {
		return claim{}, fmt.Errorf("name of this host: %w", err)
	}
	pid := os.Getpid()
	return claim{
		PID: pid, Host: host, Machine: machineID(), Start: processStart(pid),
		Token: rand.Text(),
	}, nil
}

// acquire claims dir or returns an error that is ErrLocked when another process holds it.
func acquire(fs fsys, dir string) (*lock, error) {
	own, err := newClaim()
	if err != nil {
		return nil, err
	}
	body, err := json.Marshal(own)
	if err != nil {
		return nil, err
	}
	l := &lock{
		dir: dir, path: dir + lockSuffix, own: own, body: append(body, '\n'),
		stop: make(chan struct{}),
	}
	mine := l.path + "-" + own.Token
	if err := l.prepare(fs, mine); err != nil {
		return nil, err
	}
	if err := l.contest(fs, mine, l.path); err != nil {
		return nil, errors.Join(err, fs.remove(mine))
	}
	if err := l.enter(fs, mine); err != nil {
		return nil, errors.Join(err, discard(fs, mine), fs.remove(l.path))
	}
	l.done.Go(l.renew)
	return l, nil
}

// enter tidies up after a won contest and opens the claim for renewing.
func (l *lock) enter(fs fsys, mine string) error {
	if err := fs.remove(mine); err != nil {
		return err
	}
	if err := l.sweep(fs); err != nil {
		return err
	}
	f, err := os.OpenFile(l.path, os.O_WRONLY, 0)
	l.file = f
	return err
}

// sweep deletes what processes that were killed in a contest left beside the claim. The right to
// remove a claim is worthless once that claim is gone, so it is no loss to who holds it.
func (l *lock) sweep(fs fsys) error {
	entries, err := os.ReadDir(filepath.Dir(l.path))
	if err != nil {
		return err
	}
	for _, e := range entries {
		path := filepath.Join(filepath.Dir(l.path), e.Name())
		if !strings.HasPrefix(e.Name(), filepath.Base(l.path)+"-") {
			continue
		}
		left, age, err := readClaim(path, l.path)
		if err == nil && left.void(age) {
			err = fs.remove(path)
		}
		if err != nil && !isMissing(err) { // gone: another process did it
			return err
		}
	}
	return nil
}

// discard removes a file that may be gone.
func discard(fs fsys, path string) error {
	if err := fs.remove(path); err != nil && !isMissing(err) {
		return err
	}
	return nil
}

// prepare writes the claim under a name of its own.
func (l *lock) prepare(fs fsys, mine string) error {
	f, err := fs.create(mine)
	if err != nil {
		return fmt.Errorf("claim: %w", err)
	}
	_, err = f.Write(l.body)
	if err = errors.Join(err, f.Sync(), f.Close()); err != nil {
		return errors.Join(fmt.Errorf("claim %s: %w", mine, err), fs.remove(mine))
	}
	return nil
}

// contest gives the claim the name path, after removing a void one that has it.
func (l *lock) contest(fs fsys, mine, path string) error {
	for range claimAttempts {
		linkErr := fs.link(mine, path)
		held, age, err := readClaim(path, mine)
		switch {
		case linkErr == nil, err == nil && held.Token == l.own.Token:
			return nil // the second: a network disk that lost only its answer
		case isMissing(err) && errors.Is(linkErr, os.ErrExist):
			continue // given up in between
		case isMissing(err):
			return fmt.Errorf("claim %s: %w", path, linkErr)
		case err != nil:
			return fmt.Errorf("claim: %w", err)
		case !held.void(age), strings.Count(path, voidInfix) >= maxDismissals:
			return inUse(l.dir, held)
		}
		if err := l.dismiss(fs, mine, path, held); err != nil {
			return err
		}
	}
	return fmt.Errorf("%w: %s: several processes contend for %s", ErrLocked, l.dir, path)
}

// dismiss removes the void claim held from path. Only who has the exclusive name made of the token
// of that claim may do so, and looks again before: so no claim that took its place is ever removed.
func (l *lock) dismiss(fs fsys, mine, path string, held claim) error {
	right := path + voidInfix + held.Token
	if err := l.contest(fs, mine, right); err != nil {
		return err
	}
	now, _, err := readClaim(path, path)
	if err == nil && now.Token == held.Token {
		err = fs.remove(path)
	}
	if isMissing(err) {
		err = nil
	}
	if err = errors.Join(err, discard(fs, right)); err != nil {
		return fmt.Errorf("void claim: %w", err)
	}
	return nil
}

// readClaim returns the claim in path and its age by the clock of the disk, which is the time of
// the file now, written a moment ago. A claim that cannot be understood is an empty one.
func readClaim(path, now string) (claim, time.Duration, error) {
	info, err := os.Stat(path)
	if err != nil {
		return claim{}, 0, err
	}
	body, err := os.ReadFile(path)
	if err != nil {
		return claim{}, 0, err
	}
	fresh, err := os.Stat(now)
	if err != nil {
		return claim{}, 0, err
	}
	var c claim
	if json.Unmarshal(body, &c) != nil {
		c = claim{}
	}
	return c, fresh.ModTime().Sub(info.ModTime()), nil
}

// void reports whether the owner of a claim of the given age is surely gone.
func (c claim) void(age time.Duration) bool {
	host, err := os.Hostname()
	if err != nil || c.PID <= 0 || c.Host != host || c.Machine != machineID() {
		return age > voidAfter
	}
	if !alive(c.PID) {
		return true
	}
	start := processStart(c.PID)
	if start == "" || c.Start == "" {
		return age > voidAfter
	}
	return start != c.Start
}

// renew writes the claim anew until it is given up. A failure shows at the next check.
func (l *lock) renew() {
	tick := time.NewTicker(renewEvery)
	defer tick.Stop()
	for {
		select {
		case <-l.stop:
			return
		case <-tick.C:
			_ = l.touch() // a disk may be out of reach for a while: the next tick tries again
		}
	}
}

// touch makes the claim young by the clock of the disk.
func (l *lock) touch() error {
	if _, err := l.file.WriteAt(l.body, 0); err != nil {
		return err
	}
	return l.file.Sync()
}

// check returns ErrLostClaim when the claim is no longer this one.
func (l *lock) check() error {
	c, _, err := readClaim(l.path, l.path)
	if err != nil && !isMissing(err) {
		return fmt.Errorf("claim: %w", err)
	}
	if c.Token != l.own.Token {
		return fmt.Errorf("%w: claim %s", ErrLostClaim, l.path)
	}
	return nil
}

// release gives the claim up; one that was lost is left to its new owner.
func (l *lock) release(fs fsys) error {
	close(l.stop)
	l.done.Wait()
	err := l.check()
	if closeErr := l.file.Close(); err == nil {
		err = closeErr
	}
	if err != nil {
		return err
	}
	return fs.remove(l.path)
}
