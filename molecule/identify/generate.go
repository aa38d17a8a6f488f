package identify

import (
	"cmp"
	"context"
	"fmt"
	"slices"
	"sync"

	"shelfward/molecule"
	"shelfward/molecule/isomer"
	"shelfward/molecule/smiles"
)

// kept is a scored structure.
type kept struct {
	m     *molecule.Molecule
	score parts
	text  string // canonical SMILES, the tie-break
}

// pool keeps the best structures; offered in any order, it ends the same.
type pool struct {
	mu    sync.Mutex
	list  []kept
	keys  map[molecule.Key]bool
	worst float32
}

// keptStructures is how many candidates are scored again in full.
const keptStructures = 400

func newPool() *pool { return &pool{keys: map[molecule.Key]bool{}, worst: 1e9} }

// wants reports whether a score can still enter.
func (p *pool) wants(total float32) bool { return total <= p.worst }

// offer adds m unless it is there already.
func (p *pool) offer(m *molecule.Molecule, score parts) {
	p.mu.Lock()
	defer p.mu.Unlock()
	key := m.FlatKey()
	if p.keys[key] {
		return
	}
	p.keys[key] = true
	p.list = append(p.list, kept{m: m, score: score})
	if len(p.list) >= 2*keptStructures {
		p.shrink()
	}
}

// shrink sorts and cuts the list. Ties are cut by SMILES, so the outcome is the same in any order.
func (p *pool) shrink() {
	for i := range p.list {
		if p.list[i].text == "" {
			p.list[i].text = smiles.Write(p.list[i].m)
		}
	}
	slices.SortFunc(p.list, compareKept)
	if len(p.list) > keptStructures {
		for _, k := range p.list[keptStructures:] {
			delete(p.keys, k.m.FlatKey())
		}
		p.list = p.list[:keptStructures]
		p.worst = p.list[len(p.list)-1].score.total()
	}
}

func compareKept(a, b kept) int {
	return cmp.Or(cmp.Compare(a.score.total(), b.score.total()), cmp.Compare(a.text, b.text))
}

// searcher runs the generation for one formula.
type searcher struct {
	d       *Data
	opt     Options
	scorers sync.Pool
	pool    *pool
	expect  *molecule.Key
	// expectSeen is set when the expected structure was generated.
	expectSeen bool
	mu         sync.Mutex
	generated  int64
}

func newSearcher(d *Data, opt Options, expect *molecule.Key) *searcher {
	s := &searcher{d: d, opt: opt, pool: newPool(), expect: expect}
	s.scorers.New = func() any { return newScorer(d) }
	return s
}

// take scores one generated structure.
func (s *searcher) take(raw *isomer.Structure, allowed func(m *molecule.Molecule) bool) bool {
	m, err := raw.Materialise()
	if err != nil || !s.d.meetsPieces(m) || allowed != nil && !allowed(m) {
		return false
	}
	if s.expect != nil && m.FlatKey() == *s.expect {
		s.mu.Lock()
		s.expectSeen = true
		s.mu.Unlock()
	}
	sc := s.scorers.Get().(*scorer)
	p := sc.score(m, false)
	s.scorers.Put(sc)
	if s.pool.wants(p.total()) {
		s.pool.offer(m, p)
	}
	return true
}

// exhaust builds every structure that meets the hard evidence.
func (s *searcher) exhaust(ctx context.Context, p isomer.Problem) (isomer.Result, error) {
	p.Accept = func(raw *isomer.Structure) bool { return s.take(raw, nil) }
	r, err := isomer.Enumerate(ctx, p, isomer.Options{Workers: s.opt.Workers}, func(*isomer.Structure) bool { return true })
	s.generated += r.Generated
	return r, err
}

const (
	// perSetLimit bounds the structures built from one set of blocks, buildLimit those of all sets.
	perSetLimit = 40_000
	buildLimit  = 700_000
)

// assemble builds structures from sets of blocks, the likeliest sets first. It returns the number of
// sets tried and found.
func (s *searcher) assemble(ctx context.Context, f *molecule.Formula) (tried, found int, err error) {
	target, ok := countsOf(f)
	lib, err := loadLibrary()
	if err != nil || !ok {
		return 0, 0, err
	}
	c := &composer{lib: lib, d: s.d, target: target, unsat: int(f.Unsaturation())}
	comps := c.compositions()
	for i := range comps {
		if ctx.Err() != nil || s.generated > buildLimit {
			return i, len(comps), nil
		}
		if err := s.buildSet(ctx, f, &comps[i]); err != nil {
			return i, len(comps), err
		}
	}
	return len(comps), len(comps), nil
}

// buildSet runs the generator for every substitution pattern of the set's ring systems.
func (s *searcher) buildSet(ctx context.Context, f *molecule.Formula, comp *composition) error {
	choice := make([]int, len(comp.blocks))
	var run func(at int) error
	run = func(at int) error {
		if ctx.Err() != nil {
			return nil
		}
		if at == len(comp.blocks) {
			return s.buildOne(ctx, f, comp, choice)
		}
		from := 0
		if at > 0 && comp.blocks[at] == comp.blocks[at-1] {
			from = choice[at-1]
		}
		for k := from; k < len(comp.blocks[at].pieces); k++ {
			choice[at] = k
			if err := run(at + 1); err != nil {
				return err
			}
		}
		return nil
	}
	return run(0)
}

// problemOf writes a set of blocks as a problem for the generator.
func problemOf(f *molecule.Formula, v isomer.Valences, comp *composition, choice []int) isomer.Problem {
	p := isomer.Problem{Formula: *f, Valences: v, NoSmallRing: true}
	carbons, hetero, rings, oxidised := comp.sp3, comp.heteroH, comp.rings, false
	for i, b := range comp.blocks {
		piece := b.pieces[choice[i]]
		if n := len(p.Blocks); n > 0 && i > 0 && comp.blocks[i-1] == b && choice[i-1] == choice[i] {
			p.Blocks[n-1].Count++
		} else {
			p.Blocks = append(p.Blocks, isomer.Block{Piece: piece, Count: 1})
		}
		for h := range carbons {
			carbons[h] += b.carbonH[h]
		}
		hetero += b.heteroH
		rings += b.rings
		oxidised = oxidised || b.atoms[iS] > 0 && b.atoms[iO] > 0
	}
	for h := range carbons {
		p.Carbons[h] = isomer.Exactly(carbons[h])
	}
	p.OnHetero, p.Rings = isomer.Exactly(hetero), isomer.Exactly(rings)
	ban := func(a, b molecule.Element) { p.Bonds = append(p.Bonds, isomer.BondBan{A: a, B: b}) }
	ban(8, 8)
	ban(7, 8)
	ban(7, 7)
	if !oxidised {
		ban(8, 16)
		ban(7, 16)
	}
	for _, hal := range []molecule.Element{9, 17, 35, 53} {
		for _, x := range []molecule.Element{7, 8, 9, 16, 17, 35, 53} {
			if x <= hal || x < 9 || x == 16 {
				ban(hal, x)
			}
		}
	}
	return p
}

func (s *searcher) buildOne(ctx context.Context, f *molecule.Formula, comp *composition, choice []int) error {
	p := problemOf(f, s.d.Valences, comp, choice)
	acyl := 0
	for _, b := range comp.blocks {
		acyl += b.acyl
	}
	p.Accept = func(raw *isomer.Structure) bool {
		return countAcyl(raw) == acyl && s.take(raw, nil)
	}
	r, err := isomer.Enumerate(ctx, p, isomer.Options{Workers: s.opt.Workers, MaxStructures: perSetLimit}, func(*isomer.Structure) bool { return true })
	if err != nil {
		return fmt.Errorf("building from blocks: %w", err)
	}
	s.generated += r.Generated
	return nil
}

// countAcyl counts C=O carbons that also carry O, N, S or a halogen by a single bond: a set of blocks
// without such groups must not make them by joining a ketone with an ether, for another set has them.
func countAcyl(s *isomer.Structure) int {
	var oxo, hetero [256]uint8
	for _, b := range s.Bonds {
		for _, ends := range [2][2]uint8{{b.A, b.B}, {b.B, b.A}} {
			c, x := ends[0], ends[1]
			if s.Atoms[c].Element != 6 {
				continue
			}
			switch e := s.Atoms[x].Element; {
			case e == 8 && b.Order == 2:
				oxo[c]++
			case e != 6 && e != 1 && b.Order == 1:
				hetero[c]++
			}
		}
	}
	n := 0
	for a := range s.Atoms {
		if oxo[a] == 1 && hetero[a] > 0 {
			n++
		}
	}
	return n
}
