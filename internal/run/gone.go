package run

import (
	"errors"
	"fmt"
	"math"
)

// goneOut explains why no charged particles are left: a time step that does not resolve the plasma
// frequency heats the electrons until they are lost, which is no property of the discharge.
func (m *machine) goneOut() error {
	most := 0.0
	for i := range m.history {
		most = math.Max(most, m.history[i].Content)
	}
	q := plasma{Density: peakOverMean * most / m.plan.volume()}
	dt := m.plan.period() / float64(m.control.Numerics.StepsPerPeriod)
	if step := q.frequency() * dt; step > largestPlasmaStep {
		return fmt.Errorf("no charged particles are left, but the numerics have done it: at the "+
			"density of up to %.2g /m3 the plasma frequency times the time step reached %.2g, want "+
			"at most %g: give more steps_per_period than %d, or numerics: auto",
			q.Density, step, largestPlasmaStep, m.control.Numerics.StepsPerPeriod)
	}
	return errors.New("the plasma has gone out: no charged particles are left at these settings")
}

// largestPlasmaStep is omega_pe dt beyond which electrons are heated at once, well below the limit
// 2 of stability (C. K. Birdsall and A. B. Langdon, Plasma Physics via Computer Simulation (1985)).
const largestPlasmaStep = 0.6
