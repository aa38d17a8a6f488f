package smiles_test

import (
	"errors"
	"fmt"

	"shelfward/molecule/smiles"
)

func ExampleRead() {
	m, err := smiles.Read("OC(=O)c1ccccc1")
	if err != nil {
		fmt.Println(err)
		return
	}
	fmt.Printf("%s, %.2f g/mol, %g rings or double bonds\n", m.Formula(), m.Formula().MolarMass(), m.Formula().Unsaturation())
	// Output: C7H6O2, 122.12 g/mol, 5 rings or double bonds
}

func ExampleError() {
	_, err := smiles.Read("CC(C")
	var e *smiles.Error
	if errors.As(err, &e) {
		fmt.Println(e)
		fmt.Println(e.Caret())
	}
	// Output:
	// column 3: '(' is never closed
	// CC(C
	//   ^
}

func ExampleWrite() {
	for _, text := range []string{"C1=CC=CC=C1O", "Oc1ccccc1", "c1(O)ccccc1"} {
		m, err := smiles.Read(text)
		if err != nil {
			fmt.Println(err)
			continue
		}
		fmt.Println(smiles.Write(m))
	}
	// Output:
	// Oc1ccccc1
	// Oc1ccccc1
	// Oc1ccccc1
}
