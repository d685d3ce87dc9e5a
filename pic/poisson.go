package pic

import "ionfall/internal/phys"

func epsilonOver(length float64) float64 { return phys.Epsilon0 / length }

// poisson solves face[j-1] (phi[j-1] - phi[j]) + face[j] (phi[j+1] - phi[j]) = -rhs[j] for
// 0 < j < n with phi[0] and phi[n] given: Gauss's law for the volume of each node, with rhs its
// charge per area of the powered electrode times dx/eps0. For plates all faces are 1, and this is
// the second-order form of -phi” = rho/eps0. The factors of the elimination are computed once.
//
// Ref: L. H. Thomas's elimination; C. K. Birdsall and A. B. Langdon, Plasma Physics via
// Computer Simulation (1985), app. D.
type poisson struct {
	gamma []float64 // of row j: 1/(face[j-1] + face[j] - face[j-1]^2 gamma[j-1])
	face  []float64 // of cells; nil for plates
}

func newPoisson(c *Config) *poisson {
	p := &poisson{gamma: make([]float64, c.Cells)}
	if c.Geometry.Shape == Plates {
		for j := 1; j < c.Cells; j++ {
			p.gamma[j] = 1 / (2 - p.gamma[j-1])
		}
		return p
	}
	p.face = make([]float64, c.Cells)
	for j := range p.face {
		p.face[j] = c.face(j)
	}
	for j := 1; j < c.Cells; j++ {
		f := p.face[j-1]
		p.gamma[j] = 1 / (f + p.face[j] - f*f*p.gamma[j-1])
	}
	return p
}

// solve fills phi; phi[0] and phi[cells] hold the wall potentials. len(rhs) = len(phi).
func (p *poisson) solve(rhs, phi []float64) {
	if p.face != nil {
		p.solveShells(rhs, phi)
		return
	}
	n := len(p.gamma)
	gamma, rhs, phi := p.gamma[:n], rhs[:n+1], phi[:n+1]
	forward := phi[0]
	for j := 1; j < n; j++ {
		forward = (rhs[j] + forward) * gamma[j]
		phi[j] = forward
	}
	back := phi[n]
	for j := n - 1; j > 0; j-- {
		back = phi[j] + float64(gamma[j]*back)
		phi[j] = back
	}
}

func (p *poisson) solveShells(rhs, phi []float64) {
	n := len(p.gamma)
	gamma, face, rhs, phi := p.gamma[:n], p.face[:n], rhs[:n+1], phi[:n+1]
	forward := phi[0]
	for j := 1; j < n; j++ {
		forward = (rhs[j] + float64(face[j-1]*forward)) * gamma[j]
		phi[j] = forward
	}
	back := phi[n]
	for j := n - 1; j > 0; j-- {
		back = phi[j] + float64(gamma[j]*float64(face[j]*back))
		phi[j] = back
	}
}

// influence returns what a unit charge at each node means for the powered electrode: the
// potential there of the empty gap with 1 V at x = 0 (Green's reciprocity), times scale. For
// plates it is 1 - j/Cells, and scale Cells keeps it whole.
func influence(c *Config) (of []float64, scale float64) {
	of = make([]float64, c.Cells+1)
	if c.Geometry.Shape == Plates {
		for j := range of {
			of[j] = float64(c.Cells - j)
		}
		return of, float64(c.Cells)
	}
	for j := c.Cells - 1; j >= 0; j-- {
		of[j] = of[j+1] + 1/c.face(j)
	}
	for j := 1; j < len(of); j++ {
		of[j] /= of[0]
	}
	of[0] = 1
	return of, 1
}
