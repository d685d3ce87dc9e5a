package mcc

import (
	"context"
	"flag"
	"fmt"
	"math"
	"os"
	"strings"
	"testing"

	"go.yaml.in/yaml/v4"

	"ionfall/crosssections"
	"ionfall/internal/phys"
	"ionfall/internal/stats"
	"ionfall/internal/validation"
)

var (
	validate = flag.Bool("validate", false, "run the complete comparison with published values")
	update   = flag.Bool("update", false, "with -validate: keep the comparisons as rows")
)

const (
	swarmReference = "../testdata/reference/swarm.yaml"
	swarmRows      = "../testdata/validation/swarm.json"
	swarmDensity   = 1e23 // of all swarms here [1/m3]; coefficients are reduced, so it cancels
	swarmSeed      = 20
)

// swarmSection is a table of the reference file; see there.
type swarmSection struct {
	Section     string             `yaml:"section"`
	Gas         string             `yaml:"gas"`
	Projectile  string             `yaml:"projectile"`
	Temperature float64            `yaml:"temperature_K"`
	Sharing     string             `yaml:"sharing"`
	Source      string             `yaml:"source"`
	Status      string             `yaml:"status"`
	Note        string             `yaml:"note"`
	Errors      map[string]float64 `yaml:"errors"`
	Points      []swarmPoint       `yaml:"points"`
}

type swarmPoint struct {
	Field  float64            `yaml:"field_Td"`
	Quick  bool               `yaml:"quick"`
	Solve  bool               `yaml:"solve"` // the Boltzmann equation, too
	Note   string             `yaml:"note"`
	Values map[string]float64 `yaml:"values"`
	Errors map[string]float64 `yaml:"errors"`
}

// swarmQuantity is a quantity of the reference file.
type swarmQuantity struct {
	key, name, unit string
	of              func(r *SwarmResult) stats.Estimate
}

func swarmQuantities() []swarmQuantity {
	return []swarmQuantity{
		{
			"mean_energy_eV", "mean energy", "eV",
			func(r *SwarmResult) stats.Estimate { return r.MeanEnergy },
		},
		{
			"flux_drift_mps", "flux drift velocity", "m/s",
			func(r *SwarmResult) stats.Estimate { return r.FluxDrift },
		},
		{
			"bulk_drift_mps", "bulk drift velocity", "m/s",
			func(r *SwarmResult) stats.Estimate { return r.BulkDrift },
		},
		{
			"ionization_m3ps", "ionization rate coefficient", "m3/s",
			func(r *SwarmResult) stats.Estimate { return r.Ionization },
		},
		{
			"loss_m3ps", "attachment rate coefficient", "m3/s",
			func(r *SwarmResult) stats.Estimate { return r.Loss },
		},
		{
			"townsend_m2", "ionization per length and density", "m2",
			func(r *SwarmResult) stats.Estimate { return r.Townsend },
		},
		{
			"transverse_pmps", "transverse diffusion times density", "1/(m s)",
			func(r *SwarmResult) stats.Estimate { return r.DiffusionTransverse },
		},
		{
			"longitudinal_pmps", "longitudinal diffusion times density", "1/(m s)",
			func(r *SwarmResult) stats.Estimate { return r.DiffusionLongitudinal },
		},
		{
			"mobility_cm2pVs", "reduced mobility", "cm2/(V s)",
			func(r *SwarmResult) stats.Estimate { return r.Mobility },
		},
	}
}

// readSwarmSections reads the reference file strictly.
func readSwarmSections(t *testing.T) []swarmSection {
	t.Helper()
	data, err := os.ReadFile(swarmReference)
	if err != nil {
		t.Fatal(err)
	}
	var list []swarmSection
	if err := yaml.Load(data, &list, yaml.WithKnownFields()); err != nil {
		t.Fatal(err)
	}
	known := map[string]bool{}
	for _, q := range swarmQuantities() {
		known[q.key] = true
	}
	for _, s := range list {
		for _, p := range s.Points {
			for key := range p.Values {
				if !known[key] {
					t.Fatalf("%s, %g Td: unknown quantity %q", s.Section, p.Field, key)
				}
			}
		}
	}
	return list
}

// swarmGas returns a model gas or a bundled one.
func swarmGas(t testing.TB, name string) *crosssections.Gas {
	t.Helper()
	switch name {
	case "reid":
		return reidGas()
	case "lucas-saelee-0":
		return lucasSaeleeGas(0)
	case "lucas-saelee-1":
		return lucasSaeleeGas(1)
	}
	return bundled(t, name).Gas
}

// asked is how exactly swarms are followed: for the tables, a part of the references' errors.
func asked(set SwarmSettings) SwarmSettings {
	set.Seed, set.Workers = swarmSeed, 2
	set.RelativeError, set.Particles = 0.01, 2000
	if *validate {
		set.RelativeError = 0.003
		set.RateError = 0.015
		set.MaxSteps = 1_500_000
	}
	return set
}

// Goal: the swarms agree with independently computed and published tables, within four joint
// standard errors. Method: the points marked quick, and with -validate all of them; a swarm that
// serves several tables is followed once.
func TestValidationSwarmTables(t *testing.T) {
	if testing.Short() {
		t.Skip("takes some ten seconds")
	}
	known := map[string]*SwarmResult{}
	for _, s := range readSwarmSections(t) {
		t.Run(s.Section, func(t *testing.T) {
			for _, p := range s.Points {
				if !*validate && !p.Quick {
					continue
				}
				key := fmt.Sprint(s.Gas, s.Projectile, s.Temperature, p.Field)
				if known[key] == nil {
					known[key] = tableSwarm(t, s, p.Field)
				}
				record(t, pointRows(s, p, known[key])...)
				if p.Solve {
					record(t, multiTermRows(t, s, p.Field, known[key])...)
				}
			}
		})
	}
}

// tableSwarm follows the swarm of a point.
func tableSwarm(t *testing.T, s swarmSection, field float64) *SwarmResult {
	t.Helper()
	b := Background{
		Gas: swarmGas(t, s.Gas), Density: swarmDensity, Temperature: s.Temperature,
	}
	r := mustSwarm(t, asked(SwarmSettings{Projectile: s.Projectile, Field: field}), b)
	t.Logf("%g Td: beyond %g, extrapolated %g, %+v", field, r.Beyond, r.Extrapolated, r.Run)
	return &r
}

func mustSwarm(t testing.TB, set SwarmSettings, gas ...Background) SwarmResult {
	t.Helper()
	r, err := Swarm(context.Background(), gas, set)
	if err != nil {
		t.Fatal(err)
	}
	return r
}

// pointRows makes the rows of a point, in the order of swarmQuantities.
func pointRows(s swarmSection, p swarmPoint, r *SwarmResult) []validation.Row {
	var rows []validation.Row
	for _, q := range swarmQuantities() {
		want, ok := p.Values[q.key]
		if !ok {
			continue
		}
		relative, ok := p.Errors[q.key]
		if !ok {
			relative = s.Errors[q.key]
		}
		e := q.of(r)
		rows = append(rows, validation.Row{
			Section: s.Section, Quantity: fmt.Sprintf("%g Td, %s", p.Field, q.name), Unit: q.unit,
			Reference: want, ReferenceError: relative * want, Source: s.Source, Status: s.Status,
			Ours: e.Mean, OursError: e.StdErr, Limit: 4, LimitKind: validation.Sigma,
			Seed: swarmSeed, Note: strings.Join(nonEmpty(s.Note, p.Note), "; "),
		})
	}
	return rows
}

func nonEmpty(list ...string) []string {
	var kept []string
	for _, s := range list {
		if s != "" {
			kept = append(kept, s)
		}
	}
	return kept
}

// record judges the rows and, for a complete run, keeps them.
func record(t *testing.T, rows ...validation.Row) {
	t.Helper()
	validation.Record(t, swarmRows, *update && *validate, rows...)
}

// exactRow compares an estimate with an exact value.
func exactRow(section, quantity, unit, source string, want float64, e stats.Estimate,
) validation.Row {
	return validation.Row{
		Section: section, Quantity: quantity, Unit: unit, Reference: want, Source: source,
		Status: "exact", Ours: e.Mean, OursError: e.StdErr, Limit: 4, LimitKind: validation.Sigma,
		Seed: swarmSeed,
	}
}

// exactly is how exactly swarms with a known answer are followed: with a step whose error,
// Step^2/12, is a third of the statistical one.
func exactly(set SwarmSettings) SwarmSettings {
	set = asked(set)
	set.Step, set.RateError = 0.1, 0
	if *validate {
		set.RelativeError, set.Step, set.MaxSteps = 0.001, 0.05, 4_000_000
	}
	return set
}

// fieldFor returns E/N [Td] for a force q E = m a on particles of the mass.
func fieldFor(acceleration, mass float64) float64 {
	return acceleration * mass / phys.ElementaryCharge / swarmDensity / townsend
}

// energyOf returns the kinetic energy of a squared speed [eV].
func energyOf(square, mass float64) float64 { return 0.5 * mass * square / phys.ElementaryCharge }

// eepfRows compares the distribution at energies around the mean with the exact part of the
// particles between two energies.
func eepfRows(section, source string, r *SwarmResult, parts []float64,
	within func(fromEV, toEV float64) float64,
) []validation.Row {
	var rows []validation.Row
	for _, part := range parts {
		at := part * r.MeanEnergy.Mean
		bin := int(swarmBins * math.Sqrt(at/r.Run.TopEnergy))
		from, to := r.Energies.EdgesEV[bin], r.Energies.EdgesEV[bin+1]
		rows = append(rows, exactRow(section,
			fmt.Sprintf("energy distribution at %g of the mean energy", part), "eV^-3/2", source,
			within(from, to)/binVolume(r, bin),
			stats.Estimate{Mean: r.Energies.EEPF[bin], StdErr: r.Energies.StdErr[bin]}))
	}
	return rows
}

// binVolume is the integral of sqrt(E) dE over a bin.
func binVolume(r *SwarmResult, bin int) float64 {
	e := r.Energies.EdgesEV
	return 2. / 3 * (math.Pow(e[bin+1], 1.5) - math.Pow(e[bin], 1.5))
}
