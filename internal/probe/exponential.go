package probe

import (
	"math"

	"gonum.org/v1/gonum/mat"
)

// exponentialParts of the largest current are where fits of the exponential part end: what they
// disagree about is an error.
func exponentialParts() []float64 { return []float64{0.5, 0.3, 0.8} }

// exponential fits I = a exp(V/T) + b + c V below the knee, the last two for the ions: temperature
// and floating potential with errors.
func (r *reduction) exponential() (t, tSE, f, fSE float64) {
	var temperatures, roots []float64
	for _, part := range exponentialParts() {
		e := r.exponentialUpTo(part * r.guess.kneeCurrent)
		if e == nil {
			return math.NaN(), math.NaN(), math.NaN(), math.NaN()
		}
		temperatures, roots = append(temperatures, e.temperature), append(roots, e.root())
		if part == exponentialParts()[0] {
			t, tSE, f = e.temperature, e.error, e.root()
			fSE = e.rootError()
		}
	}
	for k := range temperatures {
		tSE = math.Max(tSE, math.Abs(temperatures[k]-t))
		fSE = math.Max(fSE, math.Abs(roots[k]-f))
	}
	return t, tSE, f, fSE
}

// exponentialFit is an exponential on a line.
type exponentialFit struct {
	temperature, error float64
	a, b, c            float64 // of exp((V - at)/T), 1, V - at
	at                 float64
	from               float64
	noise              float64 // of a point [A]
}

// exponentialUpTo fits the points below the current; nil if there are too few.
func (r *reduction) exponentialUpTo(top float64) *exponentialFit {
	d := r.cleaned
	n := 0
	for n < len(d.voltage) && (d.current[n] < top || d.voltage[n] < r.guess.floating) {
		n++
	}
	if n < MinPoints/2 {
		return nil
	}
	e := &exponentialFit{at: d.voltage[n-1], from: d.voltage[0], noise: d.floor}
	part := &data{d.voltage[:n], d.current[:n], d.sigma[:n]}
	try := func(logT float64) float64 { return e.linear(part, math.Exp(logT)) }
	span := d.voltage[n-1] - d.voltage[0]
	lo, hi := math.Log(span/500), math.Log(span)
	best := lo
	const steps = 120
	for k := range steps + 1 {
		if x := lo + (hi-lo)*float64(k)/steps; try(x) < try(best) {
			best = x
		}
	}
	width := (hi - lo) / steps
	lo, hi = best-width, best+width
	for range 40 {
		a, b := lo+0.382*(hi-lo), lo+0.618*(hi-lo)
		if try(a) < try(b) {
			hi = b
		} else {
			lo = a
		}
	}
	best = (lo + hi) / 2
	least := try(best)
	const h = 0.01
	bend := (try(best+h) - 2*least + try(best-h)) / (h * h)
	e.linear(part, math.Exp(best))
	e.temperature = math.Exp(best)
	if !(bend > 0 && e.a > 0) {
		return nil
	}
	scale := math.Max(1, least/float64(n-4))
	e.error = e.temperature * math.Sqrt(2*scale/bend)
	return e
}

// linear finds a, b and c for a temperature and returns chi-square.
func (e *exponentialFit) linear(d *data, t float64) float64 {
	n := len(d.voltage)
	left, right := mat.NewDense(n, 3, nil), mat.NewVecDense(n, nil)
	for k, v := range d.voltage {
		w := 1 / d.sigma[k]
		left.SetRow(k, []float64{w * math.Exp((v-e.at)/t), w, w * (v - e.at)})
		right.SetVec(k, w*d.current[k])
	}
	var x mat.VecDense
	if err := x.SolveVec(left, right); err != nil {
		return math.Inf(1) // the columns are alike
	}
	e.a, e.b, e.c = x.AtVec(0), x.AtVec(1), x.AtVec(2)
	var rest mat.VecDense
	rest.MulVec(left, &x)
	rest.SubVec(right, &rest)
	return mat.Dot(&rest, &rest)
}

func (e *exponentialFit) current(v float64) float64 {
	return e.a*math.Exp((v-e.at)/e.temperature) + e.b + e.c*(v-e.at)
}

// root is the floating potential; NaN outside the sweep.
func (e *exponentialFit) root() float64 {
	lo, hi := e.from, e.at
	if e.current(lo) > 0 || e.current(hi) < 0 {
		return math.NaN()
	}
	for range 60 {
		if mid := (lo + hi) / 2; e.current(mid) > 0 {
			hi = mid
		} else {
			lo = mid
		}
	}
	return lo
}

// rootError is from the noise of three points over the slope: what a fit of three numbers to the
// neighbourhood leaves at the least.
func (e *exponentialFit) rootError() float64 {
	v := e.root()
	slope := e.a/e.temperature*math.Exp((v-e.at)/e.temperature) + e.c
	return math.Max(e.noise/math.Sqrt(3)/math.Abs(slope), 0)
}
