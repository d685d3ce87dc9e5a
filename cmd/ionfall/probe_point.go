package main

import (
	"fmt"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"ionfall/internal/probe"
	"ionfall/internal/report"
)

// runOf is the results folder that belongs to a measurement: the one it names, relative to its
// description, the one of the command line, or the point of a scan that has its conditions.
func runOf(where *probe.Placed, named, folder string, at []probe.Condition) (string, error) {
	if named != "" {
		folder = beside(where.File(), named)
	}
	if folder == "" {
		return "", where.Errorf("run", "nothing", "a results folder, here or on the command line", "")
	}
	points := filepath.Join(folder, "points")
	if info, err := os.Stat(points); err != nil || !info.IsDir() || report.IsRun(folder) {
		return folder, nil
	}
	if len(at) == 0 {
		return "", where.Errorf("pressure", "nothing",
			"the pressure, or inputs: to find the point of the scan "+folder, "")
	}
	names, err := filepath.Glob(filepath.Join(points, "point=*"))
	if err != nil {
		return "", err
	}
	var fit, seen []string
	for _, name := range names {
		resolved, err := os.ReadFile(filepath.Join(name, "resolved.yaml"))
		if err != nil || !report.IsRun(name) || strings.HasSuffix(name, ".running") {
			continue // a point that is not there yet
		}
		all := true
		var found []string
		for _, c := range at {
			same, got, err := c.Holds(resolved)
			if err != nil {
				return "", where.Errorf("inputs", "", "", err.Error())
			}
			all = all && same
			found = append(found, got)
		}
		if text := strings.Join(found, ", "); !slices.Contains(seen, text) {
			seen = append(seen, text)
		}
		if all {
			fit = append(fit, name)
		}
	}
	return onePoint(where, folder, at, fit, seen)
}

// onePoint is the only one that fits.
func onePoint(where *probe.Placed, folder string, at []probe.Condition, fit, seen []string) (
	string, error,
) {
	var paths, texts []string
	for _, c := range at {
		paths, texts = append(paths, c.Path), append(texts, c.Text)
	}
	key, got := "inputs", strings.Join(paths, ", ")+": "+strings.Join(texts, ", ")
	if len(at) == 1 && paths[0] == "gas.pressure" {
		key, got = "pressure", texts[0]
	}
	const most = 12
	if len(seen) > most {
		seen = append(seen[:most], "...")
	}
	switch {
	case len(fit) == 1:
		return fit[0], nil
	case len(fit) > 1:
		for i := range fit {
			fit[i] = filepath.Base(fit[i])
		}
		return "", where.Errorf(key, got, fmt.Sprintf("what only one point has, and %d have it (%s, "+
			"...): add inputs, such as {drive.tones.0.amplitude: 250 V}", len(fit), fit[0]), "")
	case len(seen) == 0:
		return "", where.Errorf(key, got, "a finished point of the scan "+folder+", which has none", "")
	}
	return "", where.Errorf(key, got, "that of a finished point of the scan, within 1 %: "+
		strings.Join(seen, "; "), "")
}

func openAt(where *probe.Placed, named, folder string, at []probe.Condition) (*finishedRun, error) {
	dir, err := runOf(where, named, folder, at)
	if err != nil {
		return nil, err
	}
	return openRun(dir)
}
