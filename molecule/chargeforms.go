package molecule

// SeparateCharges returns m with pentavalent nitrogen (CN(=O)=O, CN=N#N) drawn with charges and the
// oxygen acids of halogens ([O-][Cl+3]([O-])([O-])O) without, the forms that patterns and rules are
// written in; m itself if there is nothing to redraw. Readers of files and texts call it. Atom and
// bond indices are kept.
func (m *Molecule) SeparateCharges() *Molecule {
	if !m.redraw {
		return m
	}
	b := m.Builder()
	c := newChargeWork(b)
	for a := range b.Atoms {
		switch {
		case b.Atoms[a].Element == 7:
			c.pentavalent(int32(a))
		case b.Atoms[a].Element.IsHalogen():
			c.halate(int32(a))
		}
	}
	if !c.changed {
		return m
	}
	n, err := b.Build()
	if err != nil {
		return m
	}
	return n
}

// chargeForms rewrites the ways of drawing one compound with and without charges to one of them:
// nitro groups, N-oxides, azides and diazo compounds charge-separated; sulfoxides, sulfones,
// phosphine oxides and phosphorus and sulfur ylides with double bonds. It reports whether b changed.
// Hydrogens must be counts, not AutoHydrogens.
func chargeForms(b *Builder) bool {
	c := newChargeWork(b)
	for a := range b.Atoms {
		switch b.Atoms[a].Element {
		case 7:
			c.pentavalent(int32(a))
			c.diazo(int32(a))
		case 15, 16, 33, 34:
			c.ylide(int32(a))
		}
	}
	return c.changed
}

type chargeWork struct {
	b       *Builder
	nbs     [][]Neighbor
	changed bool
}

func newChargeWork(b *Builder) *chargeWork {
	c := &chargeWork{b: b, nbs: make([][]Neighbor, len(b.Atoms))}
	for i, x := range b.Bonds {
		c.nbs[x.A] = append(c.nbs[x.A], Neighbor{Atom: x.B, Bond: int32(i)})
		c.nbs[x.B] = append(c.nbs[x.B], Neighbor{Atom: x.A, Bond: int32(i)})
	}
	return c
}

func (c *chargeWork) valence(a int32) int {
	v := int(c.b.Atoms[a].Hydrogens)
	for _, nb := range c.nbs[a] {
		v += int(c.b.Bonds[nb.Bond].Order)
	}
	return v
}

// shift lowers the order of bond b by one; electrons go to atom to, away from atom from.
func (c *chargeWork) shift(bond, from, to int32, by int8) {
	x := &c.b.Bonds[bond]
	x.Order = uint8(int8(x.Order) - by)
	c.b.Atoms[from].Charge += by
	c.b.Atoms[to].Charge -= by
	c.changed = true
}

// pentavalent turns N with five bonds into N+ with the partner of one multiple bond negative: an
// end nitrogen of a triple bond first, then oxygen, then other nitrogen, then carbon.
func (c *chargeWork) pentavalent(a int32) {
	if c.b.Atoms[a].Charge != 0 || c.valence(a) != 5 {
		return
	}
	found, grade := Neighbor{Atom: -1}, 99
	for _, nb := range c.nbs[a] {
		order, e := c.b.Bonds[nb.Bond].Order, c.b.Atoms[nb.Atom].Element
		if order < 2 || c.b.Atoms[nb.Atom].Charge != 0 {
			continue
		}
		g := 50
		switch {
		case e == 7 && order == 3:
			g = 0
		case e == 8:
			g = 1
		case e == 16:
			g = 2
		case e == 7:
			g = 3
		case e == 6:
			g = 4
		}
		if g < grade {
			found, grade = nb, g
		}
	}
	if found.Atom >= 0 {
		c.shift(found.Bond, a, found.Atom, 1)
	}
}

// halate turns a positive halogen among oxygens, some of them negative, into one with double bonds.
func (c *chargeWork) halate(a int32) {
	for _, nb := range c.nbs[a] {
		if c.b.Atoms[nb.Atom].Element != 8 {
			return
		}
	}
	for _, nb := range c.nbs[a] {
		if c.b.Atoms[a].Charge > 0 && c.b.Atoms[nb.Atom].Charge == -1 && c.b.Bonds[nb.Bond].Order == 1 {
			c.shift(nb.Bond, a, nb.Atom, -1)
		}
	}
}

// diazo turns X(-)-N(+)#N into X=N(+)=N(-), X being carbon or nitrogen.
func (c *chargeWork) diazo(a int32) {
	if c.b.Atoms[a].Charge != 1 || len(c.nbs[a]) != 2 {
		return
	}
	for i, nb := range c.nbs[a] {
		other := c.nbs[a][1-i]
		x, y := &c.b.Atoms[nb.Atom], &c.b.Atoms[other.Atom]
		if c.b.Bonds[nb.Bond].Order == 1 && x.Charge == -1 && (x.Element == 6 || x.Element == 7) &&
			c.b.Bonds[other.Bond].Order == 3 && y.Element == 7 && y.Charge == 0 && len(c.nbs[other.Atom]) == 1 {
			c.b.Bonds[nb.Bond].Order, c.b.Bonds[other.Bond].Order = 2, 2
			x.Charge, y.Charge = 0, -1
			c.changed = true
			return
		}
	}
}

// ylide turns P(+) or S(+) beside O(-), N(-), S(-) or C(-) into a double bond.
func (c *chargeWork) ylide(a int32) {
	for _, nb := range c.nbs[a] {
		x, y := &c.b.Atoms[a], &c.b.Atoms[nb.Atom]
		if x.Charge <= 0 {
			return
		}
		e := y.Element
		if y.Charge < 0 && (e == 8 || e == 7 || e == 6 || e == 16 || e == 34) && c.b.Bonds[nb.Bond].Order == 1 {
			c.shift(nb.Bond, a, nb.Atom, -1)
		}
	}
}
