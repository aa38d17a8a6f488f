package route

import (
	"fmt"
	"slices"
	"strings"

	"shelfward/molecule"
	"shelfward/reactions"
)

// Protection is a group shielded over some steps of a route.
type Protection struct {
	Group    string   `json:"group"`     // what is shielded, in words
	As       string   `json:"as"`        // the form it has meanwhile
	PutOn    int      `json:"put_on"`    // step; 0: it came with a material
	TakenOff int      `json:"taken_off"` // step
	Through  []int    `json:"through"`   // steps between
	Against  []string `json:"against"`   // the media among them that would not leave the group alone
}

// protectingBook knows protecting groups; *reactions.Book does.
type protectingBook interface {
	ProtectingGroups() []*reactions.ProtectingGroup
	Threats(c *reactions.Conditions, groups []string) []string
	Shielded(g *reactions.ProtectingGroup, m *molecule.Molecule) string
}

// protections finds the protecting groups that a route puts on or takes off.
func (r *Route) protections(w *World) {
	b, ok := w.Book.(protectingBook)
	if !ok {
		return
	}
	for _, g := range b.ProtectingGroups() {
		for j := range r.Steps {
			if s := &r.Steps[j]; slices.Contains(g.TakeOff, s.Transform) {
				r.protection(b, g, j)
			}
		}
	}
	slices.SortStableFunc(r.Protections, func(a, b Protection) int { return a.TakenOff - b.TakenOff })
}

// protection follows the group of the form that step j takes off back to the step that put it on.
func (r *Route) protection(b protectingBook, g *reactions.ProtectingGroup, j int) {
	p := Protection{Group: b.Shielded(g, r.Steps[j].Molecule), As: g.Name, TakenOff: j + 1, Through: []int{}, Against: []string{}}
	for at := r.before(j); at >= 0; at = r.before(at) {
		if slices.Contains(g.PutOn, r.Steps[at].Transform) {
			p.PutOn = at + 1
			break
		}
		p.Through = append(p.Through, at+1)
		for _, name := range b.Threats(r.Steps[at].Set, g.Shields) {
			if !slices.Contains(p.Against, name) {
				p.Against = append(p.Against, name)
			}
		}
	}
	if p.Group == "" || g.Builds && (p.PutOn == 0 || len(p.Against) == 0) {
		return
	}
	slices.Reverse(p.Through)
	slices.Reverse(p.Against)
	r.Protections = append(r.Protections, p)
}

// before is the index of the step that makes the largest material of step j, -1 if all are from the shelf.
func (r *Route) before(j int) int {
	at, most := -1, 0
	for i, n := range r.Steps[j].MadeBy {
		if size := r.Steps[j].Consumed[i].NumAtoms(); n > 0 && size > most {
			at, most = n-1, size
		}
	}
	return at
}

// text says the protection in one line.
func (p *Protection) text() string {
	from := "as it comes"
	if p.PutOn > 0 {
		from = fmt.Sprintf("put on in step %d", p.PutOn)
	}
	why := ""
	if len(p.Through) > 0 {
		why = ", through " + stepList(p.Through)
	}
	if len(p.Against) > 0 {
		why += " (" + strings.Join(p.Against, "; ") + ")"
	}
	return fmt.Sprintf("the %s as %s, %s%s, taken off in step %d", p.Group, p.As, from, why, p.TakenOff)
}
