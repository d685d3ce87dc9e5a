package main

import (
	"bytes"
	"encoding/json"
	"errors"
	"fmt"
	"math"
	"os"
	"strings"
)

const timeToAnswer = `## Time to an answer

"numerics: auto" against a resolved run of the same discharge, both from a cold start to 1 % of
standard error in mean ion energy and ion flux (go run ./bench/fastpath). Resolved is momentum
conserving: the first two with numerics that are known to be fine enough (helium: those of the
benchmark; argon: 256 cells, 400 particles a cell, 1200 steps), ions moved every step, without
projections of the density; the others with a quarter of the automatic cell size, two thirds of
its step, ions moved every fourth step and twice its particles. Twice the particles are not enough
for argon at 20 Pa (bench/VALIDATION.md, part Numerics). Differences in per cent with their
joint standard error; processor seconds as measured, on a machine that was doing other work, too.

| discharge | CPU s: auto | resolved | ratio | energy | flux | electron power | density | verdicts |
|---|---|---|---|---|---|---|---|---|
`

// fastPath adds the table of automatic against resolved runs from bench/fastpath.json.
func fastPath(b *bytes.Buffer) error {
	type value struct {
		Value, SE float64
	}
	type side struct {
		Numerics map[string]any
		Verdict  string
		CPU      float64 `json:"cpu_s"`
		Periods  float64
		Results  map[string]value
	}
	var list []struct {
		Name, Title    string
		Auto, Resolved *side
	}
	data, err := os.ReadFile("bench/fastpath.json")
	if err != nil {
		return err
	}
	if err := json.Unmarshal(data, &list); err != nil {
		return fmt.Errorf("bench/fastpath.json: %w", err)
	}
	b.WriteString(timeToAnswer)
	compared := []string{
		"ion_mean_energy_eV.grounded.all", "ion_flux_m2ps.grounded.all", "power_Wpm2.electron",
		"electron_density_center_m3",
	}
	for _, e := range list {
		if e.Auto == nil || e.Resolved == nil {
			continue
		}
		fmt.Fprintf(b, "| %s | %.1f | %.0f | %.0f |", e.Title, e.Auto.CPU, e.Resolved.CPU,
			e.Resolved.CPU/e.Auto.CPU)
		for _, path := range compared {
			a, r := e.Auto.Results[path], e.Resolved.Results[path]
			fmt.Fprintf(b, " %+.1f +- %.1f |", 100*(a.Value/r.Value-1),
				100*math.Hypot(a.SE/a.Value, r.SE/r.Value))
		}
		fmt.Fprintf(b, " %s, %s |\n", e.Auto.Verdict, e.Resolved.Verdict)
	}
	b.WriteString("\n")
	return nil
}

// withAnswers returns the page with its table of answers made anew.
func withAnswers() ([]byte, error) {
	page, err := os.ReadFile("bench/SPEED.md")
	if err != nil {
		return nil, err
	}
	heading, _, _ := strings.Cut(timeToAnswer, "\n")
	before, rest, ok := strings.Cut(string(page), heading)
	end := strings.Index(rest, "\nPeak memory")
	if !ok || end < 0 {
		return nil, errors.New("bench/SPEED.md has no table of answers: make the whole page")
	}
	var b bytes.Buffer
	b.WriteString(before)
	if err := fastPath(&b); err != nil {
		return nil, err
	}
	b.WriteString(rest[end+1:])
	return b.Bytes(), nil
}
