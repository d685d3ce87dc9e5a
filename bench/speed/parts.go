package main

import (
	"bytes"
	"fmt"
	"os/exec"
	"slices"
	"strconv"
	"strings"
)

// repeats is how often each benchmark of a part is run.
const repeats = 5

// pieces adds the benchmarks of single parts, by the language's own tool: medians.
func pieces(b *bytes.Buffer) error {
	out, err := exec.Command("go", "test", "-run", "^$", "-bench", ".",
		"-count", strconv.Itoa(repeats), "./internal/kernels", "./internal/rng", "./pic",
		"./mcc").CombinedOutput()
	if err != nil {
		return fmt.Errorf("%w: %s", err, out)
	}
	fmt.Fprintf(b, "## Parts\n\n`go test -bench . -count %d`, medians (least to most):\n\n"+
		"| benchmark | figures |\n|---|---|\n", repeats)
	var names []string
	figures := map[string]map[string][]float64{}
	units := map[string][]string{}
	for line := range strings.Lines(string(out)) {
		f := strings.Fields(line)
		if !strings.HasPrefix(line, "Benchmark") || len(f) < 4 {
			continue
		}
		name := f[0]
		if figures[name] == nil {
			names, figures[name] = append(names, name), map[string][]float64{}
		}
		for i := 2; i+1 < len(f); i += 2 {
			v, err := strconv.ParseFloat(f[i], 64)
			if err != nil {
				return fmt.Errorf("a benchmark printed %q: %w", line, err)
			}
			if figures[name][f[i+1]] == nil {
				units[name] = append(units[name], f[i+1])
			}
			figures[name][f[i+1]] = append(figures[name][f[i+1]], v)
		}
	}
	for _, name := range names {
		var parts []string
		for _, unit := range units[name] {
			v := figures[name][unit]
			slices.Sort(v)
			parts = append(parts, fmt.Sprintf("%.4g (%.4g to %.4g) %s", v[len(v)/2], v[0],
				v[len(v)-1], unit))
		}
		fmt.Fprintf(b, "| %s | %s |\n", strings.TrimPrefix(name, "Benchmark"),
			strings.Join(parts, ", "))
	}
	return nil
}
