package probe

import (
	"errors"
	"math"
	"slices"
)

// candidate is a form of the characteristic that the data are tried with.
type candidate struct {
	kind string
	rf   bool
	// straight says that the current goes on straight above the plasma potential, as that of a tip
	// with a thick sheath around it or near its holder may, and not as orbital motion has it.
	straight bool
}

const (
	// kneeRange is how far above the plasma potential the fit reaches [T]: further up, what a
	// probe draws depends on its length and on the discharge.
	kneeRange = 2
)

// kinds are the shapes, simple ones first.
func kinds() []string { return []string{Maxwell, Druyvesteyn, General, TwoTemp, Free} }

// freeOf are the parameters that a candidate fits.
func freeOf(c candidate) []int {
	free := []int{parDensity, parPotential, parTemp, parIon, parIonSlope, parSaturation}
	if c.rf {
		free = append(free, parRF)
	}
	switch c.kind {
	case General:
		free = append(free, parShape)
	case TwoTemp:
		free = append(free, parShape, parShape2)
	case Free:
		for k := range freeCells - 1 {
			free = append(free, parShape+k)
		}
	}
	return free
}

// within are the points up to a voltage.
func (d *data) within(top float64) *data {
	n := len(d.voltage)
	for n > MinPoints && d.voltage[n-1] > top {
		n--
	}
	return &data{d.voltage[:n], d.current[:n], d.sigma[:n]}
}

// scored is a fitted candidate.
type scored struct {
	candidate
	*fitted
	weight float64 // of the candidate among all, from the criterion of Schwarz
}

// fitAll fits all candidates and returns them, the best first.
func fitAll(d *cleaned, g *guess, setup *Setup) ([]scored, *data, error) {
	top := g.knee + kneeRange*g.temperature
	var list []scored
	used := d.within(top)
	// The first round finds the plasma potential, the second fits up to the right height above.
	first, err := fitKinds(used, g, setup, g.knee, g.temperature, []string{Maxwell, General},
		d.atFloor)
	if err != nil {
		return nil, nil, err
	}
	c := first[0].model.characteristic(first[0].p)
	used = d.within(c.potential + kneeRange*c.shape.coldest)
	list, err = fitKinds(used, g, setup, c.potential, c.shape.temperature, kinds(), d.atFloor)
	if err != nil {
		return nil, nil, err
	}
	return list, used, nil
}

// triedStraight is how many of the best are also tried with a straight rise above the knee.
const triedStraight = 3

// hopeless is how much larger chi-square of a shape may be than that of the best, for it to be
// tried with RF, too.
const hopeless = 4

// fitKinds fits the shapes, each without RF and, where there is hope, with it.
func fitKinds(d *data, g *guess, setup *Setup, knee, temperature float64, kinds []string,
	atFloor bool,
) ([]scored, error) {
	var list []scored
	least := math.Inf(1)
	for _, kind := range kinds {
		m := newModel(setup, kind)
		m.scale = temperature
		start := g.startFor(m, knee, temperature)
		if !math.IsNaN(setup.RF) {
			start[parRF] = setup.RF * setup.RF
		}
		c := candidate{kind: kind}
		if f, err := m.fit(start, freeOf(c), d); err == nil { // others may do better
			list = append(list, scored{candidate: c, fitted: f})
			least = math.Min(least, f.chi2)
		}
	}
	for _, s := range list {
		if !math.IsNaN(setup.RF) || s.chi2 > hopeless*least {
			continue
		}
		start := slices.Clone(s.p)
		start[parRF] = math.Pow(temperature/2, 2)
		c := candidate{kind: s.kind, rf: true}
		if f, err := s.model.fit(start, freeOf(c), d); err == nil {
			list = append(list, scored{candidate: c, fitted: f})
		}
	}
	if len(list) == 0 {
		return nil, errors.New("no form of characteristic could be fitted")
	}
	rank(list, atFloor)
	for _, s := range list[:min(len(list), triedStraight)] {
		start := slices.Clone(s.p)
		start[parStraight] = 1
		c := s.candidate
		c.straight = true
		if f, err := s.model.fit(start, freeOf(c), d); err == nil {
			list = append(list, scored{candidate: c, fitted: f})
		}
	}
	rank(list, atFloor)
	return list, nil
}

// rank sorts by the criterion and gives weights. The best fit of all gives the unit of chi-square:
// with a poor one, differences count less.
func rank(list []scored, atFloor bool) {
	least := math.Inf(1)
	for _, s := range list {
		least = math.Min(least, s.chi2/float64(s.points-len(s.free)))
	}
	stretch := least
	if atFloor {
		stretch = math.Max(1, least)
	}
	criterion := func(s scored) float64 {
		return s.chi2/stretch + float64(len(s.free))*math.Log(float64(s.points))
	}
	slices.SortStableFunc(list, func(a, b scored) int {
		return int(math.Copysign(1, criterion(a)-criterion(b)))
	})
	sum := 0.0
	for i := range list {
		list[i].weight = math.Exp(-(criterion(list[i]) - criterion(list[0])) / 2)
		sum += list[i].weight
	}
	for i := range list {
		list[i].weight /= sum
	}
}
