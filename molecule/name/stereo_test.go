package name

import (
	"testing"

	"shelfward/molecule/smiles"
)

// descriptors of well-known compounds (common practice; the independent reader agrees).
var marks = []struct{ name, smiles string }{
	{"(5E)-dec-5-ene", "CCCC/C=C/CCCC"},
	{"(2Z,6E)-octa-2,6-diene", "C/C=C\\CC/C=C/C"},
	{"(2R)-octan-2-ol", "CCCCCC[C@@H](C)O"},
	{"(2S)-2-aminopropanoic acid", "C[C@H](N)C(=O)O"},
	{"(2R)-2-amino-3-sulfanylpropanoic acid", "N[C@@H](CS)C(=O)O"},
	{"(3R,4S)-3,4-dimethylhexa-1,5-diene", "C=C[C@@H](C)[C@@H](C)C=C"},
	{"(1R,2S,5R)-5-methyl-2-(propan-2-yl)cyclohexan-1-ol", "C[C@@H]1CC[C@H]([C@@H](C1)O)C(C)C"},
	{"(2E)-9-oxodec-2-enoic acid", "CC(=O)CCCCC/C=C/C(=O)O"},
	{"(2R)-2-bromo-2-chlorobutane", "CC[C@](C)(Cl)Br"},
}

func TestDescriptors(t *testing.T) {
	for _, c := range marks {
		want := mustRead(t, c.smiles)
		r, err := Read(c.name)
		if err != nil {
			t.Errorf("%v", err)
		} else if r.Key() != want.Key() {
			t.Errorf("%s reads as %s, want %s", c.name, smiles.Write(r), smiles.Write(want))
		}
		if got, ok := OfWithStereo(want); got != c.name || !ok {
			t.Errorf("%s: got %q, %v, want %q", c.smiles, got, ok, c.name)
		}
	}
}
