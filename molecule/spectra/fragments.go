package spectra

import (
	"cmp"
	"io/fs"
	"slices"
	"strings"

	"shelfward/molecule"
	"shelfward/rules"
)

// process is a way in which a molecular ion falls apart.
type process uint8

const (
	acylium process = iota
	besideN
	besideO
	besideS
	benzylic
	allylic
	tertiary
	secondary
	primary
	methylIon
	arylIon
	otherCut
	ringOpening
	mcLafferty
	lossH
	lossHHetero
	lossWater
	lossAcid
	lossHX
	lossNO
	lossCO
	numProcesses
)

var processNames = [numProcesses]string{
	"acylium", "beside nitrogen", "beside oxygen", "beside sulfur", "benzylic", "allylic", "tertiary", "secondary", "primary",
	"methyl", "aryl", "other cleavage", "ring opening", "McLafferty", "loss of hydrogen", "loss of hydrogen beside a heteroatom",
	"loss of water", "loss of a carboxylic acid", "loss of hydrogen halide", "loss of nitric oxide", "loss of carbon monoxide",
}

// Fragment is an expected ion: nominal m/z and how likely it is among the main peaks (0-1).
type Fragment struct {
	MZ     int16
	Weight float32
	how    process
}

// Name says how the ion forms, in words.
func (f Fragment) Name() string { return processNames[f.how] }

type fragmentFile struct {
	Sources map[string]string `yaml:"sources"`
	Ions    []struct {
		sourced `yaml:",inline"`
		Process rules.Text `yaml:"process" need:"process: acylium"`
		Weight  float64    `yaml:"weight"`
	} `yaml:"ions"`
	Further struct {
		sourced  `yaml:",inline"`
		CO       float64 `yaml:"carbon_monoxide"`
		Ethene   float64 `yaml:"ethene"`
		Ethyne   float64 `yaml:"acetylene"`
		Water    float64 `yaml:"water"`
		Hydrogen float64 `yaml:"hydrogen"`
	} `yaml:"further"`
}

func (t *tables) readFragments(fsys fs.FS) error {
	const name = "fragments.yaml"
	var f fragmentFile
	if err := rules.ReadInto(fsys, name, &f); err != nil {
		return err
	}
	for _, r := range f.Ions {
		i := slices.Index(processNames[:], r.Process.Value)
		if i < 0 {
			return r.Process.Errorf(rules.PathOf(fsys, name), "unknown process %q; known: %s", r.Process.Value, strings.Join(processNames[:], "; "))
		}
		if err := sourceCheck(f.Sources, r.sourced); err != nil {
			return err
		}
		t.ion[i] = float32(r.Weight)
	}
	t.furtherCO, t.furtherEthene, t.furtherEthyne = float32(f.Further.CO), float32(f.Further.Ethene), float32(f.Further.Ethyne)
	t.furtherWater, t.furtherH = float32(f.Further.Water), float32(f.Further.Hydrogen)
	return nil
}

// nominal masses of the commonest isotope.
func nominalMass(el uint8) int {
	switch el {
	case hydrogen:
		return 1
	case boron:
		return 11
	case carbon:
		return 12
	case nitrogen:
		return 14
	case oxygen:
		return 16
	case fluorine:
		return 19
	case silicon:
		return 28
	case phosphor:
		return 31
	case sulfur:
		return 32
	case chlorine:
		return 35
	case bromine:
		return 79
	case iodine:
		return 127
	}
	f := molecule.Formula{}
	f.Count[el] = 1
	return int(f.MonoisotopicMass() + 0.5)
}

// cutter walks the pieces of a molecule for Fragments.
type cutter struct {
	p     *Predictor
	total int
	seen  []bool
	out   []Fragment
}

// Fragments lists the ions expected of the molecule last perceived, each m/z once with its best
// weight, by falling weight.
func (p *Predictor) Fragments(m *molecule.Molecule, out []Fragment) []Fragment {
	if p.m != m {
		p.perceive(m)
	}
	c := cutter{p: p, seen: make([]bool, p.n), out: out[:0]}
	for a := range p.n {
		c.total += nominalMass(p.el[a]) + int(p.hyd[a])
	}
	for b := range m.NumBonds() {
		bond := m.Bond(b)
		if bond.Order == 1 && !bond.Ring {
			c.cut(int(bond.A), int(bond.B))
			c.cut(int(bond.B), int(bond.A))
		}
	}
	c.wholeLosses()
	c.ringCuts()
	return mergeFragments(c.out)
}

// mergeFragments keeps the best weight for each m/z.
func mergeFragments(out []Fragment) []Fragment {
	slices.SortStableFunc(out, func(a, b Fragment) int {
		return cmp.Or(cmp.Compare(a.MZ, b.MZ), cmp.Compare(b.Weight, a.Weight))
	})
	out = slices.CompactFunc(out, func(a, b Fragment) bool { return a.MZ == b.MZ })
	slices.SortStableFunc(out, func(a, b Fragment) int { return cmp.Compare(b.Weight, a.Weight) })
	return out
}

func (c *cutter) add(mz int, weight float32, how process) {
	if mz >= 12 && mz <= c.total && weight > 0.02 {
		c.out = append(c.out, Fragment{int16(mz), weight, how})
	}
}

// side returns the mass of the piece that holds a when the bond a-b is cut, its aromatic atoms and
// oxygens.
func (c *cutter) side(a, b int) (mass, arenes, oxygens int) {
	p := c.p
	clear(c.seen)
	c.seen[a], c.seen[b] = true, true
	stack := append(make([]int32, 0, 64), int32(a))
	for len(stack) > 0 {
		x := int(stack[len(stack)-1])
		stack = stack[:len(stack)-1]
		mass += nominalMass(p.el[x]) + int(p.hyd[x])
		if p.aromatic[x] {
			arenes++
		}
		if p.el[x] == oxygen {
			oxygens++
		}
		for _, nb := range p.nb[x] {
			if !c.seen[nb.Atom] {
				c.seen[nb.Atom] = true
				stack = append(stack, nb.Atom)
			}
		}
	}
	return mass, arenes, oxygens
}

// cut adds the ion at a when the bond to b breaks, what it loses further, and rearrangements that
// begin there.
func (c *cutter) cut(a, b int) {
	p, t := c.p, c.p.t
	mass, arenes, oxygens := c.side(a, b)
	how := c.stability(a, b)
	w := t.ion[how]
	if p.el[b] != carbon && how > allylic && how < arylIon {
		w += 0.1 // a heteroatom leaves easily
	}
	c.add(mass, w, how)
	c.add(mass-1, w*t.furtherH, how)
	c.add(mass+1, w*t.furtherH, how)
	if how == acylium {
		c.add(mass-28, w*t.furtherCO, how)
		if arenes > 0 {
			c.add(mass-54, w*t.furtherCO*t.furtherEthyne, how)
		}
	}
	if arenes > 0 {
		c.add(mass-26, w*t.furtherEthyne, how)
		c.add(mass-27, w*t.furtherEthyne*0.6, how)
	} else {
		c.add(mass-28, w*t.furtherEthene, how)
		c.add(mass-42, w*t.furtherEthene*0.7, how)
		c.add(mass-2, w*t.furtherEthene, how)
	}
	if oxygens > 0 {
		c.add(mass-18, w*t.furtherWater, how)
		c.add(mass-32, w*t.furtherWater*0.6, how)
	}
	c.rearrange(a, b, mass)
}

// stability names the cation that forms at a when b leaves.
func (c *cutter) stability(a, b int) process {
	p := c.p
	if p.el[a] != carbon {
		return otherCut
	}
	if p.carbonyl[a] != noCarbonyl && p.sp[a] == double {
		return acylium
	}
	switch p.sp[a] {
	case arene:
		return arylIon
	case single:
	default:
		return otherCut
	}
	carbons, found := 0, otherCut
	for _, nb := range p.nb[a] {
		x := int(nb.Atom)
		if x == b {
			continue
		}
		switch p.el[x] {
		case nitrogen:
			if p.carbonylBeside(x) {
				found = min(found, besideO)
			} else {
				found = min(found, besideN)
			}
		case oxygen:
			if !p.carbonylBeside(x) {
				found = min(found, besideO)
			}
		case sulfur:
			found = min(found, besideS)
		case carbon:
			carbons++
			if p.sp[x] == arene {
				found = min(found, benzylic)
			} else if p.sp[x] == double && p.carbonyl[x] == noCarbonyl {
				found = min(found, allylic)
			}
		}
	}
	if found < otherCut {
		return found
	}
	return [4]process{methylIon, primary, secondary, tertiary}[min(carbons, 3)]
}

func (p *Predictor) carbonylBeside(x int) bool {
	for _, nb := range p.nb[x] {
		if p.carbonyl[nb.Atom] != noCarbonyl {
			return true
		}
	}
	return false
}

// rearrange adds the McLafferty ion (b: alpha carbon, a: beta carbon that leaves with the alkene) and
// the loss of RCOOH from esters (a: alkyl carbon, b: the O).
func (c *cutter) rearrange(a, b, mass int) {
	p, t := c.p, c.p.t
	if p.el[a] == carbon && p.sp[a] == single && p.el[b] != carbon && p.el[b] != nitrogen && p.carbonylBeside(b) {
		for _, nb := range p.nb[a] {
			if p.el[nb.Atom] == carbon && p.hyd[nb.Atom] > 0 && p.sp[nb.Atom] == single {
				c.add(mass-1, t.ion[lossAcid], lossAcid)
				c.add(c.total-mass+2, t.ion[lossAcid]*0.6, lossAcid)
				c.add(c.total-mass+1, t.ion[lossAcid]*0.5, lossAcid)
				break
			}
		}
	}
	if p.el[a] != carbon || p.sp[a] != single {
		return
	}
	gamma := false
	for _, nb := range p.nb[a] {
		if x := int(nb.Atom); x != b && p.sp[x] == single && p.hyd[x] > 0 && p.el[x] == carbon {
			gamma = true
		}
	}
	if !gamma {
		return
	}
	for _, nb := range p.nb[b] {
		x := int(nb.Atom)
		switch {
		case x == a:
		case p.carbonyl[x] != noCarbonyl && p.sp[x] == double && p.el[b] == carbon && p.sp[b] == single:
			c.add(c.total-mass+1, t.ion[mcLafferty], mcLafferty)
		case p.sp[x] == arene && p.el[b] == carbon && p.sp[b] == single:
			c.add(c.total-mass+1, t.ion[mcLafferty]*0.5, mcLafferty)
		}
	}
}

// wholeLosses adds what the molecular ion loses as a small molecule.
func (c *cutter) wholeLosses() {
	p, t := c.p, c.p.t
	c.add(c.total, 0.5, otherCut)
	c.add(c.total-1, t.ion[lossH], lossH)
	for a := range p.n {
		switch {
		case p.el[a] == oxygen && p.hyd[a] == 1 && p.deg[a] == 1:
			x := int(p.nb[a][0].Atom)
			if p.sp[x] == single {
				c.add(c.total-18, t.ion[lossWater], lossWater)
			} else if p.sp[x] == arene {
				c.add(c.total-28, t.ion[lossCO], lossCO)
				c.add(c.total-29, t.ion[lossCO]*0.7, lossCO)
			}
		case isHalogen(p.el[a]):
			c.add(c.total-nominalMass(p.el[a])-1, t.ion[lossHX], lossHX)
		case p.el[a] == nitrogen && p.groupSeen(-1, a) == NO2:
			c.add(c.total-30, t.ion[lossNO], lossNO)
		case p.carbonyl[a] != noCarbonyl && (p.ring[a] > 0 || p.sp[a] == arene):
			c.add(c.total-28, t.ion[lossCO], lossCO)
		case p.carbonyl[a] != noCarbonyl && p.hyd[a] == 1:
			c.add(c.total-1, t.ion[lossHHetero], lossHHetero)
			c.add(c.total-29, t.ion[lossCO], lossCO)
		}
		if p.el[a] == carbon && p.hyd[a] > 0 && p.sp[a] == single && p.bearsHetero(a) {
			c.add(c.total-1, t.ion[lossHHetero], lossHHetero)
		}
	}
}

// ringCuts opens saturated rings at two single bonds.
func (c *cutter) ringCuts() {
	p, t := c.p, c.p.t
	for _, r := range p.ringOf {
		n := len(r)
		if n > 8 {
			continue
		}
		simple := true
		for _, x := range r {
			simple = simple && !p.aromatic[x]
		}
		if !simple {
			continue
		}
		for i := range n {
			for k := i + 1; k < n; k++ {
				if p.orderOf(r, i) == 1 && p.orderOf(r, k) == 1 {
					mass := 0
					for j := i + 1; j <= k; j++ {
						mass += c.branchMass(int(r[j]), r)
					}
					for _, mz := range []int{mass, c.total - mass} {
						c.add(mz, t.ion[ringOpening], ringOpening)
						c.add(mz-1, t.ion[ringOpening]*0.6, ringOpening)
						c.add(mz+1, t.ion[ringOpening]*0.5, ringOpening)
					}
				}
			}
		}
	}
}

func (p *Predictor) orderOf(r []int32, i int) uint8 {
	b := p.m.BondBetween(int(r[i]), int(r[(i+1)%len(r)]))
	if b < 0 {
		return 0
	}
	return p.order[b]
}

// branchMass is the mass of ring atom x with everything that hangs on it.
func (c *cutter) branchMass(x int, ring []int32) int {
	p := c.p
	clear(c.seen)
	for _, y := range ring {
		c.seen[y] = true
	}
	mass := 0
	stack := append(make([]int32, 0, 64), int32(x))
	for len(stack) > 0 {
		y := int(stack[len(stack)-1])
		stack = stack[:len(stack)-1]
		mass += nominalMass(p.el[y]) + int(p.hyd[y])
		for _, nb := range p.nb[y] {
			if !c.seen[nb.Atom] {
				c.seen[nb.Atom] = true
				stack = append(stack, nb.Atom)
			}
		}
	}
	return mass
}
