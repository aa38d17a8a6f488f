package molecule

// Molecules of a few atoms fit into a room, which holds the struct and its slices in one piece of memory: a
// search builds hundreds for every molecule that it opens. Larger rooms would stand half empty.
type (
	room10 struct {
		m         Molecule
		atoms     [10]Atom
		bonds     [11]Bond
		first     [11]int32
		neighbors [22]Neighbor
	}
	room15 struct {
		m         Molecule
		atoms     [15]Atom
		bonds     [16]Bond
		first     [16]int32
		neighbors [32]Neighbor
	}
)

// newMolecule returns a molecule with room for n atoms and nb bonds, all zero.
func newMolecule(n, nb int) *Molecule {
	switch {
	case n <= 10 && nb <= 11:
		r := &room10{}
		return r.m.within(r.atoms[:n:n], r.bonds[:nb:nb], r.first[:n+1:n+1], r.neighbors[:2*nb:2*nb])
	case n <= 15 && nb <= 16:
		r := &room15{}
		return r.m.within(r.atoms[:n:n], r.bonds[:nb:nb], r.first[:n+1:n+1], r.neighbors[:2*nb:2*nb])
	}
	return new(Molecule).within(make([]Atom, n), make([]Bond, nb), make([]int32, n+1), make([]Neighbor, 2*nb))
}

func (m *Molecule) within(atoms []Atom, bonds []Bond, first []int32, neighbors []Neighbor) *Molecule {
	m.atoms, m.bonds, m.first, m.neighbors = atoms, bonds, first, neighbors
	return m
}
