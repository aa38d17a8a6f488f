package spectra

import (
	"io/fs"
	"strings"
	"sync"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
	"shelfward/rules"
)

// shift is a table value with its spread (one standard deviation), both in ppm.
type shift struct{ mean, spread float32 }

// systemAtom is what the table of ring systems says about one atom of a parent.
type systemAtom struct {
	carbon, proton float32
	system         string
}

// tables are the shift tables compiled for use; read only after load.
type tables struct {
	alkaneBase float32
	alkane     [numGroups][4]float32 // alpha, beta, gamma, delta
	branching  [4][4]float32
	correction [numCorrections]float32

	alkeneBase                                                      float32
	chainNear, chainFar                                             [3]float32
	steric                                                          map[string]float32
	alkeneNear, alkeneFar                                           [numGroups]float32
	alkeneWhole                                                     [numGroups]bool
	benzeneBase                                                     float32
	benzene                                                         [numGroups][4]float32 // ipso, ortho, meta, para
	protonBenzeneBase                                               float32
	protonBenzene                                                   [numGroups][4]float32
	protonAlkeneBase                                                float32
	protonAlkene                                                    [numGroups][3]float32 // gem, cis, trans
	protonBase                                                      [4]float32            // by hydrogens
	protonSP3                                                       [numGroups][3]float32 // alpha, beta, gamma
	methyleneBase                                                   float32
	methylene                                                       [numGroups]float32
	ringCarbon, ringProton                                          map[string][]float32
	openChain                                                       [5]float32 // ring size 3, 4, 5, 6, larger
	onRing                                                          struct{ alpha, gem, beta, gamma float32 }
	system                                                          map[uint64]systemAtom
	nitrogen                                                        [3]float32
	bands                                                           [numFeatures][]Band
	ion                                                             [numProcesses]float32
	furtherCO, furtherEthene, furtherEthyne, furtherWater, furtherH float32
	carbonyl                                                        [numCarbonyls]carbonylRow
	chelateOH, chelateNH                                            chelate
	ringBand                                                        [4]float32 // size 4, 5, 6; lactam of 5
}

// chelate is the effect of a hydrogen bridge from OH or NH to an ortho acyl group: on the carbonyl
// carbon, the ring carbons of donor and acyl (ppm) and the C=O band (cm-1).
type chelate struct{ carbonyl, donorIpso, acylIpso, band float32 }

// carbonylRow is one class of carbonyl: 13C shift and band with spreads.
type carbonylRow struct {
	name           string
	carbon         shift
	bandCM1, width float32
	alpha, hetero  float32 // per further carbon, per heteroatom or conjugated group, on the alpha carbons
}

var loadTables = sync.OnceValues(func() (*tables, error) { return readTables(rules.Files()) })

// Check reads every table of the built-in rules and reports what is wrong with them.
func Check() error {
	_, err := loadTables()
	return err
}

func mustTables() *tables {
	t, err := loadTables()
	if err != nil {
		panic("spectra: the built-in tables are broken: " + err.Error())
	}
	return t
}

// readTables reads the files of the shifts folder.
func readTables(fsys fs.FS) (*tables, error) {
	t := &tables{steric: map[string]float32{}, ringCarbon: map[string][]float32{}, ringProton: map[string][]float32{}, system: map[uint64]systemAtom{}}
	for _, read := range []func(fs.FS) error{t.readAlkane, t.readAlkene, t.readBenzene, t.readProton, t.readRings, t.readCarbonyls, t.readBands, t.readFragments, t.readSystems} {
		if err := read(fsys); err != nil {
			return nil, err
		}
	}
	return t, nil
}

// sourceCheck reports the first row whose source is not listed at the head of its file.
func sourceCheck(sources map[string]string, rows ...sourced) error {
	for _, r := range rows {
		if _, ok := sources[r.Source]; !ok {
			return r.Errorf("the source %q is not listed under sources", r.Source)
		}
	}
	return nil
}

func groupOf(path string, name rules.Text) (Group, error) {
	g, ok := groupByName(name.Value)
	if !ok {
		return None, name.Errorf(path, "unknown group %q; known: %s", name.Value, strings.Join(groupNames[1:], " "))
	}
	return g, nil
}

func (t *tables) readAlkane(fsys fs.FS) error {
	const name = "shifts/carbon-alkane.yaml"
	var f alkaneFile
	if err := rules.ReadInto(fsys, name, &f); err != nil {
		return err
	}
	t.alkaneBase = float32(f.Base.Value)
	var have [numGroups]bool
	for _, r := range f.Increments {
		g, err := groupOf(rules.PathOf(fsys, name), r.Group)
		if err == nil {
			err = sourceCheck(f.Sources, r.sourced)
		}
		if err != nil {
			return err
		}
		t.alkane[g], have[g] = [4]float32{float32(r.Alpha), float32(r.Beta), float32(r.Gamma), float32(r.Delta)}, true
	}
	spreadOver(&t.alkane, &have)
	for i, row := range f.Branching.Rows {
		for j, v := range row {
			if i < 4 && j < 4 {
				t.branching[i][j] = float32(v)
			}
		}
	}
	for _, r := range f.Corrections {
		k, ok := correctionByName(r.Where.Value)
		if !ok {
			return r.Where.Errorf(rules.PathOf(fsys, name), "unknown arrangement %q; known: %s", r.Where.Value, strings.Join(correctionNames[:], "; "))
		}
		if err := sourceCheck(f.Sources, r.sourced); err != nil {
			return err
		}
		t.correction[k] = float32(r.Value)
	}
	return nil
}

func (t *tables) readAlkene(fsys fs.FS) error {
	const name = "shifts/carbon-alkene.yaml"
	var f alkeneFile
	if err := rules.ReadInto(fsys, name, &f); err != nil {
		return err
	}
	t.alkeneBase = float32(f.Base.Value)
	for _, r := range f.Chain {
		i := strings.Index("alpha beta  gamma", r.At) / 6
		if i < 0 || i > 2 {
			return r.Errorf("place: expected alpha, beta or gamma, found %q", r.At)
		}
		t.chainNear[i], t.chainFar[i] = float32(r.Near), float32(r.Far)
	}
	for _, r := range f.Steric {
		t.steric[r.At] = float32(r.Value)
	}
	have := &t.alkeneWhole
	for _, r := range f.Groups {
		g, err := groupOf(rules.PathOf(fsys, name), r.Group)
		if err == nil {
			err = sourceCheck(f.Sources, r.sourced)
		}
		if err != nil {
			return err
		}
		t.alkeneNear[g], t.alkeneFar[g], have[g] = float32(r.Near), float32(r.Far), true
	}
	spreadOver(&t.alkeneNear, have)
	spreadOver(&t.alkeneFar, have)
	for g := Group(1); g < numGroups; g++ {
		for up := general[g]; up != None && !have[g]; up = general[up] {
			have[g] = have[up]
		}
	}
	return nil
}

// readColumns reads one file of rows by group and hands each row over.
func readColumns(fsys fs.FS, name string, have *[numGroups]bool, use func(g Group, r columnsRow)) (*columnsFile, error) {
	var f columnsFile
	if err := rules.ReadInto(fsys, name, &f); err != nil {
		return nil, err
	}
	for _, r := range f.Groups {
		g, err := groupOf(rules.PathOf(fsys, name), r.Group)
		if err == nil {
			err = sourceCheck(f.Sources, r.sourced)
		}
		if err != nil {
			return nil, err
		}
		have[g] = true
		use(g, r)
	}
	return &f, nil
}

func (t *tables) readBenzene(fsys fs.FS) error {
	var have, haveH [numGroups]bool
	f, err := readColumns(fsys, "shifts/carbon-benzene.yaml", &have, func(g Group, r columnsRow) {
		t.benzene[g] = [4]float32{float32(r.Ipso), float32(r.Ortho), float32(r.Meta), float32(r.Para)}
	})
	if err != nil {
		return err
	}
	spreadOver(&t.benzene, &have)
	t.benzeneBase = float32(f.Base.Value)
	f, err = readColumns(fsys, "shifts/proton-benzene.yaml", &haveH, func(g Group, r columnsRow) {
		t.protonBenzene[g] = [4]float32{0, float32(r.Ortho), float32(r.Meta), float32(r.Para)}
	})
	if err != nil {
		return err
	}
	spreadOver(&t.protonBenzene, &haveH)
	t.protonBenzeneBase = float32(f.Base.Value)
	return nil
}

func (t *tables) readProton(fsys fs.FS) error {
	var haveA, haveS, haveM [numGroups]bool
	f, err := readColumns(fsys, "shifts/proton-alkene.yaml", &haveA, func(g Group, r columnsRow) {
		t.protonAlkene[g] = [3]float32{float32(r.Gem), float32(r.Cis), float32(r.Trans)}
	})
	if err != nil {
		return err
	}
	spreadOver(&t.protonAlkene, &haveA)
	t.protonAlkeneBase = float32(f.Base.Value)
	f, err = readColumns(fsys, "shifts/proton-sp3.yaml", &haveS, func(g Group, r columnsRow) {
		t.protonSP3[g] = [3]float32{float32(r.Alpha), float32(r.Beta), float32(r.Gamma)}
	})
	if err != nil {
		return err
	}
	spreadOver(&t.protonSP3, &haveS)
	t.protonBase = [4]float32{0, float32(f.Methine), float32(f.Methylene), float32(f.Methyl)}
	f, err = readColumns(fsys, "shifts/proton-methylene.yaml", &haveM, func(g Group, r columnsRow) {
		t.methylene[g] = float32(r.Value)
	})
	if err != nil {
		return err
	}
	spreadOver(&t.methylene, &haveM)
	t.methyleneBase = float32(f.Base.Value)
	return nil
}

func (t *tables) readRings(fsys fs.FS) error {
	const name = "shifts/carbon-ring.yaml"
	var f ringFile
	if err := rules.ReadInto(fsys, name, &f); err != nil {
		return err
	}
	for _, r := range f.Rings {
		letters := strings.ReplaceAll(r.Ring.Value, " ", "")
		if len(letters) != len(r.Carbon) || len(r.Proton) != 0 && len(r.Proton) != len(letters) {
			return r.Ring.Errorf(rules.PathOf(fsys, name), "the ring has %d atoms, but carbon %d and proton %d values", len(letters), len(r.Carbon), len(r.Proton))
		}
		if err := sourceCheck(f.Sources, r.sourced); err != nil {
			return err
		}
		t.addRing(letters, r.Carbon, t.ringCarbon)
		if len(r.Proton) > 0 {
			t.addRing(letters, r.Proton, t.ringProton)
		}
	}
	o := f.OpenChain
	t.openChain = [5]float32{float32(o.Size3), float32(o.Size4), float32(o.Size5), float32(o.Size6), float32(o.Larger)}
	t.onRing.alpha, t.onRing.gem = float32(f.OnRing.Alpha), float32(f.OnRing.Gem)
	t.onRing.beta, t.onRing.gamma = float32(f.OnRing.Beta), float32(f.OnRing.Gamma)
	return nil
}

// addRing enters a ring under all its rotations and reflections, so that a lookup may start anywhere.
func (t *tables) addRing(letters string, values []float64, into map[string][]float32) {
	n := len(letters)
	for _, step := range []int{1, n - 1} {
		for start := range n {
			key, vals := make([]byte, n), make([]float32, n)
			for i := range n {
				j := (start + i*step) % n
				key[i], vals[i] = letters[j], float32(values[j])
			}
			if _, ok := into[string(key)]; !ok {
				into[string(key)] = vals
			}
		}
	}
}

func (t *tables) readCarbonyls(fsys fs.FS) error {
	const name = "shifts/carbonyl.yaml"
	var f carbonylFile
	if err := rules.ReadInto(fsys, name, &f); err != nil {
		return err
	}
	for _, r := range f.Classes {
		c, ok := carbonylByName(r.Class.Value)
		if !ok || len(r.Carbon) != 2 || len(r.Band) != 2 {
			return r.Class.Errorf(rules.PathOf(fsys, name), "expected a known class with carbon: [mean, spread] and band: [mean, spread], found %q; known: %s", r.Class.Value, strings.Join(carbonylNames[:], "; "))
		}
		if err := sourceCheck(f.Sources, r.sourced); err != nil {
			return err
		}
		t.carbonyl[c] = carbonylRow{r.Class.Value, shift{float32(r.Carbon[0]), float32(r.Carbon[1])}, float32(r.Band[0]), float32(r.Band[1]), float32(r.Alpha), float32(r.Hetero)}
	}
	for name, into := range map[string]*chelate{"OH": &t.chelateOH, "NH": &t.chelateNH} {
		c := f.Chelate[name]
		*into = chelate{float32(c.Carbonyl), float32(c.Donor), float32(c.Acyl), float32(c.Band)}
	}
	t.ringBand = [4]float32{float32(f.RingBand.Size4), float32(f.RingBand.Size5), float32(f.RingBand.Size6), float32(f.RingBand.Lactam5)}
	for c, row := range t.carbonyl {
		if row.name == "" && c > 0 {
			return &rules.Error{Path: rules.PathOf(fsys, name), Text: "no row for the class " + carbonylNames[c]}
		}
	}
	return nil
}

func (t *tables) readSystems(fsys fs.FS) error {
	const name = "shifts/ring-systems.yaml"
	var f systemsFile
	if err := rules.ReadInto(fsys, name, &f); err != nil {
		return err
	}
	t.nitrogen = [3]float32{float32(f.Nitrogen.Ortho), float32(f.Nitrogen.Meta), float32(f.Nitrogen.Para)}
	p := &Predictor{t: t}
	for _, r := range f.Systems {
		m, err := smiles.Read(r.Structure.Value)
		if err != nil {
			return r.Structure.Errorf(rules.PathOf(fsys, name), "cannot read the structure: %v", err)
		}
		if m.NumAtoms() != len(r.Carbon) || m.NumAtoms() != len(r.Proton) {
			return r.Structure.Errorf(rules.PathOf(fsys, name), "%s has %d atoms, but %d carbon and %d proton values", r.Name, m.NumAtoms(), len(r.Carbon), len(r.Proton))
		}
		if err := sourceCheck(f.Sources, r.sourced); err != nil {
			return err
		}
		p.addSystem(m, r.Name, r.Carbon, r.Proton)
	}
	return nil
}

// addSystem enters the ring atoms of a parent under their environment codes.
func (p *Predictor) addSystem(m *molecule.Molecule, name string, carbon, proton []float64) {
	p.perceive(m)
	for a := range p.n {
		if p.aromatic[a] {
			p.t.system[p.systemCode[a]] = systemAtom{float32(carbon[a]), float32(proton[a]), name}
		}
	}
}

// RingSystem is an aromatic parent of the tables: its structure and the shifts of its atoms (ppm, 0
// where there is none).
type RingSystem struct {
	Name           string
	Molecule       *molecule.Molecule
	Carbon, Proton []float64
}

// RingSystems lists the unsubstituted aromatic parents of the built-in tables, benzene first.
func RingSystems() ([]RingSystem, error) {
	var f systemsFile
	if err := rules.ReadInto(rules.Files(), "shifts/ring-systems.yaml", &f); err != nil {
		return nil, err
	}
	var out []RingSystem
	for _, r := range f.Systems {
		m, err := smiles.Read(r.Structure.Value)
		if err != nil {
			return nil, err
		}
		if !m.Atom(0).Aromatic {
			continue // rows for N-substituted parents
		}
		out = append(out, RingSystem{r.Name, m, r.Carbon, r.Proton})
	}
	return out, nil
}
