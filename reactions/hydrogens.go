package reactions

import "shelfward/molecule"

// setHydrogens gives every touched atom the hydrogens that its new bonds leave room for.
func (e *editor) setHydrogens(mappings [][]int32) error {
	e.madeOf = zeroed(e.madeOf, len(e.b.Atoms))
	for _, to := range mappings {
		for i := range e.s.slots {
			if q := e.s.slots[i].made(e.d); to[i] >= 0 && q >= 0 {
				e.madeOf[to[i]] = int32(q + 1)
			}
		}
	}
	sum, arom, degree := e.bondSums()
	for a := range e.hBefore {
		if !e.touched[a] || e.dead[a] {
			continue
		}
		if e.madeOf[a] == 0 {
			e.neutralise(a, sum[a])
			continue
		}
		qa := &e.s.side[1-e.d].Atoms[e.madeOf[a]-1]
		h, ok := e.hydrogensAfter(a, sum[a], arom[a], degree[a], qa.Hydrogens, qa.OnlyAromatic())
		if !ok {
			return errNoFit
		}
		e.b.Atoms[a].Hydrogens = uint8(h)
		e.b.Atoms[a].Aromatic = arom[a] > 0
	}
	return nil
}

// neutralise lets an atom that leaves take hydrogens and give up its charge: nitro oxygen leaves as water.
func (e *editor) neutralise(a, sum int) {
	at := &e.b.Atoms[a]
	at.Aromatic = false
	if isMetal(at.Element) {
		return
	}
	at.Charge = 0
	at.Hydrogens = uint8(max(0, lowestValence(at.Element, sum)-sum))
}

// lowestValence is the lowest normal valence of an element that holds a sum of bond orders.
func lowestValence(el molecule.Element, sum int) int {
	for _, v := range manyValences(el) {
		if v >= sum {
			return v
		}
	}
	switch el {
	case 5, 7:
		return 3
	case 6, 14, 32, 50:
		return 4
	case 8:
		return 2
	case 9:
		return 1
	}
	return sum
}

// bondSums returns per atom the sum of the orders of plain bonds, the number of aromatic bonds and the degree.
func (e *editor) bondSums() (sum, arom, degree []int) {
	n := len(e.b.Atoms)
	e.sum, e.arom, e.degree = zeroed(e.sum, n), zeroed(e.arom, n), zeroed(e.degree, n)
	sum, arom, degree = e.sum, e.arom, e.degree
	for _, b := range e.b.Bonds {
		if b.Order == 0 {
			continue
		}
		for _, a := range [2]int32{b.A, b.B} {
			degree[a]++
			if b.Order == molecule.OrderAromatic {
				arom[a]++
			} else {
				sum[a] += int(b.Order)
			}
		}
	}
	return sum, arom, degree
}

// hydrogensAfter follows the valence: hydrogens before + bond orders before - bond orders after,
// corrected for the charge. Elements of several valences take the lowest that holds the bonds. written is
// the number of hydrogens the pattern asks for (-1 free), lower says that it writes an aromatic symbol.
func (e *editor) hydrogensAfter(a, sum, arom, degree, written int, lower bool) (int, bool) {
	at := e.b.Atoms[a]
	if arom > 0 {
		sum += arom
		switch {
		case at.Element == 6 && sum == degree: // no double bond out of the ring
			sum++
		case at.Element == 7 && written < 1 && at.Charge > 0:
			sum++
		case at.Element == 7 && written < 1 && degree == 2 && (lower || e.hBefore[a] == 0):
			sum++ // pyridine-like; a '*' that had its hydrogen keeps it, as in pyrrole
		}
	}
	var h int
	switch valences := manyValences(at.Element); {
	case isMetal(at.Element):
		return e.hBefore[a], true
	case valences != nil:
		h = -1
		for _, v := range valences {
			if v+int(at.Charge) >= sum {
				h = v + int(at.Charge) - sum
				break
			}
		}
		if written >= 0 {
			h = written
		}
	default:
		before := e.chargeBefore(a)
		h = e.hBefore[a] + e.sumBefor[a] - sum + valenceShift(at.Element, int(at.Charge)) - valenceShift(at.Element, before)
	}
	return h, h >= 0 && (written < 0 || h == written)
}

func (e *editor) chargeBefore(a int) int {
	which, atom := e.p.locate(int32(a))
	return int(e.p.molecules[which].Atom(int(atom)).Charge)
}

// valenceShift is how a charge changes the number of bonds: N+ and O+ gain one, C+ and C- lose one,
// anions of N, O lose one, B- gains one.
func valenceShift(el molecule.Element, charge int) int {
	switch el {
	case 6, 14:
		return -max(charge, -charge)
	case 5:
		return -charge
	}
	return charge
}

// manyValences lists the valences of elements that have several, lowest first.
func manyValences(el molecule.Element) []int {
	switch el {
	case 16, 34, 52:
		return []int{2, 4, 6}
	case 15, 33:
		return []int{3, 5}
	case 17, 35, 53:
		return []int{1, 3, 5, 7}
	}
	return nil
}

func isMetal(el molecule.Element) bool {
	switch el {
	case 1, 2, 5, 6, 7, 8, 9, 10, 14, 15, 16, 17, 18, 32, 33, 34, 35, 36, 50, 52, 53:
		return false
	}
	return el != 0
}
