package draw

import (
	"math"

	"shelfward/molecule"
)

// Wedge is a bond drawn as a wedge (Up) or a hash; its narrow end stands at the stereocentre From.
type Wedge struct {
	Bond, From int32
	Up         bool
}

// Hydrogen is a hydrogen drawn for its configuration alone, at a centre whose other bonds had better stay plain.
type Hydrogen struct {
	Center int32
	At     Point
	Up     bool
}

// Placed is a molecule on the plane: places of its atoms in bond lengths, and the marks of its centres. Every
// centre has a wedge, a hydrogen, or neither where its bonds lie too unevenly for a mark to be read.
type Placed struct {
	Molecule  *molecule.Molecule
	At        []Point
	Wedges    []Wedge
	Hydrogens []Hydrogen // empty unless asked for
}

// Place lays m out and places its wedges. With hydrogens, centres in the middle of rings or of other centres
// show one that carries the mark; without, a bond between the rings carries it.
func Place(m *molecule.Molecule, hydrogens bool) *Placed {
	p := &Placed{Molecule: m, At: Layout(m)}
	w := newWedger(m, p.At)
	for _, c := range m.Centers() {
		if hydrogens {
			w.markWithHydrogens(c)
		} else {
			w.mark(c)
		}
	}
	p.Wedges, p.Hydrogens = w.wedges, w.hydrogens
	return p
}

// wedger places wedges: at each centre on the bond to a ligand outside rings that is no centre itself, small
// ligands first; on ring bonds and bonds between two centres last (IUPAC Recommendations 2006, ST-1.1).
type wedger struct {
	m         *molecule.Molecule
	at        []Point
	center    []bool // by atom
	used      []bool // by bond
	wedges    []Wedge
	hydrogens []Hydrogen
}

func newWedger(m *molecule.Molecule, at []Point) *wedger {
	w := &wedger{m: m, at: at, center: make([]bool, m.NumAtoms()), used: make([]bool, m.NumBonds())}
	for _, c := range m.Centers() {
		w.center[c.Atom] = true
	}
	return w
}

// mark gives c its wedge, and a hash beside it where two ligands outside the ring invite both.
func (w *wedger) mark(c molecule.Center) {
	best, second := -1, -1
	bestCost, secondCost := math.Inf(1), math.Inf(1)
	for k := range c.Ligands {
		cost := w.cost(c, k)
		if cost < bestCost {
			second, secondCost = best, bestCost
			best, bestCost = k, cost
		} else if cost < secondCost {
			second, secondCost = k, cost
		}
	}
	if best < 0 || math.IsInf(bestCost, 1) {
		return
	}
	up := w.lifted(c, best, nil) > 0
	w.put(c, best, up)
	if second >= 0 && secondCost < ringCost && c.Ligands[0] >= 0 && w.fourLigands(c) && w.m.InRing(int(c.Atom)) {
		if other := w.lifted(c, second, nil) > 0; other != up {
			w.put(c, second, other)
		}
	}
}

// markWithHydrogens is mark, but where only ring bonds or bonds to other centres are left a hydrogen is drawn to
// carry the mark.
func (w *wedger) markWithHydrogens(c molecule.Center) {
	least := math.Inf(1)
	hydrogen := -1
	for k, l := range c.Ligands {
		if l == molecule.LigandHydrogen {
			hydrogen = k
		}
		least = min(least, w.cost(c, k))
	}
	if hydrogen < 0 || least < ringCost {
		w.mark(c)
		return
	}
	var around []spoke
	for _, nb := range w.m.Neighbors(int(c.Atom)) {
		around = append(around, spoke{angleOf(w.at[nb.Atom].sub(w.at[c.Atom])), nb.Atom})
	}
	from, width := outerGap(around, w.m.Rings(), c.Atom)
	place := w.at[c.Atom].add(toward(from + width/2).scale(0.75))
	sense := w.lifted(c, hydrogen, &place)
	if math.Abs(sense) < leastSense {
		w.mark(c)
		return
	}
	w.hydrogens = append(w.hydrogens, Hydrogen{c.Atom, place, sense > 0})
}

func (w *wedger) fourLigands(c molecule.Center) bool {
	for _, l := range c.Ligands {
		if l < 0 {
			return false
		}
	}
	return true
}

func (w *wedger) put(c molecule.Center, k int, up bool) {
	b := w.m.BondBetween(int(c.Atom), int(c.Ligands[k]))
	w.used[b] = true
	w.wedges = append(w.wedges, Wedge{int32(b), c.Atom, up})
}

// ringCost is what a wedge inside a ring costs at least, far above any other place but a bond to another centre.
const ringCost = 1000

// leastSense is the least triple product that tells a sense at a glance.
const leastSense = 0.15

// cost ranks ligand k as the place for the wedge; infinite where it cannot be.
func (w *wedger) cost(c molecule.Center, k int) float64 {
	l := c.Ligands[k]
	if l < 0 {
		return math.Inf(1)
	}
	b := w.m.BondBetween(int(c.Atom), int(l))
	x := w.m.Bond(b)
	if x.Order != 1 || w.used[b] || !w.readable(c, k) {
		return math.Inf(1)
	}
	cost := 10 * float64(w.m.Degree(int(l)))
	if w.m.Atom(int(l)).Element == 6 {
		cost += 5
	}
	for _, nb := range w.m.Neighbors(int(l)) {
		if w.m.Bond(int(nb.Bond)).Order > 1 {
			cost += 2
		}
	}
	if w.m.InRing(int(l)) {
		cost += 12
	}
	if x.Ring {
		cost += ringCost
	}
	if w.center[l] {
		cost += 2 * ringCost
	}
	return cost
}

// readable says that a wedge on ligand k can be read one way only: its triple product is clear, and where all
// bonds lie in one half of the plane it is not between others.
func (w *wedger) readable(c molecule.Center, k int) bool {
	if math.Abs(w.lifted(c, k, nil)) < leastSense {
		return false
	}
	if w.fourLigands(c) {
		return true
	}
	var angles []float64
	for _, l := range c.Ligands {
		if l >= 0 {
			angles = append(angles, angleOf(w.at[l].sub(w.at[c.Atom])))
		}
	}
	from, width := widestGap(angles)
	if width < math.Pi-0.1 {
		return true
	}
	mine := angleOf(w.at[c.Ligands[k]].sub(w.at[c.Atom]))
	return math.Abs(wrap(mine-from)) < 1e-6 || math.Abs(wrap(mine-from-width)) < 1e-6
}

func wrap(a float64) float64 { return math.Remainder(a, 2*math.Pi) }

// lifted is positive if a wedge (not a hash) on ligand k shows the sense of c, negative if it shows the other
// one, near nothing if it shows none. A ligand without a place stands opposite the others; drawn gives the
// place of the hydrogen.
func (w *wedger) lifted(c molecule.Center, k int, drawn *Point) float64 {
	type solid struct{ x, y, z float64 }
	var v [4]solid
	missing := -1
	for i, l := range c.Ligands {
		var p Point
		switch {
		case l >= 0:
			p = w.at[l].sub(w.at[c.Atom]).unit()
		case drawn != nil && l == molecule.LigandHydrogen:
			p = drawn.sub(w.at[c.Atom]).unit()
		default:
			missing = i
			continue
		}
		v[i] = solid{p.X, p.Y, 0}
	}
	v[k].z = 1
	if missing >= 0 {
		for i := range v {
			if i != missing {
				v[missing] = solid{v[missing].x - v[i].x, v[missing].y - v[i].y, v[missing].z - v[i].z}
			}
		}
	}
	a, b, d := v[1], v[2], v[3]
	o := v[0]
	for _, p := range []*solid{&a, &b, &d} {
		p.x, p.y, p.z = p.x-o.x, p.y-o.y, p.z-o.z
	}
	volume := a.x*(b.y*d.z-b.z*d.y) - a.y*(b.x*d.z-b.z*d.x) + a.z*(b.x*d.y-b.y*d.x)
	if !c.Clockwise {
		volume = -volume
	}
	return volume
}
