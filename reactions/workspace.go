package reactions

import (
	"encoding/binary"
	"sync"

	"shelfward/molecule"
	"shelfward/molecule/pattern"
)

// workspace remembers what one expansion or judgement has worked out, for hundreds of proposals share
// their leaving groups, by-products and precursors; and it holds the memory of what is thrown away at
// its end: matches, mappings, pieces. Not safe for concurrent use.
type workspace struct {
	b        *Book
	built    map[molecule.Fingerprint]*made
	subjects map[molecule.Key]*subject
	seen     map[setKey]bool // precursor sets of the transform at hand
	spare    []*subject      // subjects of earlier expansions whose memory can be used again
	taken    int             // how many of them are in use

	makings    arena[made]
	pieces     arena[piece]
	atoms      arena[int32]
	counts     arena[int]
	mappings   arena[[]int32]
	pools      arena[pool]
	molecules  arena[*molecule.Molecule]
	laid       arena[laid]
	matches    arena[partMatch]
	perPart    arena[[]partMatch]
	found      arena[[][]partMatch]
	outcomes   arena[outcome]
	drafts     arena[draft]
	subjectsOf arena[*subject]
	busy       arena[[]bool]
	flags      arena[bool]

	expected *expectation // of the run at hand, nil: none

	gatherer gatherer   // scratch of matches
	tried    []proposal // scratch of withFragments
	finder   siteFinder // scratch of sites
	combiner combiner   // scratch of run
}

var workspaces = sync.Pool{New: func() any {
	w := &workspace{built: map[molecule.Fingerprint]*made{}, subjects: map[molecule.Key]*subject{}, seen: map[setKey]bool{}}
	w.gatherer.w = w
	w.gatherer.add = w.gatherer.take
	return w
}}

func (b *Book) newWorkspace() *workspace {
	w := workspaces.Get().(*workspace)
	w.b = b
	return w
}

// maxSpare bounds the subjects whose memory is kept.
const maxSpare = 1024

// release gives the memory of w to the next workspace: nothing that came from w may be used any more but
// molecules.
func (w *workspace) release() {
	w.b = nil
	clear(w.built)
	clear(w.subjects)
	clear(w.seen)
	w.spare = w.spare[:min(len(w.spare), maxSpare)]
	w.taken = 0
	w.makings.reset()
	w.pieces.reset()
	w.atoms.reset()
	w.counts.reset()
	w.mappings.reset()
	w.pools.reset()
	w.molecules.reset()
	w.laid.reset()
	w.matches.reset()
	w.perPart.reset()
	w.found.reset()
	w.outcomes.reset()
	w.drafts.reset()
	w.subjectsOf.reset()
	w.busy.reset()
	w.flags.reset()
	w.expected = nil
	workspaces.Put(w)
}

// arena hands out slices that are given back all at once.
type arena[T any] struct {
	room []T // the part handed out lies below len
}

// take returns n zero values.
func (a *arena[T]) take(n int) []T {
	if cap(a.room)-len(a.room) < n {
		a.room = make([]T, 0, max(2*cap(a.room), n, 256))
	}
	at := len(a.room)
	a.room = a.room[:at+n]
	s := a.room[at : at+n : at+n]
	clear(s)
	return s
}

// keep returns a copy of s.
func (a *arena[T]) keep(s []T) []T {
	out := a.take(len(s))
	copy(out, s)
	return out
}

func (a *arena[T]) reset() {
	clear(a.room)
	a.room = a.room[:0]
}

// made is a molecule that edits have made, with what was asked of it so far.
type made struct {
	m     *molecule.Molecule
	s     *subject
	rings answer // whether its rings are sane
	lines uint64 // its sketch, once asked for
}

func (x *made) sketch() uint64 {
	if x.lines == 0 {
		x.lines = x.m.Sketch()
	}
	return x.lines
}

// madeFrom is the subject as if an edit had made it.
func (w *workspace) madeFrom(s *subject) *made {
	x := &w.makings.take(1)[0]
	x.m, x.s = s.M, s
	return x
}

// answer to a question that may not have been asked yet.
type answer uint8

const (
	unknown answer = iota
	no
	yes
)

func answerOf(b bool) answer {
	if b {
		return yes
	}
	return no
}

// build freezes what b holds, or returns what was frozen before from the same atoms and bonds.
func (w *workspace) build(b *molecule.Builder) (*made, error) {
	f := b.Fingerprint()
	if x := w.built[f]; x != nil {
		return x, nil
	}
	var m *molecule.Molecule
	var err error
	if len(b.Atoms) <= maxCommon {
		m, err = w.b.common.build(b, f)
	} else {
		m, err = b.Build()
	}
	if err != nil {
		return nil, err
	}
	x := &w.makings.take(1)[0]
	x.m = m
	w.built[f] = x
	return x, nil
}

// subject is a molecule ready for matching, with its key.
type subject struct {
	*pattern.Subject
	key      molecule.Key
	ion      bool    // drawn as an anion: its acid is not in the flask
	relative bool    // its marks say only how centres stand to each other: a racemate
	stock    answer  // whether it is at hand
	far      []int32 // see featureDistance
	lines    uint64  // its sketch, once asked for
}

func (s *subject) sketch() uint64 {
	if s.lines == 0 {
		s.lines = s.M.Sketch()
	}
	return s.lines
}

func (b *Book) subject(m *molecule.Molecule) *subject {
	return &subject{Subject: pattern.NewSubject(m, b.groups), key: m.Key()}
}

// of returns the subject of the first molecule met with the key of m; its atoms may be numbered otherwise.
func (w *workspace) of(m *molecule.Molecule) *subject {
	k := m.Key()
	s := w.subjects[k]
	if s == nil {
		s = w.newSubject(m, k)
		w.subjects[k] = s
	}
	return s
}

func (w *workspace) newSubject(m *molecule.Molecule, k molecule.Key) *subject {
	if w.taken == len(w.spare) {
		w.spare = append(w.spare, &subject{Subject: &pattern.Subject{}})
	}
	s := w.spare[w.taken]
	w.taken++
	s.Subject.Reset(m, w.b.groups)
	*s = subject{Subject: s.Subject, key: k, far: s.far[:0]}
	return s
}

// subjectOf is of for the molecule of a piece.
func (w *workspace) subjectOf(p *piece) *subject {
	if p.s == nil {
		p.s = w.of(p.m)
	}
	return p.s
}

// setKey identifies a multiset of molecules: the sum of their keys.
type setKey [2]uint64

func (s *setKey) add(k molecule.Key) {
	s[0] += binary.BigEndian.Uint64(k[:8])
	s[1] += binary.BigEndian.Uint64(k[8:])
}

func (w *workspace) setOf(pieces []piece) (s setKey) {
	for i := range pieces {
		s.add(pieces[i].m.Key())
	}
	return s
}

// sketchOf is the sum of the sketches of pieces.
func sketchOf(pieces []piece) (sum uint64) {
	for i := range pieces {
		sum += pieces[i].sketch()
	}
	return sum
}

func (w *workspace) newPool(ms []*molecule.Molecule) *pool {
	p := &w.pools.take(1)[0]
	p.molecules, p.offset = ms, w.atoms.take(len(ms))
	for i, m := range ms {
		p.offset[i] = int32(p.atoms)
		p.atoms += m.NumAtoms()
	}
	return p
}

func (w *workspace) poolOf(ms []*subject, which []int) *pool {
	list := w.molecules.take(len(which))
	for i, k := range which {
		list[i] = ms[k].M
	}
	return w.newPool(list)
}

// emptyMapping is a mapping of the slots of t with none found yet.
func (w *workspace) emptyMapping(t *Transform) []int32 {
	to := w.atoms.take(len(t.script.slots))
	for i := range to {
		to[i] = -1
	}
	return to
}
