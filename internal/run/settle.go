package run

import (
	"fmt"
	"math"

	"ionfall/internal/stats"
)

const (
	// roundPeriods is the least length of a round; longer where ions live long.
	roundPeriods = 20
	// firstRounds and lastRounds are how many rounds fit into the residence time of an ion: short
	// ones find the density coarsely, longer ones finely.
	firstRounds, lastRounds = 15, 4
	// projection is the part of the way to where a round's growth leads that is gone at once.
	projection = 0.8
	// largestJump bounds ln(density) of one projection; below leastJump none is worth it.
	largestJump, leastJump = 0.7, 0.005
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
	length, longest := int(c.Residence/firstRounds)<<c.Round.Doubled, int(c.Residence/lastRounds)
	c.Round = round{
		Number: c.Round.Number + 1, Length: max(roundPeriods, min(length, longest)),
		Last: length >= longest, Content: content, Doubled: c.Round.Doubled,
	}
}

// project ends a round: the density, which follows slowly, is moved ahead by a part of the
// residence time of an ion at the growth rate that was seen, if the growth is more than chance.
// If it is not, the next round is twice as long and sees less of chance. Reports whether a
// round of the greatest length saw no growth.
func (m *machine) project(row *Row) (done bool) {
	c := &m.control
	c.Round.Periods++
	if c.Round.Periods < c.Round.Length {
		return false
	}
	r := c.Round
	growth := math.Log(row.Content/r.Content) / float64(r.Length)
	jump := projected(projection * c.Residence * growth)
	// Births and losses of n particles in the round scatter the growth.
	chance := projection * c.Residence / float64(r.Length) *
		math.Sqrt(2*float64(r.Length)/c.Residence/float64(row.Ions))
	content := row.Content
	switch calm := math.Abs(jump) < math.Max(leastJump, 2*chance); {
	case r.Number == 1: // sees the start's own transient
	case calm:
		done = r.Last
		c.Round.Doubled++
	case m.mostlyNegative(): // electrons follow soon by themselves; negative ions would be scaled, too
	default:
		m.sim.ScaleWeight(math.Exp(jump))
		m.rebase()
		content *= math.Exp(jump)
		c.Event = fmt.Sprintf("density projected by %+.1f %%", 100*math.Expm1(jump))
	}
	if m.balanceNegative() {
		done = false
	}
	c.startRound(content)
	return done || r.Number >= mostRounds
}

// projected returns ln(n*/n) for the way w = (n* - n)/n that is to be gone: births do not follow
// the density much while losses do, so dn/dt = (n* - n)/T with the residence time T.
func projected(w float64) float64 {
	return math.Log(math.Max(math.Exp(-largestJump), math.Min(math.Exp(largestJump), 1+w)))
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
