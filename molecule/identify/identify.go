// Package identify goes from evidence (combustion analysis, mass, infrared and NMR spectra) to
// formulas, functional groups and ranked structures.
//
// Hard evidence excludes: the formula, valences, pieces the user states, and the few inferences that
// Result.Assumed lists. Everything else only ranks, by the likelihood of the observed spectra under
// predictions from published additivity tables. Where all structures that meet the hard evidence can
// be built they are, and Result.Complete says so; otherwise likely structures are put together from
// building blocks, and Complete is false. The ranking is a help for a chemist, not a proof.
package identify

import (
	"context"
	"fmt"
	"math"
	"slices"
	"strings"
	"time"

	"shelfward/molecule"
	"shelfward/molecule/formula"
	"shelfward/molecule/isomer"
	"shelfward/molecule/smiles"
)

// Options steer a run. The zero value is one worker, ten candidates and a minute.
type Options struct {
	Count   int           // candidates listed; 0 means 10
	Time    time.Duration // 0 means 60 s
	Workers int           // 0 means 1
	Expect  *molecule.Molecule
	// Name gives the name of a structure, empty where none is known; may be nil.
	Name func(*molecule.Molecule) string
}

// SettledMargin is the difference in log-likelihood at which the first structure counts as settled:
// a likelihood ratio of 90 to 1, twice that in logarithm where not all structures could be built.
const SettledMargin = 4.5

// exhaustiveLimit is the largest estimated number of structures that are all built and scored.
const exhaustiveLimit = 450_000

// blocksFirst is the estimated number above which likely structures are built from blocks before all
// structures are.
const blocksFirst = 60_000

// Identify runs the whole chain. A result without candidates says why in Nothing. The error is for
// evidence that makes no sense and for a context that ended before anything was found.
func Identify(ctx context.Context, d *Data, opt Options) (*Result, error) {
	if opt.Count <= 0 {
		opt.Count = 10
	}
	if opt.Time <= 0 {
		opt.Time = time.Minute
	}
	opt.Workers = max(opt.Workers, 1)
	began := time.Now()
	// part of the time is kept for the final scoring
	ctx, cancel := context.WithDeadline(ctx, began.Add(opt.Time*85/100))
	defer cancel()

	res := &Result{Formulas: []FormulaLine{}, Groups: []GroupVerdict{}, Candidates: []Candidate{}, Assumed: []Assumption{}, Doubts: append([]string{}, d.Doubts...)}
	formulas, err := d.chooseFormulas(ctx, res)
	if err != nil {
		return nil, err
	}
	if len(formulas) == 0 {
		if res.Nothing == "" {
			res.Nothing = "No molecular formula agrees with the evidence."
		}
		return res, nil
	}
	res.Formula = formulas[0].String()
	res.Unsaturation = formulas[0].Unsaturation()
	res.Groups = d.judgeGroups(&formulas[0].Formula)

	var expect *molecule.Key
	if opt.Expect != nil {
		k := opt.Expect.FlatKey()
		expect = &k
	}
	s := newSearcher(d, opt, expect)
	if err := s.search(ctx, res, formulas); err != nil {
		return nil, err
	}
	s.rank(res, opt)
	return res, nil
}

// likelyFormula is a formula with its drop in log-likelihood against the first.
type likelyFormula struct {
	molecule.Formula
	behind float64
}

// chooseFormulas lists the formulas and returns those to build structures for: the first, and any
// that the evidence hardly tells from it.
func (d *Data) chooseFormulas(ctx context.Context, res *Result) ([]likelyFormula, error) {
	if d.Formula != nil {
		res.Formulas = append(res.Formulas, FormulaLine{Formula: d.Formula.String(), MolarMass: d.Formula.MolarMass(), Reasons: []string{"given"}})
		if u := d.Formula.Unsaturation(); u < 0 || u != math.Floor(u) {
			res.Doubts = append(res.Doubts, fmt.Sprintf("%s has an unsaturation of %v: no neutral closed-shell molecule has this formula.", d.Formula, u))
			return nil, nil
		}
		if why := d.contradicts(d.Formula); why != "" {
			res.Nothing = why
			return nil, nil
		}
		return []likelyFormula{{*d.Formula, 0}}, nil
	}
	ev := formula.Evidence{MolecularIon: d.MolecularIon, MolarMass: d.MolarMass, Exact: d.Exact, Peaks: d.Peaks}
	if d.Elements != nil {
		ev.Analysis, ev.Tolerance = d.Elements.Analysis, d.Elements.Tolerance
	}
	sig := formula.Signals{}
	sumH, sumRatio := 0.0, 0.0
	for _, x := range d.Proton {
		if x.Solvent == "" {
			sumH += x.H
			sumRatio += x.Ratio
		}
	}
	for _, x := range d.Carbon {
		if x.Solvent == "" {
			sig.CarbonLines++
		}
	}
	sig.Hydrogens, sig.Ratio = int(sumH+0.5), int(sumRatio+0.5)
	ev.Score = sig.Score
	r, err := formula.Find(ctx, ev)
	if err != nil {
		if ctx.Err() != nil {
			return nil, err
		}
		res.Nothing = fmt.Sprintf("The evidence for the formula contradicts itself: %v.", err)
		return nil, nil
	}
	res.Doubts = append(res.Doubts, r.Doubts...)
	var use []likelyFormula
	for i, c := range r.Candidates {
		if d.Elements != nil && d.Elements.NoOthers && !d.onlyListed(&c.Formula) {
			continue
		}
		reasons := c.Reasons
		if reasons == nil {
			reasons = []string{}
		}
		res.Formulas = append(res.Formulas, FormulaLine{Formula: c.Formula.String(), MolarMass: c.MolarMass, Error: c.Error, Reasons: reasons})
		if len(use) == 0 || c.Penalty < r.Candidates[0].Penalty+3 && len(use) < 3 && i < 4 {
			use = append(use, likelyFormula{c.Formula, c.Penalty - r.Candidates[0].Penalty})
		}
	}
	if len(res.Formulas) > 20 {
		res.Formulas = res.Formulas[:20]
	}
	return use, nil
}

// contradicts says where a given formula clashes with what was measured: another nominal mass, or mass
// percentages off by more than three tolerances.
func (d *Data) contradicts(f *molecule.Formula) string {
	if nominal := int(math.Round(f.MonoisotopicMass())); d.MolecularIon > 0 && d.MolecularIon != nominal {
		return fmt.Sprintf("The formula %s (nominal mass %d) and the molecular ion %d contradict each other.", f, nominal, d.MolecularIon)
	}
	if m := f.MolarMass(); d.MolarMass > 0 && math.Abs(m-d.MolarMass) > 0.03*m {
		return fmt.Sprintf("The formula %s (%.1f g/mol) and the molar mass %.1f contradict each other.", f, m, d.MolarMass)
	}
	if d.Elements == nil {
		return ""
	}
	tolerance := d.Elements.Tolerance
	if tolerance == 0 {
		tolerance = 0.4
	}
	for _, a := range d.Elements.Analysis {
		sum := 0.0
		for _, p := range a.Percent {
			sum += p
		}
		one := molecule.Formula{}
		one.Count[a.Element] = f.Count[a.Element]
		want, got := 100*one.MolarMass()/f.MolarMass(), sum/float64(len(a.Percent))
		if math.Abs(want-got) > 3*tolerance {
			return fmt.Sprintf("The formula %s (%s %.1f %%) and the combustion analysis (%s %.1f %%) contradict each other.", f, a.Element.Symbol(), want, a.Element.Symbol(), got)
		}
	}
	return ""
}

// onlyListed reports that f holds no element but those of the combustion analysis, and oxygen.
func (d *Data) onlyListed(f *molecule.Formula) bool {
	for el, n := range f.Count {
		if n == 0 || el == 8 {
			continue
		}
		if !slices.ContainsFunc(d.Elements.Analysis, func(a formula.Analysis) bool { return int(a.Element) == el }) {
			return false
		}
	}
	return true
}

// search builds the structures: all of them where that is possible, else from blocks.
func (s *searcher) search(ctx context.Context, res *Result, formulas []likelyFormula) error {
	res.Complete = true
	for i := range formulas {
		f := &formulas[i]
		if i > 0 && float64(s.pool.bestTotal())-f.behind < s.goodFit() {
			continue // the first formula has a structure that fits well
		}
		s.offset = float32(f.behind)
		if err := s.searchFormula(ctx, res, &f.Formula, i); err != nil {
			return err
		}
	}
	res.Generated = s.generated
	return nil
}

// countSteps writes behind each inference how many structures it leaves, where counting is quick: the
// formula alone, then with the group inferred, then with the kinds of carbon.
func (s *searcher) countSteps(ctx context.Context, f *molecule.Formula, p *isomer.Problem, assumed []Assumption) {
	bare := isomer.Problem{Formula: *f, Valences: p.Valences}
	size, err := isomer.Estimate(ctx, bare, 300, 1)
	if err != nil || size.Structures > 60_000 {
		return
	}
	note := func(q isomer.Problem, has func(Assumption) bool) {
		r, err := isomer.Enumerate(ctx, q, isomer.Options{Workers: s.opt.Workers}, func(*isomer.Structure) bool { return true })
		if err != nil || !r.Complete {
			return
		}
		for i := range assumed {
			if has(assumed[i]) {
				assumed[i].Why += fmt.Sprintf("; leaves %d structures", r.Generated)
				return
			}
		}
	}
	note(bare, func(a Assumption) bool { return strings.HasSuffix(a.What, "valences") })
	if len(p.Contains) > 0 {
		bare.Contains = p.Contains
		note(bare, func(a Assumption) bool { return strings.Contains(a.What, "C=O") || strings.Contains(a.What, "CHO") })
	}
	if p.Carbons != bare.Carbons {
		bare.Carbons = p.Carbons
		note(bare, func(a Assumption) bool {
			return strings.Contains(a.What, "CH3") || strings.Contains(a.What, "kind of carbon")
		})
	}
}

// goodFit is a cost that a right structure seldom exceeds: about one unit for each signal.
func (s *searcher) goodFit() float64 {
	return 4 + float64(len(s.d.Carbon)+len(s.d.Proton)) + 0.5*float64(len(s.d.Bands)+len(s.d.Peaks))
}

func (s *searcher) searchFormula(ctx context.Context, res *Result, f *molecule.Formula, at int) error {
	p := isomer.Problem{Formula: *f, Valences: s.d.Valences}
	assumed := s.d.inferHard(f, &p)
	if at == 0 {
		s.countSteps(ctx, f, &p, assumed)
		res.Assumed = append(res.Assumed, assumed...)
	}
	size, err := isomer.Estimate(ctx, p, 600, 1)
	if err != nil && ctx.Err() == nil {
		return err
	}
	if ctx.Err() != nil {
		res.Complete = false
		res.Doubts = append(res.Doubts, "Time ran out before structures of "+f.String()+" were built.")
		return nil
	}
	if size.Structures <= exhaustiveLimit {
		if size.Structures > blocksFirst {
			// should time run out before all are built, the likely ones are there
			if _, _, err := s.assemble(ctx, f); err != nil {
				return err
			}
			s.generated = 0
		}
		r, err := s.exhaust(ctx, p)
		if err != nil {
			return err
		}
		if !r.Complete {
			res.Complete = false
			res.Doubts = append(res.Doubts, "Not all structures that fit the hard evidence were built: "+r.Stopped+".")
		}
		return nil
	}
	res.Complete = false
	full, found, err := s.assemble(ctx, f)
	if err != nil {
		return err
	}
	if at == 0 {
		res.Doubts = append(res.Doubts, fmt.Sprintf("%s has too many structures to build them all (about %s): likely ones were put together from building blocks (%d of %d arrangements of blocks built in full); a structure outside these was not considered.", f, roundNumber(size.Structures), full, found))
	}
	return nil
}

// roundNumber writes an estimate with one figure.
func roundNumber(x float64) string {
	if x < 1e6 {
		return fmt.Sprintf("%.0f", x)
	}
	return fmt.Sprintf("1e%.0f", math.Floor(math.Log10(x)))
}

// rank scores the kept structures in full and writes the result.
func (s *searcher) rank(res *Result, opt Options) {
	sc := newScorer(s.d)
	s.pool.shrink() // the same structures whatever order they came in
	list := s.pool.list
	for i := range list {
		behind := list[i].score.formula
		list[i].score = sc.score(list[i].m, true)
		list[i].score.formula = behind
		if list[i].text == "" {
			list[i].text = smiles.Write(list[i].m)
		}
	}
	slices.SortFunc(list, compareKept)
	if opt.Expect != nil {
		res.Expected = &Expected{Generated: s.expectSeen}
		for i, k := range list {
			if k.m.FlatKey() == *s.expect {
				res.Expected.Rank = i + 1
				break
			}
		}
		if res.Expected.Rank > opt.Count {
			res.Expected.Rank = 0
		}
	}
	if len(list) == 0 {
		res.Nothing = "No structure meets the hard evidence."
		return
	}
	first := list[0].score.total()
	for i, k := range list[:min(opt.Count, len(list))] {
		c := Candidate{Rank: i + 1, SMILES: k.text, Score: round2(float64(first - k.score.total()))}
		if opt.Name != nil {
			c.Name = opt.Name(k.m)
		}
		c.Fits, c.Misfits = sc.explain(k.m)
		res.Candidates = append(res.Candidates, c)
	}
	s.conclude(res, sc, list)
}

func round2(x float64) float64 {
	if r := math.Round(x*100) / 100; r != 0 {
		return r
	}
	return 0 // no minus zero
}
