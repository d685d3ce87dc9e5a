// Package bib holds the publications that the program's methods and data come from, as values:
// a feature that a run uses names the key, and the run lists the citation.
//
//	if entry, ok := bib.Lookup("birdsall-1991"); ok {
//		fmt.Println(entry.Citation)
//	}
package bib

import "slices"

// The two values of Entry.Status.
const (
	// StatusRead marks a citation seen in the work itself or in one that quotes it.
	StatusRead = "read"
	// StatusMemory marks a citation that was recalled and not checked.
	StatusMemory = "memory"
)

// Entry is a publication.
type Entry struct {
	Key      string // first authors and year: "phelps-1994"
	Citation string // authors, journal, volume, page, year
	DOI      string // without a resolver in front; empty if not known
	Status   string // how the citation was obtained: read or memory
}

// Lookup is the entry with the key.
func Lookup(key string) (Entry, bool) {
	for _, e := range entries() {
		if e.Key == key {
			return e, true
		}
	}
	return Entry{}, false
}

// Keys are the keys of all entries, sorted.
func Keys() []string {
	var keys []string
	for _, e := range entries() {
		keys = append(keys, e.Key)
	}
	slices.Sort(keys)
	return keys
}

// entries are all publications, by subject.
func entries() []Entry {
	return slices.Concat(methods(), plasmas(), crossSections(), measurements(), reactor())
}
