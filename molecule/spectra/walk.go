package spectra

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
