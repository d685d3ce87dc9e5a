package pic

import (
	"fmt"
	"math"
	"math/rand/v2"
	"testing"

	"ionfall/internal/phys"
	"ionfall/internal/validation"
)

// exchangeLaw is the motion of ions in a given field, with exchanges of charge at a constant mean
// free path in a cold gas: nothing of the simulation but its measured field.
type exchangeLaw struct {
	acceleration [][]float64 // by part of the period and cell [m/s2]
	cell         float64     // [m]
	period       float64     // [s]
	path         float64     // mean free path [m]
}

// newExchangeLaw takes the potentials [V] at the nodes by part of the period.
func newExchangeLaw(phases [][]float64, c *Config, path float64) exchangeLaw {
	l := exchangeLaw{cell: c.CellSize(), period: c.Period, path: path}
	for _, phi := range phases {
		list := make([]float64, len(phi)-1)
		for j := range list {
			field := (phi[j] - phi[j+1]) / l.cell
			list[j] = phys.ElementaryCharge / c.Species[1].Mass * field
		}
		l.acceleration = append(l.acceleration, list)
	}
	return l
}

// squaredSpeed follows an ion that is at rest at x [m] at a random phase to the wall at 0 and
// returns its squared speed there. The steps are centred: their error is of second order in the
// part of a free path that a step covers, a hundredth at most.
func (l *exchangeLaw) squaredSpeed(x float64, random *rand.Rand) float64 {
	const parts = 200 // of a period
	dt := l.period / parts
	v := 0.0
	for n := random.IntN(parts); ; n++ {
		a := l.acceleration[n%parts*len(l.acceleration)/parts][int(x/l.cell)]
		if random.Float64() < -math.Expm1(-math.Abs(v)*dt/l.path) {
			v = 0
		}
		half := v + 0.5*a*dt
		next := x + half*dt
		if next <= 0 {
			return v*v + 2*a*(0-x) // the field is uniform in the last cell
		}
		top := float64(len(l.acceleration[0])) * l.cell
		x = math.Min(next, math.Nextafter(top, 0))
		b := l.acceleration[(n+1)%parts*len(l.acceleration)/parts][int(x/l.cell)]
		v = half + 0.5*b*dt
	}
}

// meanEnergy returns the mean energy at the wall of ions from x [m], and its standard error [eV].
func (l *exchangeLaw) meanEnergy(x, mass float64) (mean, stdErr float64) {
	const n = 40_000
	random := rand.New(rand.NewPCG(7, 11))
	var sum, square float64
	for range n {
		e := 0.5 * mass / phys.ElementaryCharge * l.squaredSpeed(x, random)
		sum, square = sum+e, square+e*e
	}
	mean = sum / n
	return mean, math.Sqrt((square/n - mean*mean) / n)
}

// lawRows makes two rows beside that of the wave sheath: its ions against the law in its field by
// phase, and the law in the field's mean against what the potential says. Ions start from the
// node number cells. It returns what they showed, for the row's note.
func lawRows(t *testing.T, row validation.Row, r *radioSheath, path float64, cells int) string {
	t.Helper()
	mass, from := r.config.Species[1].Mass, float64(cells)*r.config.CellSize()
	wave := newExchangeLaw(r.phases, &r.config, path)
	frozen := newExchangeLaw([][]float64{r.potential}, &r.config, path)
	inWave := row
	inWave.Quantity += ", against the law in the field of the wave"
	inWave.Reference, inWave.ReferenceError = wave.meanEnergy(from, mass)
	inWave.Source = "test ions in the measured field, charge exchange at a constant mean free path"
	inWave.Status, inWave.Limit, inWave.LimitKind = "computed", fourSigma, validation.Sigma
	inMean := row
	inMean.Quantity += ", the law in the field frozen at its mean"
	inMean.Reference = fallen(r.potential[:cells+1], r.config.CellSize(), path)
	inMean.Ours, inMean.OursError = frozen.meanEnergy(from, mass)
	inMean.Status, inMean.Limit, inMean.LimitKind = "exact", fourSigma, validation.Sigma
	record(t, inWave, inMean)
	return fmt.Sprintf("; tested: test ions with the same law find %.2f ± %.2f eV in the field by "+
		"phase and %.2f ± %.2f eV in the field frozen at its mean, so the difference comes from "+
		"exchanges that happen more often in phases of strong field", inWave.Reference,
		inWave.ReferenceError, inMean.Ours, inMean.OursError)
}
