package name

import (
	"cmp"
	"fmt"
	"regexp"
	"slices"
	"strconv"
	"strings"

	"shelfward/molecule"
)

// OfWithStereo returns the name of m with descriptors R, S, E and Z before it. complete is false if m
// has stereo marks that the name does not express: it is then the name of the constitution. Descriptors
// are written only where all of them belong to the parent and rule 1a of the sequence rules decides, and
// only if the name reads back as m, marks included.
func OfWithStereo(m *molecule.Molecule) (name string, complete bool) {
	flat := Of(m)
	if flat == "" || !m.HasStereo() {
		return flat, true
	}
	words := strings.Fields(flat)
	if len(words) > 1 && !strings.HasSuffix(flat, " acid") {
		return flat, false
	}
	q, r, err := readParent(flat)
	if err != nil {
		return flat, false
	}
	marks := descriptors(m, q, r)
	if marks == nil {
		return flat, false
	}
	text := "(" + strings.Join(marks, ",") + ")-" + flat
	if back, err := Read(text); err != nil || back.Key() != m.Key() {
		return flat, false
	}
	return text, true
}

// readParent reads a name of one unit and keeps the locants of its parent.
func readParent(text string) (*piece, *molecule.Molecule, error) {
	b := &assembly{}
	q, err := b.word(text, asMolecule, "")
	if err != nil {
		return nil, nil, err
	}
	if len(q.esters) > 0 || len(q.free) > 0 {
		return nil, nil, fmt.Errorf("%s is only a part of a name", text)
	}
	r, err := b.finish()
	return q, r, err
}

// descriptors lists the marks of m with the locants that the atoms have in r, which is m without marks
// numbered by q; nil if one of them has no locant or is not decided.
func descriptors(m *molecule.Molecule, q *piece, r *molecule.Molecule) []string {
	flat := m.WithoutStereo()
	if flat.Key() != r.Key() {
		return nil
	}
	there := make([]int32, r.NumAtoms()) // canonical place -> atom of r
	for a, k := range r.Ranks() {
		there[k] = int32(a)
	}
	locant := func(a int32) string {
		x := int(there[flat.Ranks()[a]])
		for i, y := range q.atoms {
			if y == x && q.locants[i][0] >= '0' && q.locants[i][0] <= '9' {
				return q.locants[i]
			}
		}
		return ""
	}
	var list []string
	for _, c := range m.Centers() {
		l, mark := locant(c.Atom), centerMark(m, c)
		if l == "" || mark == "" {
			return nil
		}
		list = append(list, l+mark)
	}
	for _, d := range m.DoubleBonds() {
		b := m.Bond(int(d.Bond))
		x, y, mark := locant(b.A), locant(b.B), bondMark(m, d)
		if x == "" || y == "" || mark == "" {
			return nil
		}
		if locantNumber(y) < locantNumber(x) {
			x = y
		}
		list = append(list, x+mark)
	}
	slices.SortStableFunc(list, func(x, y string) int { return cmp.Compare(locantNumber(x), locantNumber(y)) })
	return list
}

func locantNumber(l string) int {
	i := 0
	for i < len(l) && l[i] >= '0' && l[i] <= '9' {
		i++
	}
	n, _ := strconv.Atoi(l[:i])
	return n
}

// centerMark is "R" or "S"; empty if the ligands are not told apart.
func centerMark(m *molecule.Molecule, c molecule.Center) string {
	order, ok := ranked(m, c.Atom, -1)
	if !ok || len(order) != 4 {
		return ""
	}
	// Seen from the last ligand R runs counter-clockwise.
	if clockwiseFrom(c, order) {
		return "S"
	}
	return "R"
}

// clockwiseFrom says whether, seen from the last ligand of order, the first three run clockwise.
func clockwiseFrom(c molecule.Center, order []int32) bool {
	want := []int32{order[3], order[0], order[1], order[2]}
	swaps := 0
	have := c.Ligands
	for i, x := range want {
		j := slices.Index(have[:], x)
		if j != i {
			have[i], have[j] = have[j], have[i]
			swaps++
		}
	}
	return c.Clockwise == (swaps%2 == 0)
}

// bondMark is "E" or "Z".
func bondMark(m *molecule.Molecule, d molecule.DoubleBond) string {
	b := m.Bond(int(d.Bond))
	x, ok1 := ranked(m, b.A, b.B)
	y, ok2 := ranked(m, b.B, b.A)
	if !ok1 || !ok2 || len(x) == 0 || len(y) == 0 {
		return ""
	}
	together := d.Together
	if x[0] != d.A {
		together = !together
	}
	if y[0] != d.B {
		together = !together
	}
	if x[0] < 0 || y[0] < 0 {
		return ""
	}
	if together {
		return "Z"
	}
	return "E"
}

// marked splits "(2E,4R)-" from the beginning of a name whose capitals are still there.
var marked = regexp.MustCompile(`^\(((?:\d+[a-z]?)?[RSEZ](?:,(?:\d+[a-z]?)?[RSEZ])*)\)-(.+)$`)

// readMarked reads a name with descriptors before it.
func readMarked(marks []string, rest string) (*molecule.Molecule, error) {
	q, m, err := readParent(rest)
	if err != nil {
		return nil, err
	}
	b := m.Builder()
	for _, mark := range marks {
		kind, locant := mark[len(mark)-1], mark[:len(mark)-1]
		switch kind {
		case 'R', 'S':
			err = addCenter(b, m, q, locant, kind == 'R')
		default:
			err = addBond(b, m, q, locant, kind == 'Z')
		}
		if err != nil {
			return nil, err
		}
	}
	r, err := b.Build()
	if err != nil {
		return nil, err
	}
	if len(r.Centers())+len(r.DoubleBonds()) != len(marks) {
		return nil, fmt.Errorf("a descriptor stands at a place without stereo")
	}
	return r, nil
}

// addCenter puts R or S on the atom with the locant, or on the only stereocentre.
func addCenter(b *molecule.Builder, m *molecule.Molecule, q *piece, locant string, right bool) error {
	found := -1
	var order []int32
	for a := range m.NumAtoms() {
		x := m.Atom(a)
		if x.Element != 6 || m.Degree(a)+int(x.Hydrogens) != 4 || x.Hydrogens > 1 {
			continue
		}
		if locant != "" {
			if y, ok := q.find(locant); !ok || y != a {
				continue
			}
		}
		if o, ok := ranked(m, int32(a), -1); ok && len(o) == 4 {
			if found >= 0 {
				return fmt.Errorf("a descriptor needs a locant")
			}
			found, order = a, o
		}
	}
	if found < 0 {
		return fmt.Errorf("there is no stereocentre for %s%s, or its ligands are not told apart", locant, map[bool]string{true: "R", false: "S"}[right])
	}
	b.Centers = append(b.Centers, molecule.Center{Atom: int32(found), Ligands: [4]int32{order[3], order[0], order[1], order[2]}, Clockwise: !right})
	return nil
}

// addBond puts E or Z on the double bond at the locant, or on the only one that can bear it.
func addBond(b *molecule.Builder, m *molecule.Molecule, q *piece, locant string, together bool) error {
	found := -1
	var x, y []int32
	for k := range m.NumBonds() {
		bond := m.Bond(k)
		if bond.Order != 2 || bond.Aromatic {
			continue
		}
		if locant != "" {
			a, ok := q.find(locant)
			if !ok || int(bond.A) != a && int(bond.B) != a {
				continue
			}
		}
		p, ok1 := ranked(m, bond.A, bond.B)
		r, ok2 := ranked(m, bond.B, bond.A)
		if !ok1 || !ok2 || len(p) == 0 || len(r) == 0 || p[0] < 0 || r[0] < 0 || m.SmallestBondRing(k) > 0 && m.SmallestBondRing(k) < 8 {
			continue
		}
		if found >= 0 {
			return fmt.Errorf("a descriptor needs a locant")
		}
		found, x, y = k, p, r
	}
	if found < 0 {
		return fmt.Errorf("there is no double bond for the descriptor at %q", locant)
	}
	b.DoubleBonds = append(b.DoubleBonds, molecule.DoubleBond{Bond: int32(found), A: x[0], B: y[0], Together: together})
	return nil
}
