package identify

import (
	"cmp"
	"context"
	"fmt"
	"slices"
	"sync"
	"time"

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
	best  float32
}

// keptStructures is how many candidates are scored again in full.
const keptStructures = 400

func newPool() *pool { return &pool{keys: map[molecule.Key]bool{}, worst: 1e9, best: 1e9} }

// limit is the score above which nothing enters any more.
func (p *pool) limit() float32 {
	p.mu.Lock()
	defer p.mu.Unlock()
	return p.worst
}

// bestTotal is the least cost met so far.
func (p *pool) bestTotal() float32 {
	p.mu.Lock()
	defer p.mu.Unlock()
	return p.best
}

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
	p.best = min(p.best, score.total())
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
	// offset is how much worse the formula being searched fits than the first.
	offset float32
}

func newSearcher(d *Data, opt Options, expect *molecule.Key) *searcher {
	s := &searcher{d: d, opt: opt, pool: newPool(), expect: expect}
	s.scorers.New = func() any { return newScorer(d) }
	return s
}

// take scores one generated structure and returns what it costs, or a bound above which the scoring
// was broken off. ok is false for a structure that does not meet the hard evidence.
func (s *searcher) take(raw *isomer.Structure) (score float32, ok bool) {
	m, err := raw.Materialise()
	if err != nil || !s.d.meetsPieces(m) {
		return 0, false
	}
	if s.expect != nil && m.FlatKey() == *s.expect {
		s.mu.Lock()
		s.expectSeen = true
		s.mu.Unlock()
	}
	sc := s.scorers.Get().(*scorer)
	p, within := sc.scoreUnder(m, false, s.pool.limit()-s.offset)
	p.formula = s.offset
	s.scorers.Put(sc)
	if within {
		s.pool.offer(m, p)
	}
	return p.total(), true
}

// exhaust builds every structure that meets the hard evidence.
func (s *searcher) exhaust(ctx context.Context, p isomer.Problem) (isomer.Result, error) {
	p.Accept = func(raw *isomer.Structure) bool {
		_, ok := s.take(raw)
		return ok
	}
	r, err := isomer.Enumerate(ctx, p, isomer.Options{Workers: s.opt.Workers}, func(*isomer.Structure) bool { return true })
	s.generated += r.Generated
	return r, err
}

const (
	// A first pass looks at sampleSize structures out of at most sampleReach of each arm; a second
	// builds up to perArmLimit of the arms that looked best. buildLimit bounds all structures scored.
	// Values of ours: a pass over the usual number of arms takes a few seconds.
	sampleSize  = 120
	sampleReach = 3_000
	maxArms     = 260
	// patternStep puts the later substitution patterns of a set behind the first ones of the next sets;
	// siblingBehind is where patterns that were not sampled stand behind the best sample of their set.
	patternStep   = 0.3
	siblingBehind = 5
	perArmLimit   = 60_000
	buildLimit    = 500_000
	// armWindow is how far behind the best structure so far an arm's best sample may lie for the arm to
	// be built in full: a sample holds near relatives of every structure of its arm.
	armWindow = 20
)

// arm is a set of blocks with one substitution pattern for each of its ring systems.
type arm struct {
	comp    *composition
	order   float32 // cost of the set and place among its patterns
	choice  []int
	best    float32 // best score met so far
	sampled int64   // structures scored in the first pass
	done    bool    // all were
}

// assemble builds structures from sets of blocks: a thin sample of every set first, then all of the
// sets whose sample looked best. It returns how many sets were built in full, and how many there were.
func (s *searcher) assemble(ctx context.Context, f *molecule.Formula) (full, found int, err error) {
	target, ok := countsOf(f)
	lib, err := loadLibrary()
	if err != nil || !ok {
		return 0, 0, err
	}
	c := &composer{lib: lib, d: s.d, target: target, unsat: int(f.Unsaturation())}
	arms := armsOf(c.compositions())
	found = len(arms)
	sampling, cancel := samplingContext(ctx)
	defer cancel()
	for i := range arms[:min(found, maxArms)] {
		if sampling.Err() != nil {
			break // the likeliest sets come first; the rest of the time is for building
		}
		if err := s.sampleArm(sampling, f, &arms[i]); err != nil {
			return 0, found, err
		}
		arms[i].comp.best = min(arms[i].comp.best, arms[i].best)
	}
	for i := range arms[min(found, maxArms):] {
		// other patterns of a set stand near those sampled
		a := &arms[maxArms+i]
		a.best = a.comp.best + siblingBehind
	}
	slices.SortStableFunc(arms, func(a, b arm) int { return cmp.Compare(a.best, b.best) })
	for i := range arms {
		a := &arms[i]
		if ctx.Err() != nil || s.generated > buildLimit || a.best > s.pool.bestTotal()+armWindow {
			break
		}
		if !a.done {
			if err := s.buildArm(ctx, f, a); err != nil {
				return full, found, err
			}
		}
		if a.done {
			full++
		}
	}
	return full, found, nil
}

// samplingContext gives the first pass at most two fifths of the time left, so that a slow machine
// still builds the sets that look best.
func samplingContext(ctx context.Context) (context.Context, context.CancelFunc) {
	end, ok := ctx.Deadline()
	if !ok {
		return context.WithCancel(ctx)
	}
	return context.WithTimeout(ctx, time.Until(end)*2/5)
}

// armsOf spreads sets over the substitution patterns of their ring systems.
func armsOf(comps []composition) []arm {
	var out []arm
	for i := range comps {
		comp := &comps[i]
		comp.best = 1e9
		index := 0
		choice := make([]int, len(comp.blocks))
		var run func(at int)
		run = func(at int) {
			if at == len(comp.blocks) {
				out = append(out, arm{comp: comp, order: comp.cost + patternStep*float32(index), choice: slices.Clone(choice), best: 1e9})
				index++
				return
			}
			from := 0
			if at > 0 && comp.blocks[at] == comp.blocks[at-1] {
				from = choice[at-1]
			}
			for k := from; k < len(comp.blocks[at].pieces); k++ {
				choice[at] = k
				run(at + 1)
			}
		}
		run(0)
		if len(out) > 20*maxArms {
			break
		}
	}
	slices.SortStableFunc(out, func(a, b arm) int { return cmp.Compare(a.order, b.order) })
	return out
}

// sampleArm scores a spread sample of the arm's structures.
func (s *searcher) sampleArm(ctx context.Context, f *molecule.Formula, a *arm) error {
	p := problemOf(f, s.d.Valences, a.comp, a.choice)
	size, err := isomer.Estimate(ctx, p, 20, 1)
	if ctx.Err() != nil {
		return nil
	}
	if err != nil {
		return fmt.Errorf("building from blocks: %w", err)
	}
	every := uint64(max(1, min(size.Structures, sampleReach)/sampleSize))
	acyl, at := acylOf(a.comp), uint64(0)
	p.Accept = func(raw *isomer.Structure) bool {
		at++
		// every n-th on average, not in step with the generator
		if every > 1 && (at*0x9e3779b97f4a7c15)>>32%every != 0 || countAcyl(raw) != acyl {
			return true
		}
		if score, ok := s.take(raw); ok {
			a.best = min(a.best, score)
			a.sampled++
		}
		return true
	}
	r, err := isomer.Enumerate(ctx, p, isomer.Options{Workers: 1, MaxStructures: sampleReach}, func(*isomer.Structure) bool { return true })
	if err != nil && ctx.Err() == nil {
		return fmt.Errorf("building from blocks: %w", err)
	}
	a.done = r.Complete && every == 1
	s.generated += a.sampled
	return nil
}

// buildArm scores every structure of the arm, up to a limit.
func (s *searcher) buildArm(ctx context.Context, f *molecule.Formula, a *arm) error {
	p := problemOf(f, s.d.Valences, a.comp, a.choice)
	acyl := acylOf(a.comp)
	p.Accept = func(raw *isomer.Structure) bool {
		if countAcyl(raw) != acyl {
			return false
		}
		_, ok := s.take(raw)
		return ok
	}
	r, err := isomer.Enumerate(ctx, p, isomer.Options{Workers: s.opt.Workers, MaxStructures: perArmLimit}, func(*isomer.Structure) bool { return true })
	if err != nil && ctx.Err() == nil {
		return fmt.Errorf("building from blocks: %w", err)
	}
	a.done = r.Complete
	s.generated += max(r.Generated-a.sampled, 0)
	return nil
}

func acylOf(comp *composition) int {
	acyl := 0
	for _, b := range comp.blocks {
		acyl += b.acyl
	}
	return acyl
}

// problemOf writes a set of blocks as a problem for the generator.
func problemOf(f *molecule.Formula, v isomer.Valences, comp *composition, choice []int) isomer.Problem {
	p := isomer.Problem{Formula: *f, Valences: v, NoSmallRing: true}
	carbons, hetero, rings, oxidised, imine := comp.sp3, comp.heteroH, comp.rings, false, false
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
		imine = imine || b.shows == "imine"
		oxidised = oxidised || b.atoms[iS] > 0 && b.atoms[iO] > 0
	}
	for h := range carbons {
		p.Carbons[h] = isomer.Exactly(carbons[h])
	}
	p.OnHetero, p.Rings = isomer.Exactly(hetero), isomer.Exactly(rings)
	ban := func(a, b molecule.Element) {
		for _, blk := range p.Blocks { // a ban also holds inside blocks
			if hasBond(&blk.Piece, a, b) {
				return
			}
		}
		p.Bonds = append(p.Bonds, isomer.BondBan{A: a, B: b})
	}
	ban(8, 8)
	ban(7, 8)
	if !imine {
		ban(7, 7) // with C=N blocks N-substituted azoles and hydrazones must be reached
	}
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

// hasBond reports a bond between two elements inside a piece.
func hasBond(p *isomer.Piece, a, b molecule.Element) bool {
	for _, x := range p.Bonds {
		e, f := p.Atoms[x.A].Element, p.Atoms[x.B].Element
		if e == a && f == b || e == b && f == a {
			return true
		}
	}
	return false
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
