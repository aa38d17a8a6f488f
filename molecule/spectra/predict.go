// Package spectra predicts what a structure shows in 13C and 1H NMR, in the infrared and in the mass
// spectrum, from published additivity tables, each value with its spread.
//
// The tables live in the shifts folder of the rules, with their sources. Predictions are means over
// freely turning chains: stereo marks are not read, conformations not searched. Known weak spots:
// ring carbons of ring systems without a table row, carbons with two heteroatoms, crowded arenes,
// and every solvent other than CDCl3.
package spectra

import (
	"cmp"
	"slices"

	"shelfward/molecule"
)

// CarbonLine is one set of equivalent carbons.
type CarbonLine struct {
	Atom      int32 // one of them
	Count     uint8 // how many
	Hydrogens uint8 // attached to each
	// MeanPPM and SpreadPPM (one standard deviation) of the shift.
	MeanPPM, SpreadPPM float32
	// MaySplit says that two carbons counted as equivalent need not be: methyl groups on one atom of a
	// molecule with a centre of chirality, alkyl groups on the N of a tertiary amide.
	MaySplit bool
}

// ProtonSignal is one set of equivalent hydrogens on carbon, or of exchanging ones on O, N or S.
type ProtonSignal struct {
	Atom      int32 // a carrier
	Hydrogens uint8 // in all
	MeanPPM   float32
	SpreadPPM float32
	// Exchanging hydrogens stand somewhere in LowPPM-HighPPM; Seen says how often they are listed.
	Exchanging      bool
	LowPPM, HighPPM float32
	Seen            float32
	// Couplings are first-order; NumCouplings are in use.
	Couplings    [maxCouplings]Coupling
	NumCouplings uint8
	Aromatic     bool
	// MaySplit says that the two hydrogens of a CH2 need not be equivalent.
	MaySplit bool
}

// Prediction is everything predicted for one molecule. Slices are owned by the caller of Predict;
// those of Predictor.Predict are valid until its next call.
type Prediction struct {
	Carbon []CarbonLine
	Proton []ProtonSignal
	Bands  []Band
}

// Predict predicts all spectra of m.
func Predict(m *molecule.Molecule) Prediction {
	var out Prediction
	NewPredictor().Predict(m, &out)
	return out
}

// Predict fills out for m, reusing its slices.
func (p *Predictor) Predict(m *molecule.Molecule, out *Prediction) {
	p.perceive(m)
	out.Carbon = p.carbonLines(out.Carbon[:0])
	out.Proton = p.protonSignals(out.Proton[:0])
	out.Bands = p.bands(out.Bands[:0])
}

// carbonLines groups the carbons by symmetry class, down field first.
func (p *Predictor) carbonLines(out []CarbonLine) []CarbonLine {
next:
	for a := range p.n {
		if p.el[a] != carbon {
			continue
		}
		for i := range out {
			if p.class[out[i].Atom] == p.class[a] {
				out[i].Count++
				continue next
			}
		}
		s := p.carbonShift(a)
		out = append(out, CarbonLine{Atom: int32(a), Count: 1, Hydrogens: p.hyd[a], MeanPPM: s.mean, SpreadPPM: s.spread})
	}
	chiral := p.hasCentre()
	for i := range out {
		l := &out[i]
		l.MaySplit = l.Count == 2 && (chiral && l.Hydrogens == 3 && p.sharedNeighbour(int(l.Atom)) || p.onAmideN(int(l.Atom)))
	}
	slices.SortStableFunc(out, func(x, y CarbonLine) int { return cmp.Compare(y.MeanPPM, x.MeanPPM) })
	return out
}

// sharedNeighbour reports whether the methyl a and an equivalent one hang on the same atom.
func (p *Predictor) sharedNeighbour(a int) bool {
	for _, nb := range p.nb[a] {
		for _, nb2 := range p.nb[nb.Atom] {
			if int(nb2.Atom) != a && p.class[nb2.Atom] == p.class[a] {
				return true
			}
		}
	}
	return false
}

// onAmideN reports an sp3 carbon one or two bonds from the N of a tertiary amide that carries two
// equivalent groups: rotation about C-N is slow, the groups differ.
func (p *Predictor) onAmideN(a int) bool {
	if p.sp[a] != single {
		return false
	}
	for _, nb := range p.nb[a] {
		x := int(nb.Atom)
		if p.amideN(x, p.class[a]) {
			return true
		}
		if p.el[x] != carbon || p.sp[x] != single {
			continue
		}
		for _, nb2 := range p.nb[x] {
			if p.amideN(int(nb2.Atom), p.class[x]) {
				return true
			}
		}
	}
	return false
}

// amideN reports an acylated N without hydrogen that carries two atoms of the class.
func (p *Predictor) amideN(n int, class uint64) bool {
	if p.el[n] != nitrogen || p.hyd[n] > 0 || p.aromatic[n] || !p.carbonylBeside(n) {
		return false
	}
	same := 0
	for _, nb := range p.nb[n] {
		if p.class[nb.Atom] == class {
			same++
		}
	}
	return same == 2
}

// protonSignals groups the hydrogens by the symmetry class of their carrier, down field first; the
// exchanging ones come last.
func (p *Predictor) protonSignals(out []ProtonSignal) []ProtonSignal {
	chiral := p.hasCentre()
next:
	for a := range p.n {
		if p.hyd[a] == 0 {
			continue
		}
		for i := range out {
			if p.class[out[i].Atom] == p.class[a] {
				if p.terminalAlkene(a) {
					out[i].Hydrogens++
				} else {
					out[i].Hydrogens += p.hyd[a]
				}
				if !p.terminalAlkene(a) {
					continue next
				}
			}
		}
		if p.seenBefore(a, out) {
			continue
		}
		out = p.addSignal(a, chiral, out)
	}
	slices.SortStableFunc(out, func(x, y ProtonSignal) int {
		if x.Exchanging != y.Exchanging {
			if x.Exchanging {
				return 1
			}
			return -1
		}
		return cmp.Compare(y.MeanPPM, x.MeanPPM)
	})
	return out
}

func (p *Predictor) seenBefore(a int, out []ProtonSignal) bool {
	for i := range out {
		if p.class[out[i].Atom] == p.class[a] {
			return true
		}
	}
	return false
}

// terminalAlkene reports a =CH2, whose two hydrogens are two signals.
func (p *Predictor) terminalAlkene(a int) bool {
	if p.el[a] != carbon || p.hyd[a] != 2 || p.sp[a] != double {
		return false
	}
	b := p.doubleTo(a, carbon)
	if b < 0 {
		return false
	}
	var classes [2]uint64
	i := 0
	for _, nb := range p.nb[b] {
		if int(nb.Atom) != a && i < 2 {
			classes[i] = p.class[nb.Atom]
			i++
		}
	}
	return classes[0] != classes[1]
}

func (p *Predictor) addSignal(a int, chiral bool, out []ProtonSignal) []ProtonSignal {
	s := ProtonSignal{Atom: int32(a), Hydrogens: p.hyd[a], Aromatic: p.sp[a] == arene}
	if p.el[a] != carbon {
		e := p.exchangeRange(a)
		s.Exchanging, s.LowPPM, s.HighPPM, s.Seen = true, e.lo, e.hi, e.seen
		s.MeanPPM, s.SpreadPPM = (e.lo+e.hi)/2, (e.hi-e.lo)/4
		return append(out, s)
	}
	s.NumCouplings = uint8(len(p.couplings(a, s.Couplings[:0:maxCouplings])))
	if p.terminalAlkene(a) {
		one, two := p.alkeneProton(a)
		s.Hydrogens = 1
		s.MeanPPM, s.SpreadPPM = one.mean, one.spread
		out = append(out, s)
		s.MeanPPM, s.SpreadPPM = two.mean, two.spread
		return append(out, s)
	}
	v := p.protonHere(a)
	s.MeanPPM, s.SpreadPPM = v.mean, v.spread
	s.MaySplit = p.sp[a] == single && p.onAmideN(a) || p.hyd[a] == 2 && p.sp[a] == single && (chiral || p.ring[a] > 0 && p.ring[a] < 8)
	return append(out, s)
}

// hasCentre reports an atom with four different ligands, or an acetal-like carbon whose two equal
// chains make the hydrogens inside each chain unlike.
func (p *Predictor) hasCentre() bool {
	for a := range p.n {
		if p.sp[a] != single || p.hyd[a] > 1 || p.deg[a] < 3 || p.el[a] != carbon {
			continue
		}
		var classes [4]uint64
		same, oxygens := 0, 0
		for i, nb := range p.nb[a] {
			classes[i] = p.class[nb.Atom]
			if p.el[nb.Atom] == oxygen {
				oxygens++
			}
			for j := range i {
				if classes[j] == classes[i] {
					same++
				}
			}
		}
		if same == 0 && p.deg[a]+min(p.hyd[a], 1) == 4 || oxygens >= 2 && same == 1 {
			return true
		}
	}
	return false
}
