package run

import (
	"fmt"
	"math"

	"ionfall/internal/stats"
)

const (
	// roundPeriods is the least length of a round; longer where ions live long.
	roundPeriods = 20
	// roundsPerLife is how many rounds fit into the residence time of an ion.
	roundsPerLife = 15
	// projection is the part of the residence time by which a round's growth is carried ahead.
	projection = 0.4
	// largestJump bounds ln(density) of one projection.
	largestJump = 0.5
	// mostRounds ends the projection; from then on the steadiness test decides alone.
	mostRounds = 60
	// transitsToSettle is how many sheath transits of an ion the undisturbed settling lasts.
	transitsToSettle = 4
	// leastSettling in periods.
	leastSettling = 40
	// driftErrors is the drift, in its own standard errors, that is not taken for chance.
	driftErrors = 3
)

// startRound begins to measure the growth of the density.
func (c *control) startRound(content float64) {
	length := max(roundPeriods, int(c.Residence/roundsPerLife))
	c.Round = round{
		Number: c.Round.Number + 1, Length: length, Content: content, Calm: c.Round.Calm,
	}
}

// project ends a round: the density, which follows slowly, is moved ahead by a part of the
// residence time of an ion at the growth rate that was seen. Reports whether two rounds in a row
// saw no growth beyond noise.
func (m *machine) project(row *Row) (calm bool) {
	c := &m.control
	c.Round.Periods++
	if c.Round.Periods < c.Round.Length {
		return false
	}
	r := c.Round
	growth := math.Log(row.Content/r.Content) / float64(r.Length)
	jump := projection * c.Residence * growth
	// Births and losses of n particles in the round scatter the growth.
	noise := projection * c.Residence / float64(r.Length) *
		math.Sqrt(2*float64(r.Length)/c.Residence/float64(row.Ions))
	jump = math.Max(-largestJump, math.Min(largestJump, jump))
	if math.Abs(jump) < math.Max(0.02, 2*noise) {
		c.Round.Calm++
	} else {
		c.Round.Calm = 0
	}
	content := row.Content
	if r.Number > 1 && c.Round.Calm < 2 { // the first round sees the start's own transient
		m.sim.ScaleWeight(math.Exp(jump))
		m.rebase()
		content *= math.Exp(jump)
		c.Event = fmt.Sprintf("density projected by %+.1f %%", 100*math.Expm1(jump))
	}
	done := c.Round.Calm >= 2 || r.Number >= mostRounds
	c.startRound(content)
	return done
}

// watched is a quantity whose drift is tested, with the drift that would not matter.
type watched struct {
	name      string
	of        func(r *Row) float64
	tolerance float64 // relative
	density   bool    // follows the number of ions, which wanders by births and losses
}

func (p *Plan) watched() []watched {
	want := p.Case.Accuracy
	list := []watched{
		{"ion density", func(r *Row) float64 { return r.Content }, want.IonFlux, true},
		{"ion flux", func(r *Row) float64 { return r.Flux[0] + r.Flux[1] }, want.IonFlux / 2, true},
	}
	for _, wall := range p.substrates() {
		list = append(list, watched{
			"mean ion energy, " + wall.String(),
			func(r *Row) float64 { return r.Energy[wall] }, want.IonEnergy / 2, false,
		})
	}
	return list
}

// steady tests the periods since from for drift of what a run is asked for: the means of the
// first and last third differ by no more than chance would have it, or too little to matter. It
// returns the largest difference in its own standard errors, and of what.
//
// The number of ions wanders slowly by chance: between thirds that lie t periods apart, births
// and losses shift a population of n that lives for T periods by sqrt(2 t/(T n)). That is
// added to the error, as the thirds are too short to show it.
func (m *machine) steady(from int) (ok bool, worst float64, name string) {
	rows := m.history[from:]
	ions := float64(rows[len(rows)-1].Ions)
	apart := 2.0 / 3 * float64(len(rows))
	wander := math.Sqrt(2 * apart / (math.Max(apart, m.control.Residence) * ions))
	ok = true
	for _, w := range m.plan.watched() {
		values := make([]float64, len(rows))
		for i := range rows {
			values[i] = w.of(&rows[i])
		}
		mean := math.Abs(stats.Mean(values).Mean)
		difference, se := stats.Drift(values)
		if w.density {
			se = math.Hypot(se, wander*mean)
		}
		z := math.Abs(difference) / se
		if math.IsNaN(z) {
			return false, z, w.name
		}
		if z > worst || name == "" {
			worst, name = z, w.name
		}
		if z > driftErrors && math.Abs(difference) > w.tolerance*mean {
			ok = false
		}
	}
	return ok, worst, name
}
