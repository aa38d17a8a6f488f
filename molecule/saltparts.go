package molecule

// part is one component while it is judged.
type part struct {
	atoms    []int32
	charge   int
	carbon   bool // holds carbon, or is hydroxylamine, hydrazine and the like
	metal    bool // a salt metal cation or ammonium, alone
	halide   bool // Cl-, Br-, I- or the hydrogen halide
	acid     bool // a neutral mineral acid or hydrogen halide, or one of their anions
	takes    bool // an anion that is protonated
	stubborn bool // an anion that takes no proton
}

// parts lists the components with what they are.
func (f *freeing) parts() []part {
	b := f.b
	seen := make([]bool, len(b.Atoms))
	var list []part
	for a := range b.Atoms {
		if seen[a] {
			continue
		}
		p := part{atoms: []int32{int32(a)}}
		seen[a] = true
		for i := 0; i < len(p.atoms); i++ {
			for _, nb := range f.nbs[p.atoms[i]] {
				if !seen[nb.Atom] {
					seen[nb.Atom] = true
					p.atoms = append(p.atoms, nb.Atom)
				}
			}
		}
		f.classify(&p)
		list = append(list, p)
	}
	return list
}

func (f *freeing) classify(p *part) {
	b := f.b
	oxygens := 0
	for _, a := range p.atoms {
		x := &b.Atoms[a]
		p.charge += int(x.Charge)
		p.carbon = p.carbon || x.Element == 6
		if x.Element == 8 {
			oxygens++
		}
	}
	x := &b.Atoms[p.atoms[0]]
	if len(p.atoms) == 1 {
		p.metal = isSaltMetal(x.Element) && x.Charge > 0 || x.Element == 7 && x.Charge == 1 && x.Hydrogens == 4
		p.halide = (x.Element == 17 || x.Element == 35 || x.Element == 53) && (x.Charge == -1 || x.Charge == 0 && x.Hydrogens == 1)
		p.acid = p.halide
		p.carbon = p.carbon && !(x.Element == 6 && x.Hydrogens == 0)
	}
	p.carbon = p.carbon || f.nitrogenBase(p)
	if len(p.atoms) == 4 && oxygens == 3 && p.carbon && p.charge < 0 {
		p.carbon = false // carbonate and hydrogen carbonate count as inorganic
	}
	if !p.carbon && len(p.atoms) > 1 && f.mineralAcid(p) {
		p.acid = true
	}
	if p.charge < 0 {
		p.takes = p.carbon || f.azide(p)
		if p.takes {
			for _, a := range p.atoms {
				if x := &b.Atoms[a]; x.Charge < 0 && !f.protonSite(a) && !f.balanced(a) {
					p.takes, p.stubborn = false, true
				}
			}
		}
	}
}

// nitrogenBase knows hydroxylamine, hydrazine and their ammonium ions: two atoms or more, all
// singly bonded nitrogen or oxygen.
func (f *freeing) nitrogenBase(p *part) bool {
	nitrogen := false
	for _, a := range p.atoms {
		x := &f.b.Atoms[a]
		nitrogen = nitrogen || x.Element == 7
		if x.Element != 7 && x.Element != 8 || x.Charge < 0 {
			return false
		}
		for _, nb := range f.nbs[a] {
			if f.b.Bonds[nb.Bond].Order != 1 {
				return false
			}
		}
	}
	return nitrogen && len(p.atoms) > 1
}

// mineralAcid knows sulfuric, nitric, phosphoric and perchloric acid and their anions by formula:
// one central atom, the rest oxygen.
func (f *freeing) mineralAcid(p *part) bool {
	center := int32(-1)
	for _, a := range p.atoms {
		if f.b.Atoms[a].Element == 8 {
			continue
		}
		if center >= 0 {
			return false
		}
		center = a
	}
	if center < 0 {
		return false
	}
	switch e := f.b.Atoms[center].Element; len(p.atoms) {
	case 5:
		return e == 16 || e == 15 || e == 17
	case 4:
		return e == 7
	}
	return false
}

// azide says that p is the azide ion.
func (f *freeing) azide(p *part) bool {
	if len(p.atoms) != 3 || p.charge != -1 {
		return false
	}
	for _, a := range p.atoms {
		if f.b.Atoms[a].Element != 7 {
			return false
		}
	}
	return true
}

// balanced says that an anion is drawn next to its cation (nitro, N-oxide, ylide, isocyanide).
func (f *freeing) balanced(a int32) bool {
	for _, nb := range f.nbs[a] {
		if f.b.Atoms[nb.Atom].Charge > 0 {
			return true
		}
	}
	return false
}

// protonSite says that anion a takes a proton to make the free acid.
func (f *freeing) protonSite(a int32) bool {
	x := &f.b.Atoms[a]
	switch x.Element {
	case 8, 16, 34:
		return x.Charge < 0
	case 7:
		return x.Charge < 0 && f.stabilised(a)
	case 6:
		return x.Charge == -1 && (f.cyanide(a) || f.enolate(a))
	}
	return false
}

// stabilised says that the nitrogen anion a stands beside a multiple bond (imides, azoles, azide):
// the strong bases made from plain amines are reagents of their own.
func (f *freeing) stabilised(a int32) bool {
	for _, nb := range f.nbs[a] {
		if f.b.Bonds[nb.Bond].Order > 1 {
			return true
		}
		for _, c := range f.nbs[nb.Atom] {
			if f.b.Bonds[c.Bond].Order > 1 {
				return true
			}
		}
	}
	return false
}

// ammonium says that a is a protonated nitrogen (not one whose charge is only drawn apart).
func (f *freeing) ammonium(a int32) bool {
	x := &f.b.Atoms[a]
	if x.Element != 7 || x.Charge != 1 || x.Hydrogens == 0 {
		return false
	}
	for _, nb := range f.nbs[a] {
		if f.b.Atoms[nb.Atom].Charge < 0 || f.b.Atoms[nb.Atom].Element == 7 && f.b.Atoms[nb.Atom].Charge > 0 {
			return false
		}
	}
	return true
}

func (f *freeing) acidicAmmonium(p part) int {
	n := 0
	for _, a := range p.atoms {
		if f.ammonium(a) {
			n++
		}
	}
	return n
}

// hasAmine says that p holds a nitrogen that an acid protonates: an ammonium, or a neutral one with
// single or aromatic bonds to carbon that is no amide, nitrile or nitro nitrogen.
func (f *freeing) hasAmine(p part) bool {
	b := f.b
	for _, a := range p.atoms {
		if f.ammonium(a) {
			return true
		}
		x := &b.Atoms[a]
		if x.Element != 7 || x.Charge != 0 {
			continue
		}
		basic := true
		for _, nb := range f.nbs[a] {
			if b.Bonds[nb.Bond].Order == 3 {
				basic = false
			}
			if b.Bonds[nb.Bond].Order != 1 {
				continue
			}
			for _, c := range f.nbs[nb.Atom] { // acyl, sulfonyl
				if e := b.Atoms[c.Atom].Element; b.Bonds[c.Bond].Order == 2 && (e == 8 || e == 16) {
					basic = false
				}
			}
		}
		if basic {
			return true
		}
	}
	return false
}
