package molecule

import "slices"

// FreeForm returns the neutral parent of a salt: cations of the alkali and alkaline earth metals
// and plain ammonium dropped, their organic anions (and cyanide and azide) protonated, ammonium
// ions of amines deprotonated and the halide, hydrogen halide or mineral acid beside them dropped,
// equal copies left by it written once. Organometallics drawn as ions become covalent and are never
// protonated. Quaternary ammonium and the like stay charged, without chloride, bromide or iodide.
// Salts without an organic ion (sodium chloride, potassium carbonate), salts of other metals and
// of anions that take no proton (borates, hexafluorophosphate, the anions of plain amines) are left
// as they are. It returns m
// itself if nothing changes.
func (m *Molecule) FreeForm() *Molecule {
	if !m.mayBeSalt() {
		return m
	}
	b := m.Builder()
	f := &freeing{b: b}
	changed := f.cutMetalBonds()
	changed = f.joinOrganometals() || changed
	changed = f.neutralise() || changed
	if !changed {
		return m
	}
	free, err := b.Build()
	if err != nil {
		return m
	}
	if f.dropped {
		free = free.withoutCopies()
	}
	return free
}

// mayBeSalt is a quick look for charges, metals or mineral acids beside something else.
func (m *Molecule) mayBeSalt() bool {
	for a := range m.atoms {
		x := &m.atoms[a]
		if x.Charge != 0 || x.Element.IsMetal() {
			return true
		}
		if m.Degree(a) == 0 && len(m.atoms) > 1 || x.Element == 16 && m.Degree(a) == 4 {
			return true
		}
	}
	return false
}

// isSaltMetal says that e forms salts whose anion is what counts on the shelf: groups 1 and 2.
func isSaltMetal(e Element) bool {
	switch e {
	case 3, 11, 19, 37, 55, 12, 20, 38, 56:
		return true
	}
	return false
}

// freeing is the working state of FreeForm.
type freeing struct {
	b       *Builder
	dropped bool // some component was dropped
	nbs     [][]Neighbor
}

// adjacency lists neighbours as the bonds now stand.
func (f *freeing) adjacency() {
	f.nbs = make([][]Neighbor, len(f.b.Atoms))
	for i, x := range f.b.Bonds {
		f.nbs[x.A] = append(f.nbs[x.A], Neighbor{Atom: x.B, Bond: int32(i)})
		f.nbs[x.B] = append(f.nbs[x.B], Neighbor{Atom: x.A, Bond: int32(i)})
	}
}

// cyanide says that carbon a is the carbon of a cyanide: a triple bond to nitrogen.
func (f *freeing) cyanide(a int32) bool {
	if f.b.Atoms[a].Element != 6 {
		return false
	}
	for _, nb := range f.nbs[a] {
		if f.b.Bonds[nb.Bond].Order == 3 && f.b.Atoms[nb.Atom].Element == 7 && f.b.Atoms[nb.Atom].Charge == 0 {
			return true
		}
	}
	return false
}

// cutMetalBonds turns covalently drawn salts (CO[Na], [K]C#N) into ions. A metal that also holds
// carbon is an organometallic and keeps its bonds.
func (f *freeing) cutMetalBonds() bool {
	f.adjacency()
	b := f.b
	cut := make([]bool, len(b.Bonds))
	any := false
	for a := range b.Atoms {
		if !isSaltMetal(b.Atoms[a].Element) || len(f.nbs[a]) == 0 {
			continue
		}
		ionic := true
		organic := false
		for _, nb := range f.nbs[a] {
			e := b.Atoms[nb.Atom].Element
			ionic = ionic && b.Bonds[nb.Bond].Order == 1 && b.Atoms[nb.Atom].Charge == 0 && (e == 7 || e == 8 || e == 16 || e == 34 || e == 9 || e == 17 || e == 35 || e == 53 || f.cyanide(nb.Atom))
			organic = organic || len(f.nbs[nb.Atom]) > 1
		}
		if !ionic || !organic {
			continue
		}
		for _, nb := range f.nbs[a] {
			cut[nb.Bond] = true
			b.Atoms[a].Charge++
			b.Atoms[nb.Atom].Charge--
			any = true
		}
	}
	if any {
		b.RemoveBonds(cut)
	}
	return any
}

// carbanion says that a is a carbon anion that makes an organometallic: no cyanide, no carbide, not
// balanced by a neighbour, no enolate drawn with its charge on carbon.
func (f *freeing) carbanion(a int32) bool {
	x := &f.b.Atoms[a]
	if x.Element != 6 || x.Charge >= 0 || f.cyanide(a) || f.enolate(a) {
		return false
	}
	for _, nb := range f.nbs[a] {
		if f.b.Atoms[nb.Atom].Charge != 0 {
			return false
		}
	}
	return true
}

// enolate says that a is a carbon anion beside a carbonyl group.
func (f *freeing) enolate(a int32) bool {
	if x := &f.b.Atoms[a]; x.Element != 6 || x.Charge != -1 {
		return false
	}
	for _, nb := range f.nbs[a] {
		if f.b.Atoms[nb.Atom].Element != 6 || f.b.Bonds[nb.Bond].Order != 1 {
			continue
		}
		for _, c := range f.nbs[nb.Atom] {
			if o := &f.b.Atoms[c.Atom]; f.b.Bonds[c.Bond].Order == 2 && o.Element == 8 && o.Charge == 0 {
				return true
			}
		}
	}
	return false
}

// joinOrganometals bonds carbanions to metal cations, and halide ions to metals that hold carbon.
func (f *freeing) joinOrganometals() bool {
	f.adjacency()
	b := f.b
	changed := false
	var metals []int32
	for a := range b.Atoms {
		if b.Atoms[a].Element.IsMetal() && b.Atoms[a].Charge > 0 {
			metals = append(metals, int32(a))
		}
	}
	join := func(a, metal int32) {
		b.AddBond(int(a), int(metal), 1)
		b.Atoms[a].Charge++
		b.Atoms[metal].Charge--
		changed = true
	}
	holdsCarbon := func(metal int32) bool {
		for _, x := range b.Bonds {
			if x.A == metal && b.Atoms[x.B].Element == 6 || x.B == metal && b.Atoms[x.A].Element == 6 {
				return true
			}
		}
		return false
	}
	for a := range b.Atoms {
		for b.Atoms[a].Charge < 0 && f.carbanion(int32(a)) {
			at := slices.IndexFunc(metals, func(k int32) bool { return b.Atoms[k].Charge > 0 })
			if at < 0 {
				return changed
			}
			join(int32(a), metals[at])
			break // one bond between two atoms
		}
	}
	for _, metal := range metals {
		for a := range b.Atoms {
			if b.Atoms[metal].Charge > 0 && b.Atoms[a].Element.IsHalogen() && b.Atoms[a].Charge == -1 && len(f.nbs[a]) == 0 && holdsCarbon(metal) {
				join(int32(a), metal)
			}
		}
	}
	return changed
}

// neutralise drops counter-ions and moves protons.
func (f *freeing) neutralise() bool {
	f.adjacency()
	parts := f.parts()
	organicIon, organicBase, stubborn, permanent := false, false, false, 0
	for _, p := range parts {
		stubborn = stubborn || p.stubborn || p.charge > 0 && !p.metal && !p.carbon || p.charge < 0 && !p.takes && !p.carbon && !p.acid
		if p.carbon && !p.metal {
			organicIon = organicIon || p.charge != 0
			organicBase = organicBase || f.hasAmine(p)
			permanent += max(0, p.charge-f.acidicAmmonium(p))
		}
		if p.takes {
			organicIon = true
		}
	}
	changed := false
	drop := make([]bool, len(f.b.Atoms))
	metals := 0
	for _, p := range parts {
		if p.metal {
			metals++
		}
	}
	for _, p := range parts {
		switch {
		case (p.metal || p.halide && p.charge < 0 && metals > 0) && organicIon && !stubborn,
			p.acid && len(parts) > 1 && (organicBase || p.halide && p.charge < 0 && f.hasOrganicCation(parts)) && metals == 0:
			for _, a := range p.atoms {
				drop[a] = true
			}
			changed, f.dropped = true, true
		case p.carbon || p.takes:
			protonate := !stubborn && (permanent == 0 || metals > 0)
			changed = f.balance(p, protonate) || changed
		}
	}
	if f.dropped {
		f.b.RemoveAtoms(drop)
	}
	return changed
}

func (f *freeing) hasOrganicCation(parts []part) bool {
	for _, p := range parts {
		if p.carbon && p.charge > 0 {
			return true
		}
	}
	return false
}

// balance deprotonates ammonium ions of p and protonates its anions until p is neutral or only
// permanent charges are left.
func (f *freeing) balance(p part, protonate bool) bool {
	b := f.b
	changed := false
	net := p.charge
	for _, a := range p.atoms {
		if f.ammonium(a) {
			b.Atoms[a].Charge, b.Atoms[a].Hydrogens = 0, b.Atoms[a].Hydrogens-1
			net--
			changed = true
		}
	}
	if !protonate {
		return changed
	}
	for pass := 0; pass < 2; pass++ { // anions drawn apart from their cation first
		for _, a := range p.atoms {
			for net < 0 && f.protonSite(a) && (pass == 1 || !f.balanced(a)) && b.Atoms[a].Charge < 0 {
				b.Atoms[a].Charge++
				b.Atoms[a].Hydrogens++
				net++
				changed = true
			}
		}
	}
	return changed
}

// withoutCopies writes equal components once.
func (m *Molecule) withoutCopies() *Molecule {
	parts := m.Split()
	if len(parts) == 1 {
		return m
	}
	var kept []*Molecule
	for _, p := range parts {
		if !slices.ContainsFunc(kept, func(q *Molecule) bool { return q.Key() == p.Key() }) {
			kept = append(kept, p)
		}
	}
	if len(kept) == len(parts) {
		return m
	}
	return Join(kept...)
}
