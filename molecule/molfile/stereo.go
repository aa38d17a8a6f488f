package molfile

import (
	"math"

	"shelfward/molecule"
)

// perceiveStereo adds centres and double bond marks to the builder; Build drops those that say
// nothing. Sources: CTfile Formats for the meaning of the fields; IUPAC Recommendations 2006 on
// graphical representation of stereochemical configuration for wedges (the narrow end marks).
func (b *block) perceiveStereo() {
	flat, none := true, true
	for _, p := range b.points {
		flat = flat && p.Z == 0
		none = none && p.X == 0 && p.Y == 0 && p.Z == 0
	}
	g := geometry{b: &b.b, points: b.points, stereo: b.stereo}
	g.adjacency()
	for a := range b.b.Atoms {
		switch {
		case none && (b.parity[a] == 1 || b.parity[a] == 2):
			g.fromParity(a, b.parity[a])
		case !none && flat:
			g.fromWedges(a)
		case !none:
			g.fromSpace(a)
		}
	}
	if !none {
		g.doubleBonds()
	}
}

// geometry turns places of atoms into marks.
type geometry struct {
	b      *molecule.Builder
	points []Point
	stereo []int
	nbs    [][]molecule.Neighbor
}

func (g *geometry) adjacency() {
	g.nbs = make([][]molecule.Neighbor, len(g.b.Atoms))
	for i, x := range g.b.Bonds {
		g.nbs[x.A] = append(g.nbs[x.A], molecule.Neighbor{Atom: x.B, Bond: int32(i)})
		g.nbs[x.B] = append(g.nbs[x.B], molecule.Neighbor{Atom: x.A, Bond: int32(i)})
	}
}

// candidate says that a has three or four neighbours and no flat double bond.
func (g *geometry) candidate(a int) bool {
	n := len(g.nbs[a])
	if n != 3 && n != 4 {
		return false
	}
	for _, nb := range g.nbs[a] {
		x := g.b.Bonds[nb.Bond]
		if x.Order == molecule.OrderAromatic || x.Order > 1 && (g.b.Atoms[a].Element == 6 || g.b.Atoms[a].Element == 7) {
			return false
		}
	}
	return true
}

// missing is the ligand beside three neighbours: a hydrogen, or a lone pair where none is filled.
func (g *geometry) missing(a int) int32 {
	x := g.b.Atoms[a]
	if h := x.Hydrogens; h != molecule.AutoHydrogens {
		if h == 1 {
			return molecule.LigandHydrogen
		}
		return molecule.LigandLonePair
	}
	sum := 0
	for _, nb := range g.nbs[a] {
		sum += int(g.b.Bonds[nb.Bond].Order)
	}
	if molecule.FilledHydrogens(x, sum) == 1 {
		return molecule.LigandHydrogen
	}
	return molecule.LigandLonePair
}

// fromParity reads the parity of the atom line: seen with the highest-numbered neighbour (or the
// hydrogen) behind, the others in rising order run clockwise (1) or counterclockwise (2).
func (g *geometry) fromParity(a, parity int) {
	if !g.candidate(a) {
		return
	}
	c := molecule.Center{Atom: int32(a)}
	order := sortedAtoms(g.nbs[a])
	// Seen from the last ligand the sense is the opposite.
	c.Clockwise = parity == 2
	if len(order) == 3 {
		c.Ligands = [4]int32{g.missing(a), order[0], order[1], order[2]}
	} else {
		c.Ligands = [4]int32{order[3], order[0], order[1], order[2]}
	}
	g.b.Centers = append(g.b.Centers, c)
}

func sortedAtoms(nbs []molecule.Neighbor) []int32 {
	var list []int32
	for _, nb := range nbs {
		at := len(list)
		list = append(list, nb.Atom)
		for ; at > 0 && list[at-1] > nb.Atom; at-- {
			list[at], list[at-1] = list[at-1], nb.Atom
		}
	}
	return list
}

// vectors returns the unit vectors from a to its neighbours.
func (g *geometry) vectors(a int) []Point {
	var list []Point
	for _, nb := range g.nbs[a] {
		v := minus(g.points[nb.Atom], g.points[a])
		if l := math.Sqrt(v.X*v.X + v.Y*v.Y + v.Z*v.Z); l > 1e-9 {
			v = Point{v.X / l, v.Y / l, v.Z / l}
		}
		list = append(list, v)
	}
	return list
}

// fromWedges reads the wedges whose narrow end is a. Wedges that contradict each other (two alike side by
// side among four bonds, one up and one down among three) leave the centre open: readers differ on them.
func (g *geometry) fromWedges(a int) {
	if !g.candidate(a) {
		g.leaveOut(a)
		return
	}
	v := g.vectors(a)
	sense := 0.0
	for i, nb := range g.nbs[a] {
		if int(g.b.Bonds[nb.Bond].A) != a {
			continue
		}
		lift := 0.0
		switch g.stereo[nb.Bond] {
		case stereoEither:
			return
		case stereoWedge:
			lift = 1
		case stereoHash:
			lift = -1
		default:
			continue
		}
		v[i].Z = lift
		alone := volume(v)
		v[i].Z = 0
		if sense*alone < 0 {
			g.b.LeftOut++
			return
		}
		if math.Abs(alone) > math.Abs(sense) {
			sense = alone
		}
	}
	g.addCenter(a, sense)
}

// leaveOut counts the wedges at an atom with a double or aromatic bond: they mean an axis (an allene, a
// biaryl) or a plane.
func (g *geometry) leaveOut(a int) {
	wedged, flat := false, false
	for _, nb := range g.nbs[a] {
		x := g.b.Bonds[nb.Bond]
		wedged = wedged || int(x.A) == a && (g.stereo[nb.Bond] == stereoWedge || g.stereo[nb.Bond] == stereoHash)
		flat = flat || x.Order == molecule.OrderAromatic || x.Order == 2
	}
	if wedged && flat {
		g.b.LeftOut++
	}
}

func (g *geometry) fromSpace(a int) {
	if g.candidate(a) {
		g.addCenter(a, volume(g.vectors(a)))
	}
}

func minus(p, q Point) Point { return Point{p.X - q.X, p.Y - q.Y, p.Z - q.Z} }

func det(u, v, w Point) float64 {
	return u.X*(v.Y*w.Z-v.Z*w.Y) - u.Y*(v.X*w.Z-v.Z*w.X) + u.Z*(v.X*w.Y-v.Y*w.X)
}

// volume is the triple product of the directions of three neighbours, or of three of four seen from
// the first: its sign is the sense in which they run.
func volume(v []Point) float64 {
	if len(v) == 3 {
		return det(v[0], v[1], v[2])
	}
	return det(minus(v[1], v[0]), minus(v[2], v[0]), minus(v[3], v[0]))
}

// leastVolume is the smallest triple product of unit vectors that tells a sense: about three degrees
// from a flat arrangement, or from a straight line through a centre whose third bond is wedged.
const leastVolume = 0.05

// addCenter adds the centre a whose neighbours span the volume.
func (g *geometry) addCenter(a int, volume float64) {
	if math.Abs(volume) < leastVolume {
		return
	}
	c := molecule.Center{Atom: int32(a)}
	at := 0
	if len(g.nbs[a]) == 3 {
		c.Ligands[0] = g.missing(a)
		at = 1
	}
	for i, nb := range g.nbs[a] {
		c.Ligands[at+i] = nb.Atom
	}
	// Seen from the first ligand, the others run clockwise when their triple product is positive.
	c.Clockwise = volume > 0
	g.b.Centers = append(g.b.Centers, c)
}

// doubleBonds reads cis and trans from the coordinates, unless the bond is marked 'either' or a
// wavy bond ends at it. Small rings are dropped by Build.
func (g *geometry) doubleBonds() {
	for i, x := range g.b.Bonds {
		if x.Order != 2 || g.stereo[i] == stereoCis || g.wavy(x.A) || g.wavy(x.B) {
			continue
		}
		a, ok1 := g.beside(x.A, x.B)
		b, ok2 := g.beside(x.B, x.A)
		if !ok1 || !ok2 {
			continue
		}
		if s := sameSide(g.points[x.A], g.points[x.B], g.points[a], g.points[b]); s != 0 {
			g.b.DoubleBonds = append(g.b.DoubleBonds, molecule.DoubleBond{Bond: int32(i), A: a, B: b, Together: s > 0})
		}
	}
}

// wavy says that a wavy bond leaves the double bond end a open: one whose narrow end is a, or a
// neighbour that is no centre itself.
func (g *geometry) wavy(a int32) bool {
	for _, nb := range g.nbs[a] {
		x := g.b.Bonds[nb.Bond]
		if g.stereo[nb.Bond] == stereoEither && x.Order == 1 && (x.A == a || !g.candidate(int(nb.Atom))) {
			return true
		}
	}
	return false
}

// beside returns a ligand of the double bond end a, a hydrogen only where it is the only one.
func (g *geometry) beside(a, partner int32) (int32, bool) {
	hydrogen := int32(-1)
	for _, nb := range g.nbs[a] {
		if order := g.b.Bonds[nb.Bond].Order; nb.Atom == partner || order != 1 && order != molecule.OrderAromatic {
			continue
		}
		if x := g.b.Atoms[nb.Atom]; x.Element != 1 || x.Isotope != 0 {
			return nb.Atom, true
		}
		if hydrogen >= 0 {
			return 0, false // two hydrogens
		}
		hydrogen = nb.Atom
	}
	return hydrogen, hydrogen >= 0
}

// sameSide says whether p (at a) and q (at b) lie on one side of the line a-b: 1, -1, or 0 where
// one of them lies on it.
func sameSide(a, b, p, q Point) int {
	axis := minus(b, a)
	l2 := axis.X*axis.X + axis.Y*axis.Y + axis.Z*axis.Z
	if l2 < 1e-12 {
		return 0
	}
	off := func(v Point) Point {
		t := (v.X*axis.X + v.Y*axis.Y + v.Z*axis.Z) / l2
		w := Point{v.X - t*axis.X, v.Y - t*axis.Y, v.Z - t*axis.Z}
		if l := math.Sqrt(w.X*w.X + w.Y*w.Y + w.Z*w.Z); l > 0.05*math.Sqrt(l2) {
			return Point{w.X / l, w.Y / l, w.Z / l}
		}
		return Point{}
	}
	u, v := off(minus(p, a)), off(minus(q, b))
	dot := u.X*v.X + u.Y*v.Y + u.Z*v.Z
	switch {
	case dot > 0.3:
		return 1
	case dot < -0.3:
		return -1
	}
	return 0
}
