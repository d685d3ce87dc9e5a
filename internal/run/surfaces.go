package run

import (
	"fmt"
	"slices"
	"strings"

	"ionfall/internal/config"
	"ionfall/internal/inputerr"
	"ionfall/internal/phys"
	"ionfall/internal/surfaces"
	"ionfall/pic"
)

const (
	// The yields as a function of the energy are known for these.
	yieldIon, yieldAtom = "Ar+", "Ar"
	// floatingCapacitance couples a floating wafer to its electrode [F/m2]: so large that it takes no
	// RF voltage.
	floatingCapacitance = 1e-3
)

// yieldOf returns the yield that a word stands for, of ions or of fast atoms.
func yieldOf(model string, atoms bool) surfaces.Yield {
	switch {
	case model == config.CleanMetal && atoms:
		return surfaces.CleanMetalAtom
	case model == config.CleanMetal:
		return surfaces.CleanMetalIon
	case atoms:
		return surfaces.DirtyMetalAtom
	case model == config.DirtyMetalRF:
		return surfaces.DirtyMetalIonRF
	}
	return surfaces.DirtyMetalIon
}

// addSurfaces enters what the walls do to the species, which must be there.
func (p *Plan) addSurfaces(c *pic.Config) {
	labels := make([]string, len(c.Species))
	for i := range labels {
		labels[i] = c.Species[i].Name
	}
	c.Electrodes[pic.Powered] = electrode(&p.Case.Electrodes.Powered, labels)
	c.Electrodes[pic.Grounded] = electrode(&p.Case.Electrodes.Grounded, labels)
}

// electrode returns what a wall does to the species, whose labels are given, electrons first.
func electrode(e *config.Electrode, labels []string) pic.Electrode {
	w := pic.Electrode{
		IonSecondaryYield: e.IonSecondaryYield, SecondaryEnergyEV: e.SecondaryElectronEnergy,
		ElectronReflection: e.ElectronReflection,
	}
	if m := e.Emission; m != nil {
		w.Emission = &surfaces.Emission{
			MaxYield: m.MaxYield, MaxEnergyEV: m.MaxEnergy, ThresholdEV: m.Threshold,
			Smoothness: m.Smoothness, Elastic: m.Elastic, Inelastic: m.Inelastic,
		}
	}
	list := e.IonYields
	if e.IonYieldModel != "" {
		list = []config.IonYield{{Ion: yieldIon, Model: e.IonYieldModel}}
	}
	if len(list) == 0 {
		return w
	}
	w.Yields = make([]surfaces.Yield, len(labels))
	for _, y := range list {
		for i, label := range labels {
			switch {
			case label == y.Ion && y.Model != "":
				w.Yields[i] = yieldOf(y.Model, false)
			case label == y.Ion:
				w.Yields[i] = surfaces.Constant(y.Yield)
			case label == pic.FastPrefix+yieldAtom && y.Model != "":
				w.Yields[i] = yieldOf(y.Model, true)
			}
		}
	}
	return w
}

// unknownYields finds yields of ions that are none of the run, and words for ions that they are
// not known for.
func (p *Plan) unknownYields() inputerr.List {
	var bad inputerr.List
	var ions []string
	for _, h := range p.heavy {
		if h.Charge > 0 {
			ions = append(ions, h.Name)
		}
	}
	for name, e := range map[string]*config.Electrode{
		"powered": &p.Case.Electrodes.Powered, "grounded": &p.Case.Electrodes.Grounded,
	} {
		key := "electrodes." + name + ".ion_secondary_yield"
		if e.IonYieldModel != "" {
			for _, ion := range ions {
				if ion != yieldIon {
					bad = append(bad, p.Case.Errorf(key, fmt.Sprintf("%s, which is not known for %s",
						e.IonYieldModel, ion), "a yield for each ion, such as {Ar+: "+e.IonYieldModel+
						", "+ion+": 0.05}", ""))
				}
			}
		}
		for _, y := range e.IonYields {
			at := key + "." + y.Ion
			if !slices.Contains(ions, y.Ion) {
				bad = append(bad, p.Case.Errorf(at, y.Ion, "an ion of this mixture: "+
					strings.Join(ions, ", "), ""))
			} else if y.Model != "" && y.Ion != yieldIon {
				bad = append(bad, p.Case.Errorf(at, y.Model+" for "+y.Ion, "a number: it is known for "+
					yieldIon+" alone", ""))
			}
		}
	}
	return bad
}

// layers returns the capacitances of what covers the powered and the grounded electrode, per area
// of the powered one [F/m2]; 0 for nothing.
func (p *Plan) layers() (list [2]float64) {
	ratio := 1.0
	if p.geometry().Shape != pic.Plates {
		ratio = p.Case.Geometry.AreaRatio
	}
	for wall, e := range []*config.Electrode{&p.Case.Electrodes.Powered, &p.Case.Electrodes.Grounded} {
		area := 1.0
		if wall == int(pic.Grounded) {
			area = ratio
		}
		var parts []float64
		if l := e.Dielectric; l != nil {
			parts = append(parts, area*phys.Epsilon0*l.Permittivity/l.Thickness)
		}
		if e.Floating {
			parts = append(parts, area*floatingCapacitance)
		}
		list[wall] = inSeries(parts...)
	}
	return list
}

// inSeries returns the capacitance of capacitors in series; those of 0 are not there.
func inSeries(list ...float64) float64 {
	sum := 0.0
	for _, c := range list {
		if c > 0 {
			sum += 1 / c
		}
	}
	if sum == 0 {
		return 0
	}
	return 1 / sum
}

// reactorReferences are the publications that circuit, shells and surfaces rely on, with what for.
func (p *Plan) reactorReferences() [][2]string {
	var list [][2]string
	c := p.bare()
	if c.CurrentDrive || c.Network != (pic.Network{}) {
		list = append(list, [2]string{"verboncoeur-1993", "circuit solved together with the potential"})
	}
	if c.Geometry.Shape != pic.Plates {
		list = append(list, [2]string{"verboncoeur-2001", "volumes of the nodes between shells"})
	}
	if p.biasFree() {
		list = append(list, [2]string{"heil-2008", "first guess of the self-bias"})
	}
	yields, emission := false, false
	for _, e := range []*config.Electrode{&p.Case.Electrodes.Powered, &p.Case.Electrodes.Grounded} {
		yields = yields || e.IonYieldModel != ""
		for _, y := range e.IonYields {
			yields = yields || y.Model != ""
		}
		emission = emission || e.Emission != nil
	}
	if yields {
		list = append(list, [2]string{"phelps-petrovic-surfaces-1999", "electrons set free by argon"})
	}
	if emission {
		list = append(list, [2]string{"vaughan-1989", "electrons set free by electrons"},
			[2]string{"vaughan-1993", "electrons set free by electrons"},
			[2]string{"chung-everhart-1974", "energies of true secondary electrons"})
	}
	return list
}
