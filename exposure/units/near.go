package units

import "strings"

// Near returns the symbol that an unknown unit was most likely meant to be, or
// "" where none is near.
func Near(symbol string) string {
	s := spelling.Replace(symbol)
	all := make([]string, 0, len(table))
	for _, u := range table {
		all = append(all, u.Symbol)
	}
	return NearName(s, all)
}

// NearName returns the name that word was most likely meant to be, or "" where
// none is near: the same but for letter case, else the fewest single-letter
// changes (a letter more, less, other, or two exchanged): at most one in a word
// of three to five letters, two up to nine, three beyond. The first of equals.
func NearName(word string, names []string) string {
	word = strings.TrimSpace(word)
	for _, n := range names {
		if strings.EqualFold(word, n) {
			return n
		}
	}
	w := []rune(strings.ToLower(word))
	allowed := 0
	switch {
	case len(w) >= 10:
		allowed = 3
	case len(w) >= 6:
		allowed = 2
	case len(w) >= 3:
		allowed = 1
	}
	best := ""
	for _, n := range names {
		if d := distance(w, []rune(strings.ToLower(n))); d <= allowed {
			best, allowed = n, d-1
		}
	}
	return best
}

// distance counts the single-letter changes between two words, an exchange of
// neighbours counting one (the optimal string alignment distance).
func distance(a, b []rune) int {
	prev2 := make([]int, len(b)+1)
	prev := make([]int, len(b)+1)
	row := make([]int, len(b)+1)
	for j := range prev {
		prev[j] = j
	}
	for i := 1; i <= len(a); i++ {
		row[0] = i
		for j := 1; j <= len(b); j++ {
			cost := 1
			if a[i-1] == b[j-1] {
				cost = 0
			}
			row[j] = min(prev[j]+1, row[j-1]+1, prev[j-1]+cost)
			if i > 1 && j > 1 && a[i-1] == b[j-2] && a[i-2] == b[j-1] {
				row[j] = min(row[j], prev2[j-2]+1)
			}
		}
		prev2, prev, row = prev, row, prev2
	}
	return prev[len(b)]
}
