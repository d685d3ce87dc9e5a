package mcc

import (
	"math"

	"ionfall/crosssections"
	"ionfall/internal/phys"
)

// table gives collision probabilities as a function of relative speed: row r holds, for
// every channel, the cumulated n sigma g / nu_max at speed r*step.
type table struct {
	channels int
	perSpeed float64   // rows per unit of speed, in the caller's velocity unit
	rows     []float64 // (tableRows+1) x channels, cumulated over channels
	ceiling  []float64 // of the sum, at any relative speed that a projectile of row r may have
	max      float64   // nu_max [1/s]
}

// newTable tabulates the channels up to the speed top [m/s] each, for targets that move at reach
// [m/s] at most.
func newTable(channels []channel, top, reach, unit float64) table {
	t := table{channels: len(channels), perSpeed: tableRows / (top / unit)}
	for c := range channels {
		channels[c].end = top / unit
	}
	t.rows = make([]float64, (tableRows+1)*len(channels))
	for r := range tableRows + 1 {
		g := top * float64(r) / tableRows
		sum := 0.0
		for c, ch := range channels {
			sum += ch.density * ch.crossSection(g) * g
			t.rows[r*len(channels)+c] = sum
			if ch.process.Table.Beyond(ch.energyEV(g)) {
				channels[c].end = math.Min(channels[c].end, g/unit)
			}
		}
		t.max = math.Max(t.max, sum)
	}
	if t.max > 0 {
		for i := range t.rows {
			t.rows[i] /= t.max
		}
	}
	t.setCeiling(int(math.Ceil(reach/top*tableRows)) + 1)
	return t
}

// setCeiling finds, for each row, the largest sum within width rows of it, by doubling the
// width that a maximum covers.
func (t *table) setCeiling(width int) {
	c := make([]float64, tableRows+1)
	for r := range c {
		c[r] = t.rows[(r+1)*t.channels-1]
	}
	for have := 0; have < width; {
		step := min(width-have, max(1, have))
		next := make([]float64, len(c))
		for r := range c {
			next[r] = max(c[r], c[max(0, r-step)], c[min(tableRows, r+step)])
		}
		c, have = next, have+step
	}
	t.ceiling = c
}

// mayCollide tells, from the projectile's own speed, whether u could select a channel at any
// relative speed: a bound that spares drawing targets for most null collisions.
func (t *table) mayCollide(v, u float64) bool {
	r := tableRows
	if at := v * t.perSpeed; at < tableRows {
		r = int(at)
	}
	return u < t.ceiling[r]
}

// pick returns the channel that the uniform number u selects at relative speed g, or -1.
func (t *table) pick(g, u float64) int {
	at := g * t.perSpeed
	r := tableRows - 1
	if at < tableRows { // false for what is no number, too
		r = int(at)
	} else {
		at = tableRows
	}
	s := at - float64(r)
	n := t.channels
	rows := t.rows[r*n : r*n+2*n]
	if u >= rows[n-1]+s*(rows[2*n-1]-rows[n-1]) {
		return -1
	}
	for c := range n - 1 {
		if u < rows[c]+s*(rows[n+c]-rows[c]) {
			return c
		}
	}
	return n - 1
}

// channel is one process with one component of the gas, with its kinematics prepared.
type channel struct {
	process *crosssections.Process
	density float64 // of the target [1/m3]
	share   float64 // M/(m+M): part of the relative velocity's change the projectile takes
	loss2   float64 // g^2 lost to the threshold, 2 eps/mu in the caller's unit squared
	thermal float64 // target's thermal speed, caller's unit
	perG2   float64 // table energy [eV] over g^2 [m2/s2]

	changing   *changing  // what attachment and reactions need; nil for others
	target     string     // name of the gas
	heavier    float64    // m/M
	end        float64    // speed beyond which the cross section is extrapolated or the rate held
	scattering Scattering // of elastic collisions
	unit2      float64    // square of the caller's unit
	sharing    Sharing    // of ionization
	width2     float64    // of the sharing law, as 2 w/mu in the caller's unit squared
}

func newChannel(p *crosssections.Process, b Background, set *Settings) channel {
	mass, unit := set.Mass, set.Unit
	mu := mass * b.Gas.Mass / (mass + b.Gas.Mass)
	energyMass := mu
	if p.Frame == crosssections.Lab {
		energyMass = mass
	}
	width := b.Gas.Sharing.Value
	if width == 0 {
		width = opalPart * p.Threshold
	}
	c := channel{
		process: p,
		density: b.Density,
		share:   b.Gas.Mass / (mass + b.Gas.Mass),
		loss2:   2 * p.Threshold * phys.ElementaryCharge / mu / (unit * unit),
		thermal: b.thermalSpeed() / unit,
		perG2:   0.5 * energyMass / phys.ElementaryCharge,

		changing: newChanging(p, set, mu, unit), target: b.Gas.Name, heavier: mass / b.Gas.Mass,
		unit2: unit * unit, sharing: set.Sharing,
		width2: 2 * width * phys.ElementaryCharge / mu / (unit * unit),
	}
	if p.Kind == crosssections.Attachment && set.Haste > 1 {
		c.density *= set.Haste
	}
	if p.Kind == crosssections.Elastic {
		c.scattering = set.Scattering
	}
	return c
}

// crossSection returns the total cross section at the relative speed g [m/s]: that of momentum
// transfer, larger where the scattering is forward peaked.
func (c *channel) crossSection(g float64) float64 {
	q := c.process.Table.At(c.energyEV(g))
	if c.scattering == ScreenedCoulomb {
		q /= momentumPart(forwardness(c.energyEV(g)))
	}
	return q
}

// energyEV returns the energy at which the process is tabulated for relative speed g [m/s].
func (c *channel) energyEV(g float64) float64 { return c.perG2 * g * g }
