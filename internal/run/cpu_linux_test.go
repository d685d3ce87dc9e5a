package run

import (
	"context"
	"path/filepath"
	"runtime"
	"testing"
)

// Goal: the processor time of a run on a thread of its own is that of its work, all of it. Method:
// the only run of the process, whose whole processor time bounds it from above.
func TestOwnThreadPaysForTheWork(t *testing.T) {
	runtime.LockOSThread()
	defer runtime.UnlockOSThread()
	before := cpuSeconds()
	s, err := TakeUp(context.Background(), plan(t, short), Options{
		Out: filepath.Join(t.TempDir(), "out"), Cores: 1, OwnThread: true,
	})
	if err != nil {
		t.Fatal(err)
	}
	all := cpuSeconds() - before
	// Preparing the plan, collecting garbage and writing are partly the work of other threads.
	if own := number(s.Provenance["cpu_s"]); own < 0.5*all || own > all {
		t.Errorf("the run is said to have taken %.3g s, the process took %.3g s", own, all)
	}
}
