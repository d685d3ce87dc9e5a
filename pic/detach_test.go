package pic

import (
	"bytes"
	"fmt"
	"math"
	"testing"

	"ionfall/crosssections"
	"ionfall/internal/phys"
	"ionfall/internal/rng"
	"ionfall/internal/validation"
	"ionfall/mcc"
)

// oxygenPair is the detachment of O- by electrons, as bundled.
func oxygenPair(t testing.TB) crosssections.Pair {
	t.Helper()
	lib, err := crosssections.Bundled()
	if err != nil {
		t.Fatal(err)
	}
	gas, err := lib.Gas("O2")
	if err != nil {
		t.Fatal(err)
	}
	for _, p := range gas.Pairs {
		if p.Kind == crosssections.Detachment {
			return p
		}
	}
	t.Fatal("oxygen has no detachment by electrons")
	return crosssections.Pair{}
}

// detaching is a uniform plasma of electrons, heavy positive ions and O-, without motion: every
// call of react on a chunk lasts the time of pairs.
func detaching(t *testing.T, electrons, negative int, rate *mcc.PairRate,
	d *mcc.Detachment, density float64,
) *Simulation {
	t.Helper()
	mass := oxygenPair(t).Masses[1]
	c := Config{
		Gap: 0.01, Cells: 16, Period: 1e-7, StepsPerPeriod: 10, Scheme: EnergyConserving,
		Species: []Species{
			{Name: "e", Charge: -1, Mass: phys.ElectronMass, Every: 1},
			{Name: "O2+", Charge: 1, Mass: 2 * mass, Every: 1},
			{Name: "O-", Charge: -1, Mass: mass, Every: 1},
			{Name: "fast_O", Mass: mass - phys.ElectronMass, Every: 1},
		},
		Weight: density * 0.01 / float64(electrons), Chunks: 4, Seed: 8,
		Pairs:     []PairReaction{{A: 0, B: 2, Rate: rate, Detach: d, Neutral: 3}},
		PairEvery: 10,
	}
	s := mustNew(t, c)
	mustLoad(t, s, 0, electrons, 30_000)
	mustLoad(t, s, 1, electrons+negative, 300)
	mustLoad(t, s, 2, negative, 300)
	s.step = 1 // velocities are where they are
	s.SetWorkers(1)
	return s
}

// heat gives electrons new velocities of the temperature [eV] and takes those out that are more than
// keep, by chunk; nil keeps all.
func heat(s *Simulation, stream *rng.Stream, te float64, keep []int) {
	spread := math.Sqrt(te*phys.ElementaryCharge/phys.ElectronMass) / s.config.VelocityUnit(1)
	for c := range s.species[0].chunks {
		ch := &s.species[0].chunks[c]
		if keep != nil {
			ch.truncate(keep[c])
		}
		for i := range ch.x {
			ch.vx[i], ch.vy[i], ch.vz[i] = spread*stream.Normal(), spread*stream.Normal(),
				spread*stream.Normal()
		}
	}
}

// Goal: electrons of a temperature detach O- at the rate n k(T): its number falls as
// exp(-n_e k t). Method: 20 000 electrons, made Maxwellian again and held to their number after each
// step, and 40 000 O- in a box, until some 60 % are left; k by the formula whose cross section is
// bundled; within four standard errors of the binomial law, 0.7 % of k.
func TestDetachmentDecay(t *testing.T) {
	pair := oxygenPair(t)
	rate := mcc.NewPairRate(&pair.Table, pair.Masses, 100)
	d := mcc.NewDetachment(pair.Masses, pair.Threshold, mcc.EqualSharing)
	const electrons, negative, density = 20_000, 40_000, 1e17
	for _, te := range []float64{2, 4} {
		s := detaching(t, electrons, negative, rate, d, density)
		keep := make([]int, s.config.Chunks)
		for c := range keep {
			keep[c] = len(s.species[0].chunks[c].x)
		}
		k := 5.47e-14 * math.Pow(te, 0.324) * math.Exp(-2.98/te)
		dt := s.config.TimeStep() * float64(s.config.PairEvery)
		rounds := int(math.Round(0.5 / (density * k * dt)))
		stream := rng.Key{Seed: 12}.Stream()
		w := s.workers[0]
		for w.step = 0; w.step < int64(10*rounds); w.step += 10 {
			heat(s, &stream, te, keep)
			for c := range s.config.Chunks {
				s.react(w, c)
			}
		}
		time := float64(rounds) * dt
		left := float64(s.species[2].Count()) / negative
		// ln of the part left has the error sqrt((1 - part)/(part N)).
		got := -math.Log(left) / (density * time)
		se := math.Sqrt((1-left)/(left*negative)) / (density * time)
		checkMean(t, "rate coefficient", got, k, se)
		validation.Record(t, "../testdata/validation/gases.json", *update, validation.Row{
			Section:   "electrons detach O-, 20 000 electrons of a Maxwellian and 40 000 ions in a box",
			Quantity:  fmt.Sprintf("rate coefficient at %g eV", te),
			Unit:      "m3/s",
			Reference: k,
			Source: "5.47e-14 Te^0.324 exp(-2.98/Te), of the measurement of L. Vejby-Christensen " +
				"et al., Phys. Rev. A 53, 2371 (1996)",
			Status: "memory", Ours: got, OursError: se, Limit: 4, LimitKind: validation.Sigma, Seed: 8,
		})
	}
}

// Goal: with a constant rate coefficient k, electrons multiply and O- falls by the logistic law: of n
// electrons and m ions a volume, m (n+m)/(m + n exp((n+m) k t)) ions are left. The charge stays, and
// the energy but for the threshold of each; the ledger finds no work of the field. Method: k = 1e-13
// m3/s whatever the energy, electrons of 200 eV, until two fifths of the ions are left. Their number m
// scatters by the variance V with dV/d(u k t) = -2 (1 - 2 m/u) V + m (1 - m/u), u = n + m.
func TestDetachmentMultipliesElectrons(t *testing.T) {
	pair := oxygenPair(t)
	const k, number, density = 1e-13, 20_000, 1e17
	table := crosssections.Table{}
	for e := 1.461; e < 2000; e *= 1.005 {
		g := math.Sqrt(2 * e * phys.ElementaryCharge / phys.ElectronMass)
		table.Energy = append(table.Energy, e)
		table.CrossSection = append(table.CrossSection, k/g)
	}
	d := mcc.NewDetachment(pair.Masses, pair.Threshold, mcc.EqualSharing)
	s := detaching(t, number, number, mcc.NewPairRate(&table, pair.Masses, 2000), d, density)
	stream := rng.Key{Seed: 13}.Stream()
	heat(s, &stream, 133, nil)
	s.TakeLedger()
	before := s.Kinetic()
	dt := s.config.TimeStep() * float64(s.config.PairEvery)
	rounds := int(0.35 / (density * k * dt) * 2)
	w := s.workers[0]
	for w.step = 0; w.step < int64(10*rounds); w.step += 10 {
		for c := range s.config.Chunks {
			s.react(w, c)
		}
	}
	l, after := s.TakeLedger(), s.Kinetic()
	left := s.species[2].Count()
	m, variance := float64(number), 0.0
	step := 2 * density * k * dt
	for range rounds {
		variance += step * (m*(1-m/(2*number)) - 2*(1-m/number)*variance)
		m -= step * m * (1 - m/(2*number))
	}
	if exact := 2 * number / (1 + math.Exp(step*float64(rounds))); math.Abs(m/exact-1) > 1e-3 {
		t.Fatalf("steps give %.0f ions, the law %.0f", m, exact)
	}
	checkMean(t, "ions left", float64(left), m, math.Sqrt(variance))
	gone := number - left
	if e := s.species[0].Count(); e != number+gone || s.species[3].Count() != gone {
		t.Errorf("%d electrons and %d neutrals of %d ions", e, s.species[3].Count(), gone)
	}
	if l.Species[2].Gone != int64(gone) || l.Species[0].Born != int64(gone) {
		t.Errorf("the ledger says %d ions gone, %d electrons born, want %d", l.Species[2].Gone,
			l.Species[0].Born, gone)
	}
	lost := before[0] + before[2] - after[0] - after[2] - after[3]
	want := float64(gone) * s.config.Weight * pair.Threshold * phys.ElementaryCharge
	checkNear(t, "energy lost [J/m2]", lost, want, 1e-9*before[0])
	e := &l.Species[0]
	checkNear(t, "work of the field on electrons [J/m2]",
		e.Kinetic-before[0]+e.GoneEnergy-e.EmitEnergy, 0, 1e-9*before[0])
}

// electronegative is the small argon discharge with O- that electrons detach at a rate high enough to
// be seen in some hundred steps.
func electronegative(t *testing.T) *Simulation {
	t.Helper()
	d := smallDischarge()
	pair := oxygenPair(t)
	table := pair.Table
	table.CrossSection = make([]float64, len(table.Energy))
	for i, q := range pair.Table.CrossSection {
		table.CrossSection[i] = 2e6 * q
	}
	c := d.build(t).Config()
	c.Species = append(d.species(t, &c), Species{
		Name: "O-", Charge: -1, Mass: pair.Masses[1], Every: d.every,
	}, Species{Name: "fast_O", Mass: pair.Masses[1] - phys.ElectronMass, Every: d.every})
	c.Pairs = []PairReaction{{
		A: 0, B: 2, Rate: mcc.NewPairRate(&table, pair.Masses, 100), Neutral: 3,
		Detach: mcc.NewDetachment(pair.Masses, pair.Threshold, mcc.UniformSharing),
	}}
	c.PairEvery = 2 * d.every
	s := mustNew(t, c)
	for i, n := range []int{d.particles, 2 * d.particles, d.particles} {
		mustLoad(t, s, i, n, []float64{30_000, 300, 300}[i])
	}
	return s
}

// Goal: detachment gives the same bits for any number of workers, and after any stop. Method: 401
// steps with 1, 2, 3 and 7 workers, and in pieces through checkpoints with changing workers.
func TestDetachmentBits(t *testing.T) {
	var state []byte
	for _, workers := range []int{1, 2, 3, 7} {
		s := electronegative(t)
		s.SetWorkers(workers)
		mustAdvance(t, s, 401)
		got := stateBytes(t, s)
		if state == nil {
			state = got
			if gone := s.TakeLedger().Species[2].Gone; gone < 200 {
				t.Errorf("only %d detachments", gone)
			}
		}
		if !bytes.Equal(got, state) {
			t.Errorf("%d workers: another state", workers)
		}
	}
	s := electronegative(t)
	for k, steps := range []int{3, 101, 50, 7, 240} {
		s.SetWorkers(1 + k%3)
		mustAdvance(t, s, steps)
		file := stateBytes(t, s)
		s = electronegative(t)
		if err := restore(t, s, file); err != nil {
			t.Fatal(err)
		}
	}
	if !bytes.Equal(stateBytes(t, s), state) {
		t.Error("another state after stops")
	}
}

// Goal: pairs that cannot react so are refused. Method: one mistake each.
func TestPairsAreChecked(t *testing.T) {
	s := electronegative(t)
	for _, c := range []struct {
		change func(p *PairReaction)
		want   string
	}{
		{func(p *PairReaction) { p.B = 1 }, "pic: species 0 cannot detach electrons of 1"},
		{func(p *PairReaction) { p.A, p.B = 2, 0 }, "pic: species 2 cannot detach electrons of 0"},
		{func(p *PairReaction) { p.Detach = nil }, "pic: species 0 and 2 cannot end each other"},
		{func(p *PairReaction) { p.B = 4 }, "pic: no species 0 and 4 that could react"},
		{func(p *PairReaction) { p.Neutral = 1 }, "pic: species 1 is no neutral"},
	} {
		config := s.Config()
		config.Pairs = append([]PairReaction(nil), config.Pairs...)
		c.change(&config.Pairs[0])
		if _, err := New(config); err == nil || err.Error() != c.want {
			t.Errorf("got %v, want %s", err, c.want)
		}
	}
}
