package route

import (
	"crypto/sha256"
	"fmt"
	"strings"
)

// Letters of the two syllables of a code: hard to mishear, and chosen so that no code is an ordinary
// word that says something about the route.
const (
	consonants = "bdfklmnrstv"
	vowels     = "aeiou"
	lastVowels = "aiou"
)

// codeOf names a route by two syllables and three digits made from its steps and conditions. The same
// route has the same code in every plan; two routes of one plan share a code about once in two
// million pairs.
func codeOf(lines []string) string {
	h := sha256.Sum256([]byte(strings.Join(lines, "\n")))
	return fmt.Sprintf("%c%c%c%c%03d", consonants[int(h[0])%len(consonants)], vowels[int(h[1])%len(vowels)],
		consonants[int(h[2])%len(consonants)], lastVowels[int(h[3])%len(lastVowels)], (int(h[4])<<8|int(h[5]))%1000)
}
