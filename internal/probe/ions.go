package probe

import (
	"math"
	"sort"
)

// OMLCylinder is the current of attracted Maxwellian particles to a thin cylinder over that at the
// plasma potential, chi >= 0.
//
// Ref: Mott-Smith and Langmuir, Phys. Rev. 28, 727 (1926).
func OMLCylinder(chi float64) float64 {
	root := math.Sqrt(chi)
	return 2/math.SqrtPi*root + scaledErfc(root)
}

// OMLSphere is the same for a sphere.
func OMLSphere(chi float64) float64 { return 1 + chi }

// scaledErfc is exp(x^2) erfc(x) for x >= 0.
func scaledErfc(x float64) float64 {
	if x < 5 {
		return math.Exp(x*x) * math.Erfc(x)
	}
	// Asymptotic series; at 5 the first term left out is 1e-8.
	y := 1 / (2 * x * x)
	return 1 / (x * math.SqrtPi) * (1 - y*(1-3*y*(1-5*y*(1-7*y))))
}

// orbitalRho and orbitalChi are the nodes of the table of the orbital-motion problem.
func orbitalNodes() (rho, chi []float64) {
	return []float64{1, 2, 3, 5, 10, 20, 50}, []float64{1, 3, 5, 10, 15, 25}
}

// orbitalTable is the ion current i = I/(A n e sqrt(e T/(2 pi M))) to a cylinder, rows in chi and
// columns in rho, for the ratio of ion to electron temperature 0.02.
//
// Computed by an independent solver of the collisionless problem of isotropic Maxwellian ions
// (Bernstein and Rabinowitz 1959, Laframboise 1966), to about 1e-3.
func orbitalTable() [][]float64 {
	return [][]float64{
		{1.140, 1.140, 1.140, 1.135, 1.083, 1.028, 0.975},
		{1.961, 1.961, 1.961, 1.815, 1.547, 1.358, 1.204},
		{2.529, 2.529, 2.529, 2.178, 1.755, 1.478, 1.263},
		{3.572, 3.572, 3.515, 2.770, 2.082, 1.657, 1.342},
		{4.374, 4.374, 4.195, 3.204, 2.322, 1.790, 1.401},
		{5.645, 5.645, 5.240, 3.880, 2.699, 1.999, 1.495},
	}
}

// OrbitalCurrent is i(rho, chi) of cold ions, from the table: bilinear in the logarithms. Below
// chi 1 and above 25 the current goes on as a power of chi; below rho 1 it is that of rho 1, and
// above rho 50 that of 50.
func OrbitalCurrent(rho, chi float64) float64 {
	if chi <= 0 {
		return 0
	}
	rhos, chis := orbitalNodes()
	table := orbitalTable()
	rho = math.Min(math.Max(rho, rhos[0]), rhos[len(rhos)-1])
	j, u := bracket(rhos, rho)
	i, v := bracket(chis, chi)
	at := func(i int) float64 {
		return math.Log(table[i][j])*(1-u) + math.Log(table[i][j+1])*u
	}
	return math.Exp(at(i)*(1-v) + at(i+1)*v)
}

// bracket finds the interval of x and its place in it, in logarithms; outside it extrapolates.
func bracket(nodes []float64, x float64) (int, float64) {
	i := sort.SearchFloat64s(nodes, x) - 1
	i = min(max(i, 0), len(nodes)-2)
	return i, math.Log(x/nodes[i]) / math.Log(nodes[i+1]/nodes[i])
}

// ParametrisedCurrent is i(rho, chi) = a chi^b, for chi from 3 and rho up to 50.
//
// Ref: G. Narasimhan and Ch. Steinbruchel, J. Vac. Sci. Technol. A 19, 376 (2001); constants from
// memory, within 5 % of the table of OrbitalCurrent.
func ParametrisedCurrent(rho, chi float64) float64 {
	a, b := 2/math.SqrtPi, 0.5
	if rho >= 3 {
		a = 1.18 - 0.00080*math.Pow(rho, 1.35)
		b = 0.0684 + math.Pow(0.722+0.928*rho, -0.729)
	}
	return a * math.Pow(chi, b)
}

// CollisionTrend is the factor that ion collisions put on the collisionless current, for X the
// thickness of the sheath over the mean free path of the ions, and radial the ratio of the radial
// (ABR) to the orbital-motion current: collisions first destroy orbits, then scatter ions out.
//
// Refs: Z. Zakrzewski and T. Kopiczynski, Plasma Phys. 16, 1195 (1974); S. Klagge and M. Tichy,
// Czech. J. Phys. B 35, 988 (1985); from memory, limits checked only: it shows the trend.
func CollisionTrend(x, radial float64) float64 {
	g1 := radial
	if x <= 1 {
		g1 = 1 + x*(radial-1)
	}
	return g1 * (3 - 2*math.Exp(-x)) / (1 + 2*x)
}
