package route

import (
	"shelfward/molecule"
	"shelfward/reactions"
)

// Estimated bytes that a step keeps as long as its search runs: the step, its options and edge, and the
// molecules in it with their labels and descriptions. Measured on the heap after searches of 100 and more
// molecules of 10 to 25 atoms; TestEstimateOfMemory holds them against it.
const (
	bytesPerStep     = 700
	bytesPerMolecule = 550
	bytesPerAtom     = 75
)

// heldBytes estimates what a step keeps, from the step alone, so that a search that ends for its memory ends
// at the same molecule every time.
func heldBytes(s *reactions.Step) int {
	n := bytesPerStep
	add := func(m *molecule.Molecule) { n += bytesPerMolecule + bytesPerAtom*m.NumAtoms() }
	for _, r := range s.Reactants {
		add(r.Molecule)
	}
	for _, b := range s.Byproducts {
		add(b.Molecule)
	}
	return n
}

// partOfMemory is the part of Options.Memory that a search may hold by its estimate: the rest is for the
// rules, for what an expansion needs while it runs, and for what the collector has not taken up yet.
const partOfMemory = 0.5
