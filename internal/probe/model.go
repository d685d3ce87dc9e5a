package probe

import (
	"math"

	"ionfall/internal/phys"
)

// The places of the parameters of a fit; those of the shape follow.
const (
	parDensity    = iota // ln of the electron density
	parPotential         // plasma potential [V]
	parTemp              // ln of the temperature, of the cold group of two [eV]
	parIon               // ln of the ion density
	parIonSlope          // power of chi on top of theory
	parSaturation        // enhancement above the plasma potential over that of orbital motion
	parStraight          // 1: the enhancement is straight; 0: that of orbital motion
	parRF                // square of the residual RF amplitude [V2]
	parShape             // kappa, or ln(warm/cold - 1)
	parShape2            // logit of the part that is warm; the free form has more
	parCount      = parShape + freeCells - 1
)

// model is a characteristic of known form.
type model struct {
	setup *Setup
	kind  string
	scale float64                // of the knots of the free form [eV]
	kappa map[float64]*unitShape // those computed before
}

func newModel(setup *Setup, kind string) *model {
	return &model{setup: setup, kind: kind, kappa: map[float64]*unitShape{}}
}

const (
	kappaLeast, kappaMost = 0.5, 4
	// ionReference is where the ion density is defined by the current [units of T].
	ionReference = 10
	// rfNodes of the average over the RF period: exact for polynomials up to twice as many.
	rfNodes = 10
	// maxKept tables of shapes.
	maxKept = 64
)

// shape is that of the parameters.
func (m *model) shape(p []float64) shape {
	temperature := math.Exp(p[parTemp])
	switch m.kind {
	case Maxwell:
		return maxwellShape(temperature)
	case Free:
		return m.freeShape(p)
	case TwoTemp:
		return twoShape(temperature, temperature*(1+math.Exp(p[parShape])),
			1/(1+math.Exp(-p[parShape2])))
	}
	kappa := 2.0
	if m.kind == General {
		kappa = math.Min(math.Max(p[parShape], kappaLeast), kappaMost)
	}
	s, ok := m.kappa[kappa]
	if !ok {
		var err error
		if s, err = newUnitShape(kappa); err != nil {
			return maxwellShape(math.NaN())
		}
		if len(m.kappa) > maxKept {
			clear(m.kappa)
		}
		m.kappa[kappa] = s
	}
	return s.scaled(temperature)
}

// characteristic is a model with its parameters put in.
type characteristic struct {
	shape                  shape
	density, potential     float64 // [1/m3], [V]
	ionDensity             float64 // [1/m3]
	ionSlope, saturation   float64
	straight               float64
	rf                     float64 // amplitude [V]
	rho, tau               float64 // tip radius over Debye length, ion over electron temperature
	electrons, ionPrefixed float64 // currents that the shapes multiply [A]
}

func (m *model) characteristic(p []float64) *characteristic {
	c := &characteristic{
		shape: m.shape(p), density: math.Exp(p[parDensity]), potential: p[parPotential],
		ionDensity: math.Exp(p[parIon]), ionSlope: p[parIonSlope], saturation: p[parSaturation],
		straight: p[parStraight],
		rf:       math.Sqrt(math.Max(0, p[parRF])),
	}
	c.complete(m.setup)
	return c
}

func (c *characteristic) complete(setup *Setup) {
	c.rho = setup.Radius / DebyeLength(c.density, c.shape.temperature)
	c.tau = setup.ionRatio(c.shape.temperature)
	charge := phys.ElementaryCharge * setup.Area()
	c.electrons = charge * c.density * c.shape.flux
	c.ionPrefixed = charge * c.ionDensity * setup.ionFlux(c.shape.temperature)
}

// steady is the current without RF [A], electron current positive.
func (c *characteristic) steady(v float64) float64 {
	u := c.potential - v
	if u <= 0 {
		curved, straight := c.shape.enhanced(-u)-1, -u/c.shape.temperature
		more := c.saturation * ((1-c.straight)*curved + c.straight*straight)
		return c.electrons * (1 + more)
	}
	return c.electrons*c.shape.part(u) - c.ions(v)
}

// ions is the ion current [A], positive.
func (c *characteristic) ions(v float64) float64 {
	chi := (c.potential - v) / c.shape.temperature
	if chi <= 0 {
		return 0
	}
	i := WarmCurrent(c.tau, c.rho, chi)
	if c.ionSlope != 0 {
		i *= math.Pow(chi/ionReference, c.ionSlope)
	}
	return c.ionPrefixed * i
}

// at is the current averaged over the RF period [A].
func (c *characteristic) at(v float64) float64 {
	if c.rf <= 0 {
		return c.steady(v)
	}
	sum := 0.0
	for k := range rfNodes {
		// Gauss-Chebyshev: phases at the middles of equal parts.
		sum += c.steady(v + c.rf*math.Cos(math.Pi*(float64(k)+0.5)/rfNodes))
	}
	return sum / rfNodes
}
