// Package surrogate predicts a quantity between the points at which it is known, with an error.
//
// The quantity is taken as a draw of a Gaussian process: a constant of unknown size plus a random
// function whose values at x and x' have the covariance
//
//	k(x, x') = s^2 (1 + r + r^2/3) exp(-r),  r^2 = 5 sum_i ((x_i - x'_i) / l_i)^2
//
// (Matern, smoothness 5/2: twice differentiable). What is known are samples with their own standard
// errors, taken as independent and normal. The amplitude s and the lengths l_i, one an input, are
// drawn from their posterior: the restricted marginal likelihood of the samples times a broad
// prior, which keeps them finite where a quantity hardly depends on an input.
//
// A prediction is that of the quantity itself, not of a new noisy sample. It averages over the
// draws. Its error holds the errors of the samples, the distance to them, the unknown constant and
// the uncertainty of s and l, which is much of it where samples are few. The tests measure how
// often the intervals hold.
//
//	m, err := surrogate.Fit(samples)
//	p := m.At([]float64{5, 250})
//	fmt.Println(p.Mean, p.StdErr, p.Above(1e18))
//
// Inputs may have any unit: each is scaled by the range of the samples. An input that acts by its
// ratios is best given as its logarithm.
//
// Refs: C. E. Rasmussen and C. K. I. Williams, Gaussian Processes for Machine Learning (MIT Press,
// 2006), ch. 2, 4 and 5; H. D. Patterson and R. Thompson, Biometrika 58, 545 (1971) for the
// restricted likelihood; R. M. Neal, Ann. Stat. 31, 705 (2003) for the draws; formulas from memory.
package surrogate
