package isomer

import (
	"fmt"

	"shelfward/molecule"
)

func pieceOf(name string, m *molecule.Molecule) (Piece, error) {
	p := Piece{Name: name}
	for a := 0; a < m.NumAtoms(); a++ {
		at := m.Atom(a)
		if int(at.Class) > int(at.Hydrogens) {
			return p, fmt.Errorf("piece %s: atom %d is to have %d free valences but has %d hydrogens", name, a+1, at.Class, at.Hydrogens)
		}
		p.Atoms = append(p.Atoms, PieceAtom{at.Element, at.Charge, int8(at.Hydrogens) - int8(at.Class)})
	}
	if n, _ := m.Components(); n != 1 {
		return p, fmt.Errorf("piece %s: it falls into %d parts, expected one", name, n)
	}
	for b := 0; b < m.NumBonds(); b++ {
		x := m.Bond(b)
		order := x.Order
		if x.Aromatic {
			order = OrderAromatic
		}
		p.Bonds, p.kekule = append(p.Bonds, PieceBond{uint8(x.A), uint8(x.B), order}), append(p.kekule, x.Order)
	}
	return p, nil
}

// pieceMatch looks for pieces in structure.
type pieceMatch struct {
	aromatic []bool // by bond of structure
	unsure   []bool // bonds of a prefix that may still become aromatic; empty for finished structures
	at       [64]uint8
	used     [256]bool
}

// pieces tests Contains and Lacks on the finished structure.
func (w *workspace) pieces(p *compiled) bool {
	if len(p.Contains)+len(p.Lacks) == 0 {
		return true
	}
	w.markAromatic()
	for i := range p.Contains {
		if !w.occurs(&p.Contains[i]) {
			return false
		}
	}
	for i := range p.Lacks {
		if w.occurs(&p.Lacks[i]) {
			return false
		}
	}
	return true
}

// banned reports whether a prefix already holds a piece of Lacks whatever follows. Hydrogens and the
// bonds made are final; but a bond that could still become aromatic does not count.
func (w *workspace) banned(s *search, depth int) bool {
	if depth == s.plan.units {
		return false // tested with all the rest
	}
	w.writePrefix(s)
	w.unsure = w.unsure[:0]
	for range w.structure.Bonds {
		w.unsure = append(w.unsure, false)
	}
	settled := func(u uint8) bool { // u has no bond that can be aromatic
		k := &s.plan.kinds[s.kind[u]]
		if s.deg[u] == 1 && s.free[u] == 0 && s.need[u] == 0 {
			return true // the only bond of an end
		}
		if int(u) >= depth || k.state.element != carbon {
			return false
		}
		for _, e := range s.adj[u][:s.deg[u]] {
			if e.code != 1 && e.code != inner {
				return false
			}
		}
		return true
	}
	first := len(w.structure.Bonds) - len(w.links)
	w.aromatic = w.aromatic[:0]
	for range w.structure.Bonds {
		w.aromatic = append(w.aromatic, false)
	}
	for i, l := range w.links {
		if l.aromatic {
			w.aromatic[first+i] = true
		} else if l.order < 3 && !settled(l.a) && !settled(l.b) {
			w.unsure[first+i] = true
		}
	}
	found := false
	for i := range s.plan.problem.Lacks {
		if w.occurs(&s.plan.problem.Lacks[i]) {
			found = true
			break
		}
	}
	w.unsure = w.unsure[:0]
	return found
}

// markAromatic asks package molecule for the aromatic bonds of structure.
func (w *workspace) markAromatic() {
	st := &w.structure
	w.aromatic = w.aromatic[:0]
	for range st.Bonds {
		w.aromatic = append(w.aromatic, false)
	}
	if len(st.Bonds) < len(st.Atoms) {
		return // no ring
	}
	if m, err := st.Materialise(); err == nil {
		st.built = m
		for i, b := range st.Bonds {
			w.aromatic[i] = m.Bond(m.BondBetween(int(b.A), int(b.B))).Aromatic
		}
	}
}

// occurs reports whether piece p is part of the structure: elements, charges and hydrogens as
// stated; an aromatic bond matches aromatic bonds only, any other bond those that are not.
func (w *workspace) occurs(p *Piece) bool {
	for a := range w.structure.Atoms {
		if w.fits(p, 0, uint8(a)) && w.place(p, 0, uint8(a)) {
			return true
		}
	}
	return false
}

func (w *workspace) fits(p *Piece, x int, a uint8) bool {
	want, have := &p.Atoms[x], &w.structure.Atoms[a]
	return want.Element == have.Element && want.Charge == have.Charge &&
		(want.Hydrogens == AnyHydrogens || uint8(want.Hydrogens) == have.Hydrogens)
}

// place puts atom x of the piece on atom a, and the following atoms of p wherever they fit; the
// atoms of compiled pieces are sorted so that each is bonded to an earlier one.
func (w *workspace) place(p *Piece, x int, a uint8) bool {
	w.at[x], w.used[a] = a, true
	ok := w.bonded(p, x)
	if ok && x+1 < len(p.Atoms) {
		ok = false
		for next := range w.structure.Atoms {
			if !w.used[next] && w.fits(p, x+1, uint8(next)) && w.place(p, x+1, uint8(next)) {
				ok = true
				break
			}
		}
	}
	w.used[a] = false
	return ok
}

// bonded tests the bonds of atom x to earlier atoms of the piece.
func (w *workspace) bonded(p *Piece, x int) bool {
	for _, b := range p.Bonds {
		if max(b.A, b.B) != uint8(x) {
			continue
		}
		if !w.bondIs(w.at[b.A], w.at[b.B], b.Order) {
			return false
		}
	}
	return true
}

func (w *workspace) bondIs(a, b, order uint8) bool {
	for i, x := range w.structure.Bonds {
		if x.A == a && x.B == b || x.A == b && x.B == a {
			if len(w.unsure) > 0 && w.unsure[i] {
				return false
			}
			if w.aromatic[i] && x.Order < 3 {
				return order == OrderAromatic
			}
			return x.Order == order
		}
	}
	return false
}

// sorted returns p with its atoms in an order in which each but the first is bonded to an earlier one.
func (p Piece) sorted() (Piece, error) {
	if len(p.Atoms) == 0 || len(p.Atoms) > 64 {
		return p, fmt.Errorf("piece %s: it has %d atoms, expected 1 to 64", p.Name, len(p.Atoms))
	}
	place := make([]int, len(p.Atoms))
	for i := range place {
		place[i] = -1
	}
	q := Piece{Name: p.Name, kekule: p.kekule}
	put := func(a uint8) {
		place[a] = len(q.Atoms)
		q.Atoms = append(q.Atoms, p.Atoms[a])
	}
	put(0)
	for grown := true; grown; {
		grown = false
		for _, b := range p.Bonds {
			if int(max(b.A, b.B)) >= len(p.Atoms) || b.A == b.B || b.Order < 1 || b.Order > OrderAromatic {
				return p, fmt.Errorf("piece %s: the bond %d-%d of order %d makes no sense", p.Name, b.A, b.B, b.Order)
			}
			if a, c := place[b.A] >= 0, place[b.B] >= 0; a != c {
				grown = true
				if a {
					put(b.B)
				} else {
					put(b.A)
				}
			}
		}
	}
	if len(q.Atoms) < len(p.Atoms) {
		return p, fmt.Errorf("piece %s: it falls into several parts, expected one", p.Name)
	}
	for _, b := range p.Bonds {
		q.Bonds = append(q.Bonds, PieceBond{uint8(place[b.A]), uint8(place[b.B]), b.Order})
	}
	return q, nil
}
