package crosssections

import (
	"fmt"
	"math"
	"slices"
)

// ElasticFromEffective is the elastic momentum-transfer cross section that an effective one
// contains: effective minus the sum of the inelastic processes (excitation, ionization and
// attachment). The rows are the union of all rows, so that the parts add up to the effective
// cross section everywhere within its range and not only at its rows; Onset steps keep a row on
// either side. Where the difference is negative it is set to zero, and a warning says where.
func ElasticFromEffective(effective *Table, inelastic []Process) (Table, []string) {
	energies := unionOfRows(effective, inelastic)
	elastic := Table{ValidTo: effective.ValidTo, Energy: energies}
	var clipped clipping
	for _, e := range energies {
		q := effective.At(e)
		for i := range inelastic {
			q -= inelastic[i].Table.At(e)
		}
		clipped.note(e, q, effective.At(e))
		elastic.CrossSection = append(elastic.CrossSection, max(q, 0))
	}
	return elastic, clipped.warnings()
}

// unionOfRows is the energies of all tables within the range of the first, each once.
func unionOfRows(effective *Table, inelastic []Process) []float64 {
	energies := slices.Clone(effective.Energy)
	first, last := effective.Energy[0], effective.Max()
	for i := range inelastic {
		t := &inelastic[i].Table
		candidates := slices.Clone(t.Energy)
		if t.Onset > 0 {
			candidates = append(candidates, t.Onset, math.Nextafter(t.Onset, 0))
		}
		for _, e := range candidates {
			if e >= first && e <= last {
				energies = append(energies, e)
			}
		}
	}
	slices.Sort(energies)
	return slices.Compact(energies)
}

// clipping collects where a difference was negative.
type clipping struct {
	rows      int
	from, to  float64 // [eV]
	worst, at float64 // negative share of the effective cross section, energy [eV]
}

func (c *clipping) note(energyEV, difference, effective float64) {
	// Differences of rounding size are not worth a warning.
	if difference >= -1e-12*effective {
		return
	}
	share := math.Inf(1)
	if effective > 0 {
		share = -difference / effective
	}
	if c.rows == 0 || share > c.worst {
		c.worst, c.at = share, energyEV
	}
	if c.rows == 0 {
		c.from = energyEV
	}
	c.rows++
	c.to = energyEV
}

func (c *clipping) warnings() []string {
	if c.rows == 0 {
		return nil
	}
	return []string{fmt.Sprintf("the inelastic cross sections exceed the effective one at %d rows "+
		"between %g and %g eV (most at %g eV, by %.3g of it): elastic set to 0 there",
		c.rows, c.from, c.to, c.at, c.worst)}
}
