package reactions

import "shelfward/molecule"

// pieces builds the connected pieces that are left.
func (e *editor) pieces() ([]piece, error) {
	n := len(e.b.Atoms)
	e.label = zeroed(e.label, n)
	label := e.label
	for i := range label {
		label[i] = int32(i)
	}
	var find func(a int32) int32
	find = func(a int32) int32 {
		for label[a] != a {
			label[a] = label[label[a]]
			a = label[a]
		}
		return a
	}
	for _, b := range e.b.Bonds {
		if b.Order == 0 || e.dead[b.A] || e.dead[b.B] {
			continue
		}
		x, y := find(b.A), find(b.B)
		if x != y {
			label[max(x, y)] = min(x, y)
		}
	}
	return e.build(e.number(find, label), label)
}

// number turns the roots of the union into piece numbers, written into label; it returns their count.
func (e *editor) number(find func(int32) int32, label []int32) int {
	count := 0
	e.root = zeroed(e.root, len(label))
	piece := e.root
	for a := range label {
		if e.dead[a] {
			continue
		}
		if root := find(int32(a)); int(root) == a {
			piece[a] = int32(count)
			count++
		}
	}
	for a := range label {
		label[a] = find(int32(a))
	}
	for a := range label {
		label[a] = piece[label[a]]
	}
	return count
}

// build freezes the pieces; label gives the piece of every atom.
func (e *editor) build(count int, label []int32) ([]piece, error) {
	builders := e.emptyBuilders(count)
	out := make([]piece, count)
	e.index = zeroed(e.index, len(label))
	index := e.index
	for a := range e.b.Atoms {
		if e.dead[a] {
			continue
		}
		p := label[a]
		index[a] = int32(builders[p].AddAtom(e.b.Atoms[a]))
		from := int32(-1)
		if a < e.p.atoms {
			from = int32(a)
		}
		out[p].from = append(out[p].from, from)
	}
	e.bondIndex = zeroed(e.bondIndex, len(e.b.Bonds))
	bondIndex := e.bondIndex
	for i, b := range e.b.Bonds {
		bondIndex[i] = -1
		if b.Order == 0 || e.dead[b.A] || e.dead[b.B] {
			continue
		}
		bondIndex[i] = int32(builders[label[b.A]].AddBond(int(index[b.A]), int(index[b.B]), b.Order))
	}
	e.copyMarks(builders, label, index, bondIndex)
	for i := range out {
		m, err := builders[i].Build()
		if err != nil {
			return nil, err
		}
		out[i].m = m
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
