package run

import (
	"fmt"
	"math"

	"ionfall/internal/store"
	"ionfall/pic"
)

// Negative ions live for a millisecond, much longer than a run. Their number is therefore set, not
// awaited: to where as many would be lost as are made. Births and losses come one by one, so that E
// of them tell the number to about 1/sqrt(E), whatever the length of the average: this is an error
// of its own, which batch means do not see.

const (
	// negativeEvents is how many negative ions must have come and gone to judge their balance.
	negativeEvents = 600
	// leastNegative is the change of their number that is not worth it.
	leastNegative = 0.005
	// farNegative is a change of ln(number) that makes another plasma, so that what was known of
	// the old one says little.
	farNegative = 0.2
	// fewNegative is the part of the electrons below which negative ions do not matter.
	fewNegative = 0.01
	// negativeLeverage is above the change of ln(flux), ln(density) and ln(power) by that of ln(number
	// of negative ions), where these carry most of the negative charge. In 10 % silane in hydrogen at
	// 40 Pa, with eleven of them to an electron, 36 % more made the electron density 8 % smaller, the
	// power 5 % and the ion flux 3 % larger, the errors being 1 %: 0.27, 0.16 and 0.1.
	negativeLeverage = 0.5
	// negativeShare is the part of the asked-for error of the flux that the number of negative ions
	// is to make at most.
	negativeShare = 0.5
)

// negativeCount is what is known of the number of a negative species.
type negativeCount struct {
	Born, Lost int64 // since it was changed last
	Known      int64 // births and losses before, that it was set by
	Settled    bool  // when it was looked at last: known well enough, and no change was due
}

// countNegative adds a period's births and losses of negative ions.
func (c *control) countNegative(species []pic.Species, l *pic.Ledger) {
	if len(c.Negative) != len(species) {
		c.Negative = make([]negativeCount, len(species))
	}
	for i := 1; i < len(species); i++ {
		if species[i].Charge < 0 {
			sp := &l.Species[i]
			c.Negative[i].Born += sp.Born
			c.Negative[i].Lost += sp.Gone + sp.Absorbed[0] + sp.Absorbed[1]
		}
	}
}

// off is ln of the number at which negative ions would stand over their number n, and the standard
// error of it by the given births and losses. Losses follow the positive ions, of which there are
// as many as electrons and negative ions together: with b made and l lost,
// n' (e + n') l = b n (e + n).
func off(born, lost int64, n, electrons float64) (ln, se float64) {
	if born+lost == 0 || n == 0 {
		return 0, math.Inf(1)
	}
	ratio := (float64(born) + 0.5) / (float64(lost) + 0.5)
	stands := 0.5 * (math.Sqrt(electrons*electrons+4*ratio*n*(electrons+n)) - electrons)
	return math.Log(stands / n), offError(born+lost, n, electrons)
}

// offError is the standard error of ln of the number by the given births and losses together, half
// of each: that of ln(b/l) over the change of ln(loss) by ln(number), 1 + n/(e + n).
func offError(events int64, n, electrons float64) float64 {
	return 2 / math.Sqrt(float64(events)) / (1 + n/(electrons+n))
}

// judge looks at what was seen of n negative ions beside the electrons since their number was
// changed, and returns the ln of the factor by which to change it, 0 for none. While what is seen
// agrees with what the number was set by, both count by their births and losses, so that the number
// becomes the more exact the longer it goes on; else all begins anew. Enough of both together make
// it settled.
func (k *negativeCount) judge(n, electrons, enough float64) (ln float64) {
	events := k.Born + k.Lost
	ln, se := off(k.Born, k.Lost, n, electrons)
	if k.Known > 0 {
		se = math.Hypot(se, offError(k.Known, n, electrons))
	}
	calm, known := math.Abs(ln) < 2*se, events+k.Known
	if calm {
		ln *= float64(events) / float64(known)
	} else if known = events; math.Abs(ln) > farNegative {
		known = 0
	}
	k.Settled = calm && float64(known) >= enough
	if math.Abs(ln) < leastNegative {
		return 0
	}
	*k = negativeCount{Known: known, Settled: k.Settled}
	return ln
}

// balanceNegative brings negative ions to the number at which they would stand. Reports whether it
// is to go on.
func (m *machine) balanceNegative() (open bool) {
	c := &m.control
	scaled := false
	for i, sp := range m.sim.Species() {
		if i == 0 || sp.Charge >= 0 || i >= len(c.Negative) {
			continue
		}
		k := &c.Negative[i]
		n, electrons := float64(sp.Count()), float64(m.sim.Species()[0].Count())
		ln := 0.0
		if k.Born+k.Lost >= negativeEvents {
			ln = k.judge(n, electrons, m.enoughNegative(n, electrons))
		}
		open = open || !k.Settled && n > fewNegative*electrons
		if ln == 0 {
			continue
		}
		factor := math.Max(0.4, math.Min(2.5, math.Exp(ln)))
		m.sim.ScaleNegative(i, factor)
		c.Event = fmt.Sprintf("%s projected by %+.1f %%", sp.Name, 100*(factor-1))
		scaled = true
	}
	if scaled {
		m.rebase()
	}
	return open
}

// mostlyNegative tells whether negative ions outnumber electrons. The density that is projected is
// then that of the electrons, which stay for a short time.
func (m *machine) mostlyNegative() bool {
	negative := 0
	for i, sp := range m.sim.Species() {
		if i > 0 && sp.Charge < 0 {
			negative += sp.Count()
		}
	}
	return negative > m.sim.Species()[0].Count()
}

// enoughNegative is how many births and losses tell the number of n negative ions beside the
// electrons as exactly as the asked-for flux needs it; the pilot's need not be as exact.
func (m *machine) enoughNegative(n, electrons float64) float64 {
	if m.control.Stage == StagePilot {
		return negativeEvents
	}
	tolerance := negativeShare * m.plan.Case.Accuracy.IonFlux
	one := negativeEffect(n, electrons) * offError(1, n, electrons)
	return math.Max(negativeEvents, one*one/(tolerance*tolerance))
}

// negativeEffect is by how much ln of ion flux, density and power may change with ln of the number
// of negative ions, which is less where electrons carry the negative charge.
func negativeEffect(n, electrons float64) float64 {
	if n == 0 {
		return 0
	}
	return negativeLeverage * n / (electrons + n)
}

// negativeError returns the relative standard error of the number of negative ions, and that which
// it makes in the ion flux and the density. What was seen since the number was set counts by its
// births and losses, beside those that it was set by; where the number does not stand, it is off by
// the difference, too, which is left out of the error by chance alone.
func (m *machine) negativeError(all bool) (number, effect float64) {
	electrons := float64(m.sim.Species()[0].Count())
	ions, sum := 0.0, 0.0
	for i, sp := range m.sim.Species() {
		if i == 0 || sp.Charge >= 0 || i >= len(m.control.Negative) {
			continue
		}
		k, n := &m.control.Negative[i], float64(sp.Count())
		relative := 1.0
		if seen := k.Born + k.Lost; seen+k.Known > 0 {
			ln, _ := off(k.Born, k.Lost, n, electrons)
			ln *= float64(seen) / float64(seen+k.Known)
			if !all {
				ln = 0
			}
			relative = math.Min(1, math.Hypot(ln, offError(seen+k.Known, n, electrons)))
		}
		ions += n
		sum += n * n * relative * relative
	}
	if ions == 0 {
		return 0, 0
	}
	number = math.Sqrt(sum) / ions
	return number, negativeEffect(ions, electrons) * number
}

// negativeOff tells whether what was seen since the number of negative ions was set says that it is
// off, by more than chance and enough to matter.
func (m *machine) negativeOff() bool {
	electrons := float64(m.sim.Species()[0].Count())
	for i, sp := range m.sim.Species() {
		if i == 0 || sp.Charge >= 0 || i >= len(m.control.Negative) {
			continue
		}
		k, n := &m.control.Negative[i], float64(sp.Count())
		if k.Born+k.Lost < negativeEvents {
			continue
		}
		ln, se := off(k.Born, k.Lost, n, electrons)
		if k.Known > 0 {
			se = math.Hypot(se, offError(k.Known, n, electrons))
		}
		tolerance := negativeShare * m.plan.Case.Accuracy.IonFlux
		if math.Abs(ln) > driftErrors*se && math.Abs(ln)*negativeEffect(n, electrons) > tolerance {
			return true
		}
	}
	return false
}

// negativeChecks judge how well the number of negative ions is known: they follow so slowly that an
// average sees no drift.
func (m *machine) negativeChecks() []store.Check {
	number, effect := m.negativeError(true)
	if number == 0 {
		return nil
	}
	events := int64(0)
	for _, k := range m.control.Negative {
		events += k.Known + k.Born + k.Lost
	}
	check := above("negative_ion_balance", number, negativeBalance, fmt.Sprintf(
		"relative standard error of the number of negative ions, by %d births and losses; the "+
			"errors of fluxes and densities hold the %.2g %% that it may make of them", events,
		100*effect))
	if effect < negativeLeverage*fewNegative {
		check.Verdict, check.Bound = store.OK, negativeBalance.warn
		check.Text += "; there are so few that it does not matter"
	}
	return []store.Check{check}
}
