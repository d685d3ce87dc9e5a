package diagnostics

import (
	"fmt"

	"ionfall/internal/codec"
	"ionfall/internal/stats"
)

// Save writes all sums under names that start with prefix.
func (r *Recorder) Save(enc *codec.Encoder, prefix string) {
	on := int64(0)
	if r.on {
		on = 1
	}
	enc.Int64s(prefix+"counters", []int64{on, int64(r.batch), int64(r.periods)})
	s := r.averages.seen
	enc.Float64s(prefix+"seen", []float64{s.density, s.energy, s.midGap, s.samples, s.steps})
	for _, f := range r.floats() {
		enc.Float64s(prefix+f.name, *f.at)
	}
	for _, n := range r.ints() {
		enc.Int64s(prefix+n.name, *n.at)
	}
	for i, rec := range r.species {
		for wall, im := range rec.impacts {
			if im == nil {
				continue
			}
			enc.Float64s(fmt.Sprintf("%s%d.%d.spectra", prefix, i, wall), flatten(im.spectra))
			for k, series := range im.above {
				enc.Float64s(fmt.Sprintf("%s%d.%d.above%d", prefix, i, wall, k), series)
			}
		}
	}
	for _, v := range r.vectors() {
		enc.Int64(prefix+v.name+".n", int64(v.v.N))
	}
}

// Restore replaces all sums by what Save wrote for the same case.
func (r *Recorder) Restore(dec *codec.Decoder, prefix string) error {
	counters, seen := dec.Int64s(prefix+"counters"), dec.Float64s(prefix+"seen")
	if err := dec.Err(); err != nil {
		return err
	}
	if len(counters) != 3 || len(seen) != 5 {
		return fmt.Errorf("diagnostics: the saved sums are of another kind")
	}
	r.on, r.batch, r.periods = counters[0] != 0, int(counters[1]), int(counters[2])
	r.averages.seen = centerSums{seen[0], seen[1], seen[2], seen[3], seen[4]}
	for _, f := range r.floats() {
		v := dec.Float64s(prefix + f.name)
		if err := checkLength(dec, f.name, len(v), len(*f.at), f.grows); err != nil {
			return err
		}
		*f.at = v
	}
	for _, n := range r.ints() {
		v := dec.Int64s(prefix + n.name)
		if err := checkLength(dec, n.name, len(v), len(*n.at), false); err != nil {
			return err
		}
		*n.at = v
	}
	for i, rec := range r.species {
		for wall, im := range rec.impacts {
			if im == nil {
				continue
			}
			flat := dec.Float64s(fmt.Sprintf("%s%d.%d.spectra", prefix, i, wall))
			im.spectra = unflatten(flat, im.energies.count())
			for k := range im.above {
				im.above[k] = dec.Float64s(fmt.Sprintf("%s%d.%d.above%d", prefix, i, wall, k))
			}
		}
	}
	for _, v := range r.vectors() {
		v.v.N = int(dec.Int64(prefix + v.name + ".n"))
	}
	return dec.Err()
}

func checkLength(dec *codec.Decoder, name string, got, want int, grows bool) error {
	if err := dec.Err(); err != nil {
		return err
	}
	if got != want && !grows {
		return fmt.Errorf("diagnostics: saved %s has %d values, want %d", name, got, want)
	}
	return nil
}

type namedFloats struct {
	name  string
	at    *[]float64
	grows bool
}

type namedInts struct {
	name string
	at   *[]int64
}

type namedVector struct {
	name string
	v    *stats.Vector
}

// vectors lists the averages.
func (r *Recorder) vectors() []namedVector {
	var list []namedVector
	add := func(name string, v *stats.Vector) {
		if v != nil {
			list = append(list, namedVector{fmt.Sprintf("%s%d", name, len(list)), v})
		}
	}
	a := &r.averages
	for _, group := range [][]*stats.Vector{a.phases, a.profiles, a.circuit, a.eepf} {
		for _, v := range group {
			add("average", v)
		}
	}
	for i := range a.spectra {
		for wall := range 2 {
			add("average", a.spectra[i][wall])
			add("average", a.angles[i][wall])
		}
	}
	return list
}

// floats lists everything that is a slice of float64, in a fixed order.
func (r *Recorder) floats() []namedFloats {
	var list []namedFloats
	add := func(name string, at *[]float64, grows bool) {
		list = append(list, namedFloats{name, at, grows})
	}
	for _, v := range r.vectors() {
		add(v.name+".mean", &v.v.Mean, false)
		add(v.name+".m2", &v.v.M2, false)
		add(v.name+".last", &v.v.Last, false)
		add(v.name+".lag", &v.v.LagSum, false)
	}
	for q := range r.grid {
		add(fmt.Sprintf("grid%d", q), &r.grid[q], false)
	}
	for q := range r.circuit {
		add(fmt.Sprintf("circuit%d", q), &r.circuit[q], false)
	}
	a := &r.averages
	add("center.density", &a.centerDensity, true)
	add("center.energy", &a.centerEnergy, true)
	add("center.potential", &a.midGap, true)
	add("sheath0", &a.sheath[0], true)
	add("sheath1", &a.sheath[1], true)
	for i, rec := range r.species {
		for wall, im := range rec.impacts {
			if im == nil {
				continue
			}
			name := fmt.Sprintf("%d.%d.", i, wall)
			add(name+"counts", &im.counts, true)
			add(name+"energy", &im.energy, true)
			add(name+"spectrum", &im.spectrum, false)
			add(name+"angles", &im.angles, false)
		}
	}
	return list
}

// ints lists the integer counts, in a fixed order.
func (r *Recorder) ints() []namedInts {
	list := []namedInts{{"samples", &r.samples}, {"steps", &r.steps}}
	for i, rec := range r.species {
		for c := range rec.chunks {
			ch := &rec.chunks[c]
			name := fmt.Sprintf("%d.chunk%d.", i, c)
			if ch.ionized != nil {
				list = append(list, namedInts{name + "ionized", &ch.ionized},
					namedInts{name + "electrons", &ch.electrons.Counts}, namedInts{name + "moves", &ch.moves})
			}
			for wall, im := range rec.impacts {
				if im == nil {
					continue
				}
				h := &ch.hits[wall]
				at := fmt.Sprintf("%s%d.", name, wall)
				list = append(list, namedInts{at + "spectrum", &h.spectrum},
					namedInts{at + "angles", &h.angles}, namedInts{at + "above", &h.above},
					namedInts{at + "sums", &h.sums})
			}
		}
	}
	return list
}

func flatten(rows [][]float64) []float64 {
	var flat []float64
	for _, row := range rows {
		flat = append(flat, row...)
	}
	return flat
}

func unflatten(flat []float64, width int) [][]float64 {
	var rows [][]float64
	for ; len(flat) >= width; flat = flat[width:] {
		rows = append(rows, flat[:width:width])
	}
	return rows
}
