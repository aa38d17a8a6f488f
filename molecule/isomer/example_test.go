package isomer_test

import (
	"context"
	"fmt"

	"shelfward/molecule"
	"shelfward/molecule/isomer"
	"shelfward/molecule/smiles"
)

// The four alcohols C4H10O: an OH group is a block, the rest is joined in every way.
func ExampleEnumerate() {
	f, err := molecule.ParseFormula("C4H10O")
	if err != nil {
		fmt.Println(err)
		return
	}
	m, err := smiles.Read("[OH2:1]") // one of the two hydrogens of water gives way to a bond
	if err != nil {
		fmt.Println(err)
		return
	}
	hydroxyl, err := isomer.PieceOf("hydroxyl", m)
	if err != nil {
		fmt.Println(err)
		return
	}
	p := isomer.Problem{Formula: f, Blocks: []isomer.Block{{Piece: hydroxyl, Count: 1}}}
	result, err := isomer.Enumerate(context.Background(), p, isomer.Options{}, func(s *isomer.Structure) bool {
		m, err := s.Materialise()
		if err != nil {
			fmt.Println(err)
			return false
		}
		fmt.Println(smiles.Write(m))
		return true
	})
	fmt.Println(result.Generated, result.Complete, err)
	// Output:
	// CCCCO
	// CC(C)CO
	// CCC(C)O
	// CC(C)(C)O
	// 4 true <nil>
}
