package spectra

// correction is an arrangement that plain counting gets wrong.
type correction uint8

const (
	twoO correction = iota
	arylAndO
	arylAndEsterO
	arylAndN
	arylAndCO
	twoCO
	arylAndHal
	twoHal
	twoAryl
	methylOnO
	methylOnCO
	methylOnN
	methylOnAmideN
	methylOnAryl
	methylOrtho
	cisAcross
	methylOnEsterO
	onAcetalO
	besideFuranO
	besideThiopheneS
	besideAzineN
	numCorrections
)

var correctionNames = [numCorrections]string{
	"two O on one carbon", "aryl and OH or ether O on one carbon", "aryl and ester O or aryl O on one carbon",
	"aryl and N on one carbon", "aryl and carbonyl on one carbon", "two carbonyls on one carbon",
	"aryl and halogen on one carbon", "two halogens on one carbon", "two aryl on one carbon",
	"methyl on ether O", "methyl on carbonyl", "methyl on N", "methyl on amide N", "methyl on aryl",
	"methyl ortho to a group on aryl", "cis carbon across a double bond", "methyl on ester O", "carbon on an acetal O",
	"carbon beside the O of a furan", "carbon beside the S of a thiophene", "carbon beside the N of an azine",
}

func correctionByName(name string) (correction, bool) {
	for c, n := range correctionNames {
		if n == name {
			return correction(c), true
		}
	}
	return 0, false
}

// carbonShift predicts the 13C shift of carbon a (ppm) with its spread.
func (p *Predictor) carbonShift(a int) shift {
	switch {
	case p.sp[a] == arene:
		return p.areneCarbon(a)
	case p.carbonyl[a] != noCarbonyl:
		return p.carbonylCarbon(a)
	case p.sp[a] == single && p.ring[a] > 0:
		return p.ringCarbon(a)
	case p.sp[a] == single:
		return p.chainCarbon(a)
	case p.sp[a] == double && p.doubleTo(a, carbon) >= 0:
		return p.alkeneCarbon(a)
	}
	return p.specialCarbon(a)
}

// chainCarbon adds the open-chain increments.
func (p *Predictor) chainCarbon(a int) shift {
	mean := p.t.alkaneBase + p.walkSum(a, 1, 1)
	mean += p.branchingOf(a) + p.correctionsOf(a)
	spread := float32(1.9)
	if p.deg[a] >= 3 {
		spread = 2.4
	}
	hetero := 0
	for _, nb := range p.nb[a] {
		if p.el[nb.Atom] != carbon {
			hetero++
		}
	}
	if hetero >= 1 {
		spread += 0.4
	}
	if hetero >= 2 {
		spread += 2.5
	}
	return shift{mean, spread}
}

// branchingOf sums the steric corrections at a.
func (p *Predictor) branchingOf(a int) float32 {
	row := min(int(p.deg[a]), 4) - 1
	if row < 0 {
		return 0
	}
	sum := float32(0)
	for _, nb := range p.nb[a] {
		sum += p.t.branching[row][p.branchClass(a, int(nb.Atom))-1]
	}
	return sum
}

func (p *Predictor) branchClass(a, x int) int {
	if p.el[x] != carbon {
		return 1
	}
	if p.sp[x] == single {
		return min(int(p.deg[x]), 4)
	}
	switch p.groupSeen(a, x) {
	case Aryl, Vinyl, VinylConj, Aldehyde, COR, CORConj, COAr:
		return 2
	}
	return 1
}

// correctionsOf adds the rows for arrangements around a.
func (p *Predictor) correctionsOf(a int) float32 {
	var nO, nEO, nN, nAr, nCO, nHal int
	sum, t := float32(0), p.t
	for _, nb := range p.nb[a] {
		x := int(nb.Atom)
		switch g := p.groupSeen(a, x); {
		case g == OAr || g == OCOR || g == OCOAr || g == OVinyl:
			nEO++
		case p.el[x] == oxygen:
			nO++
		case p.el[x] == nitrogen:
			nN++
		case g == Aryl:
			nAr++
		case p.carbonyl[x] != noCarbonyl:
			nCO++
		case isHalogen(p.el[x]):
			nHal++
		}
	}
	sum += p.besideHetero(a)
	if nO+nEO >= 2 {
		sum += float32(nO+nEO-1) * t.correction[twoO]
	}
	switch {
	case nAr > 0 && nO > 0:
		sum += t.correction[arylAndO]
	case nAr > 0 && nEO > 0:
		sum += t.correction[arylAndEsterO]
	case nAr > 0 && nN > 0:
		sum += t.correction[arylAndN]
	case nAr > 0 && nCO > 0:
		sum += t.correction[arylAndCO]
	case nAr > 0 && nHal > 0:
		sum += t.correction[arylAndHal]
	}
	if nCO >= 2 {
		sum += float32(nCO-1) * t.correction[twoCO]
	}
	if nHal >= 2 {
		sum += float32(nHal-1) * t.correction[twoHal]
	}
	if nAr >= 2 {
		sum += float32(nAr-1) * t.correction[twoAryl]
	}
	if p.hyd[a] == 3 && p.deg[a] == 1 {
		sum += p.methylCorrection(a, int(p.nb[a][0].Atom))
	}
	return sum
}

// besideHetero applies to a carbon whose neighbour is the ring carbon next to a ring O, S or N, or an
// acetal O.
func (p *Predictor) besideHetero(a int) float32 {
	sum, t := float32(0), p.t
	for _, nb := range p.nb[a] {
		x := int(nb.Atom)
		for _, nb2 := range p.nb[x] {
			y := int(nb2.Atom)
			if y == a {
				continue
			}
			switch {
			case p.el[x] == oxygen && p.el[y] == carbon && p.sp[y] == single && p.bearsOther(y, x):
				sum += t.correction[onAcetalO]
			case !p.aromatic[x] || !p.aromatic[y]:
			case p.el[y] == oxygen:
				sum += t.correction[besideFuranO]
			case p.el[y] == sulfur:
				sum += t.correction[besideThiopheneS]
			case p.el[y] == nitrogen && p.hyd[y] == 0 && p.deg[y] == 2 && p.ring[y] == 6:
				sum += t.correction[besideAzineN]
			}
		}
	}
	return sum
}

// bearsOther reports an O on carbon y other than x.
func (p *Predictor) bearsOther(y, x int) bool {
	for _, nb := range p.nb[y] {
		if int(nb.Atom) != x && p.el[nb.Atom] == oxygen {
			return true
		}
	}
	return false
}

func (p *Predictor) methylCorrection(a, x int) float32 {
	t := p.t
	switch g := p.groupSeen(a, x); g {
	case OR:
		return t.correction[methylOnO]
	case OCOR, OCOAr:
		return t.correction[methylOnEsterO]
	case NR2:
		return t.correction[methylOnN]
	case NHCOR:
		return t.correction[methylOnAmideN]
	case Aryl:
		sum := t.correction[methylOnAryl]
		for _, nb := range p.nb[x] {
			if p.aromatic[nb.Atom] && p.deg[nb.Atom] == 3 && p.ringDegree(int(nb.Atom)) == 2 {
				sum += t.correction[methylOrtho]
			}
		}
		return sum
	default:
		if p.carbonyl[x] != noCarbonyl {
			return t.correction[methylOnCO]
		}
	}
	return 0
}

// carbonylCarbon takes the class value and moves it for the alpha carbons and the ring.
func (p *Predictor) carbonylCarbon(a int) shift {
	row := &p.t.carbonyl[p.carbonyl[a]]
	mean, spread := row.carbon.mean, row.carbon.spread
	switch p.chelated(a) {
	case oxygen:
		mean += p.t.chelateOH.carbonyl
	case nitrogen:
		mean += p.t.chelateNH.carbonyl
	}
	if p.ring[a] > 0 {
		if v, ok := p.ringValue(a, p.t.ringCarbon); ok && v > 100 {
			mean, spread = v, max(spread, 2)
			if p.carbonyl[a] == tertAmide {
				mean -= 3 // 1-methylpyrrolidin-2-one 175 against 178.5, recalled
			}
			return shift{mean + p.alphaEffect(a, row), spread}
		}
	}
	return shift{mean + p.alphaEffect(a, row), spread}
}

// alphaEffect counts further carbons and heteroatoms on the sp3 carbons beside the carbonyl.
func (p *Predictor) alphaEffect(a int, row *carbonylRow) float32 {
	sum := float32(0)
	for _, nb := range p.nb[a] {
		x := int(nb.Atom)
		if p.el[x] != carbon || p.sp[x] != single {
			continue
		}
		carbons, special := 0, 0
		for _, nb2 := range p.nb[x] {
			y := int(nb2.Atom)
			switch {
			case y == a || p.ring[a] > 0 && p.ring[x] == p.ring[a] && p.ring[y] == p.ring[a]:
			case p.el[y] == carbon && p.sp[y] == single:
				carbons++
			default:
				special++
			}
		}
		sum += row.alpha*float32(min(carbons, 2)) + row.hetero*float32(special)
		if carbons > 2 {
			sum += row.alpha * 0.5
		}
	}
	return sum
}
