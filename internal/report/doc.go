// Package report turns results folders into figures and pages for people. It reads what every
// other reader can read, the Parquet tables and summary.json, and never a simulation.
//
// A Figure is data and labels, drawn by three hands: as SVG in the report page (svg.go), for
// papers by gonum/plot (paper.go), and by the viewer, which gets it as JSON. A Kind makes one sort
// of figure from any number of runs, so that all can be overlaid.
//
// What a figure shows of a run whose verdict is "fail" is marked in every drawing and table: by a
// stamp across the axes, in the name of its curves, and in a column of its CSV.
//
// Colours. Curves take the set of M. Okabe and K. Ito as given by B. Wong, Nature Methods 8, 441
// (2011) and differ by dashes too. Maps run from dark blue over grey to pale yellow: the lightness
// rises all the way, so they survive grey printing, and blue and yellow are told apart by almost
// everybody.
//
//	run, err := report.Open("results/argon")
//	page, err := report.Page([]*report.Run{run})
package report
