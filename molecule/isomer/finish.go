package isomer

// workspace holds what one goroutine needs to judge and write finished structures.
type workspace struct {
	structure Structure
	first     [maxUnits]uint8 // the atom of each unit
	links     []link
	pi        [maxUnits]int8 // partner by the double bond in reach of resonance, or -1
	alternation
	pieceMatch
	grid     grid
	images   []image
	imageEnd []int // where the images of each block end
}

// link is a bond between two units of a finished structure.
type link struct {
	a, b     uint8
	code     uint8 // as the search chose it
	order    uint8 // in the Kekulé form written
	aromatic bool
}

// finish tests what can be tested on whole structures only and returns the structure, or nil if
// it fails or if another code stands for the same compound.
func (w *workspace) finish(s *search) *Structure {
	if len(s.plan.blocks) == 0 {
		if !w.plainKekule(s) {
			return nil
		}
		w.write(s)
	} else if !w.decomposition(s) {
		return nil
	}
	p := s.plan.problem
	if p.NoRings != 0 && !w.ringsAllowed(s) || !w.pieces(p) {
		return nil
	}
	w.structure.Score = 0
	return &w.structure
}

// write fills structure from the finished code: units in the order of the code, each followed by
// its company. It returns false if the inner bonds do not make the blocks.
func (w *workspace) write(s *search) bool {
	w.writeAtoms(s)
	if len(s.plan.blocks) > 0 && !w.kekuliseBlocks(s) {
		return false
	}
	w.writeLinks()
	return true
}

// writePrefix does the same for the units met so far.
func (w *workspace) writePrefix(s *search) {
	w.writeAtoms(s)
	w.writeLinks()
}

func (w *workspace) writeAtoms(s *search) {
	st := &w.structure
	st.Atoms, st.Bonds, st.built = st.Atoms[:0], st.Bonds[:0], nil
	for u := 0; u < s.met; u++ {
		k := &s.plan.kinds[s.kind[u]]
		first := len(st.Atoms)
		w.first[u] = uint8(first)
		st.Atoms = append(st.Atoms, Atom{k.state.element, k.state.charge, k.hydrogens})
		for _, c := range k.state.with {
			st.Bonds = append(st.Bonds, Bond{uint8(first + 1 + c.parent), uint8(len(st.Atoms)), c.order})
			st.Atoms = append(st.Atoms, Atom{Element: c.element, Charge: c.charge})
		}
	}
	w.links = w.links[:0]
	for u := 0; u < s.met; u++ {
		for _, e := range s.adj[u][:s.deg[u]] {
			if int(e.to) < u {
				continue
			}
			order := e.code
			if order >= inner {
				order -= inner - 1
			}
			w.links = append(w.links, link{a: uint8(u), b: e.to, code: e.code, order: order, aromatic: e.code == innerAromatic})
		}
	}
}

func (w *workspace) writeLinks() {
	for _, l := range w.links {
		w.structure.Bonds = append(w.structure.Bonds, Bond{w.first[l.a], w.first[l.b], l.order})
	}
}
