package pic

import (
	"math"
	"testing"

	"ionfall/internal/surfaces"
)

// strike lets n particles of a species hit the powered electrode at an energy [eV] and angle, and
// returns the ledger of the electrons and the energies of what left.
func strike(t *testing.T, e Electrode, sp Species, n int, energyEV, angle float64) (
	SpeciesLedger, []float64,
) {
	t.Helper()
	c := empty(64, 400, electrons())
	hit := 0
	if sp.Charge > 0 {
		c.Species, hit = append(c.Species, sp), 1
	}
	c.Electrodes[Powered] = e
	s := mustNew(t, c)
	own := &s.species[hit]
	v := math.Sqrt(energyEV * elementaryEV / own.energyPer)
	for k := range n {
		ch := &own.chunks[k%len(own.chunks)]
		ch.add(1e-6, -v*math.Cos(angle), v*math.Sin(angle), 0)
	}
	s.redeposit()
	mustAdvance(t, s, 1)
	var energies []float64
	list := &s.species[0]
	for k := range list.chunks {
		ch := &list.chunks[k]
		for i := range ch.x {
			energies = append(energies, list.energyEV(&Hit{Powered, ch.vx[i], ch.vy[i], ch.vz[i]}))
		}
	}
	return s.TakeLedger().Species[0], energies
}

const elementaryEV = 1.602176634e-19

// Goal: electrons that hit a wall give back as many as Vaughan's yield says, of which the parts
// reflected, rediffused and true have their numbers and energies. Method: 60 000 of them at two
// energies and angles; binomial and Poisson errors.
func TestElectronsSetElectronsFree(t *testing.T) {
	const n = 60_000
	e := surfaces.Emission{
		MaxYield: 2.4, MaxEnergyEV: 400, ThresholdEV: 12.5, Smoothness: 1, Elastic: 0.03, Inelastic: 0.07,
	}
	for _, c := range []struct{ energy, angle float64 }{{100, 0}, {300, 1}} {
		l, energies := strike(t, Electrode{Emission: &e}, electrons(), n, c.energy, c.angle)
		yield := e.Yield(c.energy, c.angle)
		elastic := float64(l.Reflected[Powered])
		checkMean(t, "elastic", elastic/n, 0.03*yield, math.Sqrt(0.03*yield/n))
		left := elastic + float64(l.Emitted[Powered])
		checkMean(t, "all", left/n, yield, math.Sqrt(yield/n))
		if got := l.Absorbed[Powered]; got != n-int64(elastic) {
			t.Errorf("%d absorbed, %g reflected", got, elastic)
		}
		// Above a third of the energy true secondaries are rare: rediffused ones are two thirds there.
		fast := 0.0
		for _, own := range energies {
			if own > 0.999*c.energy {
				fast++
			}
		}
		checkMean(t, "reflected with all their energy", fast/n, 0.03*yield, math.Sqrt(0.031*yield/n)+
			0.07*yield*0.001)
	}
	l, _ := strike(t, Electrode{Emission: &e}, electrons(), 1000, 10, 0)
	if l.Emitted[Powered]+l.Reflected[Powered] != 0 {
		t.Error("emission below the threshold")
	}
}

// Goal: ions set electrons free by the yield at their energy. Method: 60 000 ions at 300 eV on a
// dirty metal; the yield that replaces the constant.
func TestIonsSetElectronsFreeByEnergy(t *testing.T) {
	const n = 60_000
	e := Electrode{
		IonSecondaryYield: 0.5, SecondaryEnergyEV: 2,
		Yields: []surfaces.Yield{nil, surfaces.DirtyMetalIon},
	}
	l, energies := strike(t, e, ions(1), n, 300, 0.2)
	want := surfaces.DirtyMetalIon(300)
	checkMean(t, "yield", float64(l.Emitted[Powered])/n, want, math.Sqrt(want/n))
	for _, own := range energies {
		checkNear(t, "energy", own, 2, 1e-9)
	}
}
