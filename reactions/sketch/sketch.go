// Package sketch reads a transform off one drawn reaction: it finds which atom becomes which, the bonds that
// change, the reacting core around them, and writes the core as a transform to be completed by a chemist.
//
// The stages stand in three files: atommap.go pairs the atoms of both sides, core.go picks what the pattern
// must keep, write.go writes the YAML; near.go tries the result on a shelf.
package sketch

import (
	"errors"
	"fmt"
	"strings"

	"shelfward/molecule"
)

// Sketch is a transform read off a drawing.
type Sketch struct {
	Reactants []*molecule.Molecule // that give carbon to a product, each in its free form
	Agents    []*molecule.Molecule // drawn on the left, giving no carbon
	Products  []*molecule.Molecule
	Left      []Part // the reacting core on the reactant side
	Right     []Part
	Changes   []string // bonds made, broken and changed, in words, by class
	Mapped    bool     // the drawing had atom numbers on both sides
	Doubts    []string

	left, right *molecule.Molecule
	to          []int32 // product atom -> reactant atom, -1 from a reagent
}

// maxHeavy bounds a drawing: a textbook reaction has fewer than a hundred atoms.
const maxHeavy = 160

// Read works out the transform of a drawn reaction. Molecules may be salts; agents may stand among the
// reactants. The error says what keeps the drawing from being a transform.
func Read(reactants, products []*molecule.Molecule) (*Sketch, error) {
	s, err := readOnce(free(reactants), products)
	if !errors.Is(err, errCarbonMissing) {
		return s, err
	}
	for _, m := range free(reactants) { // drawn once, taken twice, if then no carbon is left over
		if twice, againErr := readOnce(append(free(reactants), m), products); againErr == nil && twice.usesAllCarbon() {
			return twice, nil
		}
	}
	return nil, err
}

// errCarbonMissing says that the product has carbon that no reactant gives.
var errCarbonMissing = errors.New("draw every reactant that gives carbon (carbon dioxide, methyl iodide, DMF and the like too)")

func readOnce(all, products []*molecule.Molecule) (*Sketch, error) {
	s := &Sketch{}
	s.Products = free(products)
	n := 0
	for _, m := range append(append([]*molecule.Molecule(nil), all...), s.Products...) {
		n += m.NumAtoms()
	}
	if n > maxHeavy {
		return nil, fmt.Errorf("the drawing has %d atoms; at most %d are read as one reaction", n, maxHeavy)
	}
	s.right = molecule.Join(s.Products...)
	s.left = molecule.Join(all...)
	var err error
	if s.to, s.Mapped, err = mapAtoms(s.left, s.right); err != nil {
		return nil, err
	}
	s.dropAgents(all)
	if err := s.checkCarbon(); err != nil {
		return nil, err
	}
	return s, s.findCore()
}

// usesAllCarbon says that every carbon of the reactants comes to stand in a product.
func (s *Sketch) usesAllCarbon() bool {
	left := 0
	for _, m := range s.Reactants {
		left += carbons(m)
	}
	for p, q := range s.to {
		if q >= 0 && s.right.Atom(p).Element == carbon {
			left--
		}
	}
	return left == 0
}

// free splits a side into its molecules, each in its free form, as transforms are written.
func free(side []*molecule.Molecule) []*molecule.Molecule {
	var out []*molecule.Molecule
	for _, m := range side {
		out = append(out, m.FreeForm().Split()...)
	}
	return out
}

// dropAgents moves what gives no carbon to the agents and joins the rest anew.
func (s *Sketch) dropAgents(all []*molecule.Molecule) {
	gives := make([]bool, s.left.NumAtoms())
	for p, r := range s.to {
		if r >= 0 && s.right.Atom(p).Element == carbon {
			gives[r] = true
		}
	}
	shift := make([]int32, s.left.NumAtoms())
	old, fresh := int32(0), int32(0)
	for _, m := range all {
		keep := false
		for a := range m.NumAtoms() {
			keep = keep || gives[int(old)+a]
		}
		for a := range m.NumAtoms() {
			shift[int(old)+a] = -1
			if keep {
				shift[int(old)+a] = fresh + int32(a)
			}
		}
		old += int32(m.NumAtoms())
		if keep {
			s.Reactants = append(s.Reactants, m)
			fresh += int32(m.NumAtoms())
		} else {
			s.Agents = append(s.Agents, m)
		}
	}
	for p, r := range s.to {
		if r >= 0 {
			s.to[p] = shift[r]
		}
	}
	if len(s.Reactants) > 0 {
		s.left = molecule.Join(s.Reactants...)
	}
}

func (s *Sketch) checkCarbon() error {
	missing := 0
	for p, r := range s.to {
		if r < 0 && s.right.Atom(p).Element == carbon {
			missing++
		}
	}
	switch {
	case len(s.Reactants) == 0:
		return fmt.Errorf("no reactant gives carbon to the product")
	case missing > 0:
		return fmt.Errorf("%d carbon atoms of the product come from none of the reactants drawn: %w", missing, errCarbonMissing)
	}
	return nil
}

const carbon = molecule.Element(6)

// Main returns the product that a planner would ask for: the largest with atoms of the core.
func (s *Sketch) Main() *molecule.Molecule {
	var main *molecule.Molecule
	for _, m := range s.Products {
		if main == nil || carbons(m) > carbons(main) || carbons(m) == carbons(main) && m.NumAtoms() > main.NumAtoms() {
			main = m
		}
	}
	return main
}

func carbons(m *molecule.Molecule) int { return int(m.Formula().Count[carbon]) }

// Balance says what the reagents must bring and take so that the drawn equation closes, such as '+ O - 2 H';
// leaving groups go as drawn, each with a hydrogen. It is empty where nothing is missing.
func (s *Sketch) Balance() string {
	var count [len(molecule.Formula{}.Count)]int
	for _, m := range s.Products {
		for el, n := range m.Formula().Count {
			count[el] += int(n)
		}
	}
	for _, m := range s.Reactants {
		for el, n := range m.Formula().Count {
			count[el] -= int(n)
		}
	}
	used := make([]bool, s.left.NumAtoms())
	for _, r := range s.to {
		if r >= 0 {
			used[r] = true
		}
	}
	for a := range used {
		if used[a] {
			continue
		}
		count[s.left.Atom(a).Element]++
		count[1] += int(s.left.Atom(a).Hydrogens)
		for _, n := range s.left.Neighbors(a) {
			if used[n.Atom] {
				count[1]++
			}
		}
	}
	var sb strings.Builder
	for el, n := range count {
		switch el := molecule.Element(el); {
		case n > 0:
			fmt.Fprintf(&sb, " + %d %s", n, el.Symbol())
		case n < 0:
			fmt.Fprintf(&sb, " - %d %s", -n, el.Symbol())
		}
	}
	return strings.TrimSpace(sb.String())
}
