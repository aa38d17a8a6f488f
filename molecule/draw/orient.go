package draw

import (
	"math"
	"slices"
)

// orient turns a component as chemists hold it: bonds on the angles of an upright benzene ring (30, 90, 150
// degrees), which are those of a zig-zag along the page; the long way across; the functional end to the
// right; doubly bonded ends up. Of the twelve ways to lay it on that grid the one that does so most is taken.
func (l *layout) orient(atoms []int32) {
	if len(atoms) < 2 {
		return
	}
	l.rotate(atoms, toward(l.gridTurn(atoms)))
	spread := l.spread(atoms)
	bestScore := math.Inf(-1)
	var best Point
	flip := false
	for k := range 6 {
		turn := toward(float64(k) * math.Pi / 3)
		for _, f := range [2]bool{false, true} {
			if score := spread.score(turn, f); score > bestScore+1e-6 {
				bestScore, best, flip = score, turn, f
			}
		}
	}
	l.rotate(atoms, best)
	if flip {
		for _, a := range atoms {
			l.at[a].Y = -l.at[a].Y
		}
	}
}

func (l *layout) rotate(atoms []int32, turn Point) {
	for _, a := range atoms {
		l.at[a] = l.at[a].times(turn)
	}
}

// gridTurn is the turn that brings most bonds onto the grid.
func (l *layout) gridTurn(atoms []int32) float64 {
	const bins = 60
	var count [bins]float64
	for _, a := range atoms {
		for _, nb := range l.v.neighbors(a) {
			if nb.Atom < a {
				continue
			}
			angle := angleOf(l.at[nb.Atom].sub(l.at[a])) * 180 / math.Pi
			k := int(math.Round(angle+360)) % bins
			w := 1.0
			if x := l.v.m.Bond(int(nb.Bond)); x.Ring {
				w = 1.5
				if l.v.m.SmallestBondRing(int(nb.Bond))%6 == 0 {
					w = 3
				}
			}
			count[k] += w
		}
	}
	for i := range l.systems { // cages stand as they are known
		if s := &l.systems[i]; s.caged && slices.Contains(atoms, s.atoms[0]) {
			count[30] += 2 * float64(len(s.atoms))
		}
	}
	best, most := 0, -1.0
	for k := range bins {
		sum := count[k] + 0.4*(count[(k+1)%bins]+count[(k+bins-1)%bins])
		if sum > most+1e-9 {
			best, most = k, sum
		}
	}
	return float64(30-best) * math.Pi / 180
}

// spread holds the moments of a component that decide how it is held.
type spread struct {
	xx, xy, yy float64 // of all atoms about the middle
	hetero     Point   // sum of the atoms that are not carbon, from the middle
	up         Point   // sum of the bonds to doubly bonded ends
	down       Point   // sum of hetero atoms in rings, from the middle of the rings
	odd        Point   // sum of the rings that are not six-membered, from the middle of a system of three rings or more
	rows       []Point // directions from ring to ring in such systems
	n          float64
}

func (l *layout) spread(atoms []int32) (s spread) {
	var middle, rings Point
	inRings := 0.0
	for _, a := range atoms {
		middle = middle.add(l.at[a])
		if l.member[a] >= 0 {
			rings = rings.add(l.at[a])
			inRings++
		}
	}
	s.n = float64(len(atoms))
	s.odd, s.rows = l.ringRows(atoms)
	middle = middle.scale(1 / s.n)
	rings = rings.scale(1 / max(inRings, 1))
	for _, a := range atoms {
		d := l.at[a].sub(middle)
		s.xx += d.X * d.X
		s.xy += d.X * d.Y
		s.yy += d.Y * d.Y
		e := l.v.atom(a).Element
		if e == 6 || e == 1 {
			continue
		}
		if l.member[a] >= 0 {
			s.down = s.down.add(l.at[a].sub(rings))
			s.hetero = s.hetero.add(d.scale(0.3))
			continue
		}
		s.hetero = s.hetero.add(d)
		if nbs := l.v.neighbors(a); len(nbs) == 1 && l.v.m.Bond(int(nbs[0].Bond)).Order == 2 {
			s.up = s.up.add(l.at[a].sub(l.at[nbs[0].Atom]))
		}
	}
	return s
}

// ringRows looks at systems of three rings or more. odd sums the middles of the rings of other sizes than six, seen
// from the middle of their system: steroids and their like are held with these to the upper right. rows are the
// directions from ring to fused ring: as many as can be lie across (IUPAC, Fused Ring Nomenclature 1998, FR-5.3).
func (l *layout) ringRows(atoms []int32) (odd Point, rows []Point) {
	rows = l.points[:0]
	for i := range l.systems {
		s := &l.systems[i]
		if len(s.rings) < 3 || s.bridged || !slices.Contains(atoms, s.atoms[0]) {
			continue
		}
		whole := l.middle(s.atoms)
		for i, r := range s.rings {
			here := l.middle(r)
			if len(r) != 6 {
				odd = odd.add(here.sub(whole))
			}
			for _, q := range s.rings[:i] {
				if common(r, q) == 2 {
					rows = append(rows, l.middle(q).sub(here).unit())
				}
			}
		}
	}
	l.points = rows
	return odd, rows
}

func (l *layout) middle(atoms []int32) (m Point) {
	for _, a := range atoms {
		m = m.add(l.at[a])
	}
	return m.scale(1 / float64(len(atoms)))
}

// score is how well the component is held after a turn and a flip of y.
func (s *spread) score(turn Point, flip bool) float64 {
	sign := 1.0
	if flip {
		sign = -1
	}
	c, n := turn.X, turn.Y
	wide := c*c*s.xx - 2*c*n*s.xy + n*n*s.yy
	total := s.xx + s.yy
	odd := s.odd.times(turn)
	across := 0.0
	for _, r := range s.rows {
		if math.Abs(r.times(turn).X) > 0.95 {
			across++
		}
	}
	return 2*across + 1.6*math.Tanh(odd.X) + 0.8*math.Tanh(sign*odd.Y) + 6*wide/max(total, 1e-9) +
		1.2*math.Tanh(s.hetero.times(turn).X/math.Sqrt(total+1)) +
		0.5*math.Tanh(sign*s.up.times(turn).Y) -
		0.3*math.Tanh(sign*s.down.times(turn).Y)
}
