// Package scan makes many runs: a plan says which, a folder keeps them, and any number of
// processes on any number of machines that share the folder work through it.
//
// The words used here. A plan is a file: a base input and what varies. An axis is an input path
// that varies. A point is one run: the base with a value on each axis; points are numbered from 1.
// Level 0 of the folder (contract C4):
//
//	DIR/plan.yaml, base.yaml, list.csv   the plan, as given
//	DIR/scan.json                        which points it has: another plan is refused
//	DIR/points.parquet                   a row a point, always whole
//	DIR/points/point=0007/               results of point 7; .running while it is not whole
//	DIR/points/point=0007.failed.json    why point 7 cannot be computed
//	DIR/added.csv, window.parquet        points that a search has added, and what it found
//
// # Never lost
//
// Nothing but the folders of the points says what is done. A runner takes the next point by
// store.Take, which begins it, takes it up from its checkpoint, or refuses it because it is whole
// or another process works at it. So there is no list of work to be damaged, no server, and a
// runner that is killed leaves nothing that the next one cannot take up.
//
// # When it will be done
//
// A tenth of the points goes first, chosen to stand for the cost of all. The logarithm of their
// times over the estimates made from the inputs is a smooth surface over the axes, which is carried
// on to the other points. At its end a scan says how far off the first such prediction was.
//
// # The same bits
//
// A point's input is text made from the plan alone. Running it by itself gives the bits of the
// scan, whatever the number of cores, runners and interruptions. Points have different seeds, so
// that their errors are independent.
package scan
