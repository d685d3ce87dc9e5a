package scan

import (
	"math"
	"math/rand/v2"
	"testing"
)

// response is an invented one with the shape of what is asked: an energy that rises with the
// voltage and falls with the pressure, and a flux that rises with both.
func response(u []float64) (energy, flux float64) {
	p, v := 5*math.Pow(10, u[0]), 100*math.Pow(5, u[1]) // 5 to 50 Pa, 100 to 500 V
	energy = 0.25 * v / (1 + math.Pow(p/20, 1.3)) * (1 + 0.15*math.Sin(4*u[0]+2*u[1]))
	flux = 2e17 * math.Pow(v/100, 1.4) * math.Sqrt(p/5) * (1 + 0.1*math.Cos(5*u[0]))
	return energy, flux
}

const relativeError = 0.01

func observe(r *rand.Rand, u []float64) observation {
	e, f := response(u)
	return observation{
		u: u, value: []float64{
			e * (1 + relativeError*r.NormFloat64()), f * (1 + relativeError*r.NormFloat64()),
		},
		err: []float64{e * relativeError, f * relativeError},
	}
}

func testWants() []Want {
	return []Want{
		{Path: "energy", Bound: 25}, {Path: "flux", Above: true, Bound: 1e18},
	}
}

// wrong is the part of the plan on the wrong side of the boundary.
func wrong(inside func(u []float64) bool) float64 {
	bad, all := 0, 0
	for _, u := range gridPlaces(2, 101) {
		e, f := response(u)
		if inside(u) != (e < 25 && f > 1e18) {
			bad++
		}
		all++
	}
	return float64(bad) / float64(all)
}

// gridError is that of a map of side x side points, interpolated bilinearly, averaged over the noise.
func gridError(r *rand.Rand, side, repeats int) float64 {
	sum := 0.0
	for range repeats {
		var known []observation
		for _, u := range gridPlaces(2, side) {
			known = append(known, observe(r, u))
		}
		between := func(u []float64, k int) float64 {
			x, y := u[0]*float64(side-1), u[1]*float64(side-1)
			i, j := min(int(x), side-2), min(int(y), side-2)
			x, y = x-float64(i), y-float64(j)
			at := func(i, j int) float64 { return known[i+side*j].value[k] }
			return at(i, j)*(1-x)*(1-y) + at(i+1, j)*x*(1-y) + at(i, j+1)*(1-x)*y + at(i+1, j+1)*x*y
		}
		sum += wrong(func(u []float64) bool { return between(u, 0) < 25 && between(u, 1) > 1e18 })
	}
	return sum / float64(repeats)
}

// searchFor spends a number of points, a third of them on a first spread.
func searchFor(t *testing.T, r *rand.Rand, points int) *search {
	t.Helper()
	s := newSearch(testWants(), 2)
	var known []observation
	for _, i := range coarseFirst(s.places, max(5, points/3)) {
		known = append(known, observe(r, s.places[i]))
	}
	for {
		if err := s.fit(known); err != nil {
			t.Fatal(err)
		}
		left := points - len(known)
		if left == 0 {
			return s
		}
		for _, u := range s.next(min(2, left)) {
			known = append(known, observe(r, u))
		}
	}
}

// Goal: the search finds the boundary with a third of the points of the grid that gives the same
// error. Method: a map of 8 x 8 points against a search with 21, both with the same noise; the
// part of the plan on the wrong side, averaged over repeats. What the search expects must not be
// less than it makes, beyond the scatter of few repeats: judged at the places where it observes,
// its doubt was 0.6 of the error that it made.
func TestSearchNeedsAThirdOfTheGrid(t *testing.T) {
	r := rand.New(rand.NewPCG(1, 1))
	const side, repeats = 8, 6
	grid := gridError(r, side, 20)
	sum, expected := 0.0, 0.0
	for range repeats {
		s := searchFor(t, r, side*side/3)
		sum += wrong(func(u []float64) bool { return s.probability(u) > 0.5 })
		expected += s.doubt()
	}
	found := sum / repeats
	t.Logf("wrong side: grid of %d points %.2f %%, search with %d points %.2f %% (expected %.2f %%)",
		side*side, 100*grid, side*side/3, 100*found, 100*expected/repeats)
	if found > grid {
		t.Errorf("with a third of the points %.2f %% of the plan is on the wrong side, the grid has "+
			"%.2f %%", 100*found, 100*grid)
	}
	if ratio := expected / sum; ratio < 0.75 || ratio > 2.5 {
		t.Errorf("the search expects %.2g times the error that it makes", ratio)
	}
}

// Goal: the recommended place is in the window, and the best of it. Method: the largest flux,
// against the truth on a fine grid.
func TestRecommendation(t *testing.T) {
	r := rand.New(rand.NewPCG(2, 2))
	s := searchFor(t, r, 24)
	u, inside := s.recommended(1, true, 0.95)
	e, f := response(u)
	if !inside || e > 25 || f < 1e18 {
		t.Fatalf("at %v: energy %g, flux %g, inside %v", u, e, f, inside)
	}
	best := 0.0
	for _, v := range gridPlaces(2, 101) {
		if e, f := response(v); e < 25 && f > 1e18 {
			best = math.Max(best, f)
		}
	}
	if f < 0.9*best {
		t.Errorf("got a flux of %g, the best is %g", f, best)
	}
	p := s.models[1].at(u)
	if math.Abs(p.Mean-f) > 4*p.StdErr {
		t.Errorf("predicted %g +- %g, true %g", p.Mean, p.StdErr, f)
	}
	impossible := &search{wants: []Want{{Bound: -1}, {Above: true, Bound: 1e30}}, places: s.places}
	impossible.models = s.models
	if _, inside := impossible.recommended(-1, true, 0.95); inside {
		t.Error("an impossible want is met")
	}
}

func TestParseWant(t *testing.T) {
	w, err := ParseWant(" ion_flux_m2ps.grounded.all >= 1e18 ")
	if err != nil || w != (Want{Path: "ion_flux_m2ps.grounded.all", Above: true, Bound: 1e18}) {
		t.Errorf("got %+v, %v", w, err)
	}
	if !w.Met(2e18) || w.Met(5e17) || (Want{Bound: 3}).Met(4) {
		t.Error("met is not met")
	}
	for _, text := range []string{"", "a", "a <", "< 5", "a = 5", "a < b", "a < 5 eV", "a < NaN"} {
		if _, err := ParseWant(text); err == nil {
			t.Errorf("%q is accepted", text)
		}
	}
}
