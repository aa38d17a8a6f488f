package reactions

import (
	"context"
	"slices"
	"sort"
	"strings"

	"shelfward/molecule"
	"shelfward/reactions/reagent"
)

// Judgement is the answer to 'is this one step sound?'.
type Judgement struct {
	Verdict       string // sound | doubtful | unsound | unknown
	Transforms    []*Transform
	Expected      []Product
	Objections    []Objection
	NotUnderstood []string
	Racemic       bool
}

// The verdicts.
const (
	Sound    = "sound"
	Doubtful = "doubtful"
	Unsound  = "unsound"
	Unknown  = "unknown"
)

// Judge asks whether the molecules give the claimed product under the conditions described. Salts are
// read as their free forms; ions without a structure of their own are dropped. described is false when
// no conditions were given: then any condition set of a transform will do.
func (b *Book) Judge(ctx context.Context, reactants, products []*molecule.Molecule, with reagent.Description, described bool, table *reagent.Table) (Judgement, error) {
	j := &judge{b: b, w: b.newWorkspace(), table: table, with: with, described: described, names: map[string]*reagent.Reagent{}}
	for _, m := range reactants {
		j.add(m)
	}
	for _, p := range products {
		for _, part := range p.Split() {
			j.claimed = append(j.claimed, part.FreeForm())
		}
	}
	sort.SliceStable(j.claimed, func(x, y int) bool { return j.claimed[x].NumAtoms() > j.claimed[y].NumAtoms() })
	j.readReagents()
	if err := j.tryAll(ctx); err != nil {
		return Judgement{}, err
	}
	return j.conclude(), nil
}

// judge is the state of one judgement.
type judge struct {
	b         *Book
	w         *workspace
	table     *reagent.Table
	with      reagent.Description
	described bool
	reactants []*subject
	extra     []*subject // substances named only among the conditions, solvents apart
	claimed   []*molecule.Molecule
	mentions  []mentioned
	found     []candidate  // transforms that give the claimed product
	others    []candidate  // transforms that fit the conditions and give something else
	near      []*Transform // transforms without reagents of their own that find some of their materials
	known     []*Transform
	names     map[string]*reagent.Reagent // charges looked up so far
	brought   []string                    // facts that salts among the materials bring, as sodium methoxide brings a base
}

// mentioned is a substance of the description or a reactant, as the condition sets see it.
type mentioned struct {
	r      *reagent.Reagent
	acts   map[string]bool
	active bool       // more than a solvent, a drying agent or part of the work-up
	late   bool       // an acid, a base or water named in a later stage: it may be no more than the work-up
	free   []*subject // its free forms, once asked for
	main   bool       // named in the first of several stages: no work-up
}

// candidate is one transform with one condition set.
type candidate struct {
	t           *Transform
	c           *Conditions
	a           assessment
	objections  []Objection
	matched     bool
	unexplained []string
	missing     []string
	foreign     []string // of the unexplained: reagents that change the course of a step by being there
	served      int      // reagents asked for that the description names
	asked       int      // facts insisted on that the description states
	uses        int      // materials with carbon that go into the product
}

func (j *judge) add(m *molecule.Molecule) {
	parts := m.Split()
	j.addSalts(parts)
	for _, part := range parts {
		if part.NumAtoms() == 1 && isMetal(part.Atom(0).Element) && part.Atom(0).Charge > 0 {
			continue // the cation of a salt
		}
		s := j.b.subject(protonated(part.FreeForm()))
		s.ion = part.Formula().Charge < 0
		if marked := cisFused(s.M); marked != nil {
			s = j.b.subject(marked)
			s.relative = true
		}
		j.reactants = append(j.reactants, s)
	}
	j.reactants = distinct(j.reactants)
}

// protonated turns a simple inorganic anion alone (hydrogensulfide, azide, chloride) into its acid: the
// transforms are written in free forms.
func protonated(m *molecule.Molecule) *molecule.Molecule {
	if m.Formula().Charge >= 0 || carbons(m) > 0 {
		return m
	}
	b := m.Builder()
	for i := range b.Atoms {
		for ; b.Atoms[i].Charge < 0 && !positiveNeighbour(m, i); b.Atoms[i].Charge++ {
			b.Atoms[i].Hydrogens++
		}
	}
	out, err := b.Build()
	if err != nil {
		return m
	}
	return out
}

// positiveNeighbour says that a charge belongs to a charge-separated form, as in azide.
func positiveNeighbour(m *molecule.Molecule, a int) bool {
	for _, n := range m.Neighbors(a) {
		if m.Atom(int(n.Atom)).Charge > 0 {
			return true
		}
	}
	return false
}

// addSalts pairs ions by charge: potassium iodide or sodium methoxide among the materials is a reagent,
// though its free form is what the transforms see.
func (j *judge) addSalts(parts []*molecule.Molecule) {
	if j.table == nil {
		return
	}
	for _, cation := range parts {
		for _, anion := range parts {
			if q := cation.Formula().Charge; q <= 0 || anion.Formula().Charge != -q {
				continue
			}
			if salt := molecule.Join(cation, anion); salt != nil {
				if r, ok := j.table.ByMolecule(salt); ok {
					j.mentions = append(j.mentions, mention(r, false))
					j.brought = append(j.brought, j.table.Facts(r)...)
				}
			}
		}
	}
}

// passive acts do nothing to a molecule by themselves.
func passive(act string) bool {
	return strings.HasPrefix(act, "solvent") || act == "drying-agent" || act == "water" || act == "inert-gas"
}

func (j *judge) readReagents() {
	for i, st := range j.with.Stages {
		for _, m := range st.Mentions {
			if m.Reagent != nil {
				active := !st.Workup && !m.Note && (i == 0 || !quenches(m.Reagent))
				named := mention(m.Reagent, active)
				named.late = i > 0 && quenches(m.Reagent)
				named.main = i == 0 && !st.Workup && len(j.with.Stages) > 1
				j.mentions = append(j.mentions, named)
			}
			if mol := mentionMolecule(m); mol != nil && !onlySolvent(m.Reagent) {
				for _, part := range mol.Split() {
					if part.NumAtoms() > 1 || !isMetal(part.Atom(0).Element) {
						j.extra = append(j.extra, j.b.subject(protonated(part.FreeForm())))
					}
				}
			}
		}
	}
	j.extra = distinct(j.extra)
	if j.table == nil {
		return
	}
	for _, s := range j.reactants {
		if r, ok := j.table.ByMolecule(s.M); ok && !s.ion {
			m := mention(r, false) // a reactant need not be explained
			j.mentions = append(j.mentions, m)
		}
	}
}

// quenches says that a reagent named in a later stage may be no more than a work-up.
func quenches(r *reagent.Reagent) bool {
	for _, act := range []string{"mineral-acid", "strong-acid", "weak-acid", "organic-acid", "hydroxide", "carbonate-base", "hydrogencarbonate", "weak-base", "water"} {
		if r.Does(act) {
			return true
		}
	}
	return false
}

// dissolves lists acts that a solvent also carries: named without further word it is there to dissolve.
var dissolves = map[string]bool{"alcohol-reagent": true, "ketone-reagent": true}

// onlySolvent says that a reagent does nothing but dissolve or dry.
func onlySolvent(r *reagent.Reagent) bool {
	if r == nil {
		return false
	}
	for _, a := range r.Acts {
		if !passive(a) {
			return false
		}
	}
	return true
}

func mentionMolecule(m reagent.Mention) *molecule.Molecule {
	if m.Reagent == nil {
		return m.Molecule
	}
	mol, err := m.Reagent.Molecule()
	if err != nil {
		return nil
	}
	return mol
}

func carbons(m *molecule.Molecule) int { return int(m.Formula().Count[6]) }

func mention(r *reagent.Reagent, active bool) mentioned {
	m := mentioned{r: r, acts: map[string]bool{}}
	solvent := r.Does("solvent")
	for _, a := range r.Acts {
		m.acts[a] = true
		m.active = m.active || !passive(a) && !(solvent && dissolves[a])
	}
	m.active = m.active && active
	return m
}

// tryAll runs every transform on the reactants alone, then with the substances named among the conditions.
func (j *judge) tryAll(ctx context.Context) error {
	pools := [][]*subject{j.reactants}
	if len(j.extra) > 0 {
		pools = append(pools, distinct(append(append([]*subject(nil), j.reactants...), j.extra...)))
	}
	for _, pool := range pools {
		for _, t := range j.b.Transforms {
			if err := ctx.Err(); err != nil {
				return err
			}
			j.try(t, pool)
		}
		if len(j.found) == 0 {
			j.tryTogether(pool)
		}
		if len(j.found) > 0 {
			return nil
		}
	}
	return nil
}

// tryTogether looks for a step in which one flask does two things.
func (j *judge) tryTogether(pool []*subject) {
	for _, t := range j.b.Transforms {
		for _, c := range t.Conditions {
			if s := j.match(t, c); len(c.Together) == 0 || !s.matched {
				continue
			}
			for _, claim := range j.claimed {
				step := j.b.stepFrom(t, pool, claim)
				if step == nil || len(step.Together) == 0 {
					continue
				}
				s := j.match(t, c)
				s.a = assessment{found: true, racemic: step.Racemic, products: []Product{{claim, step.Fraction, step.Share}}}
				s.objections = step.Objections
				j.found = append(j.found, s)
			}
		}
	}
}

// fitsHalf says that some but not all parts of a transform find a material.
func (t *Transform) fitsHalf(pool []*subject) bool {
	fit := 0
	for i := range t.part[forward] {
		for _, s := range pool {
			if t.part[forward][i].query.Matches(s.Subject) {
				fit++
				break
			}
		}
	}
	return fit > 0 && fit < len(t.part[forward])
}

func (j *judge) try(t *Transform, pool []*subject) {
	var sets []candidate
	for _, c := range t.Conditions {
		sets = append(sets, j.match(t, c))
	}
	for _, s := range sets {
		if s.matched && j.described && s.served > 0 && len(s.unexplained) == 0 {
			j.known = append(j.known, t)
			break
		}
		if s.matched && j.described && len(s.unexplained) == 0 && s.served == 0 && t.fitsHalf(pool) {
			j.near = append(j.near, t)
			break
		}
	}
	outs := t.run(j.w, pool)
	if len(outs) == 0 {
		return
	}
	hit := j.assessClaims(t, outs, pool)
	for _, s := range sets {
		s.a = hit
		if !t.appliesTo(s.c, &outs[0]) && !hit.found || hit.found && !t.appliesTo(s.c, &hit.outcome) {
			continue
		}
		if hit.found {
			s.uses = j.used(&hit.outcome)
			s.objections = append(hit.under(s.c, j.measured(&hit, pool)), j.media(t, s.c, &hit.outcome, pool, false)...)
			j.found = append(j.found, s)
		} else if s.matched {
			s.uses = j.used(strongest(outs))
			s.objections = j.media(t, s.c, &outs[0], pool, true)
			j.others = append(j.others, s)
		}
	}
}

// assessClaims weighs the outcomes against each claimed product and keeps the one that stands strongest.
func (j *judge) assessClaims(t *Transform, outs []outcome, pool []*subject) assessment {
	var best assessment
	for _, claim := range j.claimed {
		if carbons(claim) == 0 && len(j.claimed) > 1 {
			continue
		}
		var a assessment
		a.weigh(j.w, outs, claim)
		if !a.found {
			if best.products == nil {
				best.products = a.products
			}
			continue
		}
		a.judgeShare(t)
		a.judgeStereo(pool)
		a.judgeOver(j.w, t, pool)
		return a
	}
	return best
}

// strongest is the outcome that forms most.
func strongest(outs []outcome) *outcome {
	best := &outs[0]
	for i := range outs {
		if o := &outs[i]; o.blocked == "" && (best.blocked != "" || o.score > best.score) {
			best = o
		}
	}
	return best
}

// used counts the materials with carbon that an outcome takes up; they stand first in every pool.
func (j *judge) used(o *outcome) int {
	n := 0
	for i, s := range j.reactants {
		if slices.Contains(o.copies, i) && carbons(s.M) > 0 {
			n++
		}
	}
	return n
}

// media lists what the surroundings do to the other groups. A companion transform of the same flask excuses
// its groups only where the product asked for is not the one that keeps them (companions).
func (j *judge) media(t *Transform, c *Conditions, o *outcome, pool []*subject, companions bool) []Objection {
	busy := o.busyAtoms(j.w, pool)
	for _, id := range c.Together {
		if companion := j.b.byID[id]; companion != nil && companions {
			j.markCompanion(companion, pool, busy)
		}
	}
	weighed := t.otherSites(j.w, pool, busy)
	var out []Objection
	for i, s := range pool {
		used := false
		for _, which := range o.copies {
			used = used || which == i
		}
		if used {
			out = append(out, j.b.media.objections(c.Media, s.Subject, busy[i], weighed[i])...)
		}
	}
	return worstPerText(out)
}

// markCompanion marks the atoms that a companion transform of the same flask takes care of.
func (j *judge) markCompanion(t *Transform, pool []*subject, busy [][]bool) {
	for i, s := range pool {
		for _, m := range t.part[forward][0].matches(j.w, s.Subject, nil) {
			for _, a := range m {
				busy[i][a] = true
			}
		}
	}
}
