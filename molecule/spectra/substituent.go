package spectra

// groupSeen names the group that begins with atom x as seen from its neighbour from.
func (p *Predictor) groupSeen(from, x int) Group {
	switch p.el[x] {
	case hydrogen:
		return None
	case carbon:
		return p.carbonGroup(from, x)
	case nitrogen:
		return p.nitrogenGroup(from, x)
	case oxygen:
		return p.oxygenGroup(from, x)
	case sulfur:
		return p.sulfurGroup(from, x)
	case fluorine:
		return F
	case chlorine:
		return Cl
	case bromine:
		return Br
	case iodine:
		return I
	}
	return Other
}

func (p *Predictor) carbonGroup(from, x int) Group {
	switch p.sp[x] {
	case arene:
		return Aryl
	case triple:
		for _, nb := range p.nb[x] {
			if p.order[nb.Bond] == 3 && p.el[nb.Atom] == nitrogen {
				return CN
			}
		}
		return Alkynyl
	case cumulene:
		return Vinyl
	case double:
		return p.sp2Group(from, x)
	}
	return p.alkylGroup(from, x)
}

func (p *Predictor) sp2Group(from, x int) Group {
	if p.carbonyl[x] != noCarbonyl {
		return p.acylGroup(from, x)
	}
	for _, nb := range p.nb[x] {
		if p.order[nb.Bond] != 2 {
			continue
		}
		switch p.el[nb.Atom] {
		case nitrogen:
			return CImine
		case sulfur:
			return COS
		}
		// conjugated on: the far carbon, or this one, carries another sp2 centre
		for _, near := range p.nb[x] {
			if int(near.Atom) != from && near.Atom != nb.Atom && p.el[near.Atom] == carbon && p.sp[near.Atom] != single {
				return VinylConj
			}
		}
		for _, far := range p.nb[nb.Atom] {
			if int(far.Atom) != x && p.el[far.Atom] == carbon && p.sp[far.Atom] != single {
				return VinylConj
			}
		}
	}
	return Vinyl
}

// acylGroup names R-C(=O)- by what is on the far side of the carbonyl.
func (p *Predictor) acylGroup(from, x int) Group {
	s := p.sidesOf(x)
	switch {
	case s.halogens > 0:
		return COCl
	case s.sulfurs > 0:
		return COS
	case s.nitrogens > 0 && p.hyd[s.nitrogen] == 0:
		return CONR2
	case s.nitrogens > 0:
		return CON
	case s.oh > 0:
		return COOH
	case s.ester+s.aryloxy+s.acyloxy > 0:
		return COOR
	case p.hyd[x] > 0:
		return Aldehyde
	}
	aryl, vinyl := s.aryl, s.vinyl
	if p.el[from] == carbon {
		switch p.sp[from] {
		case arene:
			aryl--
		case double:
			vinyl--
		}
	}
	switch {
	case aryl > 0:
		return COAr
	case vinyl > 0:
		return CORConj
	}
	return COR
}

// alkylGroup names an sp3 carbon by its hydrogens and what else it carries.
func (p *Predictor) alkylGroup(from, x int) Group {
	var nO, nEsterO, nN, nAcylN, nS, nHal, nF, nAr, nCO, nC int
	next := -1
	for _, nb := range p.nb[x] {
		y := int(nb.Atom)
		if y == from {
			continue
		}
		switch el := p.el[y]; {
		case el == oxygen:
			nO++
			if g := p.oxygenGroup(x, y); g == OCOR || g == OCOAr || g == OAr {
				nEsterO++
			}
		case el == nitrogen:
			nN++
			if g := p.nitrogenGroup(x, y); g == NHCOR || g == NRing || g == NImine {
				nAcylN++
			}
		case el == sulfur:
			nS++
		case isHalogen(el):
			nHal++
			if el == fluorine {
				nF++
			}
		case el == carbon:
			nC++
			switch p.sp[y] {
			case arene:
				nAr++
			case double, cumulene:
				nCO++
			default:
				next = y
			}
		}
	}
	h := p.hyd[x]
	switch {
	case nF == 3:
		return CF3
	case nHal > 0 && h == 2:
		return CH2Hal
	case nO >= 2:
		return CHO2
	case nO == 1 && h == 2 && nEsterO > 0:
		return CH2OCO
	case nO == 1:
		return [4]Group{CR2O, CHRO, CH2O, CH2O}[h]
	case nAcylN > 0 && h == 2:
		return CH2NCO
	case nN > 0 && h == 2:
		return CH2N
	case nN > 0 && h == 1:
		return CHRN
	case nS > 0 && h == 2:
		return CH2S
	case nAr > 0 && h == 2:
		return CH2Ar
	case nCO > 0 && h == 2:
		return CH2CO
	case nCO > 0 && h == 1:
		return CHRCO
	case h == 3:
		return CH3
	case h == 2 && next >= 0 && p.bearsHetero(next):
		return CH2CH2X
	}
	return [4]Group{CR3, CHR2, CH2R, CH3}[min(h, 3)]
}

// bearsHetero reports whether an O, N, halogen or carbonyl carbon is bonded to a.
func (p *Predictor) bearsHetero(a int) bool {
	for _, nb := range p.nb[a] {
		if el := p.el[nb.Atom]; el == oxygen || el == nitrogen || isHalogen(el) || p.carbonyl[nb.Atom] != noCarbonyl {
			return true
		}
	}
	return false
}

func (p *Predictor) nitrogenGroup(from, x int) Group {
	if p.aromatic[x] {
		return NRing
	}
	oxygens, doubles := 0, 0
	acyl, aryl := false, false
	for _, nb := range p.nb[x] {
		y := int(nb.Atom)
		if p.el[y] == oxygen && p.deg[y] == 1 && p.hyd[y] == 0 {
			oxygens++
		}
		if p.order[nb.Bond] >= 2 {
			doubles++
		}
		if y == from {
			continue
		}
		if p.carbonyl[y] != noCarbonyl || p.el[y] == sulfur && p.doubleTo(y, oxygen) >= 0 || p.el[y] == carbon && p.doubleTo(y, sulfur) >= 0 {
			acyl = true
		}
		if p.el[y] == carbon && p.sp[y] == arene {
			aryl = true
		}
	}
	switch {
	case oxygens >= 2:
		return NO2
	case doubles > 0:
		return NImine
	case p.charge[x] > 0:
		return NR3
	case acyl:
		return NHCOR
	case aryl:
		return NAr
	case p.hyd[x] == 2:
		return NH2
	}
	return NR2
}

func (p *Predictor) oxygenGroup(from, x int) Group {
	if p.hyd[x] > 0 || p.deg[x] == 1 {
		return OH
	}
	for _, nb := range p.nb[x] {
		y := int(nb.Atom)
		if y == from {
			continue
		}
		if p.el[y] == phosphor || p.el[y] == sulfur && p.doubleTo(y, oxygen) >= 0 {
			return OCOR // esters of phosphorus and sulfur acids shift much as carboxylic ones do
		}
		if p.el[y] != carbon {
			continue
		}
		switch p.sp[y] {
		case arene:
			return OAr
		case double, cumulene:
			if p.carbonyl[y] == noCarbonyl {
				return OVinyl
			}
			if s := p.sidesOf(y); s.aryl > 0 {
				return OCOAr
			}
			return OCOR
		}
	}
	return OR
}

func (p *Predictor) sulfurGroup(from, x int) Group {
	oxo, nitro := 0, false
	aryl, acyl := false, false
	for _, nb := range p.nb[x] {
		y := int(nb.Atom)
		switch {
		case p.el[y] == oxygen && p.order[nb.Bond] == 2:
			oxo++
		case p.el[y] == nitrogen:
			nitro = true
		case y != from && p.el[y] == carbon && p.sp[y] == arene:
			aryl = true
		case y != from && p.carbonyl[y] != noCarbonyl:
			acyl = true
		}
	}
	switch {
	case oxo >= 2 && nitro:
		return SO2NR2
	case oxo >= 2:
		return SO2R
	case oxo == 1:
		return SOR
	case p.hyd[x] > 0:
		return SH
	case acyl:
		return SCOR
	case aryl:
		return SAr
	}
	return SR
}
