package pic

import (
	"fmt"
	"math"
)

// Shape is the form of the electrodes.
type Shape int

const (
	// Plates are two equal planes.
	Plates Shape = iota
	// Cylinders are coaxial, the powered one inside; x runs along the radius.
	Cylinders
	// Spheres are concentric, the powered one inside; x runs along the radius.
	Spheres
)

func (s Shape) String() string { return [...]string{"plates", "cylinders", "spheres"}[s] }

// Geometry is the form of the gap. With shells r = r0 + x, and all that is per area in this
// package is per area of the powered electrode.
//
// The equations are in flux form: the flux of the displacement through the face between nodes j
// and j+1 is eps0 Face[j] (phi[j] - phi[j+1])/dx, with the area factor
//
//	plates 1;   cylinders dx/(r0 ln(r[j+1]/r[j]));   spheres r[j] r[j+1]/r0^2
//
// which makes fluxes and capacitance of an empty gap exact. Gauss's law then needs the charge of a
// node alone. The volume of a node is the integral of its weighting function, so that a uniform
// density is deposited as a uniform density, at the walls, too: J. P. Verboncoeur, J. Comput. Phys.
// 174, 421 (2001).
type Geometry struct {
	Shape Shape
	// AreaRatio is the grounded area over the powered one, at least 1; 0 stands for 1.
	AreaRatio float64
}

func (g Geometry) check() error {
	if g.Shape == Plates {
		if g.AreaRatio != 0 && g.AreaRatio != 1 {
			return fmt.Errorf("pic: plates with the area ratio %g, want 1", g.AreaRatio)
		}
		return nil
	}
	if !(g.AreaRatio > 1 && g.AreaRatio <= MaxAreaRatio) {
		return fmt.Errorf("pic: %s with the area ratio %g, want more than 1 and at most %d",
			g.Shape, g.AreaRatio, MaxAreaRatio)
	}
	return nil
}

// Curvature returns gap/r0 of a gap with this geometry; 0 for plates.
func (g Geometry) Curvature() float64 {
	switch g.Shape {
	case Cylinders:
		return g.AreaRatio - 1
	case Spheres:
		return math.Sqrt(g.AreaRatio) - 1
	}
	return 0
}

// Area returns the area at x [cells] over that of the powered electrode.
func (c *Config) Area(x float64) float64 {
	r := 1 + x*c.cellCurvature()
	switch c.Geometry.Shape {
	case Cylinders:
		return r
	case Spheres:
		return r * r
	}
	return 1
}

// WallArea returns the area of a wall over that of the powered electrode.
func (c *Config) WallArea(wall Wall) float64 {
	if wall == Powered || c.Geometry.Shape == Plates {
		return 1
	}
	return c.Geometry.AreaRatio
}

// cellCurvature is k = dx/r0.
func (c *Config) cellCurvature() float64 {
	return c.Geometry.Curvature() / float64(c.Cells)
}

// NodeVolume returns the volume of node j per area of the powered electrode [m].
func (c *Config) NodeVolume(j int) float64 {
	dx := c.CellSize()
	if c.Geometry.Shape == Plates {
		if j == 0 || j == c.Cells {
			return 0.5 * dx
		}
		return dx
	}
	v := 0.0
	if j > 0 {
		v += c.halfVolume(j, -1)
	}
	if j < c.Cells {
		v += c.halfVolume(j, 1)
	}
	return v * dx
}

// halfVolume is the integral of (1-s) S(j + side s) over s = 0..1, S the area factor.
func (c *Config) halfVolume(j int, side float64) float64 {
	k := side * c.cellCurvature()
	r := 1 + float64(j)*c.cellCurvature()
	if c.Geometry.Shape == Cylinders {
		return 0.5*r + k/6
	}
	return 0.5*r*r + r*k/3 + k*k/12
}

// Volume returns the volume of the gap per area of the powered electrode [m].
func (c *Config) Volume() float64 {
	u := c.Geometry.Curvature()
	switch c.Geometry.Shape {
	case Cylinders:
		return c.Gap * (1 + u/2)
	case Spheres:
		return c.Gap * (1 + u + u*u/3)
	}
	return c.Gap
}

// face returns the area factor of the face between nodes j and j+1.
func (c *Config) face(j int) float64 {
	k := c.cellCurvature()
	r := 1 + float64(j)*k
	switch c.Geometry.Shape {
	case Cylinders:
		return k / math.Log1p(k/r)
	case Spheres:
		return r * (r + k)
	}
	return 1
}

// VacuumCapacitance returns the capacitance of the empty gap per area of the powered electrode
// [F/m2].
func (c *Config) VacuumCapacitance() float64 {
	u := c.Geometry.Curvature()
	flat := epsilonOver(c.Gap)
	switch c.Geometry.Shape {
	case Cylinders:
		return flat * u / math.Log1p(u)
	case Spheres:
		return flat * (1 + u)
	}
	return flat
}
