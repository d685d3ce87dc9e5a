package main

import (
	"bytes"
	"fmt"
	"math/rand/v2"
	"net"
	"os"
	"os/exec"
	"path/filepath"
	"strconv"
	"strings"
	"syscall"
	"testing"
	"time"
)

// cluster is a Slurm of virtual nodes on the loopback of this machine.
type cluster struct {
	dir   string
	nodes map[string]*exec.Cmd
	all   []*exec.Cmd
}

// newCluster starts one, or skips the test where Slurm is not installed. The daemons are children of
// the test and stay in its foreground, so that exactly they can be ended.
func newCluster(t *testing.T, nodes int) *cluster {
	t.Helper()
	if testing.Short() {
		t.Skip("a cluster takes its time")
	}
	for _, program := range []string{"slurmctld", "slurmd", "sbatch", "scontrol"} {
		if _, err := exec.LookPath(program); err != nil {
			t.Skipf("Slurm is not installed here (%v): the gate installs it", err)
		}
	}
	if os.Getuid() != 0 {
		t.Skip("starting Slurm needs root")
	}
	dir, err := os.MkdirTemp("/tmp", "slurm") // short: paths of sockets are limited
	if err != nil {
		t.Fatal(err)
	}
	c := &cluster{dir: dir, nodes: map[string]*exec.Cmd{}}
	t.Cleanup(func() { c.stop(t) })
	host, err := os.Hostname()
	if err != nil {
		t.Fatal(err)
	}
	conf := fmt.Sprintf(`ClusterName=test
SlurmctldHost=%[1]s(127.0.0.1)
SlurmctldPort=%[3]d
SlurmUser=root
AuthType=auth/none
CredType=cred/none
StateSaveLocation=%[2]s/state
SlurmdSpoolDir=%[2]s/spool-%%n
SlurmctldPidFile=%[2]s/ctld.pid
SlurmdPidFile=%[2]s/%%n.pid
ProctrackType=proctrack/linuxproc
TaskPlugin=task/none
JobAcctGatherType=jobacct_gather/none
AccountingStorageType=accounting_storage/none
MpiDefault=none
SwitchType=switch/none
ReturnToService=2
SelectType=select/cons_tres
SelectTypeParameters=CR_Core
SchedulerParameters=batch_sched_delay=0,sched_interval=1
KillWait=5
SlurmdTimeout=30
MessageTimeout=60
MailProg=/bin/true
SlurmdParameters=config_overrides
`, host, dir, freePort(t))
	var list []string
	for k := range nodes {
		name := fmt.Sprintf("n%d", k+1)
		list = append(list, name)
		conf += fmt.Sprintf("NodeName=%s NodeHostname=%s NodeAddr=127.0.0.1 Port=%d CPUs=1 "+
			"RealMemory=1000 State=UNKNOWN\n", name, host, freePort(t))
	}
	conf += "PartitionName=test Nodes=" + strings.Join(list, ",") + " Default=YES MaxTime=INFINITE\n"
	for _, name := range append(list, "state") {
		if name != "state" {
			name = "spool-" + name
		}
		if err := os.Mkdir(filepath.Join(dir, name), 0o755); err != nil {
			t.Fatal(err)
		}
	}
	path := filepath.Join(dir, "slurm.conf")
	if err := os.WriteFile(path, []byte(conf), 0o644); err != nil {
		t.Fatal(err)
	}
	t.Setenv("SLURM_CONF", path)
	c.start(t, "slurmctld", "-D", "-c", "-f", path)
	for _, name := range list {
		c.nodes[name] = c.start(t, "slurmd", "-D", "-c", "-N", name, "-f", path)
	}
	c.until(t, "the nodes are idle", clusterPatience, func() bool {
		c.daemonsLive(t)
		out, err := exec.Command("sinfo", "-h", "-N", "-t", "idle", "-o", "%N").Output()
		return err == nil && len(strings.Fields(string(out))) == nodes
	})
	return c
}

// clusterPatience is for what comes within seconds on a machine that does nothing else.
const clusterPatience = 5 * time.Minute

// daemonsLive fails at once, with the log, when a daemon has ended: nothing would come of waiting.
func (c *cluster) daemonsLive(t *testing.T) {
	t.Helper()
	for _, cmd := range c.all {
		stat, err := os.ReadFile(fmt.Sprintf("/proc/%d/stat", cmd.Process.Pid))
		if err != nil || bytes.Contains(stat, []byte(") Z ")) {
			t.Fatalf("%s has ended", cmd)
		}
	}
}

// freePort finds one below those that the system gives to others: between here and the start of a
// daemon nobody takes it but another cluster, whose ports are as random.
func freePort(t *testing.T) int {
	t.Helper()
	const low, count = 20_000, 10_000
	for range 100 {
		port := low + rand.IntN(count)
		l, err := net.Listen("tcp", fmt.Sprintf("127.0.0.1:%d", port))
		if err != nil {
			continue
		}
		if err := l.Close(); err != nil {
			t.Fatal(err)
		}
		return port
	}
	t.Fatal("no port is free")
	return 0
}

func (c *cluster) start(t *testing.T, name string, args ...string) *exec.Cmd {
	t.Helper()
	log, err := os.Create(filepath.Join(c.dir, fmt.Sprintf("%s-%d.log", name, len(c.all))))
	if err != nil {
		t.Fatal(err)
	}
	cmd := exec.Command(name, args...)
	cmd.Stdout, cmd.Stderr = log, log
	if err := cmd.Start(); err != nil {
		t.Fatal(err)
	}
	c.all = append(c.all, cmd)
	return cmd
}

// stop ends the jobs, then the daemons.
func (c *cluster) stop(t *testing.T) {
	if len(c.all) > 0 {
		_ = exec.Command("scancel", "--user=root").Run() // there may be none
	}
	for name := range c.nodes {
		c.killProcesses(t, name)
	}
	for i := len(c.all) - 1; i >= 0; i-- {
		_ = c.all[i].Process.Kill() // it may be dead already
		_ = c.all[i].Wait()
	}
	if t.Failed() {
		for i := range c.all {
			logs, err := filepath.Glob(filepath.Join(c.dir, fmt.Sprintf("*-%d.log", i)))
			if err == nil && len(logs) == 1 {
				text, _ := os.ReadFile(logs[0])
				t.Logf("%s\n%s", logs[0], text[max(0, len(text)-3000):])
			}
		}
	}
	if err := os.RemoveAll(c.dir); err != nil {
		t.Error(err)
	}
}

// cancelAll ends the jobs and waits until nothing of them runs: they write into the folder of the
// test, which is removed after it.
func (c *cluster) cancelAll(t *testing.T) {
	t.Helper()
	_ = exec.Command("scancel", "--user=root").Run() // there may be none
	c.until(t, "no task runs", clusterPatience, func() bool {
		for name := range c.nodes {
			if len(c.processes(t, name)) > 0 {
				return false
			}
		}
		return true
	})
}

// killNode ends a node and all that runs on it, as a power cut would.
func (c *cluster) killNode(t *testing.T, name string) {
	t.Helper()
	_ = c.nodes[name].Process.Kill()
	_ = c.nodes[name].Wait()
	c.killProcesses(t, name)
}

// killProcesses kills what was run on a node of this cluster, and the daemons of its steps, which
// are the parents of the scripts.
func (c *cluster) killProcesses(t *testing.T, node string) {
	t.Helper()
	for _, pid := range c.processes(t, node) {
		// They may be gone since.
		if parent := parentOf(pid, "slurmstepd"); parent > 1 {
			_ = syscall.Kill(parent, syscall.SIGKILL)
		}
		_ = syscall.Kill(pid, syscall.SIGKILL)
	}
}

// processes are those of tasks on a node of this cluster, which are known by their environment.
func (c *cluster) processes(t *testing.T, node string) []int {
	t.Helper()
	entries, err := os.ReadDir("/proc")
	if err != nil {
		t.Fatal(err)
	}
	var list []int
	for _, e := range entries {
		pid, err := strconv.Atoi(e.Name())
		if err != nil || pid == os.Getpid() {
			continue
		}
		environment, err := os.ReadFile(filepath.Join("/proc", e.Name(), "environ"))
		if err != nil {
			continue // gone, or not ours
		}
		if bytes.Contains(environment, []byte("SLURM_CONF="+c.dir+"/")) &&
			bytes.Contains(environment, []byte("SLURMD_NODENAME="+node+"\x00")) {
			list = append(list, pid)
		}
	}
	return list
}

// parentOf is the parent of a process if it bears the name, else 0.
func parentOf(pid int, name string) int {
	stat, err := os.ReadFile(fmt.Sprintf("/proc/%d/stat", pid))
	if err != nil {
		return 0
	}
	fields := strings.Fields(string(stat[bytes.LastIndexByte(stat, ')')+1:]))
	parent, err := strconv.Atoi(fields[1])
	if err != nil {
		return 0
	}
	called, err := os.ReadFile(fmt.Sprintf("/proc/%d/comm", parent))
	if err != nil || strings.TrimSpace(string(called)) != name {
		return 0
	}
	return parent
}

func (c *cluster) until(t *testing.T, what string, limit time.Duration, ok func() bool) {
	t.Helper()
	for begin := time.Now(); !ok(); time.Sleep(200 * time.Millisecond) {
		if time.Since(begin) > limit {
			out, _ := exec.Command("squeue").CombinedOutput()
			t.Fatalf("not within %v: %s; the queue is\n%s", limit, what, out)
		}
	}
}

// count is the number of points in a state.
func count(t *testing.T, dir, state string) int {
	t.Helper()
	for line := range strings.Lines(ionfall(t, dir, "scan", "status", "p.yaml")) {
		words := strings.Fields(line)
		if len(words) > 1 && words[0] == state {
			n, err := strconv.Atoi(words[1])
			if err != nil {
				t.Fatal(err)
			}
			return n
		}
	}
	t.Fatalf("no line for %s", state)
	return 0
}

// withoutCost is a table without the columns that a second run does not repeat.
func withoutCost(text string) string {
	lines := strings.Split(strings.TrimSpace(text), "\n")
	drop := map[int]bool{}
	for i, name := range strings.Split(lines[0], ",") {
		drop[i] = name == "cpu_s" || name == "wall_s"
	}
	for k, line := range lines {
		var kept []string
		for i, field := range strings.Split(line, ",") {
			if !drop[i] {
				kept = append(kept, field)
			}
		}
		lines[k] = strings.Join(kept, ",")
	}
	return strings.Join(lines, "\n")
}

// Goal: a scan on a cluster survives the death of a node and a cancelled array, and its table equals
// the local one. Method: an array over 12 points on two virtual nodes; a node is killed, then
// the array cancelled, then all is submitted again to the node that is left.
func TestSlurmKilledNode(t *testing.T) {
	c := newCluster(t, 2)
	defer c.cancelAll(t)
	dir := scanInputs(t, `base: base.yaml
vary:
  gas.pressure: [50 Pa, 60 Pa]
  drive.tones.0.amplitude: {from: 150 V, to: 250 V, points: 6}
  numerics.periods: [80]
`)
	out := ionfall(t, dir, "scan", "submit", "p.yaml", "--time", "10", "--partition", "test")
	if !strings.HasPrefix(out, "job ") {
		t.Fatalf("got %q", out)
	}
	done := func(n int) func() bool {
		return func() bool { return count(t, dir, "done") >= n }
	}
	c.until(t, "two points are done", clusterPatience, done(2))
	c.killNode(t, "n2")
	now := count(t, dir, "done")
	c.until(t, "the other node goes on", clusterPatience, done(min(12, now+2)))
	if err := exec.Command("scancel", "--user=root").Run(); err != nil {
		t.Fatal(err)
	}
	c.until(t, "no task is left", clusterPatience, func() bool {
		out, err := exec.Command("squeue", "-h", "-t", "R,CG", "-w", "n1").Output()
		return err == nil && len(bytes.TrimSpace(out)) == 0 && len(c.processes(t, "n1")) == 0
	})
	if left := 12 - count(t, dir, "done"); left > 0 {
		ionfall(t, dir, "scan", "submit", "p.yaml", "--time", "10", "--max-running", "3")
		t.Logf("submitted again with %d points left", left)
	} else {
		t.Error("all points were done before the second submission: the test shows too little")
	}
	c.until(t, "all points are done", clusterPatience, done(12))
	ionfall(t, dir, "scan", "collect", "p.yaml")
	cluster := ionfall(t, dir, "scan", "table", "p.yaml", "--csv")
	ionfall(t, dir, "scan", "run", "p.yaml", "--out", "local", "--quiet")
	local := ionfall(t, dir, "scan", "table", "local", "--csv")
	if withoutCost(cluster) != withoutCost(local) {
		t.Errorf("the table of the cluster is\n%s\nthe local one\n%s", cluster, local)
	}
}

// Goal: before its time ends a task writes a checkpoint and goes back into the queue; when it runs
// again it takes the point up and ends it, with the bits of a run that was never interrupted. Method:
// a point that takes longer than the warning leaves of a limit of a minute. A requeued task is held
// back for two minutes; the test lets it go at once, as often as it is requeued.
func TestSlurmTimeLimit(t *testing.T) {
	c := newCluster(t, 1)
	defer c.cancelAll(t)
	dir := scanInputs(t, "base: base.yaml\nvary: {numerics.periods: [12000]}\n")
	ionfall(t, dir, "scan", "submit", "p.yaml", "--time", "1", "--warning", "50")
	c.until(t, "the point is interrupted", clusterPatience, func() bool {
		if count(t, dir, "done") > 0 {
			t.Fatal("the point was done before the warning: the test shows nothing")
		}
		return count(t, dir, "interrupted") == 1
	})
	checkpoint := filepath.Join(dir, "scans", "p", "points", "point=0001.running", "checkpoint.bin")
	if _, err := os.Stat(checkpoint); err != nil {
		t.Error(err)
	}
	requeued := 0
	c.until(t, "the requeued task ends the point", 2*clusterPatience, func() bool {
		out, err := exec.Command("squeue", "-h", "-r", "-t", "PD", "-o", "%i %r").Output()
		for line := range strings.Lines(string(out)) {
			if words := strings.Fields(line); err == nil && words[len(words)-1] == "BeginTime" {
				requeued++
				// It may have been let go by itself since.
				_ = exec.Command("scontrol", "update", "jobid="+words[0], "starttime=now").Run()
			}
		}
		return count(t, dir, "done") == 1
	})
	if requeued == 0 {
		t.Error("the task was never in the queue again")
	}
	cluster := ionfall(t, dir, "scan", "table", "p.yaml", "--csv")
	ionfall(t, dir, "scan", "run", "p.yaml", "--out", "local", "--quiet")
	local := ionfall(t, dir, "scan", "table", "local", "--csv")
	if withoutCost(cluster) != withoutCost(local) {
		t.Errorf("the table of the cluster is\n%s\nthe local one\n%s", cluster, local)
	}
}

// Goal: the script is what was asked for, and a wrong request is told. Method: a dry run.
func TestSubmitDryRun(t *testing.T) {
	dir := scanInputs(t, "base: base.yaml\nvary: {gap: {from: 1 cm, to: 3 cm, points: 5}}\n")
	out := ionfall(t, dir, "scan", "submit", "p.yaml", "--time", "4:00:00", "--partition", "long",
		"--max-running", "50", "--cpus", "2", "--option", "account=films", "--dry-run")
	for _, want := range []string{
		"#!/bin/bash\n", "#SBATCH --array=1-3%50\n", "#SBATCH --cpus-per-task=2\n",
		"#SBATCH --time=4:00:00\n", "#SBATCH --signal=B:USR1@180\n", "#SBATCH --partition=long\n",
		"#SBATCH --account=films\n", "#SBATCH --requeue\n", "/scans/p' --cores",
	} {
		if !strings.Contains(out, want) {
			t.Errorf("%q is missing from\n%s", want, out)
		}
	}
	if _, err := os.Stat(filepath.Join(dir, "scans")); err == nil {
		t.Error("a dry run has made a folder")
	}
	got := call(t, dir, "scan", "submit", "p.yaml", "--time", "soon", "--partition", "a b")
	if got.status != 2 || !strings.Contains(got.errOut, `--time: got "soon", want a limit`) ||
		!strings.Contains(got.errOut, `--partition: got "a b"`) {
		t.Errorf("got status %d and %s", got.status, got.errOut)
	}
}
