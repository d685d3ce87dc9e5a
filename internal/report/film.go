package report

import (
	"fmt"
	"math"
	"strings"
)

// Indicator is a number that publications relate to the growth of films, with what they say. It is
// no prediction of a property.
type Indicator struct {
	Name   string // what is counted
	Value  string // with its error and unit
	Says   string // what was published, for which film
	Source string
}

// The sources, and how they are known.
const (
	sourceHamers = "E. A. G. Hamers, W. G. J. H. M. van Sark, J. Bezemer, H. Meiling and W. F. " +
		"van der Weg, J. Non-Cryst. Solids 226, 205 (1998); from memory"
	sourceBruneau = "B. Bruneau et al., Effect of ion energy on microcrystalline silicon " +
		"material and devices (2014); abstract read"
	sourceWank = "Wank et al., Mater. Res. Soc. Symp. Proc. 1153, A17-06; abstract read"
)

// energyIndicator is a published energy above which ions of a kind act.
type energyIndicator struct {
	aboveEV float64
	ions    func(species string) bool
	which   string
	says    string
	source  string
}

func energyIndicators() []energyIndicator {
	return []energyIndicator{
		{
			30, heavyIon, "ions as heavy as silicon or heavier",
			"The amorphous-to-microcrystalline transition thickness of microcrystalline silicon " +
				"rose in a step at 30 eV, which the authors assign to displacement by SiHx+. " +
				"Read across to other ions of such mass, this is an assumption.", sourceBruneau,
		},
		{
			70, func(s string) bool { return s == "H3+" }, "H3+",
			"The same study found a second step at 70 eV, assigned to H3+.", sourceBruneau,
		},
		{
			120, func(string) bool { return true }, "all ions",
			"Amorphous silicon from a remote source: with ions up to about 120 to 130 eV the film " +
				"became denser at a constant density of defects; above that, defects rose.",
			sourceWank,
		},
	}
}

// heavyIon tells the ions that hand nearly all their energy to silicon in a head-on collision.
func heavyIon(species string) bool {
	for _, name := range []string{"Ar+", "N2+", "O2+", "CO2+", "CO+"} {
		if species == name {
			return true
		}
	}
	return strings.HasPrefix(species, "Si") && strings.HasSuffix(species, "+")
}

// Indicators lists what the results of a run mean by publications, for its substrates.
func (r *Run) Indicators() ([]Indicator, error) {
	var list []Indicator
	for _, electrode := range r.Substrates() {
		if v, ok := r.Summary.Lookup("film_energy_per_atom_eV." + electrode); ok {
			list = append(list, Indicator{
				Name:  "ion energy per deposited atom, " + electrode,
				Value: estimate(v.Value, v.SE, "eV"),
				Says: "A dense network of amorphous silicon with few voids was said to need about " +
					"5 eV per deposited silicon atom. The growth rate is the input's, no result.",
				Source: sourceHamers,
			})
		}
		more, err := r.shares(electrode)
		if err != nil {
			return nil, err
		}
		list = append(list, more...)
	}
	return list, nil
}

// shares are the parts of the flux above the published energies.
func (r *Run) shares(electrode string) ([]Indicator, error) {
	var list []Indicator
	for _, k := range energyIndicators() {
		above, aboveSE, total, found := 0.0, 0.0, 0.0, false
		err := eachSpectrum([]*Run{r}, electrode, Select{}, func(_ int, species string,
			x, width, y, se Numbers,
		) {
			if !strings.HasSuffix(species, "+") {
				return // the publications are about ions
			}
			for i := range y {
				total += y[i] * width[i]
			}
			if !k.ions(species) {
				return
			}
			found = true
			for i := range y {
				part := math.Min(1, math.Max(0, (x[i]+width[i]/2-k.aboveEV)/width[i]))
				above += part * y[i] * width[i]
				if len(se) > 0 {
					aboveSE += part * se[i] * width[i]
				}
			}
		})
		if err != nil {
			return nil, err
		}
		if !found || total == 0 {
			continue
		}
		list = append(list, Indicator{
			Name: fmt.Sprintf("part of the ion flux that is %s above %g eV, %s", k.which,
				k.aboveEV, electrode),
			Value:  estimate(above/total, aboveSE/total, "") + " (error: at most)",
			Says:   k.says,
			Source: k.source,
		})
	}
	return list, nil
}
