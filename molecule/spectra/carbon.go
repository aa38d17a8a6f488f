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

// walkSum adds the increments of everything within four bonds of a, off its smallest ring counted
// once at the shortest distance. betaScale and gammaScale weaken what lies further away.
func (p *Predictor) walkSum(a int, betaScale, gammaScale float32) float32 {
	w := walk{p: p, origin: a}
	for i := range p.n {
		p.dist[i] = 0
	}
	p.dist[a] = -1
	for _, nb := range p.nb[a] {
		p.dist[nb.Atom] = -1
	}
	w.methyl = p.hyd[a] == 3
	for _, nb := range p.nb[a] {
		w.enter(a, int(nb.Atom), 1)
	}
	for w.head < w.tail {
		q := w.queue[w.head%len(w.queue)]
		w.head++
		w.enter(int(q.from), int(q.atom), int(q.dist))
	}
	return w.sum[0] + betaScale*w.sum[1] + gammaScale*w.sum[2] + w.sum[3]
}

// walk is a breadth-first walk that counts groups at their first atom.
type walk struct {
	p      *Predictor
	origin int
	methyl bool
	sum    [4]float32 // by distance 1 to 4
	queue  [64]struct {
		from, atom int32
		dist       int8
	}
	head, tail int
}

func (w *walk) push(from, x, dist int) {
	if dist > 4 || w.p.dist[x] == -1 || w.tail-w.head >= len(w.queue) {
		return
	}
	w.p.dist[x] = -1
	q := &w.queue[w.tail%len(w.queue)]
	q.from, q.atom, q.dist = int32(from), int32(x), int8(dist)
	w.tail++
}

// swallow marks an atom as part of a group already counted.
func (w *walk) swallow(x int) bool {
	if x == w.origin || w.p.dist[x] == -1 && x != w.origin {
		seen := w.p.dist[x] == -1
		w.p.dist[x] = -1
		return !seen
	}
	w.p.dist[x] = -1
	return true
}

// enter counts the group that begins at x, dist bonds from the origin, and goes on beyond it.
func (w *walk) enter(from, x, dist int) {
	p := w.p
	g := p.groupSeen(from, x)
	if g >= Alkyl && g <= RingAlkyl && g != CF3 {
		w.sum[dist-1] += p.t.alkane[Alkyl][dist-1]
		w.beyond(from, x, dist+1)
		return
	}
	w.sum[dist-1] += p.t.alkane[g][dist-1]
	switch g {
	case Aryl, NRing, CN, NO2, NImine, CF3, CImine, OAr, OVinyl, SAr, COCl, COOH, Aldehyde, Other, F, Cl, Br, I, OH, SH, COAr:
		if g == COAr || g == CImine {
			w.beyondAlkylOnly(from, x, dist+1)
		}
	case Vinyl, VinylConj, Alkynyl:
		for _, nb := range p.nb[x] {
			y := int(nb.Atom)
			if y == from || p.order[nb.Bond] < 2 {
				continue
			}
			if w.swallow(y) {
				w.beyond(x, y, dist+2)
			}
		}
		w.beyond(from, x, dist+1)
	case COR, CORConj:
		w.beyond(from, x, dist+1)
	case COOR, CON, CONR2, COS:
		if w.methyl && dist == 1 {
			return
		}
		w.throughLink(from, x, dist+2)
	case OCOR, OCOAr, SCOR, NHCOR:
		w.throughAcyl(from, x, dist)
	case NAr:
		w.beyondAlkylOnly(from, x, dist+1)
	default:
		w.beyond(from, x, dist+1)
	}
}

func (w *walk) beyond(from, x, dist int) {
	for _, nb := range w.p.nb[x] {
		if y := int(nb.Atom); y != from && w.p.order[nb.Bond] == 1 {
			w.push(x, y, dist)
		}
	}
}

func (w *walk) beyondAlkylOnly(from, x, dist int) {
	for _, nb := range w.p.nb[x] {
		if y := int(nb.Atom); y != from && w.p.sp[y] == single && w.p.el[y] == carbon {
			w.push(x, y, dist)
		}
	}
}

// throughLink goes beyond the O, N or S of R-C(=O)-X-R'.
func (w *walk) throughLink(from, x, dist int) {
	p := w.p
	for _, nb := range p.nb[x] {
		y := int(nb.Atom)
		if y == from || p.order[nb.Bond] != 1 || p.el[y] == carbon {
			continue
		}
		if w.swallow(y) {
			w.beyond(x, y, dist)
		}
	}
}

// throughAcyl goes beyond the carbonyl of X-C(=O)-R, and along the other bonds of X.
func (w *walk) throughAcyl(from, x, dist int) {
	p := w.p
	for _, nb := range p.nb[x] {
		y := int(nb.Atom)
		if y == from {
			continue
		}
		if p.carbonyl[y] != noCarbonyl {
			if w.swallow(y) {
				w.beyond(x, y, dist+2)
			}
		} else if p.order[nb.Bond] == 1 && p.el[y] == carbon && p.sp[y] == single {
			w.push(x, y, dist+1)
		}
	}
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
