package bib

import (
	"regexp"
	"slices"
	"testing"
)

// Goal: every citation can be found in a library. Method: volume and page before the year in
// brackets, the year also in the key, a DOI of the right form, keys used once.
func TestEntries(t *testing.T) {
	key := regexp.MustCompile(`^[a-z]+(-[a-z]+)*-(\d{4})$`)
	citation := regexp.MustCompile(`(?:\d+, [A-Z]?\d+|p\. \d+) \((\d{4})\)$`)
	doi := regexp.MustCompile(`^10\.\d{4}/\S+$`)
	seen := map[string]bool{}
	for _, e := range entries() {
		k, c := key.FindStringSubmatch(e.Key), citation.FindStringSubmatch(e.Citation)
		if k == nil || c == nil {
			t.Errorf("%s: key or citation %q lacks a name, page or year", e.Key, e.Citation)
			continue
		}
		if c[1] != k[2] {
			t.Errorf("%s: the citation says %s", e.Key, c[1])
		}
		if seen[e.Key] {
			t.Errorf("%s: used twice", e.Key)
		}
		seen[e.Key] = true
		if e.DOI != "" && !doi.MatchString(e.DOI) {
			t.Errorf("%s: DOI %q", e.Key, e.DOI)
		}
		if e.Status != StatusRead && e.Status != StatusMemory {
			t.Errorf("%s: status %q", e.Key, e.Status)
		}
	}
}

// Goal: keys lead to their entries and no other. Method: all keys, and one that is none.
func TestLookup(t *testing.T) {
	keys := Keys()
	if !slices.IsSorted(keys) || len(keys) != len(entries()) {
		t.Errorf("got %d keys %v, want %d in order", len(keys), keys, len(entries()))
	}
	for _, key := range keys {
		if e, ok := Lookup(key); !ok || e.Key != key {
			t.Errorf("%s: got %v, %v", key, e, ok)
		}
	}
	if e, ok := Lookup("nobody-1900"); ok {
		t.Errorf("unknown key: got %v", e)
	}
}
