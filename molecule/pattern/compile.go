package pattern

import "sort"

// planStep matches one query atom: from the neighbours of an atom matched before (anchor), or from
// all atoms when a new part begins. Closing bonds lead back to atoms matched before.
type planStep struct {
	atom    int
	anchor  int // query atom, -1: any atom of the subject
	bond    int // query bond to the anchor
	closing []closing
}

type closing struct{ atom, bond int }

// Compile parses text, adds the words of where, and orders the query atoms. Errors are *Error for the
// text and *WordError for the words. groups may be nil when no word names a group.
func Compile(text string, where Where, groups *Groups) (*Query, error) {
	q, err := Parse(text)
	if err != nil {
		return nil, err
	}
	if err := q.addWords(where, groups); err != nil {
		return nil, err
	}
	q.finish()
	return q, nil
}

// CompileParts compiles several texts into one query whose parts may lie in one molecule or in several.
// firstAtom gives the index at which each text's atoms begin.
func CompileParts(texts []string, where Where, groups *Groups) (q *Query, firstAtom []int, err error) {
	q = &Query{}
	for i, text := range texts {
		part, err := Parse(text)
		if err != nil {
			return nil, nil, err
		}
		if i > 0 {
			q.Text += "."
		}
		q.Text += text
		shift := len(q.Atoms)
		firstAtom = append(firstAtom, shift)
		q.Atoms = append(q.Atoms, part.Atoms...)
		for _, b := range part.Bonds {
			b.A, b.B = b.A+shift, b.B+shift
			q.Bonds = append(q.Bonds, b)
		}
	}
	p := parser{text: q.Text, q: q}
	if err := p.checkClasses(); err != nil {
		return nil, nil, err
	}
	if len(q.Atoms) > MaxAtoms {
		return nil, nil, p.fail(0, "more than %d atoms", MaxAtoms)
	}
	if err := q.addWords(where, groups); err != nil {
		return nil, nil, err
	}
	q.finish()
	return q, firstAtom, nil
}

func (q *Query) finish() {
	q.labelParts()
	q.countNeeded()
	q.plan = q.planFrom(-1)
}

// labelParts numbers the connected pieces in order of their first atom.
func (q *Query) labelParts() {
	q.Part = make([]int, len(q.Atoms))
	for i := range q.Part {
		q.Part[i] = -1
	}
	for i := range q.Atoms {
		if q.Part[i] >= 0 {
			continue
		}
		queue := []int{i}
		q.Part[i] = q.Parts
		for len(queue) > 0 {
			a := queue[0]
			queue = queue[1:]
			for _, b := range q.Bonds {
				for _, pair := range [2][2]int{{b.A, b.B}, {b.B, b.A}} {
					if pair[0] == a && q.Part[pair[1]] < 0 {
						q.Part[pair[1]] = q.Parts
						queue = append(queue, pair[1])
					}
				}
			}
		}
		q.Parts++
	}
}

func (q *Query) countNeeded() {
	q.needed = nil
next:
	for _, a := range q.Atoms {
		e, ok := a.SingleElement()
		if !ok {
			continue
		}
		for i := range q.needed {
			if q.needed[i].element == e {
				q.needed[i].count++
				continue next
			}
		}
		q.needed = append(q.needed, need{e, 1})
	}
}

// rarity orders starting atoms: the rarer in ordinary molecules, the earlier.
func rarity(a *QueryAtom) int {
	r := 0
	if e, ok := a.SingleElement(); ok {
		switch e {
		case 6:
			r = 10
		case 7, 8:
			r = 30
		default:
			r = 50
		}
	}
	if a.Charge != 0 {
		r += 30
	}
	if a.Hydrogens >= 0 {
		r += 3
	}
	if len(a.tests) > 0 {
		r += 2
	}
	return r
}

// planFrom makes a plan that begins at atom first, or at the rarest where first is negative; every
// further part begins at its rarest atom.
func (q *Query) planFrom(first int) (plan []planStep) {
	done := make([]bool, len(q.Atoms))
	var starts []int
	if first >= 0 {
		starts = append(starts, first)
	}
	for part := range q.Parts {
		if first < 0 || part != q.Part[first] {
			starts = append(starts, q.rarest(part))
		}
	}
	for _, start := range starts {
		plan = append(plan, planStep{atom: start, anchor: -1, bond: -1})
		done[start] = true
		for {
			step, more := q.nextStep(q.Part[start], done)
			if !more {
				break
			}
			plan = append(plan, step)
		}
	}
	return plan
}

// rarest is the first of the rarest atoms of a part.
func (q *Query) rarest(part int) int {
	start := -1
	for i := range q.Atoms {
		if q.Part[i] == part && (start < 0 || rarity(&q.Atoms[i]) > rarity(&q.Atoms[start])) {
			start = i
		}
	}
	return start
}

// nextStep takes the next atom of the part: the one with most bonds to matched atoms, then the rarest.
func (q *Query) nextStep(part int, done []bool) (step planStep, more bool) {
	type choice struct{ atom, links, rare int }
	var choices []choice
	for i := range q.Atoms {
		if done[i] || q.Part[i] != part {
			continue
		}
		links := 0
		for _, b := range q.Bonds {
			if b.A == i && done[b.B] || b.B == i && done[b.A] {
				links++
			}
		}
		if links > 0 {
			choices = append(choices, choice{i, links, rarity(&q.Atoms[i])})
		}
	}
	if len(choices) == 0 {
		return step, false
	}
	sort.SliceStable(choices, func(x, y int) bool {
		if choices[x].links != choices[y].links {
			return choices[x].links > choices[y].links
		}
		return choices[x].rare > choices[y].rare
	})
	step = planStep{atom: choices[0].atom, anchor: -1}
	for bi, b := range q.Bonds {
		other := -1
		if b.A == step.atom && done[b.B] {
			other = b.B
		} else if b.B == step.atom && done[b.A] {
			other = b.A
		}
		switch {
		case other < 0:
		case step.anchor < 0:
			step.anchor, step.bond = other, bi
		default:
			step.closing = append(step.closing, closing{other, bi})
		}
	}
	done[step.atom] = true
	return step, true
}
