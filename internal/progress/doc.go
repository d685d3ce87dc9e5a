// Package progress shows how far a run is: on a terminal, as lines, or as JSON.
//
// A run hands a Status to a Printer after every RF period, which is far more often than anybody
// wants to read; the printer decides what is shown. It is safe for several goroutines at once,
// and a stderr that cannot be written to any more never stops a run.
//
//	p := progress.NewLines(os.Stderr, progress.Minutely())
//	defer p.Close() // prints the last status
//	log := slog.New(slog.NewTextHandler(p, nil)) // log lines go between the reports
//	options.Progress = p.Show
package progress
