package quantity

import "strings"

// Nearest finds the name that was probably meant by word: the first that
// differs by the case of letters alone, or else the one that the fewest
// changes of a letter make of it, at most one in a short word and two in a
// longer one. ok is false where none is near.
func Nearest(word string, among []string) (nearest string, ok bool) {
	for _, n := range among {
		if strings.EqualFold(word, n) {
			return n, true
		}
	}
	const longest = 64
	if len(word) < 2 || len(word) > longest {
		return "", false
	}
	best := 2
	if len(word) > 4 {
		best = 3
	}
	for _, n := range among {
		if len(n) < 2 || len(n) > longest {
			continue
		}
		if d := changes(word, n); d < best {
			best, nearest, ok = d, n, true
		}
	}
	return nearest, ok
}

// changes counts the insertions, deletions and replacements of a byte that
// make b of a (Levenshtein, Sov. Phys. Dokl. 10, 707 (1966)).
func changes(a, b string) int {
	row := make([]int, len(b)+1)
	for j := range row {
		row[j] = j
	}
	for i := range len(a) {
		corner := row[0]
		row[0] = i + 1
		for j := range len(b) {
			cost := corner
			if a[i] != b[j] {
				cost++
			}
			corner = row[j+1]
			row[j+1] = min(cost, corner+1, row[j]+1)
		}
	}
	return row[len(b)]
}

// suggest ends a message with the unit that was probably meant.
func suggest(word string) string {
	plain := strings.NewReplacer("\u00b5", "u", "\u03bc", "u", "\u2126", "ohm", "\u03a9", "ohm").Replace(word)
	if plain != word && IsName(plain) {
		return "; write " + plain
	}
	if n, ok := Nearest(word, Names()); ok {
		return "; did you mean " + n + "?"
	}
	return ""
}
