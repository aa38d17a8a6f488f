package reactions

import "shelfward/molecule"

// Stereo courses of concerted reactions, each said once in a transform as `classes: word` and worked out
// from the marks of the materials. Source of the rules: Woodward, Hoffmann, Angew. Chem. Int. Ed. Engl.
// 1969, 8, 781; chair of the Cope rearrangement: Doering, Roth, Tetrahedron 1962, 18, 67; endo rule: Alder,
// Stein, Angew. Chem. 1937, 50, 510 (memory).

// concerted are the words, with the number of classes that each needs.
var concerted = map[string]int{
	"exo":          7, // as endo, with group 7 away from the diene (furans: the adduct that equilibrium favours)
	"endo":         7, // diene 1-2-3-4, dienophile 5-6 (4 joins 5, 6 joins 1), group 7 on 6 under the diene
	"disrotatory":  6, // triene 1-2-3-4-5-6 closes between its ends
	"conrotatory":  6, // the same by light
	"ring-opening": 4, // cyclobutene 1-2-3-4 opens between 4 and 1, conrotatory and outward
	"chair":        6, // 1,5-diene 1-2-3-4-5-6: bond 3-4 breaks, 1-6 is made, through a chair
}

// concertedAt applies a course to one mapping; it says nothing where one of its atoms is missing.
func (e *editor) concertedAt(r relation, to []int32) {
	at := make([]int32, len(r.all))
	for i, slot := range r.all {
		if at[i] = to[slot]; at[i] < 0 {
			return
		}
	}
	e.concertedCourse(r.word, at)
}

// concertedCourse applies one of the words to pool atoms at.
func (e *editor) concertedCourse(word string, at []int32) {
	m, _, off, ok := e.original(at[0])
	if !ok {
		return
	}
	switch word {
	case "endo", "exo":
		e.cycloadd(at, word == "endo")
	case "disrotatory", "conrotatory":
		if e.within(m, at[5]) && orderBetween(m, at[0]-off, at[1]-off) == 2 {
			e.closeEnds(at, [2]int32{at[5], at[0]}, word == "disrotatory")
		}
	case "ring-opening":
		e.openRing(m, off, at)
	case "chair":
		e.chair(m, off, at)
	}
}

// within says that a builder atom was an atom of m.
func (e *editor) within(m *molecule.Molecule, a int32) bool {
	other, _, _, ok := e.original(a)
	return ok && other == m
}

func orderBetween(m *molecule.Molecule, a, b int32) uint8 {
	if i := m.BondBetween(int(a), int(b)); i >= 0 {
		return uint8(m.Bond(i).Order)
	}
	return 0
}

// outAndIn returns the ligands of the end a of the double bond a=b that point away from (out) and towards
// (in) the far side c of the diene in its s-cis shape; ok is false where the geometry is not known.
func (e *editor) outAndIn(a, b, c int32) (out, in int32, ok bool) {
	m, ia, off, okA := e.original(a)
	if !okA {
		return 0, 0, false
	}
	p, q, r, _, known := sides(m, ia, b-off)
	if !known {
		return 0, 0, false
	}
	if r != c-off {
		p, q = q, p
	}
	return shifted(q, off), shifted(p, off), true
}

func shifted(l, off int32) int32 {
	if l >= 0 {
		return l + off
	}
	return l
}

// endCenters gives the marks of the two ends of an open system a=b...y=z whose new ligands come from one
// face (together) or from both. Seen from the new ligand the order b, out, in runs counter-clockwise at the
// left end and clockwise at the right end.
func (e *editor) endCenters(a, b, c, x, y, z int32, fresh [2]int32, together bool) []molecule.Center {
	var list []molecule.Center
	if out, in, ok := e.outAndIn(a, b, c); ok {
		list = append(list, molecule.Center{Atom: a, Ligands: [4]int32{fresh[0], b, out, in}, Clockwise: false})
	}
	if out, in, ok := e.outAndIn(z, y, x); ok {
		list = append(list, molecule.Center{Atom: z, Ligands: [4]int32{fresh[1], y, out, in}, Clockwise: together})
	}
	return list
}

// closeEnds marks both ends of a triene that closes; fresh are the new ligands of its first and last atom.
func (e *editor) closeEnds(at []int32, fresh [2]int32, together bool) {
	list := e.endCenters(at[0], at[1], at[2], at[3], at[4], at[5], fresh, together)
	if len(list) == 2 {
		e.b.Centers = append(e.b.Centers, list...)
	}
}

// cycloadd marks the ring of a Diels-Alder reaction: the dienophile comes to one face of the diene with
// the group 7 below it (endo) or away from it. Fewer than two centres say nothing and stay unmarked.
func (e *editor) cycloadd(at []int32, endo bool) {
	m, i6, off, ok := e.original(at[5])
	dm, _, dieneOff, okDiene := e.original(at[0])
	if !ok || !okDiene || orderBetween(m, i6, at[4]-off) < 2 || orderBetween(dm, at[0]-dieneOff, at[1]-dieneOff) != 2 {
		return
	}
	list := e.endCenters(at[0], at[1], at[2], at[1], at[2], at[3], [2]int32{at[5], at[4]}, true)
	if orderBetween(m, i6, at[4]-off) == 2 {
		list = append(list, e.dienophileCenters(m, off, at, endo)...)
	}
	if len(list) > 1 {
		e.b.Centers = append(e.b.Centers, list...)
	}
}

// dienophileCenters gives the marks of the dienophile atoms 6 and 5: seen from the new ligand below, the
// order far end, endo, exo runs clockwise at 6 and counter-clockwise at 5; exo it runs the other way.
func (e *editor) dienophileCenters(m *molecule.Molecule, off int32, at []int32, endo bool) []molecule.Center {
	i5, i6, group := at[4]-off, at[5]-off, at[6]-off
	endo6, exo6 := group, int32(-1)
	far := spectators(m, i5, i6)
	p, q, r, s, known := sides(m, i6, i5)
	if known {
		exo6 = other([]int32{p, q}, group)
		if p != group {
			r, s = s, r
		}
	} else {
		near := spectators(m, i6, i5)
		if len(near) != 2 || len(far) != 2 || far[0] != far[1] || near[0] == near[1] {
			return nil
		}
		exo6 = other(near, group)
	}
	list := []molecule.Center{{Atom: at[5], Ligands: [4]int32{at[0], at[4], shifted(endo6, off), shifted(exo6, off)}, Clockwise: endo}}
	if known {
		list = append(list, molecule.Center{Atom: at[4], Ligands: [4]int32{at[3], at[5], shifted(r, off), shifted(s, off)}, Clockwise: !endo})
	}
	return list
}

// turns says whether, seen from the first of the ligands in order, the other three run clockwise.
func turns(c molecule.Center, order [4]int32) (clockwise, ok bool) {
	clockwise = c.Clockwise
	for k := range order {
		at := -1
		for i := k; i < 4; i++ {
			if c.Ligands[i] == order[k] {
				at = i
			}
		}
		if at < 0 {
			return false, false
		}
		if at != k {
			c.Ligands[at], c.Ligands[k] = c.Ligands[k], c.Ligands[at]
			clockwise = !clockwise
		}
	}
	return clockwise, true
}

// side is the ligand of atom a other than x and y that ranks higher, and the remaining one; heavy is false
// where a carries hydrogens only.
func (e *editor) side(m *molecule.Molecule, off, a, x, y int32) (senior, rest int32, heavy bool) {
	var l []int32
	for _, s := range spectators(m, a-off, x-off) {
		if s != y-off {
			l = append(l, s)
		}
	}
	if len(l) != 2 {
		return 0, 0, false
	}
	switch {
	case l[0] < 0 && l[1] < 0:
		return 0, 0, false
	case l[0] < 0:
		return l[1], l[0], true
	case l[1] < 0:
		return l[0], l[1], true
	}
	if s := e.seniorLigand(a, x); s == l[1]+off {
		return l[1], l[0], true
	}
	return l[0], l[1], true
}

// openRing sets both double bonds of a cyclobutene that opens: conrotatory, as many groups outward as can
// be. The groups of a trans cyclobutene both turn outward, of a cis one the first does.
func (e *editor) openRing(m *molecule.Molecule, off int32, at []int32) {
	if orderBetween(m, at[1]-off, at[2]-off) != 2 {
		return
	}
	s1, h1, heavy1 := e.side(m, off, at[0], at[1], at[3])
	s4, h4, heavy4 := e.side(m, off, at[3], at[2], at[0])
	inward := false
	if heavy1 && heavy4 {
		same, known := sameTurn(m, at[0]-off, [4]int32{s1, at[3] - off, at[1] - off, h1}, at[3]-off, [4]int32{s4, at[2] - off, at[0] - off, h4})
		if !known {
			return
		}
		inward = same
	}
	if heavy1 {
		e.markEnd(at[0], at[1], s1+off, at[2], false)
	}
	if heavy4 {
		e.markEnd(at[3], at[2], s4+off, at[1], inward)
	}
}

// sameTurn says whether the ligands of two marked centres, in the orders given, run the same way round;
// known is false where a centre has no mark or other ligands.
func sameTurn(m *molecule.Molecule, a int32, ofA [4]int32, b int32, ofB [4]int32) (same, known bool) {
	ca, okA := centerAt(m, a)
	cb, okB := centerAt(m, b)
	if !okA || !okB {
		return false, false
	}
	ta, fitsA := turns(ca, ofA)
	tb, fitsB := turns(cb, ofB)
	return ta == tb, fitsA && fitsB
}

// markEnd marks the double bond a=b: ligand l of a and ligand r of b lie together or apart.
func (e *editor) markEnd(a, b, l, r int32, together bool) {
	if i := e.bond(a, b); i >= 0 && e.b.Bonds[i].Order == 2 {
		e.markDouble(i, a, l, r, together)
	}
}

// chair sets the double bonds of a Cope rearrangement: like centres put both groups equatorial (E,E),
// unlike ones leave one of them axial (E,Z).
func (e *editor) chair(m *molecule.Molecule, off int32, at []int32) {
	if orderBetween(m, at[0]-off, at[1]-off) != 2 {
		return
	}
	s3, h3, heavy3 := e.side(m, off, at[2], at[1], at[3])
	s4, h4, heavy4 := e.side(m, off, at[3], at[4], at[2])
	axial := false
	if heavy3 && heavy4 {
		same, known := sameTurn(m, at[2]-off, [4]int32{at[3] - off, at[1] - off, s3, h3}, at[3]-off, [4]int32{at[2] - off, at[4] - off, s4, h4})
		if !known {
			return
		}
		axial = !same
	}
	if heavy3 && s3 >= 0 {
		e.markEnd(at[2], at[1], s3+off, at[0], false)
	}
	if heavy4 && s4 >= 0 {
		e.markEnd(at[3], at[4], s4+off, at[5], axial)
	}
}
