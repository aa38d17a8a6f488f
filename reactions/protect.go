package reactions

import (
	"errors"
	"io/fs"
	"slices"

	"shelfward/molecule"
	"shelfward/molecule/pattern"
	"shelfward/rules"
)

// ProtectingGroup is one way to shield a group for some steps (rules/protection.yaml). What its form
// survives stands in the tolerance table.
type ProtectingGroup struct {
	ID, Name string
	Shields  []string // ids of groups
	Form     string   // id of the group it is while it is on
	PutOn    []string // ids of transforms
	TakeOff  []string
	Builds   bool // the form is an ordinary building block as well
	Source   string
}

type sourceProtection struct {
	Groups []struct {
		rules.Place
		ID      rules.Text   `yaml:"id" need:"id: tbs"`
		Name    string       `yaml:"name" need:"name: 'tert-butyldimethylsilyl ether'"`
		Shields []rules.Text `yaml:"shields" need:"shields: [alcohol]"`
		Form    rules.Text   `yaml:"form" need:"form: silyl-ether"`
		PutOn   []rules.Text `yaml:"put_on"`
		TakeOff []rules.Text `yaml:"take_off" need:"take_off: [tbs-deprotection]"`
		Builds  bool         `yaml:"builds"`
		Source  sourceNote   `yaml:"source"`
	} `yaml:"protecting_groups"`
}

// loadProtection reads the protecting groups; a name that means nothing is an error at its place.
func (l *loader) loadProtection() (list []*ProtectingGroup) {
	if _, err := fs.Stat(l.fsys, "protection.yaml"); errors.Is(err, fs.ErrNotExist) {
		return nil // a rule set without protecting groups
	}
	var file sourceProtection
	if err := rules.ReadInto(l.fsys, "protection.yaml", &file); err != nil {
		l.addErr(rules.Place{Path: "protection.yaml"}, err)
		return nil
	}
	shown := rules.PathOf(l.fsys, "protection.yaml")
	for _, src := range file.Groups {
		for _, g := range append([]rules.Text{src.Form}, src.Shields...) {
			if !l.groups.Has(g.Value) {
				l.errs = append(l.errs, g.Errorf(shown, "no group %q in rules/groups.yaml%s", g.Value, didYouMean(g.Value, l.groups.IDs())))
			}
		}
		for _, t := range append(src.PutOn[:len(src.PutOn):len(src.PutOn)], src.TakeOff...) {
			if l.byID[t.Value] == nil {
				l.errs = append(l.errs, t.Errorf(shown, "no transform %q%s", t.Value, didYouMean(t.Value, l.ids())))
			}
		}
		list = append(list, &ProtectingGroup{ID: src.ID.Value, Name: src.Name, Shields: texts(src.Shields), Form: src.Form.Value,
			PutOn: texts(src.PutOn), TakeOff: texts(src.TakeOff), Builds: src.Builds, Source: src.Source.Text})
	}
	return list
}

// maxGuards is how many protecting groups one molecule carries at once.
const maxGuards = 2

// guarded is a step that takes a protecting group off: kept only if some other step to the same molecule
// fails without the group and would stand with it.
type guarded struct {
	group   *ProtectingGroup
	step    int             // index into expander.steps
	form    *subject        // the protected molecule
	exposed []bool          // atoms of the target that the group covers
	on      []bool          // atoms of the form that belong to the group or carry it
	stands  map[string]bool // per medium, worked out once
}

// guards is what one expansion learns about protecting groups.
type guards struct {
	list   []guarded
	failed []*draft // proposals that failed their check
	watch  bool     // the target may have been protected: what fails is kept
}

// watches says whether t takes a protecting group off that the search may not look at without need, or
// nil.
func (b *Book) watches(t *Transform) *ProtectingGroup {
	if g := b.takesOff[t.ID]; g != nil && !g.Builds {
		return g
	}
	return nil
}

// guardable says whether any such transform could have made the target.
func (x *expander) guardable() bool {
	for _, t := range x.b.guarding {
		if len(t.sites(x.w, x.target)) > 0 {
			return true
		}
	}
	return false
}

// guard notes that a step takes a protecting group off.
func (x *expander) guard(g *ProtectingGroup, d *draft) {
	e := guarded{group: g, step: len(x.steps), exposed: make([]bool, x.target.M.NumAtoms()), stands: map[string]bool{}}
	which := int32(-1)
	for a, o := range d.origins {
		if o.Reactant >= 0 && d.busy[o.Reactant][o.Atom] {
			e.exposed[a] = true
			which = o.Reactant
		}
	}
	if which < 0 {
		return
	}
	e.form = d.reactants[which]
	e.on = make([]bool, e.form.M.NumAtoms())
	for i := range e.on {
		e.on[i] = true
	}
	for a, o := range d.origins {
		if o.Reactant == which && !e.exposed[a] {
			e.on[o.Atom] = false
		}
	}
	x.guards.list = append(x.guards.list, e)
}

// dropUnneeded leaves out the steps that take off a protecting group which nothing asked for. A protected
// molecule that is at hand is no proposal of ours and stays.
func (x *expander) dropUnneeded() {
	if len(x.guards.list) == 0 {
		return
	}
	full := x.guardsOn() >= maxGuards
	drop := map[int]bool{}
	var attacks []attack
	for _, d := range x.guards.failed {
		attacks = append(attacks, d.attacks(x.w)...)
	}
	for i := range x.guards.list {
		e := &x.guards.list[i]
		if x.stocked != nil && x.stocked(e.form.M) {
			continue
		}
		if full || x.doubles(i, drop) || !x.needed(e, attacks) {
			drop[e.step] = true
		}
	}
	kept := x.steps[:0]
	for i, s := range x.steps {
		if !drop[i] {
			kept = append(kept, s)
		}
	}
	x.steps = kept
}

// doubles says whether an earlier proposal that is kept covers the same atoms with a group of the same
// form: the table tells the two not apart.
func (x *expander) doubles(i int, drop map[int]bool) bool {
	e := &x.guards.list[i]
	for j := range x.guards.list[:i] {
		o := &x.guards.list[j]
		if o.group.Form == e.group.Form && !drop[o.step] && slices.Equal(o.exposed, e.exposed) {
			return true
		}
	}
	return false
}

// guardsOn counts the protecting groups on the target.
func (x *expander) guardsOn() (n int) {
	for _, t := range x.b.guarding {
		p := &t.part[forward][0]
		n += len(disjoint(p, p.matches(x.w, x.target.Subject, nil)))
	}
	return n
}

// attack is one condition set of a failed proposal: the media, and what they do to which atoms of the
// target.
type attack struct {
	media []string
	at    [][]int32 // per group attacked its atoms in the target; empty if none of them gets there
}

// attacks lists how a proposal fails under each of its condition sets, where a protecting group could help:
// a medium attacks a group, or the same reaction runs at another site.
func (d *draft) attacks(w *workspace) (out []attack) {
	into := make([][]int32, len(d.reactants)) // atom of a reactant -> atom of the target
	for i, r := range d.reactants {
		into[i] = make([]int32, r.M.NumAtoms())
		for a := range into[i] {
			into[i][a] = -1
		}
	}
	for a, o := range d.origins {
		if o.Reactant >= 0 {
			into[o.Reactant][o.Atom] = int32(a)
		}
	}
	carry := func(reactant int, set []int32) (atoms []int32) {
		for _, a := range set {
			if t := into[reactant][a]; t >= 0 {
				atoms = append(atoms, t)
			}
		}
		return atoms
	}
	for _, c := range d.conditionSets() {
		a := attack{media: c.Media}
		hopeless := false
		for _, o := range d.under(c, nil) {
			if o.Fatal && o.Kind != KindSite && o.Kind != KindOverReaction {
				hopeless = true
			} else if o.Fatal {
				d.rivalSites(w, func(reactant int, set []int32) { a.at = append(a.at, carry(reactant, set)) })
			}
		}
		if hopeless {
			continue
		}
		for i, r := range d.reactants {
			d.b.media.attacked(c.Media, r.Subject, d.busy[i], func(set []int32) { a.at = append(a.at, carry(i, set)) })
		}
		if len(a.at) > 0 {
			out = append(out, a)
		}
	}
	return out
}

// rivalSites reports the places where the same transform could act as well.
func (d *draft) rivalSites(w *workspace, report func(reactant int, set []int32)) {
	for i, r := range d.reactants {
		for k := range d.t.part[forward] {
			p := &d.t.part[forward][k]
			for _, m := range p.matches(w, r.Subject, nil) {
				free := true
				var set []int32
				for _, q := range p.significant {
					set = append(set, m[q])
					free = free && !d.busy[i][m[q]]
				}
				if free {
					report(i, set)
				}
			}
		}
	}
}

// attacked reports the instances of groups that a medium does not leave alone: what reacts, not what only
// competes.
func (t *toleranceTable) attacked(media []string, s *pattern.Subject, busy []bool, report func(set []int32)) {
	for _, id := range media {
		m := t.media[id]
		if m == nil {
			continue
		}
		for i := range m.groups {
			if m.groups[i].level < reacts {
				continue
			}
		next:
			for _, set := range s.InstancesOf(m.groups[i].group) {
				for _, a := range set {
					if busy[a] || m.spares(s, int(a)) {
						continue next
					}
				}
				report(set)
			}
		}
	}
}

func overlaps(set []int32, marked []bool) bool {
	for _, a := range set {
		if marked[a] {
			return true
		}
	}
	return false
}

// needed says whether a protecting group saves some failed proposal: it covers an attacked group, stands
// the media, and what it leaves open one other group covers that stands them too.
func (x *expander) needed(e *guarded, attacks []attack) bool {
	for i := range attacks {
		a := &attacks[i]
		var open [][]int32
		for _, set := range a.at {
			if !overlaps(set, e.exposed) {
				open = append(open, set)
			}
		}
		if len(open) == len(a.at) || !x.standsAll(e, a.media) {
			continue
		}
		if len(open) == 0 || x.coveredByOne(open, a.media) {
			return true
		}
	}
	return false
}

func (x *expander) coveredByOne(open [][]int32, media []string) bool {
	for i := range x.guards.list {
		e := &x.guards.list[i]
		all := true
		for _, set := range open {
			all = all && overlaps(set, e.exposed)
		}
		if all && x.standsAll(e, media) {
			return true
		}
	}
	return false
}

// standsAll says whether the form stands all media: none of them attacks a group that lies on it.
func (x *expander) standsAll(e *guarded, media []string) bool {
	for _, id := range media {
		ok, known := e.stands[id]
		if !known {
			ok = true
			x.b.media.attacked([]string{id}, e.form.Subject, make([]bool, e.form.M.NumAtoms()), func(set []int32) { ok = ok && !overlaps(set, e.on) })
			e.stands[id] = ok
		}
		if !ok {
			return false
		}
	}
	return true
}

// ProtectingGroups lists the protecting groups of the rule set, in the order of the file.
func (b *Book) ProtectingGroups() []*ProtectingGroup { return b.protection }

// Threats names the media of a condition set that do not leave one of the groups alone.
func (b *Book) Threats(c *Conditions, groups []string) (names []string) {
	for _, id := range c.Media {
		m := b.media.media[id]
		if m == nil {
			continue
		}
		for _, gl := range m.groups {
			if gl.level >= reacts && slices.ContainsFunc(groups, func(g string) bool { return b.groups.Index(g) == gl.group }) {
				names = append(names, m.name)
				break
			}
		}
	}
	return names
}

// Shielded names the group that a protecting group covers in m, "" if m holds none.
func (b *Book) Shielded(g *ProtectingGroup, m *molecule.Molecule) string {
	s := pattern.NewSubject(m, b.groups)
	for _, id := range g.Shields {
		if len(s.Instances(id)) > 0 {
			return b.groups.Name(id)
		}
	}
	return ""
}
