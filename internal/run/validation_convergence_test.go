package run

import (
	"fmt"
	"math"
	"testing"

	"ionfall/internal/config"
	"ionfall/internal/store"
	"ionfall/internal/validation"

	"gonum.org/v1/gonum/stat/distuv"
)

// resolution is one choice of numerics.
type resolution struct {
	scheme                          string
	cells, steps, perCell, substeps int
}

func (r resolution) particles() int { return r.cells * r.perCell }

// bases pass all trust checks and have as many particles and steps as the automatic choice takes
// for this case.
var bases = []resolution{
	{config.EnergyConserving, 80, 768, 128, 8},
	{config.MomentumConserving, 128, 768, 80, 8},
}

const convergenceSection = "numerical convergence, argon at 5 Pa, 30 mm, 120 V"

// convergenceInput is the discharge with the numerics; more are keys that the course depends on.
func convergenceInput(seed int, more, numerics string) string {
	return fmt.Sprintf(`
gap: 30 mm
gas: {pressure: 5 Pa, temperature: 300 K, mixture: {Ar: 1}}
drive: {tones: [{frequency: 13.56 MHz, amplitude: 120 V}]}
accuracy: {ion_energy: 0.5 %%, ion_flux: 0.5 %%}
seed: %d
%s
numerics: %s
`, seed, more, numerics)
}

// course is how long a run with that many particles takes: with more of them the electrons in the
// middle cool longer, and the density rises for hundreds of periods. It starts with the number of
// ions that it ends with, to 10 %, so that the number of particles is as asked for to 10 %, and
// averages until flux and density are known to about 0.6 %.
func (r resolution) course() (density float64, settle, average int) {
	switch n := r.particles() / bases[0].particles(); {
	case n >= 4:
		return 8.6e14, 1200, 400
	case n >= 2:
		return 7.5e14, 800, 600
	case n >= 1:
		return 7e14, 500, 800
	default:
		return 6.5e14, 500, 1200
	}
}

func (r resolution) input(seed int) string {
	density, settle, average := r.course()
	return convergenceInput(seed,
		fmt.Sprintf("initial: {density: %g /m3, electron_temperature: 20000 K}", density),
		fmt.Sprintf("{scheme: %s, cells: %d, steps_per_period: %d, particles_per_cell: %d, "+
			"ion_substeps: %d, periods: %d, average_periods: %d}", r.scheme, r.cells, r.steps,
			r.perCell, r.substeps, settle+average, average))
}

// knob is one thing to refine: apply makes it finer by a factor of 2^power.
type knob struct {
	name  string
	of    func(r resolution) int
	apply func(r resolution, power int) resolution
	size  func(r resolution) float64 // to which the error is taken to be proportional
	law   string
}

// knobs: cells keep the number of particles in the gap, so that their noise is not changed, too;
// steps keep the moves of ions. The field and the deposition are of second order in the cell.
// Collisions are drawn between moves, which is of first order in the step. Noise goes as 1/N.
func knobs() []knob {
	return []knob{
		{
			"cells", func(r resolution) int { return r.cells },
			func(r resolution, power int) resolution {
				r.cells, r.perCell = times(r.cells, power), times(r.perCell, -power)
				return r
			},
			func(r resolution) float64 { return math.Pow(float64(r.cells), -2) }, "cells^-2",
		},
		{
			"steps_per_period", func(r resolution) int { return r.steps },
			func(r resolution, power int) resolution {
				r.steps, r.substeps = times(r.steps, power), times(r.substeps, power)
				return r
			},
			func(r resolution) float64 { return 1 / float64(r.steps) }, "steps^-1",
		},
		{
			"particles_per_cell", func(r resolution) int { return r.perCell },
			func(r resolution, power int) resolution {
				r.perCell = times(r.perCell, power)
				return r
			},
			func(r resolution) float64 { return 1 / float64(r.particles()) }, "particles^-1",
		},
	}
}

// times returns n 2^power.
func times(n, power int) int { return int(math.Ldexp(float64(n), power)) }

// variant is a run: the base, or one that is finer in the knob, or all finer.
type variant struct {
	resolution
	knob, power int
}

const (
	baseKnob = -1
	allKnobs = -2
)

// variants are the base, then each knob coarse and fine. Of the first scheme, particles four-fold
// follow, alone and then together with doubled cells and steps: the finest.
func variants(base resolution) []variant {
	list := []variant{{base, baseKnob, 0}}
	for i, k := range knobs() {
		list = append(list, variant{k.apply(base, -1), i, -1}, variant{k.apply(base, 1), i, 1})
	}
	if base == bases[0] {
		k := len(knobs()) - 1
		list = append(list, variant{knobs()[k].apply(base, 2), k, 2},
			variant{resolution{
				base.scheme, 2 * base.cells, 2 * base.steps, 2 * base.perCell,
				2 * base.substeps,
			}, allKnobs, 1})
	}
	return list
}

// converging are the results whose convergence is looked at, with the error that may be left.
var converging = []struct {
	name, path string
	limit      float64
}{
	{"mean ion energy", "ion_mean_energy_eV.grounded.all", 0.02},
	{"ion flux", "ion_flux_m2ps.grounded.all", 0.03},
	{"electron power", "power_Wpm2.electron", 0.03},
	{"centre density", "electron_density_center_m3", 0.03},
}

// schemeRuns is what the runs of one scheme gave, the base first; seeds count from firstSeed.
type schemeRuns struct {
	list      []variant
	runs      []*store.Summary
	firstSeed int
}

func (s *schemeRuns) base() resolution { return s.list[0].resolution }

// Goal: what cells, steps and particles leave of numerical error, for both schemes; that both give
// the same with as many steps and particles; and that the automatic choice is close to a much finer
// one. Method: each of the three halved and doubled about a base. A line fitted to the results
// against the size of the error (knobs) gives the limit and the shift that the base has from it.
// The automatic choice is compared with the finest run, with no fit between; so is a run that has
// nothing but the finest one's number of particles, which tells what particles alone do.
func TestValidationConvergence(t *testing.T) {
	onlyWhenValidating(t, "a quarter of an hour with two free processors")
	var inputs []string
	all := make([]schemeRuns, len(bases))
	for i, base := range bases {
		all[i] = schemeRuns{list: variants(base), firstSeed: 100 * (i + 1)}
		for k, r := range all[i].list {
			inputs = append(inputs, r.input(all[i].firstSeed+k))
		}
	}
	inputs = append(inputs, convergenceInput(1, "", "auto"))
	runs := runAll(t, inputs)
	automatic := runs[len(runs)-1]
	t.Logf("automatic: %v", automatic.Provenance["numerics"])
	for i := range all {
		n := len(all[i].list)
		all[i].runs, runs = runs[:n], runs[n:]
		all[i].log(t)
	}
	record(t, "convergence.json", convergenceRows(t, all, automatic)...)
}

// convergenceRows makes the rows of the runs of both schemes and of the automatic choice.
func convergenceRows(t *testing.T, all []schemeRuns, automatic *store.Summary) []validation.Row {
	t.Helper()
	var rows []validation.Row
	for _, c := range converging {
		for i := range all {
			rows = append(rows, all[i].shiftRows(t, c.name, c.path, c.limit)...)
		}
		rows = append(rows, schemesRow(t, c.name, c.path, all))
		rows = append(rows, finestRows(t, c.name, c.path, c.limit, automatic, &all[0])...)
	}
	return rows
}

// log prints the runs as they are.
func (s *schemeRuns) log(t *testing.T) {
	t.Helper()
	for i, r := range s.list {
		line := r.String() + ": "
		for _, c := range converging {
			v := lookup(t, s.runs[i], c.path)
			line += fmt.Sprintf("%s %.4g ± %.2g; ", c.name, v.Value, v.SE)
		}
		te := lookup(t, s.runs[i], centreTemperature)
		t.Logf("%scentre electron temperature %.3g ± %.1g; %g periods averaged, %.0f s; "+
			"doubts: %s", line, te.Value, te.SE, number(s.runs[i].Provenance["averaged_periods"]),
			number(s.runs[i].Provenance["cpu_s"]), doubts(s.runs[i]))
	}
}

const centreTemperature = "electron_temperature_center_eV"

// fit takes the base and the runs of one knob as a line in size^power; the first coefficient is
// the limit, the second the shift of the base. The note lists the runs against the base.
func (s *schemeRuns) fit(t *testing.T, path string, number int, power float64) (fitted, string) {
	t.Helper()
	k := knobs()[number]
	base := lookup(t, s.runs[0], path)
	var x [][]float64
	var y, errors []float64
	note := ""
	for i, r := range s.list {
		if r.knob != number && r.knob != baseKnob {
			continue
		}
		v := lookup(t, s.runs[i], path)
		x = append(x, []float64{1, math.Pow(k.size(r.resolution)/k.size(s.base()), power)})
		y, errors = append(y, v.Value), append(errors, v.SE)
		if r.knob == number {
			note += fmt.Sprintf("%d: %+.2f ± %.2f %%, ", k.of(r.resolution),
				100*(v.Value/base.Value-1), 100*math.Hypot(v.SE, base.SE)/base.Value)
		}
	}
	return fit(t, x, y, errors), note
}

// shiftRows compare the base with what it would be with one of the three perfected.
func (s *schemeRuns) shiftRows(t *testing.T, name, path string, limit float64) []validation.Row {
	t.Helper()
	base := lookup(t, s.runs[0], path)
	percent := func(x float64) float64 { return 100 * x / base.Value }
	var rows []validation.Row
	for i, k := range knobs() {
		f, note := s.fit(t, path, i, 1)
		shift, stdErr := f.at(0, 1)
		note = fmt.Sprintf("%sshift left %+.2f ± %.2f %%, chi2 %.1f (%d)", note, percent(shift),
			percent(stdErr), f.chi2, f.points-len(f.c))
		if k.law == "particles^-1" {
			root, _ := s.fit(t, path, i, 0.5)
			slow, slowErr := root.at(0, 1)
			note += fmt.Sprintf("; as particles^-1/2: %+.2f ± %.2f %%, chi2 %.1f (%d)",
				percent(slow), percent(slowErr), root.chi2, root.points-len(root.c))
		}
		if refuted(f) {
			note += ". The law does not hold: the limit is not known"
		}
		rows = append(rows, validation.Row{
			Section:  convergenceSection,
			Quantity: fmt.Sprintf("%s, %s, %d %s", name, s.base().scheme, k.of(s.base()), k.name),
			Unit:     base.Unit, Reference: base.Value - shift, ReferenceError: stdErr,
			Source: "extrapolation of own runs, error as " + k.law, Status: "computed",
			Ours: base.Value, OursError: base.SE, Limit: limit, LimitKind: validation.Relative,
			Seed: uint64(s.firstSeed), Note: note,
		})
	}
	return rows
}

// refuted tells whether the runs are off the line by more than chance makes of one fit in 1000.
func refuted(f fitted) bool {
	free := float64(f.points - len(f.c))
	return f.chi2 > distuv.ChiSquared{K: free}.Quantile(0.999)
}

// schemesRow compares the bases, which have the same number of steps and particles.
func schemesRow(t *testing.T, name, path string, all []schemeRuns) validation.Row {
	t.Helper()
	energy, momentum := lookup(t, all[0].runs[0], path), lookup(t, all[1].runs[0], path)
	return validation.Row{
		Section: convergenceSection, Quantity: name + ", both schemes", Unit: energy.Unit,
		Reference: momentum.Value, ReferenceError: momentum.SE,
		Source: "own run, " + all[1].base().String(), Status: "computed",
		Ours: energy.Value, OursError: energy.SE, Limit: 4, LimitKind: validation.Sigma,
		Seed: uint64(all[0].firstSeed), Note: "ours: " + all[0].base().String(),
	}
}

// finestRows compare the automatic choice, and what particles alone do, with the finest run.
func finestRows(t *testing.T, name, path string, limit float64, automatic *store.Summary,
	s *schemeRuns,
) []validation.Row {
	t.Helper()
	last := len(s.list) - 1
	v, many := lookup(t, automatic, path), lookup(t, s.runs[last-1], path)
	fine := lookup(t, s.runs[last], path)
	row := validation.Row{
		Section: convergenceSection, Quantity: name + ", automatic choice", Unit: v.Unit,
		Reference: fine.Value, ReferenceError: fine.SE, Source: "own run, " + s.list[last].String(),
		Status: "computed", Ours: v.Value, OursError: v.SE, Limit: limit,
		LimitKind: validation.Relative, Seed: 1,
		Note: fmt.Sprintf("ours: %s. Four times the particles alone: %+.1f %% of the reference. "+
			"Electrons in the middle: %s eV with the automatic choice, %s eV with four times the "+
			"particles, whose noise heats them less", chosenBy(t, automatic),
			100*(many.Value/fine.Value-1), temperature(t, automatic), temperature(t, s.runs[last-1])),
	}
	alone := row
	alone.Quantity = name + ", four times the particles alone"
	alone.Ours, alone.OursError = many.Value, many.SE
	alone.Seed = uint64(s.firstSeed + last - 1)
	alone.Note = "ours: " + s.list[last-1].String()
	return []validation.Row{row, alone}
}

func temperature(t *testing.T, s *store.Summary) string {
	t.Helper()
	v := lookup(t, s, centreTemperature)
	return fmt.Sprintf("%.3f ± %.3f", v.Value, v.SE)
}

// Goal: the rows find the error that the base has in each of the three, with its sign, and the
// limit. Method: made-up runs, in which a result of 20 is off by 8 % from cells, -4 % from steps
// and 2 % from particles at the base of either scheme.
func TestConvergenceRows(t *testing.T) {
	madeUp := func(r, base resolution) *store.Summary {
		off := 0.0
		for i, k := range knobs() {
			off += []float64{0.08, -0.04, 0.02}[i] * k.size(r) / k.size(base)
		}
		v := store.Value{Value: 20 * (1 + off), SE: 0.1, Unit: "eV"}
		return &store.Summary{
			Results: map[string]any{
				"ion_mean_energy_eV":         map[string]any{"grounded": map[string]any{"all": v}},
				"ion_flux_m2ps":              map[string]any{"grounded": map[string]any{"all": v}},
				"power_Wpm2":                 map[string]any{"electron": v},
				"electron_density_center_m3": v,
				centreTemperature:            v,
			},
			Provenance: map[string]any{"numerics": map[string]any{
				"scheme": r.scheme, "cells": r.cells, "steps_per_period": r.steps,
				"particles_per_cell": r.perCell, "ion_substeps": r.substeps,
			}},
		}
	}
	all := make([]schemeRuns, len(bases))
	for i, base := range bases {
		all[i] = schemeRuns{list: variants(base)}
		for _, r := range all[i].list {
			all[i].runs = append(all[i].runs, madeUp(r.resolution, base))
		}
	}
	rows := convergenceRows(t, all, madeUp(bases[0], bases[0]))
	const base = 20 * 1.06
	finest := 20 * (1 + 0.08/4 - 0.04/2 + 0.02/4)
	want := []float64{
		base - 1.6, base + 0.8, base - 0.4, base - 1.6, base + 0.8, base - 0.4, base, finest, finest,
	}
	if len(rows) != len(converging)*len(want) {
		t.Fatalf("%d rows, want %d", len(rows), len(converging)*len(want))
	}
	for i := range want {
		if r := rows[i]; math.Abs(r.Reference-want[i]) > 1e-9 {
			t.Errorf("%s: reference %.6g, want %.6g (%s)", r.Quantity, r.Reference, want[i], r.Note)
		}
	}
}

func (r resolution) String() string {
	return fmt.Sprintf("%s, %d cells, %d steps, %d particles a cell, ions moved every %d",
		r.scheme, r.cells, r.steps, r.perCell, r.substeps)
}

// chosenBy reads the numerics of a run.
func chosenBy(t *testing.T, s *store.Summary) resolution {
	t.Helper()
	n, ok := s.Provenance["numerics"].(map[string]any)
	if !ok {
		t.Fatalf("numerics of the run are %v", s.Provenance["numerics"])
	}
	whole := func(key string) int {
		v := number(n[key])
		if math.IsNaN(v) {
			t.Fatalf("numerics of the run: %s is %v", key, n[key])
		}
		return int(v)
	}
	return resolution{
		fmt.Sprint(n["scheme"]), whole("cells"), whole("steps_per_period"),
		whole("particles_per_cell"), whole("ion_substeps"),
	}
}
