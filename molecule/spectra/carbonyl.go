package spectra

// Carbonyl is the class of a C=O carbon, as the table of carbonyls names it.
type Carbonyl uint8

const (
	noCarbonyl Carbonyl = iota
	satAldehyde
	arAldehyde
	enal
	satKetone
	arylKetone
	diarylKetone
	enone
	crossKetone
	ynone
	diKetone
	satAcid
	arAcid
	enAcid
	formate
	satEster
	arEster
	enEster
	arylEster
	arArylEster
	primAmide
	secAmide
	tertAmide
	arAmide
	arTertAmide
	enAmide
	formamide
	carbamate
	urea
	carbonate
	acidHalide
	anhydride
	imide
	thioester
	quinone
	arLactone
	arKetone
	arLactam
	otherCarbonyl
	numCarbonyls
)

var carbonylNames = [numCarbonyls]string{
	"none", "saturated aldehyde", "aromatic aldehyde", "enal", "saturated ketone", "aryl ketone", "diaryl ketone", "enone",
	"cross-conjugated ketone", "ynone", "alpha-dicarbonyl", "saturated acid", "aromatic acid", "enoic acid", "formate",
	"saturated ester", "aromatic ester", "enoate ester", "aryl or vinyl ester", "aryl ester of an aromatic acid",
	"primary amide", "secondary amide", "tertiary amide", "aromatic amide", "tertiary aromatic amide", "enamide of an unsaturated acid", "formamide",
	"carbamate", "urea", "carbonate", "acid halide", "anhydride", "imide", "thioester", "quinone",
	"lactone inside an aromatic ring", "ketone inside an aromatic ring", "lactam inside an aromatic ring", "other carbonyl",
}

// String returns the name used in the table.
func (c Carbonyl) String() string { return carbonylNames[c] }

func carbonylByName(name string) (Carbonyl, bool) {
	for c, n := range carbonylNames {
		if n == name && c > 0 {
			return Carbonyl(c), true
		}
	}
	return noCarbonyl, false
}

// carbonylSides counts what a carbonyl carbon is bonded to.
type carbonylSides struct {
	aryl, vinyl, alkynyl, alkyl, carbonyl int
	oh, ester, aryloxy                    int // O single bonds: hydroxyl, to sp3 carbon, to sp2 carbon
	acyloxy                               int // O to another C=O
	nitrogens, halogens, sulfurs          int
	nitrogen                              int // atom index of one N
}

func (p *Predictor) sidesOf(a int) (s carbonylSides) {
	s.nitrogen = -1
	for _, nb := range p.nb[a] {
		x := int(nb.Atom)
		if p.order[nb.Bond] == 2 && p.el[x] == oxygen {
			continue
		}
		switch {
		case p.el[x] == carbon:
			switch p.sp[x] {
			case arene:
				s.aryl++
			case double, cumulene:
				if p.doubleTo(x, oxygen) >= 0 {
					s.carbonyl++
				} else {
					s.vinyl++
				}
			case triple:
				s.alkynyl++
			default:
				s.alkyl++
			}
		case p.el[x] == oxygen:
			p.countOxygen(a, x, &s)
		case p.el[x] == nitrogen:
			s.nitrogens++
			s.nitrogen = x
		case isHalogen(p.el[x]):
			s.halogens++
		case p.el[x] == sulfur:
			s.sulfurs++
		}
	}
	return s
}

func (p *Predictor) countOxygen(a, x int, s *carbonylSides) {
	if p.deg[x] == 1 {
		s.oh++
		return
	}
	for _, nb := range p.nb[x] {
		y := int(nb.Atom)
		if y == a {
			continue
		}
		switch {
		case p.el[y] == carbon && p.doubleTo(y, oxygen) >= 0 && p.sp[y] != arene:
			s.acyloxy++
		case p.el[y] == carbon && p.sp[y] != single:
			s.aryloxy++
		default:
			s.ester++
		}
	}
}

// carbonylOf classifies a; noCarbonyl for every atom that is no C=O carbon.
func (p *Predictor) carbonylOf(a int) Carbonyl {
	if p.el[a] != carbon || p.doubleTo(a, oxygen) < 0 {
		return noCarbonyl
	}
	if p.sp[a] == arene {
		return p.aromaticCarbonyl(a)
	}
	if p.sp[a] != double {
		return noCarbonyl // ketene, isocyanate, carbon dioxide
	}
	s := p.sidesOf(a)
	hetero := s.oh + s.ester + s.aryloxy + s.acyloxy + s.nitrogens + s.halogens + s.sulfurs
	switch {
	case hetero >= 2:
		switch {
		case s.nitrogens >= 2:
			return urea
		case s.nitrogens == 1:
			return carbamate
		case s.halogens == 0 && s.sulfurs == 0:
			return carbonate
		}
		return otherCarbonyl
	case s.halogens == 1:
		return acidHalide
	case s.acyloxy == 1:
		return anhydride
	case s.sulfurs == 1:
		return thioester
	case s.nitrogens == 1:
		return p.amideOf(a, s)
	case s.oh == 1:
		return pick(s, satAcid, arAcid, enAcid)
	case s.aryloxy == 1:
		if s.aryl > 0 || s.vinyl > 0 {
			return arArylEster
		}
		return arylEster
	case s.ester == 1:
		if p.hyd[a] > 0 {
			return formate
		}
		return pick(s, satEster, arEster, enEster)
	case p.hyd[a] > 0:
		return pick(s, satAldehyde, arAldehyde, enal)
	}
	return p.ketoneOf(a, s)
}

func pick(s carbonylSides, saturated, aromatic, conjugated Carbonyl) Carbonyl {
	switch {
	case s.aryl > 0:
		return aromatic
	case s.vinyl > 0 || s.alkynyl > 0:
		return conjugated
	}
	return saturated
}

func (p *Predictor) amideOf(a int, s carbonylSides) Carbonyl {
	n := s.nitrogen
	for _, nb := range p.nb[n] {
		if x := int(nb.Atom); x != a && p.el[x] == carbon && p.sp[x] == double && p.doubleTo(x, oxygen) >= 0 {
			return imide
		}
	}
	switch {
	case p.hyd[a] > 0:
		return formamide
	case s.aryl > 0 && p.hyd[n] == 0:
		return arTertAmide
	case s.aryl > 0:
		return arAmide
	case s.vinyl > 0 || s.alkynyl > 0:
		return enAmide
	case p.hyd[n] >= 2:
		return primAmide
	case p.hyd[n] == 1:
		return secAmide
	}
	return tertAmide
}

func (p *Predictor) ketoneOf(a int, s carbonylSides) Carbonyl {
	conj := s.aryl + s.vinyl
	switch {
	case p.inQuinone(a, s):
		return quinone
	case s.carbonyl > 0:
		return diKetone
	case s.alkynyl > 0:
		return ynone
	case s.aryl == 2:
		return diarylKetone
	case conj == 2:
		return crossKetone
	case s.aryl == 1:
		return arylKetone
	case s.vinyl == 1:
		return enone
	}
	return satKetone
}

// inQuinone reports a six-ring with two C=O whose other atoms are all sp2.
func (p *Predictor) inQuinone(a int, s carbonylSides) bool {
	if p.ring[a] != 6 || s.vinyl+s.aryl+s.carbonyl < 2 {
		return false
	}
	for _, r := range p.ringOf {
		has, oxo, flat := false, 0, true
		for _, x := range r {
			has = has || int(x) == a
			flat = flat && p.el[x] == carbon && p.sp[x] != single
			if p.el[x] == carbon && p.sp[x] == double && p.doubleTo(int(x), oxygen) >= 0 {
				oxo++
			}
		}
		if has && len(r) == 6 && flat && oxo == 2 {
			return true
		}
	}
	return false
}

func (p *Predictor) aromaticCarbonyl(a int) Carbonyl {
	if !p.isExoCarbonyl(a) {
		return noCarbonyl
	}
	for _, nb := range p.nb[a] {
		if !p.aromatic[nb.Atom] {
			continue
		}
		switch p.el[nb.Atom] {
		case oxygen:
			return arLactone
		case nitrogen:
			return arLactam
		}
	}
	return arKetone
}

// chelated returns the kind of group ortho to the aryl that carries carbonyl a, whose hydrogen bridges
// to the O: oxygen for OH, nitrogen for NH, 0 for none.
func (p *Predictor) chelated(a int) uint8 {
	for _, nb := range p.nb[a] {
		if x := int(nb.Atom); p.aromatic[x] && !p.aromatic[a] {
			if el := p.orthoDonor(x); el != 0 {
				return el
			}
		}
	}
	return 0
}

// orthoDonor looks for OH or NH on the ring atoms beside x.
func (p *Predictor) orthoDonor(x int) uint8 {
	found := uint8(0)
	for _, nb := range p.nb[x] {
		if !p.aromatic[nb.Atom] {
			continue
		}
		for _, nb2 := range p.nb[nb.Atom] {
			y := int(nb2.Atom)
			if p.aromatic[y] || p.hyd[y] == 0 {
				continue
			}
			switch p.el[y] {
			case oxygen:
				return oxygen
			case nitrogen:
				found = nitrogen
			}
		}
	}
	return found
}
