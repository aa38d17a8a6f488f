package molecule

import (
	"fmt"

	"shelfward/molecule/matching"
)

// normalValences lists the valences that hydrogens are filled up to, for neutral atoms; charged
// atoms take the list of the element with as many electrons (common practice; OpenSMILES
// specification 1.0, section 3.1.5, for the organic subset).
var normalValences = map[Element][]uint8{
	1: {1}, 5: {3}, 6: {4}, 7: {3, 5}, 8: {2}, 9: {1},
	14: {4}, 15: {3, 5}, 16: {2, 4, 6}, 17: {1, 3, 5, 7},
	32: {4}, 33: {3, 5}, 34: {2, 4, 6}, 35: {1, 3, 5, 7},
	50: {2, 4}, 51: {3, 5}, 52: {2, 4, 6}, 53: {1, 3, 5, 7},
}

// chargedValences are the ions; what is missing here is not limited.
var chargedValences = map[[2]int][]uint8{
	{1, 1}: {0}, {1, -1}: {0},
	{5, -1}: {4}, {5, 1}: {2},
	{6, 1}: {3}, {6, -1}: {3}, {6, 2}: {2}, {6, -2}: {2},
	{7, 1}: {4}, {7, -1}: {2}, {7, -2}: {1}, {7, 2}: {3}, {7, -3}: {0},
	{8, 1}: {3}, {8, -1}: {1}, {8, -2}: {0}, {8, 2}: {4},
	{9, 1}: {2}, {9, -1}: {0},
	{14, 1}: {3}, {14, -1}: {3, 5}, {14, -2}: {6},
	{15, 1}: {4}, {15, -1}: {2, 4, 6},
	{16, 1}: {3, 5}, {16, -1}: {1, 3, 5}, {16, 2}: {4}, {16, -2}: {0},
	{17, -1}: {0, 2, 4, 6}, {17, 1}: {2, 4, 6},
	{33, 1}: {4}, {33, -1}: {2, 4, 6},
	{34, 1}: {3, 5}, {34, -1}: {1, 3, 5}, {34, -2}: {0}, {34, 2}: {4},
	{35, -1}: {0, 2, 4, 6}, {35, 1}: {2, 4, 6},
	{51, 1}: {4}, {51, -1}: {2, 4, 6},
	{52, 1}: {3, 5}, {52, -1}: {1, 3, 5}, {52, -2}: {0},
	{53, -1}: {0, 2, 4, 6}, {53, 1}: {2, 4, 6},
}

// valenceTable holds the lists above by element and charge -3..3, for speed.
var valenceTable = func() (t [119][7][]uint8) {
	for e, v := range normalValences {
		t[e][3] = v
	}
	for k, v := range chargedValences {
		t[k[0]][k[1]+3] = v
	}
	return t
}()

// highest lists neutral atoms that bear more bonds than hydrogens are filled up to (SiF6, PF6 and
// the like drawn without charges; common practice of structure files).
var highest = map[Element]int16{14: 6, 15: 7, 33: 7, 51: 7}

// valences returns the normal valences of a, lowest first; nil means no limit is known.
func valences(a *Atom) []uint8 {
	if a.Charge < -3 || a.Charge > 3 || a.Element > 118 {
		return nil
	}
	return valenceTable[a.Element][a.Charge+3]
}

// assignBonds fills hydrogens, gives aromatic bonds their Kekulé orders and checks valences.
func (p *perceiver) assignBonds() error {
	m := p.m
	n := len(m.atoms)
	if cap(p.sum) < n {
		p.sum = make([]int16, n+n/2)
	}
	p.sum = p.sum[:n]
	clear(p.sum)
	aromatic := false
	for i := range m.bonds {
		x := &m.bonds[i]
		order := int16(x.Order)
		if x.Order == OrderAromatic {
			if x.Ring {
				aromatic = true
			} else {
				x.Order = 1
			}
			order = 1
		}
		x.Aromatic = false
		p.sum[x.A] += order
		p.sum[x.B] += order
	}
	if aromatic {
		if err := p.kekulise(); err != nil {
			return err
		}
	}
	for a := range m.atoms {
		x := &m.atoms[a]
		x.Aromatic = false
		if x.Hydrogens == AutoHydrogens {
			x.Hydrogens = fillUp(x, p.sum[a])
		}
		if err := p.checkValence(a); err != nil {
			return err
		}
	}
	return nil
}

// fillUp returns the hydrogens that bring x, whose bond orders sum to sum, to its lowest normal
// valence. Pentavalent nitrogen is never completed with hydrogen.
func fillUp(x *Atom, sum int16) uint8 {
	for _, v := range valences(x) {
		if int16(v) >= sum {
			if v == 5 && x.Element == 7 {
				return 0
			}
			return v - uint8(sum)
		}
	}
	return 0
}

func (p *perceiver) checkValence(a int) error {
	x := &p.m.atoms[a]
	p.m.redraw = p.m.redraw || x.Charge > 0 && x.Element.IsHalogen()
	list := valences(x)
	if list == nil {
		return nil
	}
	total := p.sum[a] + int16(x.Hydrogens)
	most := int16(list[len(list)-1])
	if x.Element == 7 && x.Charge == 0 && total > 3 {
		// Pentavalent nitrogen is a way to draw nitro groups, N-oxides and azides; it has multiple bonds.
		if total == 5 && p.sum[a] > int16(p.m.Degree(a)) {
			p.m.redraw = true
			return nil
		}
		most = 3
	}
	if total > 1 && x.Charge == 0 && x.Element.IsHalogen() && !p.oxidised(a) {
		most = 1
	}
	if total <= most || x.Charge == 0 && total <= highest[x.Element] {
		return nil
	}
	text := fmt.Sprintf("%s has %d bonds, hydrogens counted; at most %d are possible", describe(x), total, most)
	if x.Element == 7 && x.Charge == 0 && total == 4 {
		text += " without a charge: [N+]"
	}
	return &Error{a, -1, text}
}

// oxidised says that a halogen holds an atom more electronegative than carbon and no multiple bond
// to carbon: only then does it bear more than one bond.
func (p *perceiver) oxidised(a int) bool {
	found := p.m.atoms[a].Element == 53 // diaryl iodine compounds are drawn with two bonds or three
	for _, nb := range p.m.Neighbors(a) {
		switch p.m.atoms[nb.Atom].Element {
		case 7, 8, 9, 16, 17, 35, 53:
			found = true
		case 6:
			if p.m.bonds[nb.Bond].Order > 1 {
				return false
			}
		}
	}
	return found
}

// describe names an atom with its charge in words.
func describe(x *Atom) string {
	name := x.Element.Symbol()
	switch {
	case x.Charge == 1:
		name += "+"
	case x.Charge == -1:
		name += "-"
	case x.Charge != 0:
		name += fmt.Sprintf("%+d", x.Charge)
	}
	return name
}

// kekulise turns aromatic ring bonds into single and double ones: a matching that covers every
// atom which needs a double bond.
func (p *perceiver) kekulise() error {
	m := p.m
	p.usable = sizedBools(p.usable, len(m.bonds))
	if cap(p.role) < len(m.atoms) {
		p.role = make([]matching.Role, 2*len(m.atoms))
	}
	p.role = p.role[:len(m.atoms)]
	clear(p.role)
	for i := range m.bonds {
		x := &m.bonds[i]
		p.usable[i] = x.Order == OrderAromatic
		if p.usable[i] {
			p.role[x.A], p.role[x.B] = matching.Required, matching.Required
		}
	}
	for a := range p.role {
		if p.role[a] == matching.Required {
			p.role[a] = p.piRole(a)
		}
	}
	unknown := p.leaveOut() // '*' takes a double bond only where nothing else will do
	mate, alone := p.matcher.Match(m.first, m.neighbors, p.usable, p.role)
	if alone != nil && unknown {
		for a := range p.role {
			if m.atoms[a].Element == 0 {
				p.role[a] = matching.Optional
			}
		}
		mate, alone = p.matcher.Match(m.first, m.neighbors, p.usable, p.role)
	}
	if alone != nil {
		return p.kekuleError(alone)
	}
	for i := range m.bonds {
		x := &m.bonds[i]
		if !p.usable[i] {
			continue
		}
		x.Order = 1
		if mate[x.A] == x.B {
			x.Order = 2
			p.sum[x.A]++
			p.sum[x.B]++
		}
	}
	return nil
}

// leaveOut makes the optional atoms absent and reports whether there are any.
func (p *perceiver) leaveOut() bool {
	any := false
	for a, r := range p.role {
		if r == matching.Optional {
			p.role[a] = matching.Absent
			any = true
		}
	}
	return any
}

// piRole says whether aromatic atom a needs a double bond inside the ring.
func (p *perceiver) piRole(a int) matching.Role {
	x := &p.m.atoms[a]
	used := p.sum[a]
	if x.Element == 0 {
		return matching.Optional
	}
	list := valences(x)
	if list == nil {
		return matching.Absent
	}
	if x.Hydrogens != AutoHydrogens {
		used += int16(x.Hydrogens)
		for _, v := range list {
			if int16(v) == used {
				return matching.Absent
			}
			if int16(v) == used+1 {
				return matching.Required
			}
		}
		return matching.Absent
	}
	// Written without brackets: hydrogens are filled after the double bond, so carbon with three
	// neighbours or fewer needs one, boron and nitrogen only with two.
	if used < int16(list[0]) {
		return matching.Required
	}
	for _, v := range list {
		if int16(v) == used+1 {
			return matching.Required
		}
		if int16(v) >= used {
			break
		}
	}
	return matching.Absent
}

// kekuleError explains which atom is left without a double bond.
func (p *perceiver) kekuleError(alone []int32) error {
	m := p.m
	at := int(alone[0])
	hint := ""
	for _, a := range alone {
		// A nitrogen with two ring bonds in the same ring system most often lacks its hydrogen.
		if n := p.bareNitrogen(int(a)); n >= 0 {
			at = n
			hint = "; a nitrogen that carries hydrogen is written [nH]"
			break
		}
	}
	return &Error{at, -1, fmt.Sprintf("no arrangement of double bonds fits the aromatic ring at %s%s", m.atoms[at].Element.Symbol(), hint)}
}

// bareNitrogen returns an aromatic two-bonded nitrogen without hydrogen joined to a over aromatic
// bonds, or -1.
func (p *perceiver) bareNitrogen(a int) int {
	m := p.m
	seen := make([]bool, len(m.atoms))
	queue := []int32{int32(a)}
	seen[a] = true
	for i := 0; i < len(queue); i++ {
		at := int(queue[i])
		x := m.atoms[at]
		if x.Element == 7 && x.Charge == 0 && m.Degree(at) == 2 && (x.Hydrogens == 0 || x.Hydrogens == AutoHydrogens) {
			return at
		}
		for _, nb := range m.Neighbors(at) {
			if p.usable[nb.Bond] && !seen[nb.Atom] {
				seen[nb.Atom] = true
				queue = append(queue, nb.Atom)
			}
		}
	}
	return -1
}

// FilledHydrogens is the number of hydrogens that AutoHydrogens stands for on an atom like x whose
// bonds (hydrogens left out, no aromatic ones) sum to bondSum.
func FilledHydrogens(x Atom, bondSum int) uint8 { return fillUp(&x, int16(min(bondSum, 1000))) }
