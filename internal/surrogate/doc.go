// Package surrogate stands in for runs that were not made: a Gaussian process through the results
// of those that were, each with its own standard error, predicts a result and its error at any
// other setting.
//
//	m, err := surrogate.Fit(surrogate.Data{
//		Low: []float64{1, 100}, High: []float64{20, 400}, // Pa, V
//		X:   points, Y: energies, SE: errors,
//	})
//	energy, se := m.Predict([]float64{5, 250})
//
// Ref: C. E. Rasmussen and C. K. I. Williams, Gaussian Processes for Machine Learning (2006),
// ch. 2, 4 and 5.
package surrogate
