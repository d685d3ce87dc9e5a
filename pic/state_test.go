package pic

import (
	"strings"
	"testing"

	"ionfall/internal/codec"
)

// Goal: a saved state that cannot be true is refused with its reason. Method: a sound simulation
// is damaged in one place and saved; Restore of it into another must fail with the whole text,
// and that of the sound one succeed.
func TestImpossibleStatesAreRefused(t *testing.T) {
	small := smallDischarge()
	small.particles = 320
	for _, c := range []struct {
		name   string
		damage func(s *Simulation)
		want   string
	}{
		{"none", func(*Simulation) {}, ""},
		{"short vx", func(s *Simulation) {
			ch := &s.species[1].chunks[2]
			ch.vx = ch.vx[:len(ch.vx)-1]
		}, "pic: s.1.2.: positions and velocities differ in number"},
		{"short x", func(s *Simulation) {
			ch := &s.species[0].chunks[0]
			ch.x = ch.x[:len(ch.x)-1]
		}, "pic: s.0.0.: positions and velocities differ in number"},
		{
			"particle outside", func(s *Simulation) { s.species[0].chunks[1].x[5] = 64.5 },
			"pic: s.0.1.: particle 5 is at 64.5 cells, want 0 to 64",
		},
		{
			"particle at minus", func(s *Simulation) { s.species[1].chunks[13].x[0] = -1 },
			"pic: s.1.13.: particle 0 is at -1 cells, want 0 to 64",
		},
		{
			"step", func(s *Simulation) { s.step = -4 },
			"pic: saved step -4 or weight 2.5e+10 is impossible",
		},
		{
			"weight", func(s *Simulation) { s.config.Weight = -1 },
			"pic: saved step 20 or weight -1 is impossible",
		},
		{"tallies", func(s *Simulation) {
			out := s.species[0].chunks[0].outcome
			out.Counts = out.Counts[:1]
		}, "pic: s.0.0.: tallies do not fit the collision processes"},
		{"field sum", func(s *Simulation) {
			s.workers[0].fieldSum[1] = s.workers[0].fieldSum[1][:10]
		}, "pic: field sum of 20 values, want 128"},
	} {
		s, into := small.build(t), small.build(t)
		mustAdvance(t, s, 20)
		c.damage(s)
		err := restore(t, into, stateBytes(t, s))
		got := ""
		if err != nil {
			got = err.Error()
		}
		if got != c.want {
			t.Errorf("%s: %q, want %q", c.name, got, c.want)
		}
	}
}

// Goal: a state of another case is refused. Method: other chunks, cells and species.
func TestForeignStatesAreRefused(t *testing.T) {
	small := smallDischarge()
	small.particles = 320
	file := stateBytes(t, small.build(t))
	chunks, cells := small, small
	chunks.chunks, cells.cells = 7, 32
	for _, d := range []discharge{chunks, cells} {
		err := restore(t, d.build(t), file)
		if err == nil || err.Error() != "pic: the saved state is of another case" {
			t.Errorf("%d chunks, %d cells: %v", d.chunks, d.cells, err)
		}
	}
	one := mustNew(t, Config{
		Gap: 0.02, Cells: 64, Period: 1, StepsPerPeriod: 1, Species: []Species{electrons()},
		Weight: 1, Chunks: small.chunks,
	})
	if err := restore(t, one, file); err == nil {
		t.Error("state of two species fits one")
	}
	dec, err := codec.Decode("test", 1, file)
	if err != nil {
		t.Fatal(err)
	}
	if err := small.build(t).Restore(dec, "other."); err == nil ||
		!strings.Contains(err.Error(), "other.counters") {
		t.Errorf("state under another prefix: %v", err)
	}
}

// Goal: a configuration that cannot run is refused with its reason. Method: whole texts.
func TestImpossibleConfigurations(t *testing.T) {
	sound := empty(64, 100, electrons(), ions(4))
	for _, c := range []struct {
		change func(c *Config)
		want   string
	}{
		{func(*Config) {}, ""},
		{func(c *Config) { c.Cells = 1 }, "pic: 1 cells, want 2 to 65536"},
		{func(c *Config) { c.StepsPerPeriod = 0 }, "pic: 0 steps a period, want at least 1"},
		{
			func(c *Config) { c.Gap, c.Period = -1, 1e-7 },
			"pic: gap -1 m, period 1e-07 s and weight 1e-06 /m2 must be positive",
		},
		{func(c *Config) { c.Chunks = 257 }, "pic: 257 chunks, want 1 to 256"},
		{func(c *Config) { c.Species = nil }, "pic: 0 species, want 1 to 64"},
		{
			func(c *Config) { c.Species = []Species{ions(3)} },
			"pic: X+ moves every 3 steps, which does not divide the 100 of a period",
		},
	} {
		k := sound
		c.change(&k)
		_, err := New(k)
		got := ""
		if err != nil {
			got = err.Error()
		}
		if got != c.want {
			t.Errorf("%q, want %q", got, c.want)
		}
	}
	s := mustNew(t, sound)
	if err := s.Add(0, 0, 64, 0, 0, 0); err == nil {
		t.Error("particle on the far wall was accepted")
	}
	if err := s.Load(0, 5, uniform(63), 300); err == nil {
		t.Error("density of another grid was accepted")
	}
}
