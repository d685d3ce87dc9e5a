package mcc

import (
	"testing"

	"ionfall/crosssections"
	"ionfall/internal/phys"
)

// Goal: what cannot be computed is refused with its reason. Method: the whole text is compared.
func TestRefusals(t *testing.T) {
	flat := tabulate(0, 100, constant(1e-19))
	elastic := process("elastic", "e", crosssections.Elastic, 0, flat)
	set := Settings{
		Projectile: "e", Mass: phys.ElectronMass, Unit: testUnit, TimeStep: 5e-8, TopEnergy: 100,
	}
	ion := set
	ion.Projectile, ion.Mass = "X+", heavy
	for _, c := range []struct {
		name string
		set  Settings
		gas  []Background
		want string
	}{
		{
			"long step", set,
			[]Background{background(heavy, 300, elastic)},
			"mcc: e: 2.97 collision candidates a step, want at most 2: " +
				"the time step 5e-08 s is too long for this gas density",
		},
		{
			"attachment", set,
			[]Background{background(heavy, 300,
				process("att", "e", crosssections.Attachment, 0, flat))},
			`mcc: process "att" on X: the mass of a product is not known`,
		},
		{
			"reaction", ion,
			[]Background{background(heavy, 300,
				process("swap", "X+", crosssections.Reaction, 0, flat))},
			`mcc: process "swap" on X: the mass of a product is not known`,
		},
		{
			"electron kind of ion", ion,
			[]Background{background(heavy, 300,
				process("el", "X+", crosssections.Elastic, 0, flat))},
			`mcc: process "el" of X+ on X: elastic collisions are not implemented`,
		},
		{
			"nothing", ion,
			[]Background{background(heavy, 300, elastic)},
			"mcc: no cross section of X+ with this gas",
		},
		{"no gas", set, nil, "mcc: no cross section of e with this gas"},
	} {
		_, err := NewModel(c.set, c.gas)
		if err == nil || err.Error() != c.want {
			t.Errorf("%s: %v, want %s", c.name, err, c.want)
		}
	}
}

// Goal: two candidates a step are still allowed. Method: just below the limit.
func TestLongestStep(t *testing.T) {
	flat := process("elastic", "e", crosssections.Elastic, 0, tabulate(0, 100, constant(1e-19)))
	set := Settings{
		Projectile: "e", Mass: phys.ElectronMass, Unit: testUnit, TimeStep: 1e-9, TopEnergy: 100,
	}
	gas := []Background{background(heavy, 300, flat)}
	m, err := NewModel(set, gas)
	if err != nil {
		t.Fatal(err)
	}
	set.TimeStep *= 1.999 / m.CandidateRate()
	if _, err = NewModel(set, gas); err != nil {
		t.Error(err)
	}
}

// Goal: no collision is judged silently beyond the data: neither where a cross section ends
// below the top energy, nor above the top energy itself. Method: beams on both sides of each
// end; the collisions beyond are all counted, the others not.
func TestBeyondIsCounted(t *testing.T) {
	for _, c := range []struct {
		name             string
		dataEV, topEV    float64
		energyEV         float64
		beyond           bool
		projectile       string
		mass, gasKelvins float64
	}{
		{"inside", 50, 100, 48, false, "e", phys.ElectronMass, 0},
		{"data end first", 50, 100, 52, true, "e", phys.ElectronMass, 0},
		{"inside the top", 200, 100, 99, false, "e", phys.ElectronMass, 0},
		{"top energy first", 200, 100, 102, true, "e", phys.ElectronMass, 0},
		{"far beyond", 200, 100, 1e7, true, "e", phys.ElectronMass, 0},
		{"ion inside", 200, 100, 99, false, "X+", heavy, 0},
		{"ion beyond the top", 200, 100, 102, true, "X+", heavy, 0},
		{"ion beyond the data", 50, 100, 52, true, "X+", heavy, 0},
	} {
		kind := crosssections.Elastic
		if c.projectile != "e" {
			kind = crosssections.Isotropic
		}
		table := tabulate(0, c.dataEV, constant(1e-19))
		table.ValidTo = c.dataEV
		b := background(1e6*heavy, c.gasKelvins, process("p", c.projectile, kind, 0, table))
		m := mustModel(t, c.projectile, c.mass, c.topEV, 1, b)
		n := 2000
		vx, vy, vz := make([]float64, n), make([]float64, n), make([]float64, n)
		for k := range vx {
			vz[k] = speedOf(c.energyEV, c.mass)
		}
		out := m.NewOutcome()
		m.Collide(stream(400), vx, vy, vz, out)
		want := int64(0)
		if c.beyond {
			want = out.Counts[0]
		}
		if out.Counts[0] == 0 || out.Beyond != want {
			t.Errorf("%s: %d of %d collisions beyond, want %d", c.name, out.Beyond,
				out.Counts[0], want)
		}
	}
}

// Goal: after warm-up collisions allocate nothing. Method: testing.AllocsPerRun.
func TestCollideAllocatesNothing(t *testing.T) {
	b := bundled(t, "Ar")
	m := mustModel(t, "e", phys.ElectronMass, 300, 0.5, b)
	s := stream(410)
	vx, vy, vz := maxwellian(s, 5000, 3e5, phys.ElectronMass)
	out := m.NewOutcome()
	out.KeepEvents = true
	out.Births, out.Events = make([]Birth, 0, 5000), make([]Event, 0, 5000)
	allocs := testing.AllocsPerRun(50, func() {
		out.Births, out.Events = out.Births[:0], out.Events[:0]
		m.Collide(s, vx, vy, vz, out)
	})
	if allocs != 0 {
		t.Errorf("%g allocations a call, want 0", allocs)
	}
}
