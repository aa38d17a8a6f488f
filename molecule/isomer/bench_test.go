package isomer

import (
	"testing"
)

// The rate of generation on one core, without evidence and with blocks.
func BenchmarkEnumerate(b *testing.B) {
	for _, tc := range []struct{ formula, blocks string }{
		{"C10H16", ""}, {"C9H12", ""}, {"C8H10O", ""}, {"C7H7NO", ""}, {"C14H30", ""},
		{"C9H10O3", "[cH:1]1cc[cH:1]cc1"},
		{"C12H14O3", "[cH:1]1c[cH:1]ccc1 + [CH3][OH:1] + [OH:1][CH:1]=O"},
		{"C11H11N", "[cH:1]1[cH:1]cccc1 + [CH3:1]"},
		{"C11H10O3", "[cH:1]1[cH:1]c[cH:1]cc1 + [CH3][CH2:1]"},
	} {
		b.Run(tc.formula+tc.blocks, func(b *testing.B) {
			p := Problem{Formula: formulaOf(b, tc.formula)}
			if tc.blocks != "" {
				p.Blocks = readBlocks(b, tc.blocks)
			}
			b.ReportAllocs()
			n := int64(0)
			for range b.N {
				n += count(b, p)
			}
			b.ReportMetric(float64(n)/b.Elapsed().Seconds(), "structures/s")
			b.ReportMetric(float64(n)/float64(b.N), "structures")
		})
	}
}
