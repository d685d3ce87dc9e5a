package scan

import (
	"bytes"
	"context"
	"fmt"
	"os"
	"os/exec"
	"path/filepath"
	"regexp"
	"strings"

	"ionfall/internal/inputerr"
	"ionfall/internal/store"
)

// Job is what a scheduler (Slurm) is asked for.
type Job struct {
	Program    string // that runs the points, with its whole path
	Partition  string // "" for the cluster's own choice
	Time       string // limit, in the form that sbatch takes
	MaxRunning int    // tasks at once; 0 for no limit
	CPUs       int    // of a task
	Warning    int    // how long before the limit checkpoints are written [s]
	Options    []string
}

// maxTasks of an array: many clusters allow 1000. Tasks go on to further points, so fewer than one
// a point are enough.
const maxTasks = 1000

// Check returns what is wrong with a job.
func (j *Job) Check() error {
	var bad inputerr.List
	plain := regexp.MustCompile(`^[A-Za-z0-9_.,:=@%+/-]*$`)
	fail := func(key, got, want string) {
		bad = append(bad, &inputerr.Error{Key: key, Got: fmt.Sprintf("%q", got), Want: want})
	}
	if !plain.MatchString(j.Partition) {
		fail("--partition", j.Partition, "the name of a partition")
	}
	limit := regexp.MustCompile(`^([0-9]+-)?[0-9]+(:[0-9]{1,2}){0,2}$`)
	if !limit.MatchString(j.Time) {
		fail("--time", j.Time, "a limit such as 4:00:00 or 1-12:00:00")
	}
	for _, o := range j.Options {
		if !plain.MatchString(o) || o == "" || strings.HasPrefix(o, "-") {
			fail("--option", o, "an option of sbatch without its dashes, such as account=films")
		}
	}
	return bad.Err()
}

// left counts the points that are still to be computed.
func (f *Folder) left() int {
	n := 0
	for _, p := range f.Plan.Points {
		if s := f.State(p.Number); s != Done && s != Failed {
			n++
		}
	}
	return n
}

// Script is the batch script of an array of tasks that work through what is left of a scan.
//
// The warning signal goes to the script, which asks the program for checkpoints and, when they are
// written, puts the task back into the queue. A task that is cancelled or whose node dies
// leaves its points to the others, or to the next submission.
func (f *Folder) Script(j *Job) (string, error) {
	left := f.left()
	if left == 0 {
		return "", fmt.Errorf("%s: no points are left to be computed", f.Dir)
	}
	dir, err := filepath.Abs(f.Dir)
	if err != nil {
		return "", err
	}
	array := fmt.Sprintf("1-%d", min((left+j.CPUs-1)/j.CPUs, maxTasks))
	if j.MaxRunning > 0 {
		array += fmt.Sprintf("%%%d", j.MaxRunning)
	}
	lines := []string{
		"job-name=ionfall", "array=" + array, "ntasks=1", fmt.Sprintf("cpus-per-task=%d", j.CPUs),
		"time=" + j.Time, fmt.Sprintf("signal=B:USR1@%d", j.Warning), "requeue", "open-mode=append",
	}
	if j.Partition != "" {
		lines = append(lines, "partition="+j.Partition)
	}
	var b strings.Builder
	b.WriteString("#!/bin/bash\n")
	for _, l := range append(lines, j.Options...) {
		b.WriteString("#SBATCH --" + l + "\n")
	}
	fmt.Fprintf(&b, "#SBATCH --output=%q\n", filepath.Join(dir, "slurm", "%A_%a.log"))
	fmt.Fprintf(&b, `export GOMAXPROCS="${SLURM_CPUS_PER_TASK:-1}"
%s scan run %s --cores "$GOMAXPROCS" --no-wait &
child=$!
warned=
trap 'warned=yes; kill -TERM "$child"' USR1
trap 'kill -TERM "$child"' TERM
wait "$child"
status=$?
while kill -0 "$child" 2>/dev/null; do
	wait "$child" # a signal ends a wait early
	status=$?
done
if [ -n "$warned" ] && [ "$status" -ge 128 ]; then
	scontrol requeue "${SLURM_ARRAY_JOB_ID}_${SLURM_ARRAY_TASK_ID}"
fi
exit "$status"
`, shellWord(j.Program), shellWord(dir))
	return b.String(), nil
}

// shellWord quotes a text for the shell.
func shellWord(text string) string {
	return "'" + strings.ReplaceAll(text, "'", `'\''`) + "'"
}

// Submit gives the script to sbatch and returns the number of the job.
func (f *Folder) Submit(ctx context.Context, script string) (string, error) {
	folder := filepath.Join(f.Dir, "slurm")
	if err := os.MkdirAll(folder, 0o777); err != nil { // sbatch loses output without it
		return "", err
	}
	if err := store.WriteFile(filepath.Join(folder, "submit.sh"), []byte(script)); err != nil {
		return "", err
	}
	c := exec.CommandContext(ctx, "sbatch", "--parsable")
	c.Stdin = strings.NewReader(script)
	var stderr bytes.Buffer
	c.Stderr = &stderr
	out, err := c.Output()
	if err != nil {
		return "", fmt.Errorf("sbatch: %w: %s", err, strings.TrimSpace(stderr.String()))
	}
	number, _, _ := strings.Cut(strings.TrimSpace(string(out)), ";")
	return number, nil
}
