package probe

import (
	"math"
	"testing"
)

// Goal: no file makes the reader or the reduction panic or hang. Method: fuzzing from good and bad
// files.
func FuzzReadSweeps(f *testing.F) {
	s := plasmas()["Maxwellian"]
	s.points = 60
	good := csv("voltage_V,current_A", ",", s.make(argonSetup(), 1), 1)
	for _, seed := range []string{
		"", "voltage_V,current_A\n", good, "voltage_V;current_mA\n1,5;2\n", "# a\n\xff\n", good[:700],
	} {
		f.Add([]byte(seed))
	}
	f.Fuzz(func(t *testing.T, src []byte) {
		if len(src) > 5000 {
			return
		}
		file, err := ReadSweeps("a", src, Columns{})
		if err != nil {
			return
		}
		r, err := Reduce(file.Sweeps, argonSetup(), Choices{Seed: 1, Resamplings: 2})
		if err != nil {
			return
		}
		for _, q := range r.Quantities {
			if q.Reason == "" && (math.IsNaN(q.Value) || math.IsNaN(q.SE) || math.IsInf(q.Value, 0)) {
				t.Errorf("%s: %+v without a reason", q.Key, q)
			}
		}
		_, _ = r.Figures() // an error is fine, a panic is not
	})
}
