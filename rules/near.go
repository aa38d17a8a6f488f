package rules

import (
	"slices"
	"strings"
)

// Near returns the word of known that word was probably meant to be: the one at the smallest edit
// distance (letter case ignored, neighbouring letters exchanged count as one edit), if that is at
// most a third of the word's length and at least 1. Empty if there is none. Ties go to the first.
func Near(word string, known []string) string {
	if list := NearWords(word, known, 1); len(list) > 0 {
		return list[0]
	}
	return ""
}

// maxNear bounds the words for which near ones are looked for: nobody mistypes a longer one by a letter.
const maxNear = 60

// NearWords returns up to count words of known near word, the nearest first, ties in the order of
// known. Words that word begins, or that begin word, count as near too.
func NearWords(word string, known []string, count int) []string {
	type scored struct {
		word     string
		distance int
	}
	w := []rune(strings.ToLower(strings.TrimSpace(word)))
	if len(w) > maxNear {
		return nil
	}
	limit := max(1, len(w)/3)
	var found []scored
	for _, k := range known {
		r := []rune(strings.ToLower(k))
		distance := limit + 1
		if abs(len(r)-len(w)) <= limit {
			distance = editDistance(w, r, limit)
		}
		if distance > limit && min(len(w), len(r)) >= 4 && (strings.HasPrefix(string(r), string(w)) || strings.HasPrefix(string(w), string(r))) {
			distance = limit
		}
		if distance <= limit {
			found = append(found, scored{k, distance})
		}
	}
	slices.SortStableFunc(found, func(a, b scored) int { return a.distance - b.distance })
	var words []string
	for _, s := range found {
		if len(words) < count && !slices.Contains(words, s.word) {
			words = append(words, s.word)
		}
	}
	return words
}

func abs(x int) int { return max(x, -x) }

// editDistance counts insertions, deletions, substitutions and exchanges of neighbours (the optimal
// string alignment distance). It returns more than limit as soon as that is sure.
func editDistance(a, b []rune, limit int) int {
	before, last, row := make([]int, len(b)+1), make([]int, len(b)+1), make([]int, len(b)+1)
	for j := range last {
		last[j] = j
	}
	for i := 1; i <= len(a); i++ {
		row[0] = i
		least := row[0]
		for j := 1; j <= len(b); j++ {
			cost := 1
			if a[i-1] == b[j-1] {
				cost = 0
			}
			row[j] = min(last[j]+1, row[j-1]+1, last[j-1]+cost)
			if i > 1 && j > 1 && a[i-1] == b[j-2] && a[i-2] == b[j-1] {
				row[j] = min(row[j], before[j-2]+1)
			}
			least = min(least, row[j])
		}
		if least > limit {
			return limit + 1
		}
		before, last, row = last, row, before
	}
	return last[len(b)]
}
