package name

import (
	"errors"
	"fmt"
	"slices"
	"strings"

	"shelfward/molecule"
)

// assembly is a molecule in the making; Atom.Hydrogens is the number of free valences left.
type assembly struct {
	molecule.Builder
	spare []int // free valences per atom
}

// errParts are the reasons why well-formed words do not make a molecule.
var (
	errValence = errors.New("too many groups on one atom")
	errHydro   = errors.New("hydro prefixes and indicated hydrogen need a ring named with its double bonds")
	errMetal   = errors.New("a metal with too few groups")
	errLocant  = errors.New("a locant is missing: more than one place is possible")
	errDouble  = errors.New("the double bonds of the ring cannot be placed: hydro prefixes or an indicated hydrogen are missing")
)

func (b *assembly) add(e molecule.Element) int {
	b.spare = append(b.spare, normalValence(e))
	return b.AddAtom(molecule.Atom{Element: e})
}

func normalValence(e molecule.Element) int {
	switch e {
	case 6, 14, 32, 50:
		return 4
	case 7, 15, 33, 5:
		return 3
	case 8, 16, 34, 52:
		return 2
	}
	return 1
}

func (b *assembly) join(x, y, order int) error {
	b.AddBond(x, y, uint8(order))
	b.spare[x] -= order
	b.spare[y] -= order
	if b.spare[x] < 0 || b.spare[y] < 0 {
		return errValence
	}
	return nil
}

// copyTemplate adds the atoms of t; skipFirst lets its first atom be one that exists already.
func (b *assembly) copyTemplate(t *template, first int) []int {
	at := make([]int, len(t.atoms))
	for i, x := range t.atoms {
		if i == 0 && first >= 0 {
			at[0] = first
			continue
		}
		at[i] = b.AddAtom(molecule.Atom{Element: x.Element, Charge: x.Charge})
		b.spare = append(b.spare, int(x.Hydrogens))
	}
	for _, x := range t.bonds {
		b.AddBond(at[x.A], at[x.B], x.Order)
		if first >= 0 {
			for _, y := range []int32{x.A, x.B} {
				if y == 0 {
					b.spare[first] -= int(x.Order)
				}
			}
		}
	}
	return at
}

// piece is a unit built into an assembly.
type piece struct {
	locants []string // of the atoms below
	atoms   []int
	esters  []int // atoms that ester groups hang on
	free    []int // atoms with free valences
	order   int
	ends    []int // acid carbons: no prefix without locant stands on them
	amine   bool  // the suffix is amine
	equal   bool  // one substituent needs no locant
}

func (q *piece) find(locant string) (int, bool) {
	for i, l := range q.locants {
		if l == locant {
			return q.atoms[i], true
		}
	}
	return 0, false
}

func (q *piece) label(locant string, atom int) {
	if locant != "" {
		q.locants = append(q.locants, locant)
		q.atoms = append(q.atoms, atom)
	}
}

func (q *piece) labelAll(locants []string, atoms []int) {
	for i, l := range locants {
		q.label(l, atoms[i])
	}
}

// maxBuilt bounds the atoms of a molecule that is read.
const maxBuilt = 600

// build adds u to b.
func (b *assembly) build(u *unit) (*piece, error) {
	if len(b.Atoms) > maxBuilt {
		return nil, fmt.Errorf("more than %d atoms", maxBuilt)
	}
	q := &piece{order: max(1, u.order)}
	var err error
	switch {
	case u.parent != nil:
		at := b.copyTemplate(u.parent, -1)
		q.labelAll(u.parent.locants, at)
		for _, e := range u.parent.esters {
			q.esters = append(q.esters, at[e])
		}
		if u.parent.free >= 0 {
			q.free = []int{at[u.parent.free]}
		}
		if len(u.hydro)+u.hydros+len(u.indicated)+len(u.added) > 0 {
			return nil, errHydro
		}
		if u.parent.name == "amine" && len(u.items) == 0 {
			return nil, errors.New("amine is only a part of a name")
		}
		q.equal = equalParents[u.parent.name]
		err = b.suffixes(u, q)
	case u.root != nil:
		if len(u.hydro)+u.hydros+len(u.indicated)+len(u.added) > 0 {
			return nil, errHydro
		}
		err = b.acidRoot(u, q)
	default:
		err = b.hydride(u, q)
	}
	if err != nil {
		return nil, err
	}
	if err := b.freeValences(u, q); err != nil {
		return nil, err
	}
	if err := b.substituents(u, q); err != nil {
		return nil, err
	}
	if u.parent != nil && u.parent.full {
		for _, a := range q.atoms {
			if b.spare[a] > 0 {
				return nil, fmt.Errorf("%s needs groups to join", u.parent.name)
			}
		}
	}
	return q, nil
}

// freeValences finds the atoms of yl endings and holds their valences back.
func (b *assembly) freeValences(u *unit, q *piece) error {
	for _, l := range u.free {
		a, ok := q.find(l)
		if l == "" {
			if a, ok = b.onlySpare(q, q.order); !ok {
				return errLocant
			}
		}
		if !ok {
			return fmt.Errorf("locant %s does not exist", l)
		}
		q.free = append(q.free, a)
	}
	for _, a := range q.free {
		if b.spare[a] -= q.order; b.spare[a] < 0 {
			return errValence
		}
	}
	return nil
}

// equalParents are parents of known structure whose places for a first substituent are all alike.
var equalParents = map[string]bool{"benzene": true, "phenyl": true, "hydrazine": true, "diazene": true, "urea": true, "thiourea": true, "disiloxane": true, "hydrazinyl": true, "hydrazinylidene": true}

// open lists the numbered atoms of q with n free valences, acid carbons left out.
func (b *assembly) open(q *piece, n int) []int {
	var list []int
	for _, a := range q.atoms {
		if b.spare[a] >= n && !slices.Contains(list, a) && !slices.Contains(q.ends, a) {
			list = append(list, a)
		}
	}
	// Prefixes without locant stand on the skeleton of an amine: phenylmethanamine. In amides either
	// place is meant by someone.
	skeletal := list[:0:0]
	for _, a := range list {
		if c := q.locants[slices.Index(q.atoms, a)][0]; c >= '0' && c <= '9' {
			skeletal = append(skeletal, a)
		}
	}
	if len(skeletal) == len(list) || len(skeletal) > 0 && q.amine {
		return skeletal
	}
	return list
}

// onlySpare is the atom that a group without locant stands on: the only one with n free valences, or
// any where all are alike.
func (b *assembly) onlySpare(q *piece, n int) (int, bool) {
	list := b.open(q, n)
	if len(list) == 1 {
		return list[0], true
	}
	if len(list) > 0 && q.equal && list[0] == q.atoms[0] {
		q.equal = false
		return list[0], true
	}
	return 0, false
}

// fills says whether the prefixes without locants take every free valence of the numbered atoms.
func (b *assembly) fills(u *unit, q *piece) bool {
	free, taken := 0, 0
	for _, a := range b.open(q, 1) {
		free += b.spare[a]
	}
	for _, it := range u.items {
		if len(it.locants) > 0 {
			return false
		}
		taken += it.count * max(1, it.order)
	}
	return taken == free && len(u.items) == 1
}

// substituents hangs the items of u on q.
func (b *assembly) substituents(u *unit, q *piece) error {
	if len(u.free) > 0 && u.free[0] != "" || len(u.suffixes) > 0 && u.skeleton != nil && len(u.skeleton.elements) > 2 {
		q.equal = false
	}
	fills := b.fills(u, q)
	for _, it := range u.items {
		for i := range it.count {
			r, err := b.build(it.unit)
			if err != nil {
				return err
			}
			if len(r.free) != 1 || len(r.esters) > 0 {
				return errors.New("a prefix that is no substituent")
			}
			a, ok := 0, false
			if len(it.locants) == 0 {
				if fills {
					a, ok = b.open(q, r.order)[0], true
				} else if a, ok = b.onlySpare(q, r.order); !ok {
					return errLocant
				}
			} else {
				a, ok = q.find(it.locants[i])
			}
			if !ok {
				return fmt.Errorf("locant %s does not exist", it.locants[i])
			}
			b.spare[r.free[0]] += r.order
			if err := b.join(a, r.free[0], r.order); err != nil {
				return err
			}
		}
	}
	return nil
}

// acidRoot builds acetic acid and the like: the acid of the root with its OH changed to what the ending says.
func (b *assembly) acidRoot(u *unit, q *piece) error {
	t := u.root
	drop := make([]bool, len(t.atoms))
	var ends []int
	next := func(a int, e molecule.Element, order uint8) int {
		for _, x := range t.bonds {
			if x.Order != order || x.Aromatic {
				continue
			}
			if int(x.A) == a && t.atoms[x.B].Element == e {
				return int(x.B)
			}
			if int(x.B) == a && t.atoms[x.A].Element == e {
				return int(x.A)
			}
		}
		return -1
	}
	for a, x := range t.atoms {
		if x.Element != 6 {
			continue
		}
		double, single := next(a, 8, 2), next(a, 8, 1)
		if double >= 0 && single >= 0 && t.atoms[single].Hydrogens == 1 {
			drop[double], drop[single] = true, true
			ends = append(ends, a)
		}
	}
	at := make([]int, len(t.atoms))
	for i, x := range t.atoms {
		at[i] = -1
		if drop[i] {
			continue
		}
		at[i] = b.AddAtom(molecule.Atom{Element: x.Element})
		spare := int(x.Hydrogens)
		if slices.Contains(ends, i) {
			spare += 3
		}
		b.spare = append(b.spare, spare)
	}
	for i := range t.atoms {
		if !drop[i] {
			q.label(t.locants[i], at[i])
		}
	}
	for _, x := range t.bonds {
		if !drop[x.A] && !drop[x.B] {
			b.AddBond(at[x.A], at[x.B], x.Order)
		}
	}
	for _, a := range ends {
		q.ends = append(q.ends, at[a])
		if err := b.suffixAt(u.ending, at[a], t.locants[a], q, len(ends) > 1); err != nil {
			return err
		}
	}
	return nil
}

// suffixAt puts the suffix t on atom a (for an end suffix: a is its first atom). Nitrogen locants get
// the locant of the host behind the N where the suffix occurs several times.
func (b *assembly) suffixAt(t *template, a int, host string, q *piece, several bool) error {
	if t.cation {
		b.Atoms[a].Charge = 1
		b.spare[a]++
		return nil
	}
	var at []int
	if t.end {
		at = b.copyTemplate(t, a)
		if b.spare[a] < 0 {
			return errValence
		}
	} else {
		at = b.copyTemplate(t, -1)
		if t.free >= 0 && t.free == 0 {
			// The template leaves one valence for the host and one for what the radical hangs on.
			b.spare[at[0]] = max(b.spare[at[0]], 2)
		}
		if err := b.join(a, at[0], t.order); err != nil {
			return err
		}
	}
	for i, l := range t.locants {
		if l != "" && several {
			l = "N" + host + strings.TrimPrefix(l, "N")
		}
		q.label(l, at[i])
	}
	for _, e := range t.esters {
		q.esters = append(q.esters, at[e])
	}
	if t.free >= 0 {
		q.free = append(q.free, at[t.free])
	}
	return nil
}

// suffixes puts the suffixes of u on q.
func (b *assembly) suffixes(u *unit, q *piece) error {
	for _, s := range u.suffixes {
		if s.end {
			if u.skeleton == nil || s.count > 2 || len(s.locants) > 0 {
				return fmt.Errorf("%s does not fit its parent", s.name)
			}
			ends := []int{0, len(u.skeleton.elements) - 1}[:s.count]
			if s.count == 2 && ends[1] == 0 {
				return errValence
			}
			for _, i := range ends {
				q.ends = append(q.ends, q.atoms[i])
				if err := b.suffixAt(s.template, q.atoms[i], q.locants[i], q, s.count > 1); err != nil {
					return err
				}
			}
			continue
		}
		for i := range s.count {
			a, ok, host := 0, false, ""
			if len(s.locants) == 0 {
				if len(s.locants) == 0 && len(b.open(q, s.order)) == 0 {
					return errValence
				}
				if a, ok = b.onlySpare(q, s.order); !ok {
					return errLocant
				}
				for k, x := range q.atoms {
					if x == a {
						host = q.locants[k]
						break
					}
				}
			} else {
				host = s.locants[i]
				a, ok = q.find(host)
			}
			if !ok {
				return fmt.Errorf("locant %s does not exist", host)
			}
			q.amine = q.amine || s.name == "amine"
			if err := b.suffixAt(s.template, a, host, q, s.count > 1); err != nil {
				return err
			}
		}
	}
	return nil
}

// hydride builds a parent from its skeleton.
// alike says whether the first substituent needs no locant: chains of two, rings of one kind of atom.
// multipleBonds sets the orders that ene and yne endings say.
// mancudeBonds places the double bonds of a ring with the most double bonds, less hydro and indicated hydrogen.
// saturatedPositions collects what the name says and completes what it leaves out: hydro prefixes
// without locants that saturate everything, an indicated hydrogen that everyone knows (pyrrole).
// match pairs off set whole: position -> partner.
// finish freezes b: the free valences left are hydrogens.
func (b *assembly) finish() (*molecule.Molecule, error) {
	for a := range b.Atoms {
		if b.spare[a] < 0 {
			return nil, errValence
		}
		if b.spare[a] > 0 && b.Atoms[a].Element.IsMetal() && b.Atoms[a].Element != 50 {
			return nil, errMetal
		}
		b.Atoms[a].Hydrogens = uint8(b.spare[a])
	}
	return b.Build()
}
