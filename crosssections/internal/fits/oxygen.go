package fits

import (
	"math"

	"ionfall/internal/phys"
)

// The rate coefficient of e + O- -> O + 2 e for electrons of the temperature T [eV] is
// DetachmentRate T^DetachmentPower exp(-DetachmentOnset/T) [m3/s]; from memory.
const (
	DetachmentRate  = 5.47e-14
	DetachmentPower = 0.324
	DetachmentOnset = 2.98
)

// OxygenIonDetachment is the cross section of e + O- -> O + 2 e whose mean over a Maxwellian is
// that rate coefficient at every temperature, by the inverse Laplace transform:
// C (E - E0)^(p + 1/2)/E with C = k0/(sqrt(8 q/(pi m)) Gamma(p + 3/2)). It begins at 2.98 eV, twice
// the electron affinity, as the ion repels the electron.
//
// Ref: L. Vejby-Christensen et al., Phys. Rev. A 53, 2371 (1996), measurement.
func OxygenIonDetachment(e float64) float64 {
	if e <= DetachmentOnset {
		return 0
	}
	mean := math.Sqrt(8 * phys.ElementaryCharge / (math.Pi * phys.ElectronMass))
	c := DetachmentRate / (mean * math.Gamma(DetachmentPower+1.5))
	return c * math.Pow(e-DetachmentOnset, DetachmentPower+0.5) / e
}
