package name

import (
	"testing"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

var benchSMILES = []string{"CC(C)CCO", "CCOC(=O)C(C)C(=O)CC", "Cc1ccc(cc1)S(=O)(=O)NC", "CN1C=NC2=C1C(=O)N(C)C(=O)N2C", "COc1ccc2cc(ccc2c1)CCC(C)=O", "O=C(O)CCCCC(C)=O"}

func BenchmarkOf(b *testing.B) {
	list := make([]*molecule.Molecule, len(benchSMILES))
	for i, s := range benchSMILES {
		list[i], _ = smiles.Read(s)
	}
	for i := 0; b.Loop(); i++ {
		Of(list[i%len(list)])
	}
}

func BenchmarkRead(b *testing.B) {
	list := make([]string, len(benchSMILES))
	for i, s := range benchSMILES {
		m, _ := smiles.Read(s)
		list[i] = Of(m)
	}
	for i := 0; b.Loop(); i++ {
		if _, err := Read(list[i%len(list)]); err != nil {
			b.Fatal(err)
		}
	}
}
