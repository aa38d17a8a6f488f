package formula

import (
	"context"
	"fmt"
	"math"
	"sort"

	"shelfward/molecule"
)

const (
	hydrogen molecule.Element = 1
	boron    molecule.Element = 5
	carbon   molecule.Element = 6
	nitrogen molecule.Element = 7
	oxygen   molecule.Element = 8
	fluorine molecule.Element = 9
	silicon  molecule.Element = 14
	phosphor molecule.Element = 15
	sulfur   molecule.Element = 16
	chlorine molecule.Element = 17
	bromine  molecule.Element = 35
	iodine   molecule.Element = 53
)

// others are the elements besides C, H, N and O, commonest in organic samples first.
var others = []molecule.Element{chlorine, sulfur, bromine, fluorine, iodine, silicon, phosphor, boron}

// considered lists all elements that a formula may hold; nitrogen and others from index 3 on.
var considered = append([]molecule.Element{hydrogen, carbon, oxygen, nitrogen}, others...)

// unasked bounds the atoms of an element that nobody measured or hinted at; more than two such
// elements at once are not considered (Occam; our choice).
var unasked = map[molecule.Element]int{chlorine: 6, sulfur: 4, bromine: 4, fluorine: 9, iodine: 2, silicon: 3, phosphor: 2, boron: 1}

// maxUnasked is the number of different elements of others that may be assumed without a hint.
const maxUnasked = 2

// largestUnknownMass bounds the molar mass when none was measured: the smallest formulas count.
const largestUnknownMass = 450

// weights are the masses of one atom of each element: monoisotopic, nominal and average.
type weights struct{ exact, nominal, average [119]float64 }

// atomic fills the weights of the elements considered.
func atomic() (w weights) {
	for _, e := range considered {
		var f molecule.Formula
		f.Count[e] = 1
		w.exact[e], w.average[e] = f.MonoisotopicMass(), f.MolarMass()
		w.nominal[e] = math.Round(w.exact[e])
	}
	return w
}

// finder is the state of one search.
type finder struct {
	ev       *evidence
	ctx      context.Context
	mass     *[119]float64 // the scale on which the window stands
	low      float64
	high     float64
	min, max [119]int
	f        molecule.Formula
	found    []*Candidate
	steps    int
}

// evidence is an Evidence with its defaults filled in and its analyses averaged.
type evidence struct {
	Evidence
	percent  [119]float64
	measured [119]bool
	hinted   [119]bool
	neutral  []float64 // neutral monoisotopic masses of Exact
	pattern  pattern
	doubts   []string // about the evidence itself
	weights  weights
}

func find(ctx context.Context, in Evidence) (Result, error) {
	ev, err := prepare(in)
	if err != nil {
		return Result{}, err
	}
	f := &finder{ev: ev, ctx: ctx}
	doubts := ev.doubts
	w := &ev.weights
	switch {
	case len(ev.neutral) > 0:
		m := ev.neutral[0]
		delta := ev.Exact[0].MZ * ppm(ev.Exact[0]) * 1e-6
		f.run(&w.exact, m-delta, m+delta)
	case ev.MolecularIon > 0:
		f.run(&w.nominal, float64(ev.MolecularIon)-0.5, float64(ev.MolecularIon)+0.5)
	case ev.MolarMass > 0:
		f.run(&w.average, ev.MolarMass*0.99, ev.MolarMass*1.01)
	case ev.measured[carbon]:
		for m := 16.0; m <= largestUnknownMass; m++ {
			f.run(&w.nominal, m-0.5, m+0.5)
		}
		doubts = append(doubts, "No mass is given: combustion analysis fixes only the ratio of the atoms; the smallest formulas are listed first, and multiples of them fit as well.")
	default:
		return Result{Doubts: append(doubts, "Neither a mass nor a combustion analysis with carbon is given: no formula can be derived.")}, nil
	}
	if ctx.Err() != nil {
		return Result{}, ctx.Err()
	}
	sort.SliceStable(f.found, func(i, j int) bool {
		a, b := f.found[i], f.found[j]
		if a.Penalty != b.Penalty {
			return a.Penalty < b.Penalty
		}
		return a.Formula.String() < b.Formula.String()
	})
	if len(f.found) > ev.MaxCandidates {
		doubts = append(doubts, fmt.Sprintf("%d formulas agree with the evidence; the %d likeliest are listed.", len(f.found), ev.MaxCandidates))
		f.found = f.found[:ev.MaxCandidates]
	}
	list := make([]Candidate, len(f.found))
	for i, c := range f.found {
		list[i], _ = ev.judge(&c.Formula, true)
	}
	if len(f.found) == 0 {
		doubts = append(doubts, ev.whyNone())
	}
	return Result{list, doubts}, nil
}

// run finds the formulas whose mass on the scale given lies from low to high.
func (f *finder) run(mass *[119]float64, low, high float64) {
	f.mass, f.low, f.high = mass, low, high
	f.bounds()
	f.f = molecule.Formula{}
	f.choose(0, 0, 0)
}

// bounds turns the percentages into bounds on the numbers of atoms. The average molar mass exceeds
// the nominal and the monoisotopic one by at most 1.3 % (tetrabromomethane 1.2 %) plus rounding.
func (f *finder) bounds() {
	low, high := f.low, f.high
	if f.mass[bromine] != f.ev.weights.average[bromine] {
		low, high = low*0.998-0.1, high*1.013+0.1
	}
	for e := range f.max {
		f.min[e], f.max[e] = 0, 0
		if f.mass[e] == 0 {
			continue
		}
		if p := f.ev.percent[e]; f.ev.measured[e] && p > 0 {
			a := f.ev.weights.average[e]
			f.min[e] = int(math.Ceil(low*(p-f.ev.Tolerance)/100/a - 1e-9))
			f.max[e] = int(high * (p + f.ev.Tolerance) / 100 / a)
			f.min[e] = max(f.min[e], 1)
			continue
		}
		if !f.ev.measured[e] {
			f.max[e] = int(f.high / f.mass[e])
			if n, ok := unasked[molecule.Element(e)]; ok && !f.ev.hinted[e] {
				f.max[e] = min(f.max[e], n)
			}
		}
	}
	f.min[carbon] = max(f.min[carbon], f.ev.MinCarbons, 1)
	f.min[hydrogen] = max(f.min[hydrogen], f.ev.MinHydrogens)
}

// choose sets the number of atoms of others[i] and goes on; kinds counts the elements assumed
// without a hint, sum is the mass so far.
func (f *finder) choose(i, kinds int, sum float64) {
	if i == len(others) {
		f.fill(sum)
		return
	}
	e := others[i]
	top := f.max[e]
	free := f.ev.measured[e] || f.ev.hinted[e]
	if !free && kinds == maxUnasked {
		top = 0
	}
	for n := f.min[e]; n <= top; n++ {
		s := sum + float64(n)*f.mass[e]
		if s > f.high {
			break
		}
		f.f.Count[e] = int32(n)
		k := kinds
		if n > 0 && !free {
			k++
		}
		f.choose(i+1, k, s)
	}
	f.f.Count[e] = 0
}

// fill chooses nitrogen, oxygen and carbon; hydrogen takes what is left.
func (f *finder) fill(sum float64) {
	if f.steps++; f.steps%256 == 0 && f.ctx.Err() != nil {
		return
	}
	c := &f.f.Count
	tetra := int(c[silicon])
	tri := int(c[boron] + c[phosphor])
	mono := int(c[fluorine] + c[chlorine] + c[bromine] + c[iodine])
	least := float64(f.min[carbon])*f.mass[carbon] + float64(f.min[hydrogen])*f.mass[hydrogen]
	for n := f.min[nitrogen]; n <= f.max[nitrogen]; n++ {
		withN := sum + float64(n)*f.mass[nitrogen]
		if withN+least > f.high {
			break
		}
		c[nitrogen] = int32(n)
		for o := f.min[oxygen]; o <= f.max[oxygen]; o++ {
			withO := withN + float64(o)*f.mass[oxygen]
			if withO+least > f.high {
				break
			}
			c[oxygen] = int32(o)
			// Hydrogen is bounded by the valences: H + halogens <= 2C + 2Si + N + B + P + 2.
			room := 2*tetra + n + tri + 2 - mono
			from := int(math.Ceil((f.low - withO - float64(room)*f.mass[hydrogen]) / (f.mass[carbon] + 2*f.mass[hydrogen])))
			to := min(f.max[carbon], int((f.high-withO)/f.mass[carbon]))
			for k := max(from, f.min[carbon]); k <= to; k++ {
				left := withO + float64(k)*f.mass[carbon]
				h := int(math.Ceil((f.low - left) / f.mass[hydrogen]))
				h = max(h, f.min[hydrogen])
				top := min(int((f.high-left)/f.mass[hydrogen]), f.max[hydrogen], 2*k+room)
				for ; h <= top; h++ {
					if (2*k+room-h)&1 == 0 {
						c[carbon], c[hydrogen] = int32(k), int32(h)
						f.consider()
					}
				}
			}
		}
	}
	c[nitrogen], c[oxygen], c[carbon], c[hydrogen] = 0, 0, 0, 0
}

// consider tests the formula at hand against all evidence and keeps it.
func (f *finder) consider() {
	if c, ok := f.ev.judge(&f.f, false); ok {
		f.found = append(f.found, &c)
	}
}
