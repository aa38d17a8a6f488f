package route

import "shelfward/molecule"

// How a material with other stereo marks may stand for a molecule of a route:
//   - a molecule without marks is met by any stereoisomer: the step before asked for none;
//   - a molecule with one centre and no other mark is met by the unmarked material, which is the
//     racemate: marks are then relative, and the route says 'racemic';
//   - an unmarked material with several centres is a mixture of diastereomers and meets nothing else.

func marked(m *molecule.Molecule) bool { return len(m.Centers())+len(m.DoubleBonds()) > 0 }

func oneCentre(m *molecule.Molecule) bool { return len(m.Centers()) == 1 && len(m.DoubleBonds()) == 0 }

func flatKey(m *molecule.Molecule) molecule.Key {
	if marked(m) {
		m = m.WithoutStereo()
	}
	return m.SeenThroughKey()
}

// meets says whether the material f may stand for m, and whether it does so as the racemate.
func meets(f, m *molecule.Molecule) (ok, racemic bool) {
	switch {
	case f.SeenThroughKey() == m.SeenThroughKey():
		return true, false
	case flatKey(f) != flatKey(m):
		return false, false
	case !marked(m):
		return true, false
	case oneCentre(m) && !marked(f):
		return true, true
	}
	return false, false
}

// otherMarks looks for a shelf item that meets m with other marks.
func (c *chemistry) otherMarks(m *molecule.Molecule) (Material, bool) {
	f := c.world.Materials.OtherMarks(m)
	if f == nil {
		return Material{}, false
	}
	if ok, racemic := meets(f, m); !ok || racemic && c.oneEnantiomer {
		return Material{}, false
	}
	mat := c.world.Materials.Molecule(f)
	return mat, mat.OnShelf
}

// racemicStart says whether reactant i of s is taken from a bottle without its mark.
func (c *chemistry) racemicStart(s *Step, i int) bool {
	if s.MadeBy[i] > 0 || !oneCentre(s.Consumed[i]) {
		return false
	}
	f, err := c.world.Read(s.Reactants[i])
	return err == nil && !marked(f)
}
