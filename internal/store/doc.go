// Package store keeps the results of runs: a folder a run, its tables as Parquet files, its
// scalars as JSON, its state as one checksummed file.
//
// # States of a folder
//
// A run in progress lives in DIR.running and becomes DIR by one rename when every file is written
// and synced: a folder without the suffix is whole. Each file in it is replaced the same way
// (written beside, synced, renamed), so that after a crash at any moment there is the old file or
// the new one, never a part.
//
// A finished folder is continued without touching it. The continuation is a DIR.running of its own
// that holds a file "continues" (the marker), the last checkpoint as a link, and copies of what
// the run does not write itself. Commit exchanges DIR and DIR.running in one step where the system
// can (Linux, macOS), then deletes the old results and last of all the marker. Elsewhere DIR is
// first renamed to DIR.replaced. After a crash at any moment these are told apart:
//
//	DIR.running with the marker, DIR            interrupted while continuing: go on in it
//	DIR.replaced, DIR.running with the marker   interrupted between two renames: finish them
//	DIR with the marker                         swapped: delete DIR.running or DIR.replaced
//
// Reopen does so. Locate finds the folder to read and changes nothing.
//
// # Claims
//
// Two processes must not run in one folder. Create and Reopen take a claim, the file DIR.lock made
// by a hard link that fails when the name exists; Commit and Close give it up. A lock of the
// kernel (flock) would be simpler, but on the shared disks of clusters it can be missing or hold on
// one machine only, while an exclusive name works everywhere. The price is that a killed process
// leaves its claim. So the claim names its process, and is void when that process of this machine
// is gone, or, on another machine, when the owner has not renewed it for two minutes (it does so
// every 15 s). An owner that was suspended for so long finds its claim gone at the next write,
// which is refused.
//
// # Use
//
//	run, err := store.CreateNext("results/argon")
//	err = run.WriteCheckpoint(encoder)
//	err = run.WriteTable(profiles, provenance)
//	err = run.WriteSummary(summary, provenance)
//	err = run.Commit() // or run.Close() to leave an interrupted run for Reopen
package store
