package pic

// poisson solves phi[j-1] - 2 phi[j] + phi[j+1] = -rhs[j] for 0 < j < n with phi[0] and phi[n]
// given: the second-order form of -phi” = rho/eps0 with rhs = rho dx^2/eps0. The factors of the
// elimination are computed once.
//
// Ref: L. H. Thomas's elimination; C. K. Birdsall and A. B. Langdon, Plasma Physics via
// Computer Simulation (1985), app. D.
type poisson struct {
	gamma []float64 // of row j: 1/(2 - gamma[j-1])
}

func newPoisson(cells int) *poisson {
	p := &poisson{make([]float64, cells)}
	for j := 1; j < cells; j++ {
		p.gamma[j] = 1 / (2 - p.gamma[j-1])
	}
	return p
}

// solve fills phi; phi[0] and phi[cells] hold the wall potentials. len(rhs) = len(phi).
func (p *poisson) solve(rhs, phi []float64) {
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
