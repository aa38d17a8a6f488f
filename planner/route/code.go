package route

import (
	"crypto/sha256"
	"fmt"
	"strings"
)

// Letters of the two syllables of a code: consonants and vowels that are hard to mishear.
const (
	consonants = "bdfgklmnprstvz"
	vowels     = "aeiou"
)

// codeOf names a route by two syllables and three digits made from its steps and conditions. The same
// route has the same code in every plan; two routes of one plan share a code about once in five
// million pairs.
func codeOf(lines []string) string {
	h := sha256.Sum256([]byte(strings.Join(lines, "\n")))
	return fmt.Sprintf("%c%c%c%c%03d", consonants[int(h[0])%len(consonants)], vowels[int(h[1])%len(vowels)],
		consonants[int(h[2])%len(consonants)], vowels[int(h[3])%len(vowels)], (int(h[4])<<8|int(h[5]))%1000)
}
