package route

import (
	"fmt"
	"os"
	"strings"

	"shelfward/reactions"
	"shelfward/rules"
)

// Bench is what the room can do, as the bench file says. What it does not mention is taken as there.
type Bench struct {
	ColdestC      *float64 // lowest temperature a bath reaches
	HottestC      *float64
	Has           []string
	Lacks         []string
	LargestFlask  string // '2 L'
	NeedsApproval []string
	Never         []string // words as for --avoid
}

// benchFile is the form of the file.
type benchFile struct {
	Coldest       *float64 `yaml:"coldest"`
	Hottest       *float64 `yaml:"hottest"`
	Has           []string `yaml:"has"`
	Lacks         []string `yaml:"lacks"`
	LargestFlask  string   `yaml:"largest_flask"`
	NeedsApproval []string `yaml:"needs_approval"`
	Never         []string `yaml:"never"`
}

// LoadBench reads a bench file. Errors name file and line.
func LoadBench(path string) (*Bench, error) {
	data, err := os.ReadFile(path)
	if err != nil {
		return nil, fmt.Errorf("bench file: %w", err)
	}
	var f benchFile
	if err := rules.Decode(path, data, &f); err != nil {
		return nil, err
	}
	return &Bench{f.Coldest, f.Hottest, f.Has, f.Lacks, f.LargestFlask, f.NeedsApproval, f.Never}, nil
}

// reachC is how far, in C, the coldest bath may stay above the low end of a temperature window.
const reachC = 5

// can says whether the room can carry out a condition set: its bath reaches the low end of the
// temperature window, its heating too, and nothing it needs is lacking.
func (b *Bench) can(c *reactions.Conditions) bool {
	if b.ColdestC != nil && c.Temperature[0] < *b.ColdestC-reachC {
		return false
	}
	if b.HottestC != nil && c.Temperature[0] > *b.HottestC {
		return false
	}
	for _, need := range c.Needs {
		if mentions(b.Lacks, need) && !mentions(b.Has, need) {
			return false
		}
	}
	return true
}

// approval lists what of a condition set needs to be approved in this room.
func (b *Bench) approval(c *reactions.Conditions) (out []string) {
	for _, need := range c.Needs {
		if mentions(b.NeedsApproval, need) {
			out = append(out, need)
		}
	}
	for _, r := range c.Reagents {
		if mentions(b.NeedsApproval, r.Name) {
			out = append(out, r.Name)
		}
	}
	return out
}

// mentions says whether one of the words stands in the text or holds it ('hydrogen' and 'hydrogen
// balloon').
func mentions(words []string, text string) bool {
	low := strings.ToLower(text)
	for _, w := range words {
		w = strings.ToLower(strings.TrimSpace(w))
		if w != "" && (strings.Contains(low, w) || strings.Contains(w, low)) {
			return true
		}
	}
	return false
}
