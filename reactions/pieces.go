package reactions

import "shelfward/molecule"

// pieces builds the connected pieces that are left.
func (e *editor) pieces(w *workspace) ([]piece, error) {
	e.label = sized(e.label, len(e.b.Atoms))
	label := e.label // union-find: an atom of the same piece, the lowest at the root
	for i := range label {
		label[i] = int32(i)
	}
	for i := range e.b.Bonds {
		b := &e.b.Bonds[i]
		if b.Order == 0 || e.dead[b.A] || e.dead[b.B] {
			continue
		}
		x, y := rootOf(label, b.A), rootOf(label, b.B)
		if x != y {
			label[max(x, y)] = min(x, y)
		}
	}
	return e.build(w, e.number(label))
}

// rootOf follows label to the root of a and shortens the way.
func rootOf(label []int32, a int32) int32 {
	for label[a] != a {
		label[a] = label[label[a]]
		a = label[a]
	}
	return a
}

// number turns the roots into piece numbers, written into label, and counts the atoms of each piece.
func (e *editor) number(label []int32) (sizes []int32) {
	e.sizes = e.sizes[:0]
	for a := range label { // a root comes before its atoms
		switch root := label[a]; {
		case e.dead[a]:
			label[a] = -1
		case int(root) == a:
			label[a] = int32(len(e.sizes))
			e.sizes = append(e.sizes, 1)
		default:
			label[a] = label[root]
			e.sizes[label[a]]++
		}
	}
	return e.sizes
}

// build freezes the pieces; label gives the piece of every atom, sizes the atoms of every piece.
func (e *editor) build(w *workspace, sizes []int32) ([]piece, error) {
	builders := e.emptyBuilders(len(sizes))
	out := w.pieces.take(len(sizes))
	for i := range out {
		out[i].from = w.atoms.take(int(sizes[i]))
	}
	e.index = sized(e.index, len(e.label))
	index := e.index
	for a := range e.b.Atoms {
		if e.dead[a] {
			continue
		}
		p := e.label[a]
		index[a] = int32(builders[p].AddAtom(e.b.Atoms[a]))
		from := int32(-1)
		if a < e.p.atoms {
			from = int32(a)
		}
		out[p].from[index[a]] = from
	}
	e.bondIndex = sized(e.bondIndex, len(e.b.Bonds))
	bondIndex := e.bondIndex
	for i := range e.b.Bonds {
		b := &e.b.Bonds[i]
		bondIndex[i] = -1
		if b.Order == 0 || e.dead[b.A] || e.dead[b.B] {
			continue
		}
		bondIndex[i] = int32(builders[e.label[b.A]].AddBond(int(index[b.A]), int(index[b.B]), b.Order))
	}
	e.copyMarks(builders, e.label, index, bondIndex)
	for i := range out {
		if w.expected != nil && e.d == forward && w.expected.recognise(&builders[i], out[i].from, e.p, w) {
			out[i].made = w.expected.product
			continue
		}
		m, err := w.build(&builders[i])
		if err != nil {
			return nil, err
		}
		out[i].made = m
	}
	return out, nil
}

// emptyBuilders returns count builders without atoms, their room kept from edit to edit.
func (e *editor) emptyBuilders(count int) []molecule.Builder {
	for len(e.builders) < count {
		e.builders = append(e.builders, molecule.Builder{})
	}
	for i := range e.builders[:count] {
		b := &e.builders[i]
		b.Atoms, b.Bonds, b.Centers, b.DoubleBonds = b.Atoms[:0], b.Bonds[:0], b.Centers[:0], b.DoubleBonds[:0]
	}
	return e.builders[:count]
}

func (e *editor) copyMarks(builders []molecule.Builder, label, index, bondIndex []int32) {
	for _, c := range e.b.Centers {
		if e.dead[c.Atom] {
			continue
		}
		bld := &builders[label[c.Atom]]
		for k, l := range c.Ligands {
			if l >= 0 {
				c.Ligands[k] = index[l]
			}
		}
		c.Atom = index[c.Atom]
		bld.Centers = append(bld.Centers, c)
	}
	for _, db := range e.b.DoubleBonds {
		if bondIndex[db.Bond] < 0 || e.dead[db.A] || e.dead[db.B] {
			continue
		}
		bld := &builders[label[db.A]]
		bld.DoubleBonds = append(bld.DoubleBonds, molecule.DoubleBond{Bond: bondIndex[db.Bond], A: index[db.A], B: index[db.B], Together: db.Together})
	}
}
