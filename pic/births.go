package pic

import (
	"fmt"
	"slices"

	"ionfall/crosssections"
	"ionfall/internal/kernels"
	"ionfall/mcc"
)

// linkBirths finds the species that the products of each channel belong to.
func (s *Simulation) linkBirths(sp *Species) error {
	if sp.Collisions == nil {
		return nil
	}
	find := func(name string) int {
		return slices.IndexFunc(s.species, func(one Species) bool {
			return one.Name == name || one.Charge == 0 && one.Name == FastPrefix+name
		})
	}
	targets := sp.Collisions.Targets()
	for c, p := range sp.Collisions.Processes() {
		ion := -1
		for _, product := range p.Products {
			if i := find(product); i >= 0 && s.species[i].Charge > 0 {
				ion = i
			}
		}
		if p.Kind == crosssections.Ionization && ion < 0 {
			return fmt.Errorf("pic: process %q makes %v, and none of these is a species of the run",
				p.Name, p.Products)
		}
		sp.ionOf = append(sp.ionOf, ion)
		made := make([]int, len(p.Out))
		for k, out := range p.Out {
			made[k] = find(out.Name)
			changes := p.Kind == crosssections.Reaction || p.Kind == crosssections.Attachment
			if changes && out.Charge != 0 && made[k] < 0 {
				return fmt.Errorf("pic: process %q makes %s, which is no species of the run",
					p.Name, out.Name)
			}
		}
		sp.madeOf = append(sp.madeOf, made)
		sp.hitOf = append(sp.hitOf, find(targets[c]))
	}
	return nil
}

// bear adds an electron and an ion at x. The ion's velocity comes in the electrons' unit.
func (s *Simulation) bear(w *worker, electrons *Species, c, ion int, x float64, ve, vi [3]float64) {
	ch := &electrons.chunks[c]
	ch.add(x, ve[0], ve[1], ve[2])
	ch.tally.born++
	ch.tally.bornV2 += square(ve)
	s.place(w, 0, ion, c, x, scaledBy(float64(s.species[ion].Every)/float64(electrons.Every), vi))
}

// place adds a particle of species to at x, which a collision of species from made, with a velocity
// in its own unit. One that has had its turn in this step, or does not move in it, is deposited
// where it is.
func (s *Simulation) place(w *worker, from, to, c int, x float64, v [3]float64) {
	sp := &s.species[to]
	ch := &sp.chunks[c]
	ch.add(x, v[0], v[1], v[2])
	ch.tally.born++
	ch.tally.bornV2 += square(v)
	if to < from || !sp.due(w.step) {
		kernels.Deposit(ch.x[len(ch.x)-1:], w.deposit[(w.step+1)&1][to])
	}
}

// change adds the particles that collisions of species i in chunk c made, and takes out those that
// they ended.
func (s *Simulation) change(w *worker, i, c int, out *mcc.Outcome) {
	sp := &s.species[i]
	ch := &sp.chunks[c]
	for k := range out.Made {
		m := &out.Made[k]
		var to int
		if m.Product == mcc.Recoil {
			to = sp.hitOf[m.Channel]
		} else {
			to = sp.madeOf[m.Channel][m.Product]
		}
		if to < 0 {
			continue
		}
		v := scaledBy(float64(s.species[to].Every)/float64(sp.Every), m.V)
		if s.species[to].Charge == 0 && square(v) < s.species[to].least2 {
			continue
		}
		s.place(w, i, to, c, ch.x[m.Parent], v)
		if to == 0 && s.species[0].Charge < 0 { // no electron lost the energy that it brings
			ch0 := &s.species[0].chunks[c]
			ch0.tally.emittedV2 += square(v)
		}
	}
	for _, p := range slices.Backward(out.Gone) {
		ch.tally.gone++
		ch.remove(int(p))
	}
}

func square(v [3]float64) float64 { return v[0]*v[0] + v[1]*v[1] + v[2]*v[2] }

func scaledBy(k float64, v [3]float64) [3]float64 {
	return [3]float64{k * v[0], k * v[1], k * v[2]}
}
