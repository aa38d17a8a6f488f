package molfile

import (
	"bufio"
	"fmt"
	"io"
	"math"
	"strings"

	"shelfward/molecule"
)

// maxV2000 is the most atoms or bonds that the three-column counts hold.
const maxV2000 = 999

// maxCoordinate is the largest number that fits its ten columns with a sign and four decimals.
const maxCoordinate = 9999.0

// Write writes r as one molfile, without fields: V2000, or V3000 where there are more than 999 atoms
// or bonds. Coordinates must be nil (all zero then, tetrahedral marks as parities, double bond marks
// lost) or one point per atom. In a plane, acyclic double bonds drawn against their marks are turned
// over, and wedges are placed; in space the places speak for themselves.
func Write(w io.Writer, r *Record) error {
	if m := r.Molecule; m.NumAtoms() > maxV2000 || m.NumBonds() > maxV2000 {
		return WriteV3000(w, r)
	}
	t, err := newTable(r)
	if err != nil {
		return err
	}
	out := bufio.NewWriter(w)
	t.write(out, oneLine(r.Title))
	return out.Flush()
}

// newTable places wedges and marks.
func newTable(r *Record) (*table, error) {
	m := r.Molecule
	t := &table{m: m, points: make([]Point, m.NumAtoms()), stereo: make([]int, m.NumBonds()), from: make([]int32, m.NumBonds())}
	for i := range t.from {
		t.from[i] = m.Bond(i).A
	}
	if r.Coordinates == nil {
		return t, nil
	}
	if len(r.Coordinates) != m.NumAtoms() {
		return nil, fmt.Errorf("%d points for %d atoms", len(r.Coordinates), m.NumAtoms())
	}
	for a, p := range r.Coordinates {
		if max(math.Abs(p.X), math.Abs(p.Y), math.Abs(p.Z)) >= maxCoordinate {
			return nil, fmt.Errorf("atom %d lies at %g, %g, %g; a molfile holds coordinates below %g", a+1, p.X, p.Y, p.Z, maxCoordinate)
		}
		t.solid = t.solid || p.Z != 0
	}
	copy(t.points, r.Coordinates)
	t.drawn = true
	if !t.solid {
		t.turnDoubleBonds()
	}
	t.markDoubleBonds()
	switch {
	case t.solid:
	case r.Wedges != nil:
		t.takeWedges(r.Wedges)
	default:
		t.placeWedges()
	}
	return t, nil
}

// WriteSD writes r as one record of an SD file, fields and $$$$ included.
func WriteSD(w io.Writer, r *Record) error {
	if err := Write(w, r); err != nil {
		return err
	}
	return writeFields(w, r)
}

// writeFields writes what follows the table in an SD file.
func writeFields(w io.Writer, r *Record) error {
	out := bufio.NewWriter(w)
	for _, f := range r.Fields {
		fmt.Fprintf(out, "> <%s>\n", strings.NewReplacer("<", "(", ">", ")", "\n", " ").Replace(f.Name))
		for _, line := range strings.Split(f.Value, "\n") {
			if line = strings.TrimRight(line, "\r"); line == "" || strings.HasPrefix(line, "$$$$") {
				line = " " + line // a blank line or the end mark would cut the value
			}
			fmt.Fprintln(out, line)
		}
		fmt.Fprintln(out)
	}
	fmt.Fprintln(out, "$$$$")
	return out.Flush()
}

// oneLine keeps a title to its line of at most 80 characters.
func oneLine(s string) string {
	s = strings.Map(func(r rune) rune {
		if r < ' ' {
			return ' '
		}
		return r
	}, s)
	if runes := []rune(s); len(runes) > 80 {
		s = string(runes[:80])
	}
	return s
}

// table is one connection table while it is written.
type table struct {
	m      *molecule.Molecule
	points []Point
	drawn  bool
	solid  bool    // drawn in space
	stereo []int   // per bond
	from   []int32 // bond -> atom written first
}

func (t *table) write(out *bufio.Writer, title string) {
	m := t.m
	fmt.Fprintf(out, "%s\n  shelfward%s\n\n%3d%3d  0  0%3d  0  0  0  0  0999 V2000\n", title, t.dimension(), m.NumAtoms(), m.NumBonds(), t.chiral())
	parity := t.parities()
	for a := range m.NumAtoms() {
		x, p := m.Atom(a), t.points[a]
		symbol := x.Element.Symbol()
		fmt.Fprintf(out, "%10.4f%10.4f%10.4f %-3s 0  0%3d  0  0%3d  0  0  0%3d  0  0\n", p.X, p.Y, p.Z, symbol, parity[a], t.valence(a), x.Class%1000)
	}
	for b := range m.NumBonds() {
		x := m.Bond(b)
		first := t.from[b]
		fmt.Fprintf(out, "%3d%3d%3d%3d\n", first+1, x.A+x.B-first+1, min(x.Order, 3), t.stereo[b])
	}
	t.property(out, "CHG", func(x molecule.Atom) int { return int(x.Charge) })
	t.property(out, "ISO", func(x molecule.Atom) int { return int(x.Isotope) })
	fmt.Fprintln(out, "M  END")
}

// chiral is the flag of the counts line: 1 where the marks are meant as they stand.
func (t *table) chiral() int {
	if len(t.m.Centers()) > 0 {
		return 1
	}
	return 0
}

// parities returns the parity of each atom, where no drawing tells it.
func (t *table) parities() []int {
	parity := make([]int, t.m.NumAtoms())
	if !t.drawn {
		for _, c := range t.m.Centers() {
			parity[c.Atom] = parityOf(c)
		}
	}
	return parity
}

// dimension pads the program line so that the dimension code stands in columns 21-22; the date
// before it is left blank, because equal input gives equal bytes.
func (t *table) dimension() string {
	if t.solid {
		return "         3D"
	}
	if t.drawn {
		return "         2D"
	}
	return "         0D"
}

// valence is the valence field of a: 0 where a reader fills in the same hydrogens, 15 for none.
func (t *table) valence(a int) int {
	x := t.m.Atom(a)
	sum := 0
	for _, nb := range t.m.Neighbors(a) {
		sum += int(t.m.Bond(int(nb.Bond)).Order)
	}
	fill := molecule.FilledHydrogens(x, sum)
	if x.Element.IsMetal() || x.Element == 0 || x.Element == 1 {
		fill = 0
	}
	if fill == x.Hydrogens {
		return 0
	}
	if v := sum + int(x.Hydrogens); v > 0 && v < 15 {
		return v
	}
	return 15
}

// property writes the atoms with a value other than 0, eight to a line.
func (t *table) property(out *bufio.Writer, kind string, value func(molecule.Atom) int) {
	var pairs []string
	for a := range t.m.NumAtoms() {
		if v := value(t.m.Atom(a)); v != 0 {
			pairs = append(pairs, fmt.Sprintf(" %3d %3d", a+1, v))
		}
	}
	for len(pairs) > 0 {
		n := min(8, len(pairs))
		fmt.Fprintf(out, "M  %s%3d%s\n", kind, n, strings.Join(pairs[:n], ""))
		pairs = pairs[n:]
	}
}

// parityOf is the parity of the atom line; see fromParity.
func parityOf(c molecule.Center) int {
	key := func(l int32) int32 {
		if l < 0 {
			return 1 << 30 // a hydrogen or lone pair counts as the highest number
		}
		return l
	}
	l, odd := c.Ligands, c.Clockwise
	for i := 1; i < 4; i++ {
		for j := i; j > 0 && key(l[j-1]) > key(l[j]); j-- {
			l[j-1], l[j] = l[j], l[j-1]
			odd = !odd
		}
	}
	// odd: from the lowest, the others run clockwise. The highest moved to the front (three swaps)
	// turns that round, and looking from the far side turns it again.
	if odd {
		return 1
	}
	return 2
}

// turnDoubleBonds mirrors one side of each marked double bond outside rings that is drawn the
// wrong way, about the line of the bond.
func (t *table) turnDoubleBonds() {
	m := t.m
	for _, d := range m.DoubleBonds() {
		x := m.Bond(int(d.Bond))
		a, b := t.points[x.A], t.points[x.B]
		s := sameSide(a, b, t.points[d.A], t.points[d.B])
		if s == 0 || x.Ring || (s > 0) == d.Together {
			continue
		}
		axis := minus(b, a)
		l2 := axis.X*axis.X + axis.Y*axis.Y
		for _, k := range behind(m, x.B, x.A) {
			p := minus(t.points[k], a)
			f := 2 * (p.X*axis.X + p.Y*axis.Y) / l2
			t.points[k] = Point{a.X + f*axis.X - p.X, a.Y + f*axis.Y - p.Y, t.points[k].Z}
		}
	}
}

// behind lists the atoms reached from a without passing block.
func behind(m *molecule.Molecule, a, block int32) []int32 {
	seen := make([]bool, m.NumAtoms())
	seen[a], seen[block] = true, true
	list := []int32{a}
	for i := 0; i < len(list); i++ {
		for _, nb := range m.Neighbors(int(list[i])) {
			if !seen[nb.Atom] {
				seen[nb.Atom] = true
				list = append(list, nb.Atom)
			}
		}
	}
	return list
}

// markDoubleBonds writes 'either' on double bonds that a reader would give a geometry they have not.
func (t *table) markDoubleBonds() {
	m := t.m
	marked := make([]bool, m.NumBonds())
	for _, d := range m.DoubleBonds() {
		marked[d.Bond] = true
	}
	for b := range m.NumBonds() {
		x := m.Bond(b)
		small := m.SmallestBondRing(b) > 0 && m.SmallestBondRing(b) < 8
		if x.Order == 2 && !x.Aromatic && !marked[b] && !small && t.openEnd(x.A, x.B) && t.openEnd(x.B, x.A) {
			t.stereo[b] = stereoCis
		}
	}
}

// openEnd says that a double bond end has ligands that could lie on either side.
func (t *table) openEnd(a, partner int32) bool {
	n, h := t.m.Degree(int(a)), t.m.Atom(int(a)).Hydrogens
	if n < 2 || n > 3 || n == 2 && h > 1 {
		return false
	}
	var orbits []int32
	ring := false
	for _, nb := range t.m.Neighbors(int(a)) {
		if nb.Atom != partner {
			orbits = append(orbits, t.m.FlatOrbits()[nb.Atom])
			ring = ring || t.m.Bond(int(nb.Bond)).Ring
		}
	}
	// The two sides of a ring are equal only as long as nothing across the ring tells them apart.
	return len(orbits) < 2 || orbits[0] != orbits[1] || ring
}

// takeWedges writes the wedges of a drawing.
func (t *table) takeWedges(list []Wedge) {
	for _, w := range list {
		t.from[w.Bond], t.stereo[w.Bond] = w.From, stereoHash
		if w.Up {
			t.stereo[w.Bond] = stereoWedge
		}
	}
}

// placeWedges gives each centre one wedge or hash, on a bond that is no centre's other wedge:
// end atoms first, then chain bonds, then ring bonds, bonds to other centres last.
func (t *table) placeWedges() {
	m := t.m
	center := make([]bool, m.NumAtoms())
	for _, c := range m.Centers() {
		center[c.Atom] = true
	}
	for _, c := range m.Centers() {
		best, least := int32(-1), math.MaxInt
		for _, nb := range m.Neighbors(int(c.Atom)) {
			if x := m.Bond(int(nb.Bond)); t.stereo[nb.Bond] != stereoNone || x.Order != 1 {
				continue
			}
			cost := m.Degree(int(nb.Atom))
			if center[nb.Atom] {
				cost += 100
			}
			if m.Bond(int(nb.Bond)).Ring {
				cost += 20
			}
			if !t.settles(c, nb.Bond) {
				cost += 1000
			}
			if cost < least {
				best, least = nb.Bond, cost
			}
		}
		if best >= 0 {
			t.wedge(c, best)
		}
	}
}

// settles says that a wedge on bond b gives a clear sense.
func (t *table) settles(c molecule.Center, b int32) bool {
	return t.sense(c, b, stereoWedge) != 0
}

// sense reads the drawing with one wedge at c: 1 as c is, -1 the other way, 0 unclear.
func (t *table) sense(c molecule.Center, b int32, mark int) int {
	g := geometry{b: t.m.Builder(), points: t.points, stereo: make([]int, t.m.NumBonds())}
	g.b.Centers = nil
	g.stereo[b] = mark
	x := &g.b.Bonds[b]
	if x.A != c.Atom {
		x.A, x.B = x.B, x.A
	}
	g.adjacency()
	g.fromWedges(int(c.Atom))
	if len(g.b.Centers) == 0 {
		return 0
	}
	if sameSense(c, g.b.Centers[0]) {
		return 1
	}
	return -1
}

// sameSense compares two marks of one atom with the same ligands.
func sameSense(c, d molecule.Center) bool {
	l, clockwise := d.Ligands, d.Clockwise
	for i := range l {
		for j := i + 1; j < 4; j++ {
			if l[j] == c.Ligands[i] || l[j] < 0 && c.Ligands[i] < 0 {
				l[i], l[j] = l[j], l[i]
				clockwise = !clockwise
				break
			}
		}
	}
	return clockwise == c.Clockwise
}

func (t *table) wedge(c molecule.Center, b int32) {
	t.from[b] = c.Atom
	t.stereo[b] = stereoWedge
	if t.sense(c, b, stereoWedge) < 0 {
		t.stereo[b] = stereoHash
	}
}
