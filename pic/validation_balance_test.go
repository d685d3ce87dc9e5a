package pic

import (
	"fmt"
	"testing"

	"ionfall/internal/stats"
	"ionfall/internal/validation"
)

// Goal: in the steady state the electrical power goes into walls and gas, and the walls take the
// ions that ionization makes. Method: a helium discharge of 60 Pa, 2 cm, 200 V; 200 periods to
// settle, 200 to measure. What the particles and the field hold more at the end is added to
// what was lost. The difference is numerical heating: 0.5 % is the bound of the energy budget's
// own test at this resolution. The flux is judged by the fluctuation of the net production.
func TestValidationBalances(t *testing.T) {
	if testing.Short() {
		t.Skip("takes some ten seconds")
	}
	const settle, periods = 200, 200
	for _, scheme := range schemes() {
		d := smallDischarge()
		d.gas, d.pressure, d.voltage, d.density = "He", 60, 200, 7e14
		d.particles, d.cells, d.steps, d.every = 3000, 64, 800, 8
		d.scheme, d.plain = scheme, true
		s := d.build(t)
		mustAdvance(t, s, settle*d.steps)
		var start, a account
		start.add(s.TakeLedger())
		start.kinetic += halfStep(s)
		var born, taken, net []float64
		for range periods {
			mustAdvance(t, s, d.steps)
			l := s.TakeLedger()
			a.add(l)
			ion := l.Species[1]
			born = append(born, float64(ion.Born))
			taken = append(taken, float64(ion.Absorbed[0]+ion.Absorbed[1]))
			net = append(net, float64(ion.Born-ion.Absorbed[0]-ion.Absorbed[1]))
		}
		a.kinetic += halfStep(s)
		seconds := periods * s.config.Period
		stored := a.kinetic + a.field - start.kinetic - start.field
		t.Logf("%v: W/m2 in %.2f, walls %.2f, gas %.2f, stored %.2f, given to new ions %.2f", scheme,
			a.in/seconds, a.wall/seconds, a.gas/seconds, stored/seconds, a.made/seconds)
		perArea := s.config.Weight / s.config.Period
		record(t, validation.Row{
			Section: "balances of a helium discharge", Unit: "W/m2", Status: "exact",
			Quantity: fmt.Sprintf("power lost against power put in, %v", scheme),
			Source:   "conservation of energy", Reference: a.in / seconds,
			Ours: (a.wall + a.gas + stored - a.made) / seconds, Limit: 0.005,
			LimitKind: validation.Relative, Seed: d.seed,
			Note: "60 Pa, 20 mm, 200 V at 13.56 MHz",
		}, validation.Row{
			Section: "balances of a helium discharge", Unit: "1/(m2 s)", Status: "exact",
			Quantity: fmt.Sprintf("ion flux to both walls against ionization, %v", scheme),
			Source:   "conservation of particles", Reference: stats.Mean(born).Mean * perArea,
			Ours: stats.Mean(taken).Mean * perArea, OursError: stats.Mean(net).StdErr * perArea,
			Limit: fourSigma, LimitKind: validation.Sigma, Seed: d.seed,
			Note: "60 Pa, 20 mm, 200 V at 13.56 MHz",
		})
	}
}
