package inputerr

import "strings"

// maxWord bounds the work on a word: a longer one is no slip of the hand.
const maxWord = 64

// Nearest is the candidate that word was probably meant to be, or "" if none is close: at most
// one wrong letter in three (one at least). Upper and lower case count as the same letter. The
// first of equally close candidates wins.
func Nearest(word string, candidates []string) string {
	runes := []rune(strings.ToLower(word))
	if len(runes) == 0 || len(runes) > maxWord {
		return ""
	}
	nearest, limit := "", max(1, len(runes)/3)
	for _, c := range candidates {
		// A candidate differs by no less than the difference in length.
		other := []rune(strings.ToLower(c))
		if len(other) == 0 || abs(len(other)-len(runes)) > limit {
			continue
		}
		if d := distance(runes, other); d <= limit {
			nearest, limit = c, d-1
		}
	}
	return nearest
}

// distance counts the letters to insert, delete, replace or swap with a neighbour to turn a into
// b, no letter being touched twice (optimal string alignment).
//
// Ref: V. I. Levenshtein, Sov. Phys. Dokl. 10, 707 (1966); the swaps: F. J. Damerau,
// Commun. ACM 7, 171 (1964).
func distance(a, b []rune) int {
	twoAgo, ago, now := make([]int, len(b)+1), make([]int, len(b)+1), make([]int, len(b)+1)
	for j := range now {
		now[j] = j
	}
	for i := 1; i <= len(a); i++ {
		twoAgo, ago, now = ago, now, twoAgo
		now[0] = i
		for j := 1; j <= len(b); j++ {
			replace := ago[j-1]
			if a[i-1] != b[j-1] {
				replace++
			}
			now[j] = min(ago[j]+1, now[j-1]+1, replace)
			if i > 1 && j > 1 && a[i-1] == b[j-2] && a[i-2] == b[j-1] {
				now[j] = min(now[j], twoAgo[j-2]+1)
			}
		}
	}
	return now[len(b)]
}

func abs(i int) int {
	if i < 0 {
		return -i
	}
	return i
}
