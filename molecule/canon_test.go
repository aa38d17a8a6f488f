package molecule_test

import (
	"math/rand"
	"testing"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

// renumber returns m with its atoms and bonds in random order, the ligand lists of its marks
// shuffled with the sign of the permutation, and bonds turned round.
func renumber(t testing.TB, m *molecule.Molecule, r *rand.Rand) *molecule.Molecule {
	t.Helper()
	b := m.Builder()
	n := &molecule.Builder{}
	at := r.Perm(len(b.Atoms))
	n.Atoms = make([]molecule.Atom, len(b.Atoms))
	for a, x := range b.Atoms {
		n.Atoms[at[a]] = x
	}
	bondAt := r.Perm(len(b.Bonds))
	n.Bonds = make([]molecule.Bond, len(b.Bonds))
	turned := make([]bool, len(b.Bonds))
	for i, x := range b.Bonds {
		y := molecule.Bond{A: int32(at[x.A]), B: int32(at[x.B]), Order: x.Order}
		if r.Intn(2) == 0 {
			y.A, y.B = y.B, y.A
			turned[i] = true
		}
		n.Bonds[bondAt[i]] = y
	}
	for _, c := range b.Centers {
		d := molecule.Center{Atom: int32(at[c.Atom]), Clockwise: c.Clockwise}
		order := r.Perm(4)
		for i, k := range order {
			l := c.Ligands[k]
			if l >= 0 {
				l = int32(at[l])
			}
			d.Ligands[i] = l
		}
		for i := range order { // parity of the permutation
			for j := range order[:i] {
				if order[j] > order[i] {
					d.Clockwise = !d.Clockwise
				}
			}
		}
		n.Centers = append(n.Centers, d)
	}
	for _, d := range b.DoubleBonds {
		e := molecule.DoubleBond{Bond: int32(bondAt[d.Bond]), A: int32(at[d.A]), B: int32(at[d.B]), Together: d.Together}
		if turned[d.Bond] {
			e.A, e.B = e.B, e.A
		}
		n.DoubleBonds = append(n.DoubleBonds, e)
	}
	r.Shuffle(len(n.Centers), func(i, j int) { n.Centers[i], n.Centers[j] = n.Centers[j], n.Centers[i] })
	p, err := n.Build()
	if err != nil {
		t.Fatalf("renumbered molecule does not build: %v", err)
	}
	return p
}

var cages = map[string]string{
	"cubane":        "C12C3C4C1C5C2C3C45",
	"cuneane":       "C12C3C4C5C3C1C5C24",
	"prismane":      "C12C3C1C4C2C34",
	"adamantane":    "C1C2CC3CC1CC(C2)C3",
	"twistane":      "C1CC2CC3CCC2CC13",
	"dodecahedrane": "C12C3C4C5C1C6C7C2C8C3C9C4C1C5C6C2C7C8C9C12",
	"C60":           "c12c3c4c5c1c1c6c7c2c2c8c3c3c9c4c4c%10c5c5c1c1c6c6c%11c7c2c2c7c8c3c3c8c9c4c4c9c%10c5c5c1c1c6c6c%11c2c2c7c3c3c8c4c4c9c5c1c1c6c2c3c41",
	"porphine":      "C1=CC2=CC3=CC=C(N3)C=C4C=CC(=N4)C=C5C=CC(=CC1=N2)N5",
	"30 equal":      "C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1.C1CCCCC1",
	"tartaric":      "OC(=O)[C@H](O)[C@@H](O)C(=O)O",
	"inositol":      "O[C@H]1[C@H](O)[C@@H](O)[C@H](O)[C@H](O)[C@@H]1O",
	"polyene":       "C/C=C/C=C\\C(=C/C)\\C=N\\O",
	"sulfoxide":     "C[S@](=O)CC[S@@](=O)C",
	"glucose":       "OC[C@H]1OC(O)[C@H](O)[C@@H](O)[C@@H]1O",
	"camphor":       "C[C@]12CC[C@H](CC1=O)C2(C)C",
	"cholesterol":   "C[C@H](CCCC(C)C)[C@H]1CC[C@H]2[C@@H]3CC=C4C[C@@H](O)CC[C@]4(C)[C@H]3CC[C@]12C",
	"neopentane":    "CC(C)(C)CC(C)(C)CC(C(C)(C)C)(C(C)(C)C)C(C)(C)C",
	"azulene":       "c1ccc2cccc2cc1",
	"octalene":      "C1=CC=CC2=CC=CC=CC=C2C=C1",
}

// TestRenumbering is the law of canonical labelling: one text and one key for any numbering.
func TestRenumbering(t *testing.T) {
	for name, text := range cages {
		m := readMolecule(t, text)
		want, key, seen := smiles.Write(m), m.Key(), m.SeenThroughKey()
		if back := readMolecule(t, want); back.Key() != key {
			t.Errorf("%s: %s reads back as another molecule", name, want)
		}
		for seed := int64(1); seed <= 12; seed++ {
			p := renumber(t, m, rand.New(rand.NewSource(seed)))
			if got := smiles.Write(p); got != want || p.Key() != key || p.SeenThroughKey() != seen {
				t.Errorf("%s, seed %d: %s, want %s", name, seed, got, want)
			}
		}
	}
}

// TestRanksAndOrbits checks that ranks are a permutation and that orbits have the known sizes.
func TestRanksAndOrbits(t *testing.T) {
	for _, c := range []struct {
		text   string
		orbits int
	}{
		{"CCC", 2}, {"c1ccccc1", 1}, {"Cc1ccccc1", 5}, {"CC(C)(C)C", 2}, {"C12C3C4C1C5C2C3C45", 1},
		{"C1CCCCC1.C1CCCCC1.CC", 2}, {"C[C@H](O)[C@@H](C)O", 6}, {"C[C@H](O)[C@H](C)O", 3}, // meso: only a reflection joins the halves
		{"C/C=C/C", 2}, {"C1C2CC3CC1CC(C2)C3", 2}, {cages["C60"], 1}, {cages["dodecahedrane"], 1},
		{"C/C=C/C(O)/C=C\\C", 8}, {"CC(C)CC(C)C", 3}, {"O[C@@H](/C=C/C)/C=C/C", 5},
		{"C[C@H](O)[C@H](O)[C@@H](C)O", 8}, {"C[C@H](O)[C@H](O)[C@H](C)O", 5}, {"CC(O)C(O)C(C)O", 5},
	} {
		m := readMolecule(t, c.text)
		seen := make([]bool, m.NumAtoms())
		for _, r := range m.Ranks() {
			if seen[r] {
				t.Errorf("%s: rank %d twice", c.text, r)
			}
			seen[r] = true
		}
		n := 0
		for a, o := range m.Orbits() {
			if int(o) == a {
				n++
			}
			if int(o) > a || m.Orbits()[o] != o {
				t.Errorf("%s: orbit of %d is %d", c.text, a, o)
			}
		}
		if n != c.orbits {
			t.Errorf("%s: %d orbits, want %d", c.text, n, c.orbits)
		}
	}
}

// TestStereoisomerNumbers gives every combination of marks to the marked atoms of a skeleton and
// counts the different molecules, mirror images counted apart. Numbers: recomputed with the
// reference toolkit; textbook values for tartaric acid, inositol and hexaric acid.
func TestStereoisomerNumbers(t *testing.T) {
	for _, c := range []struct {
		name, text string
		want       int
	}{
		{"inositol", "O[C@H]1[C@H](O)[C@H](O)[C@H](O)[C@H](O)[C@H]1O", 9},
		{"pentane-2,3,4-triol", "C[C@H](O)[C@H](O)[C@H](C)O", 4},
		{"1,4-dimethylcyclohexane", "C[C@H]1CC[C@H](C)CC1", 2},
		{"1,3-dimethylcyclohexane", "C[C@H]1CCC[C@H](C)C1", 3},
		{"hexaric acid", "OC(=O)[C@H](O)[C@H](O)[C@H](O)[C@H](O)C(O)=O", 10},
		{"tartaric acid", "OC(=O)[C@H](O)[C@H](O)C(O)=O", 3},
		{"truxillic acid", "OC(=O)[C@H]1[C@H](c2ccccc2)[C@H](C(O)=O)[C@H]1c1ccccc1", 5},
		{"truxinic acid", "OC(=O)[C@H]1[C@H](C(O)=O)[C@H](c2ccccc2)[C@H]1c1ccccc1", 10},
		{"1,2,3-trimethylcyclopropane", "C[C@H]1[C@H](C)[C@H]1C", 2},
		{"hepta-2,5-diene", "C/C=C/C/C=C/C", 3},
		{"4-hydroxyhepta-2,5-diene", "C/C=C/[C@H](O)/C=C/C", 4},
		{"butane-2,3-diol", "C[C@H](O)[C@H](C)O", 3},
		{"1,3,5-trimethylcyclohexane", "C[C@H]1C[C@H](C)C[C@H](C)C1", 2},
		{"hexane-2,3,4,5-tetrol", "C[C@H](O)[C@H](O)[C@H](O)[C@H](C)O", 10},
		{"1,3-dimethylcyclobutane", "C[C@H]1C[C@H](C)C1", 2},
		{"1,2,3,4-tetramethylcyclobutane", "C[C@H]1[C@H](C)[C@H](C)[C@H]1C", 4},
	} {
		kinds := map[molecule.Key]bool{}
		texts := map[string]bool{}
		all := allMarks(t, c.text) // a mark that is void in one isomer may count in others
		marks := len(all.Centers) + len(all.DoubleBonds)
		for bits := 0; bits < 1<<marks; bits++ {
			d := allMarks(t, c.text)
			for i := range d.Centers {
				d.Centers[i].Clockwise = bits>>i&1 == 1
			}
			for i := range d.DoubleBonds {
				d.DoubleBonds[i].Together = bits>>(len(d.Centers)+i)&1 == 1
			}
			p, err := d.Build()
			if err != nil {
				t.Fatal(err)
			}
			kinds[p.Key()] = true
			texts[smiles.Write(p)] = true
		}
		if len(kinds) != c.want || len(texts) != c.want {
			t.Errorf("%s: %d stereoisomers by key, %d by text, want %d", c.name, len(kinds), len(texts), c.want)
		}
	}
}

// TestKeptMarks: how many marks stay where centers depend on each other. Worked out by hand: a center whose
// two equal ligands are turned into each other by the rest has none; two like centers on either
// side of a mirror plane keep theirs although turning one over would give the same molecule.
func TestKeptMarks(t *testing.T) {
	for _, c := range []struct {
		name, text string
		want       int
	}{
		{"cis,cis-1,3,5-trimethylcyclohexane", "C[C@H]1C[C@@H](C)C[C@@H](C)C1", 3},
		{"cis,trans-1,3,5-trimethylcyclohexane", "C[C@H]1C[C@H](C)C[C@@H](C)C1", 3},
		{"trans-3,5-dimethylcyclohexanol", "O[C@H]1C[C@@H](C)C[C@H](C)C1", 2},
		{"cis-3,5-dimethylcyclohexanol", "O[C@H]1C[C@@H](C)C[C@@H](C)C1", 3},
		{"cis,trans-1,2,3-trimethylcyclopropane", "C[C@H]1[C@H](C)[C@H]1C", 3},
		{"(2R,3s,4S)-pentane-2,3,4-triol", "C[C@H](O)[C@H](O)[C@@H](C)O", 3},
		{"(2R,4R)-pentane-2,3,4-triol", "C[C@H](O)[C@H](O)[C@H](C)O", 2},
		{"myo-inositol", "O[C@H]1[C@H](O)[C@@H](O)[C@H](O)[C@H](O)[C@@H]1O", 6},
		{"methylcyclohexane", "C[C@H]1CCCCC1", 0},
		{"7-methylnorbornane", "C[C@@H]1[C@H]2CC[C@@H]1CC2", 2},
		{"a spiro compound with its axis", "C[C@H]1C[C@]2(C1)C[C@H](C)C2", 3},
		{"a spiro compound whose axis is open", "C[C@H]1CC2(C1)C[C@H](C)C2", 0},
	} {
		m := readMolecule(t, c.text)
		if got := len(m.Centers()) + len(m.DoubleBonds()); got != c.want {
			t.Errorf("%s: %s keeps %d marks, want %d: %s", c.name, c.text, got, c.want, smiles.Write(m))
		}
	}
}

// allMarks is the molecule of text with every tetrahedral atom that has a mark in the text marked,
// void or not.
func allMarks(t *testing.T, text string) *molecule.Builder {
	t.Helper()
	m := readMolecule(t, text)
	b := m.Builder()
	b.Centers = b.Centers[:0]
	for a := 0; a < m.NumAtoms(); a++ {
		x := m.Atom(a)
		if x.Element == 6 && m.Degree(a) == 3 && x.Hydrogens == 1 {
			c := molecule.Center{Atom: int32(a), Ligands: [4]int32{molecule.LigandHydrogen}}
			for i, nb := range m.Neighbors(a) {
				c.Ligands[i+1] = nb.Atom
			}
			b.Centers = append(b.Centers, c)
		}
	}
	b.DoubleBonds = m.Builder().DoubleBonds
	// aromatic CH and alkene CH are no centres: Build drops them, but they must not be counted
	kept := b.Centers[:0]
	for _, c := range b.Centers {
		flat := m.Atom(int(c.Atom)).Aromatic
		for _, nb := range m.Neighbors(int(c.Atom)) {
			flat = flat || m.Bond(int(nb.Bond)).Order > 1
		}
		if !flat {
			kept = append(kept, c)
		}
	}
	b.Centers = kept
	return b
}

func TestMirror(t *testing.T) {
	for _, c := range []struct {
		text  string
		equal bool
	}{
		{"C[C@H](N)C(=O)O", false}, {"CC(N)C(=O)O", true}, {"OC(=O)[C@H](O)[C@@H](O)C(=O)O", false},
		{"OC(=O)[C@H](O)[C@H](O)C(=O)O", true}, {"C[C@H]1CC[C@@H](C)CC1", true}, {"C/C=C/C", true},
		{"C[C@H](O)[C@H](O)[C@@H](C)O", true}, {"C[C@H](O)[C@@H](O)[C@@H](O)CC", false}, {"C[S@](=O)CC", false}, {"C[C@H](O)CC.C[C@@H](O)CC", true},
	} {
		m := readMolecule(t, c.text)
		if got := m.EqualsMirror(); got != c.equal {
			t.Errorf("%s: equals its mirror image: %v, want %v", c.text, got, c.equal)
		}
		if back := m.Mirror().Mirror(); back.Key() != m.Key() {
			t.Errorf("%s: mirrored twice is another molecule", c.text)
		}
		if m.WithoutStereo().HasStereo() || m.WithoutStereo().Key() != m.FlatKey() {
			t.Errorf("%s: WithoutStereo keeps something", c.text)
		}
	}
}
