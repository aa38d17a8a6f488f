package spectra

// specialCarbon covers alkynes, nitriles, imines, allenes and their kind: class values from common
// tables, recalled.
func (p *Predictor) specialCarbon(a int) shift {
	switch p.sp[a] {
	case triple:
		return p.tripleCarbon(a)
	case cumulene:
		return p.cumuleneCarbon(a)
	}
	if n := p.doubleTo(a, nitrogen); n >= 0 {
		return p.imineCarbon(a, n)
	}
	if p.doubleTo(a, sulfur) >= 0 {
		hetero := 0
		for _, nb := range p.nb[a] {
			if p.el[nb.Atom] == nitrogen {
				hetero++
			}
		}
		return shift{[3]float32{225, 201, 182}[min(hetero, 2)], 8}
	}
	return shift{150, 30}
}

func (p *Predictor) tripleCarbon(a int) shift {
	partner, other := -1, -1
	for _, nb := range p.nb[a] {
		if p.order[nb.Bond] == 3 {
			partner = int(nb.Atom)
		} else {
			other = int(nb.Atom)
		}
	}
	if p.el[partner] == nitrogen {
		switch {
		case p.deg[partner] > 1:
			return shift{157, 5}
		case other >= 0 && p.sp[other] == arene:
			return shift{118.4, 1.6}
		case other >= 0 && p.sp[other] == double:
			return shift{117.0, 2}
		case other >= 0 && p.el[other] != carbon:
			return shift{113, 5}
		}
		return shift{118.9, 1.8}
	}
	far := -1
	for _, nb := range p.nb[partner] {
		if int(nb.Atom) != a {
			far = int(nb.Atom)
		}
	}
	mean := float32(80)
	switch {
	case other < 0:
		mean = 68.5
		if far >= 0 && p.sp[far] == arene {
			mean = 77.3
		} else if far >= 0 && (p.carbonyl[far] != noCarbonyl || p.bearsHetero(far)) {
			mean = 74.8
		}
	case p.sp[other] == arene:
		mean = 81.5
		if far >= 0 && p.sp[far] == arene {
			mean = 89.5
		} else if far < 0 {
			mean = 83.5
		} else if p.carbonyl[far] != noCarbonyl {
			mean = 85
		}
	case p.carbonyl[other] != noCarbonyl:
		mean = 78
	case far >= 0 && p.sp[far] == arene:
		mean = 89.5
		if p.bearsHetero(other) {
			mean = 87
		}
	case far < 0:
		mean = 84
		if p.bearsHetero(other) {
			mean = 80
		}
	}
	return shift{mean, 3}
}

func (p *Predictor) cumuleneCarbon(a int) shift {
	var nN, nO, nS int
	for _, nb := range p.nb[a] {
		switch p.el[nb.Atom] {
		case nitrogen:
			nN++
		case oxygen:
			nO++
		case sulfur:
			nS++
		}
	}
	switch {
	case nN == 1 && nO == 1:
		return shift{123.5, 3}
	case nN == 1 && nS == 1:
		return shift{132, 4}
	case nN == 2:
		return shift{140, 4}
	case nO == 1:
		return shift{200, 6}
	}
	return shift{208, 5}
}

func (p *Predictor) imineCarbon(a, n int) shift {
	var nN, nO int
	for _, nb := range p.nb[a] {
		if int(nb.Atom) == n {
			continue
		}
		switch p.el[nb.Atom] {
		case nitrogen:
			nN++
		case oxygen, sulfur:
			nO++
		}
	}
	hetero := uint8(0)
	for _, nb := range p.nb[n] {
		if int(nb.Atom) != a && p.el[nb.Atom] != carbon {
			hetero = p.el[nb.Atom]
		}
	}
	mean := float32(167)
	if p.hyd[a] > 0 {
		mean = 161
	}
	switch {
	case nN == 2:
		return shift{157.5, 3}
	case nN+nO > 0:
		return shift{160, 5}
	case hetero == oxygen:
		mean -= 10
	case hetero == nitrogen:
		mean -= 15
	}
	return shift{mean, 4}
}
