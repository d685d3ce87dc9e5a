package run

import (
	"crypto/sha256"
	"encoding/hex"
	"fmt"
	"os"
	"path/filepath"
	"strings"

	"ionfall/crosssections"
	"ionfall/internal/config"
	"ionfall/internal/inputerr"
	"ionfall/internal/kernels"
	"ionfall/internal/phys"
	"ionfall/mcc"
	"ionfall/pic"
)

// Plan is an input that has been checked against the gases' data: everything but running.
type Plan struct {
	Name  string // of the case: the input file's folder or name
	Case  *config.Case
	Input []byte
	Gases []*crosssections.Gas // in the order of the mixture
	// Kernels is the set of hot loops; the zero value is the fastest that works here.
	Kernels kernels.Set

	heavy    []heavySpecies // ions and fast neutrals, in the order of the simulation's species
	haste    float64        // see pilotHaste; below 1 for none
	bundled  *crosssections.Library
	own      *crosssections.Library // the user's, or nil
	ownFiles crosssections.Files    // of the gases in use that are the user's

	trace     *config.Waveform // of the drive, or nil
	band      int              // harmonics of it that are kept
	amplitude float64          // sum of amplitudes that a target has found so far [V]; 0 at the start
}

// Prepare reads and checks an input file.
func Prepare(path string) (*Plan, error) {
	c, src, err := config.Load(path)
	if err != nil {
		return nil, err
	}
	p := &Plan{Name: caseName(path), Case: c, Input: src}
	if err := p.ownLibrary(filepath.Dir(path)); err != nil {
		return nil, err
	}
	if err := p.loadTrace(filepath.Dir(path), nil); err != nil {
		return nil, err
	}
	return p.checked()
}

// PrepareBytes checks an input that is already in memory; name stands in messages, and its folder
// is that of the input.
func PrepareBytes(name string, src []byte) (*Plan, error) {
	c, err := config.Parse(name, src)
	if err != nil {
		return nil, err
	}
	p := &Plan{Name: caseName(name), Case: c, Input: src}
	if err := p.ownLibrary(filepath.Dir(name)); err != nil {
		return nil, err
	}
	if err := p.loadTrace(filepath.Dir(name), nil); err != nil {
		return nil, err
	}
	return p.checked()
}

// prepareKept checks an input with the files of the user's gases and the trace that were kept with
// it, if any.
func prepareKept(name string, src []byte, files crosssections.Files, trace []byte) (*Plan, error) {
	c, err := config.Parse(name+".yaml", src)
	if err != nil {
		return nil, err
	}
	p := &Plan{Name: name, Case: c, Input: src, ownFiles: files}
	if err := p.loadTrace("", trace); err != nil {
		return nil, err
	}
	if len(files) > 0 {
		if p.own, err = crosssections.OpenFiles(files); err != nil {
			return nil, err
		}
	}
	return p.checked()
}

// Kernels returns the set of hot loops that the environment variable IONFALL_KERNELS names
// (portable, avx2, avx512), without it the fastest that works here. All give the same bits.
func Kernels() (kernels.Set, error) {
	set, err := kernels.Select(os.Getenv("IONFALL_KERNELS"))
	if err != nil {
		return set, fmt.Errorf("environment variable IONFALL_KERNELS: %w", err)
	}
	return set, nil
}

// caseName is the folder's name for an input called input.yaml, else the file's own.
func caseName(path string) string {
	base := strings.TrimSuffix(filepath.Base(path), filepath.Ext(path))
	if base == "input" || base == "resolved" {
		if full, err := filepath.Abs(path); err == nil {
			return filepath.Base(filepath.Dir(full))
		}
	}
	return base
}

// checked finds the gases of the mixture and everything that keeps them from being simulated.
func (p *Plan) checked() (*Plan, error) {
	p.Case.Drive.Expand()
	var err error
	if p.Kernels, err = Kernels(); err != nil {
		return nil, err
	}
	library, err := crosssections.Bundled()
	if err != nil {
		return nil, err
	}
	p.bundled = library
	if p.own != nil {
		library = p.own.Over(library)
	}
	var bad inputerr.List
	for _, part := range p.Case.Gas.Mixture {
		gas, err := library.Gas(part.Gas)
		if err != nil {
			hint := ""
			if near := inputerr.Nearest(part.Gas, library.Names()); near != "" {
				hint = fmt.Sprintf("did you mean %q?", near)
			}
			bad = append(bad, p.Case.Errorf("gas.mixture."+part.Gas, fmt.Sprintf("%q", part.Gas),
				"one of "+strings.Join(library.Names(), ", "), hint))
			continue
		}
		p.Gases = append(p.Gases, gas)
	}
	p.keepOwn()
	if len(p.Gases) == len(p.Case.Gas.Mixture) {
		p.heavy = p.heavySpecies()
		bad = append(bad, p.missingCollisions()...)
		bad = append(bad, p.unusable()...)
		bad = append(bad, p.unknownYields()...)
	}
	if len(bad) > 0 {
		return nil, bad
	}
	return p, nil
}

// InputSHA256 returns the hash of the input as given.
func (p *Plan) InputSHA256() string {
	sum := sha256.Sum256(p.Input)
	return hex.EncodeToString(sum[:])
}

// period returns that of the fundamental [s].
func (p *Plan) period() float64 { return 1 / p.Case.Drive.Fundamental() }

// gasDensity returns n = p/(k T) [1/m3].
func (p *Plan) gasDensity() float64 {
	return p.Case.Gas.Pressure / (phys.Boltzmann * p.Case.Gas.Temperature)
}

func (p *Plan) backgrounds() []mcc.Background {
	list := make([]mcc.Background, len(p.Gases))
	for i, g := range p.Gases {
		list[i] = mcc.Background{
			Gas: g, Density: p.gasDensity() * p.Case.Gas.Mixture[i].Fraction,
			Temperature: p.Case.Gas.Temperature,
		}
	}
	return list
}

// substrates returns the walls on which the film grows; with none named, both.
func (p *Plan) substrates() []pic.Wall {
	var list []pic.Wall
	if p.Case.Electrodes.Powered.Substrate {
		list = append(list, pic.Powered)
	}
	if p.Case.Electrodes.Grounded.Substrate {
		list = append(list, pic.Grounded)
	}
	if len(list) == 0 {
		list = []pic.Wall{pic.Powered, pic.Grounded}
	}
	return list
}

// assemble builds an empty simulation with the given numerics.
func (p *Plan) assemble(n Numerics, weight float64) (*pic.Simulation, error) {
	c := pic.Config{
		Gap: p.Case.Gap, Cells: n.Cells, Period: p.period(), StepsPerPeriod: n.StepsPerPeriod,
		Scheme: n.scheme(), Weight: weight, Chunks: n.Chunks, Seed: p.Case.Seed, Kernels: p.Kernels,
	}
	p.reactor(&c)
	c.Relaxation = p.relaxation(&c)
	electron := heavySpecies{Name: crosssections.ElectronName, Mass: phys.ElectronMass, Charge: -1}
	for i, h := range append([]heavySpecies{electron}, p.heavy...) {
		every := n.IonSubsteps
		if i == 0 {
			every = 1
		}
		model, err := p.collisions(&c, h, every)
		if err != nil {
			return nil, err
		}
		c.Species = append(c.Species, pic.Species{
			Name: h.label(), Charge: h.Charge, Mass: h.Mass, Every: every, Collisions: model,
			Least: p.leastNeutral(h),
		})
	}
	p.addSurfaces(&c)
	p.addPairs(&c, n)
	return pic.New(c)
}

// collisions prepares a species' collisions, tabulated a little beyond the energies that the
// drive can give.
func (p *Plan) collisions(c *pic.Config, h heavySpecies, every int) (*mcc.Model, error) {
	set := p.settings(h)
	set.TopEnergy = 1.3*c.LargestVoltage() + 50
	if h.Name == crosssections.ElectronName {
		set.TopEnergy = max(set.TopEnergy, 300)
	}
	set.Unit, set.TimeStep = c.VelocityUnit(every), c.TimeStep()*float64(every)
	return mcc.NewModel(set, p.backgrounds())
}
