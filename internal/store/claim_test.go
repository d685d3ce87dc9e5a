package store

import (
	"bufio"
	"encoding/json"
	"errors"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"runtime"
	"strings"
	"sync"
	"testing"
	"time"
)

// interrupted makes an unfinished run that nobody works in.
func interrupted(t *testing.T) string {
	t.Helper()
	dir := filepath.Join(t.TempDir(), "argon")
	run, err := Create(dir)
	if err != nil {
		t.Fatal(err)
	}
	if err := run.Close(); err != nil {
		t.Fatal(err)
	}
	return dir
}

// putClaim leaves a claim of the given age.
func putClaim(t *testing.T, dir string, body any, age time.Duration) {
	t.Helper()
	b, err := json.Marshal(body)
	if err != nil {
		t.Fatal(err)
	}
	put(t, dir+".lock", string(b))
	then := time.Now().Add(-age)
	if err := os.Chtimes(dir+".lock", then, then); err != nil {
		t.Fatal(err)
	}
}

// TestHelperHolder is no test: it is the other process of TestKilledOwner.
func TestHelperHolder(t *testing.T) {
	dir := os.Getenv("STORE_TEST_HOLD")
	if dir == "" {
		t.Skip("runs only as the other process of another test")
	}
	if _, err := Reopen(dir); err != nil {
		fmt.Println("error:", err)
		return
	}
	fmt.Println("holding")
	select {}
}

// TestKilledOwner: a living process keeps others out, by name and number; killed, it does not.
func TestKilledOwner(t *testing.T) {
	dir := interrupted(t)
	cmd := exec.Command(os.Args[0], "-test.run=^TestHelperHolder$")
	cmd.Env = append(os.Environ(), "STORE_TEST_HOLD="+dir)
	out, err := cmd.StdoutPipe()
	if err != nil {
		t.Fatal(err)
	}
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	if line, err := bufio.NewReader(out).ReadString('\n'); line != "holding\n" {
		t.Fatalf("the other process says %q, %v", line, err)
	}
	_, err = Reopen(dir)
	want := fmt.Sprintf("process %d on", cmd.Process.Pid)
	if !errors.Is(err, ErrLocked) || !strings.Contains(err.Error(), want) {
		t.Errorf("while it lives: %v", err)
	}
	if err := cmd.Process.Kill(); err != nil {
		t.Fatal(err)
	}
	_ = cmd.Wait() // its status is that it was killed
	if !exists(dir + ".lock") {
		t.Fatal("the killed process left no claim: nothing is tested")
	}
	run, err := Reopen(dir)
	if err != nil {
		t.Fatalf("after its death: %v", err)
	}
	if err := run.Commit(); err != nil {
		t.Error(err)
	}
	if got := contents(t, dir); got != "argon" {
		t.Errorf("left behind: %s", got)
	}
}

func TestSameProcessIsKeptOutToo(t *testing.T) {
	dir := interrupted(t)
	run, err := Reopen(dir)
	if err != nil {
		t.Fatal(err)
	}
	if _, err := Reopen(dir); !errors.Is(err, ErrLocked) {
		t.Errorf("second Reopen: %v", err)
	}
	if err := run.WriteFile("x", nil); err != nil {
		t.Errorf("the owner: %v", err)
	}
	if err := run.Close(); err != nil {
		t.Fatal(err)
	}
	if got := contents(t, dir); got != "argon.running" {
		t.Errorf("left behind: %s", got)
	}
}

// TestWhichClaimsCount: by age only where nothing better is known.
func TestWhichClaimsCount(t *testing.T) {
	own, err := newClaim()
	if err != nil {
		t.Fatal(err)
	}
	elsewhere, container, reused := own, own, own
	elsewhere.Host, elsewhere.Token = "node17", "a"
	container.Machine, container.Token = "another", "b"
	reused.Start, reused.Token = "1", "c"
	fresh, old := voidAfter/2, 2*voidAfter
	for _, c := range []struct {
		name  string
		claim any
		age   time.Duration
		void  bool
	}{
		{"other host, fresh", elsewhere, fresh, false},
		{"other host, old", elsewhere, old, true},
		{"other container, fresh", container, fresh, false},
		{"other container, old", container, old, true},
		{"unreadable, fresh", "garbage", fresh, false},
		{"unreadable, old", "garbage", old, true},
		{"number of a dead process reused", reused, fresh, true},
		{"living process that was suspended", own, old, false},
	} {
		if runtime.GOOS != "linux" && (strings.HasPrefix(c.name, "number") ||
			strings.HasPrefix(c.name, "living")) {
			continue // the start of a process is not known there
		}
		dir := interrupted(t)
		putClaim(t, dir, c.claim, c.age)
		run, err := Reopen(dir)
		if void := err == nil; void != c.void {
			t.Errorf("%s: void %v, want %v: %v", c.name, void, c.void, err)
		}
		if err != nil && !errors.Is(err, ErrLocked) {
			t.Errorf("%s: %v, want ErrLocked", c.name, err)
		}
		if run != nil {
			if err := run.Close(); err != nil {
				t.Error(err)
			}
		}
	}
}

// TestLostClaim: an owner that was replaced writes nothing more and leaves the new claim alone.
func TestLostClaim(t *testing.T) {
	dir := interrupted(t)
	run, err := Reopen(dir)
	if err != nil {
		t.Fatal(err)
	}
	if err := os.Remove(dir + ".lock"); err != nil {
		t.Fatal(err)
	}
	putClaim(t, dir, claim{PID: 1, Host: "node17", Token: "theirs"}, 0)
	for what, err := range map[string]error{
		"WriteFile":       run.WriteFile("x", nil),
		"WriteCheckpoint": run.WriteCheckpoint(state("x")),
		"Commit":          run.Commit(),
		"Close":           run.Close(),
	} {
		if !errors.Is(err, ErrLostClaim) {
			t.Errorf("%s: %v, want ErrLostClaim", what, err)
		}
	}
	if !strings.Contains(get(t, dir+".lock"), "theirs") || exists(dir) ||
		exists(dir+".running/x") {
		t.Error("the new owner was disturbed")
	}
}

// TestContestOverVoidClaim: of many that find a dead owner's claim exactly one takes its place.
func TestContestOverVoidClaim(t *testing.T) {
	for range 20 {
		dir := interrupted(t)
		putClaim(t, dir, claim{PID: 1, Host: "node17", Token: "dead"}, 2*voidAfter)
		const n = 6
		runs := make([]*Run, n)
		var all sync.WaitGroup
		for i := range n {
			all.Go(func() {
				run, err := Reopen(dir)
				if err != nil && !errors.Is(err, ErrLocked) {
					t.Error(err)
				}
				runs[i] = run
			})
		}
		all.Wait()
		won := 0
		for _, run := range runs {
			if run == nil {
				continue
			}
			if err := run.Close(); err != nil {
				t.Error(err)
			} else {
				won++
			}
		}
		if won != 1 {
			t.Fatalf("%d of %d won", won, n)
		}
		if got := contents(t, dir); got != "argon.running" {
			t.Fatalf("left behind: %s", got)
		}
	}
}

// TestDismissLooksAgain: a claim that took the place of the void one in between is not removed.
func TestDismissLooksAgain(t *testing.T) {
	dir := interrupted(t)
	run, err := Reopen(dir)
	if err != nil {
		t.Fatal(err)
	}
	own, err := newClaim()
	if err != nil {
		t.Fatal(err)
	}
	late := &lock{path: dir + ".lock", own: own}
	mine := late.path + "-" + own.Token
	if err := late.prepare(disk{}, mine); err != nil {
		t.Fatal(err)
	}
	if err := late.dismiss(disk{}, mine, late.path, claim{Token: "void"}); err != nil {
		t.Fatal(err)
	}
	if err := os.Remove(mine); err != nil {
		t.Fatal(err)
	}
	if err := run.WriteFile("x", nil); err != nil {
		t.Errorf("the rightful owner: %v", err)
	}
	if err := run.Close(); err != nil {
		t.Error(err)
	}
	if got := contents(t, dir); got != "argon.running" {
		t.Errorf("left behind: %s", got)
	}
}

// TestDeadDismisser: a process that died while it removed a void claim is no obstacle; one that is
// still at it is.
func TestDeadDismisser(t *testing.T) {
	for _, age := range []time.Duration{0, 2 * voidAfter} {
		dir := interrupted(t)
		putClaim(t, dir, claim{PID: 1, Host: "node18", Token: "second"}, age)
		if err := os.Rename(dir+".lock", dir+".lock-void-first"); err != nil {
			t.Fatal(err)
		}
		putClaim(t, dir, claim{PID: 1, Host: "node17", Token: "first"}, 2*voidAfter)
		run, err := Reopen(dir)
		if age == 0 {
			if !errors.Is(err, ErrLocked) || !strings.Contains(err.Error(), "node18") {
				t.Errorf("still at it: %v", err)
			}
			continue
		}
		if err != nil {
			t.Fatal(err)
		}
		if err := run.Close(); err != nil {
			t.Fatal(err)
		}
		if got := contents(t, dir); got != "argon.running" {
			t.Errorf("left behind: %s", got)
		}
	}
}

// TestRenewal: renewing makes a claim young again and reaches only its own file.
func TestRenewal(t *testing.T) {
	dir := interrupted(t)
	run, err := Reopen(dir)
	if err != nil {
		t.Fatal(err)
	}
	then := time.Now().Add(-time.Hour)
	if err := os.Chtimes(dir+".lock", then, then); err != nil {
		t.Fatal(err)
	}
	before := get(t, dir+".lock")
	if err := run.lock.touch(); err != nil {
		t.Fatal(err)
	}
	info, err := os.Stat(dir + ".lock")
	if err != nil {
		t.Fatal(err)
	}
	if age := time.Since(info.ModTime()); age > time.Minute || get(t, dir+".lock") != before {
		t.Errorf("age %v after renewing", age)
	}
	if err := run.Close(); err != nil {
		t.Fatal(err)
	}
}

// TestSweep: what killed contestants left is deleted, what belongs to a living one is not.
func TestSweep(t *testing.T) {
	dir := interrupted(t)
	putClaim(t, dir, claim{PID: 1, Host: "node17", Token: "dead"}, 2*voidAfter)
	for _, name := range []string{"-dead", "-void-dead"} {
		if err := os.Link(dir+".lock", dir+".lock"+name); err != nil {
			t.Fatal(err)
		}
	}
	if err := os.Remove(dir + ".lock"); err != nil {
		t.Fatal(err)
	}
	putClaim(t, dir, claim{PID: 1, Host: "node17", Token: "alive"}, 0)
	if err := os.Rename(dir+".lock", dir+".lock-alive"); err != nil {
		t.Fatal(err)
	}
	run, err := Reopen(dir)
	if err != nil {
		t.Fatal(err)
	}
	if err := run.Close(); err != nil {
		t.Fatal(err)
	}
	if got := contents(t, dir); got != "argon.lock-alive argon.running" {
		t.Errorf("left: %s", got)
	}
}
