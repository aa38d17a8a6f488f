package identify

import (
	"io/fs"
	"math"
	"slices"
	"strings"

	"shelfward/molecule"
	"shelfward/molecule/formula"
	"shelfward/molecule/isomer"
	"shelfward/molecule/pattern"
	"shelfward/molecule/spectra"
	"shelfward/rules"
)

// Data is evidence checked and read, ready for use.
type Data struct {
	Path     string // name of the case file, for messages
	Formula  *molecule.Formula
	Valences isomer.Valences
	Contains []*pattern.Query
	Lacks    []*pattern.Query
	// ContainsText and LacksText are the pieces as written.
	ContainsText, LacksText []string
	Elements                *Elements

	HasMass      bool
	MolecularIon int
	MolarMass    float64
	Exact        []formula.ExactMass
	Peaks        []formula.Peak
	PeaksAll     bool // listed: all

	Bands    []Band
	BandsAll bool

	Proton        []Proton
	ProtonAll     bool
	ProtonMHz     float64
	ProtonSolvent string
	Carbon        []Carbon
	CarbonAll     bool
	CarbonSolvent string

	// Doubts met while reading, in words.
	Doubts []string
}

// Band is an observed infrared band.
type Band struct {
	Span
	Strength spectra.Strength
	Broad    bool
}

// Proton is an observed 1H signal. H is absolute, or 0 where only Ratio is known.
type Proton struct {
	Span
	Shape    string
	J        []float64
	H, Ratio float64
	lines    []int // splitting by partners, from Shape
	// Solvent names a residual solvent or water that the signal agrees with; such a signal is left out
	// of the score, not out of sight.
	Solvent string
}

// Carbon is an observed 13C signal. Attached is the number of hydrogens on the carbon, -1 unknown.
type Carbon struct {
	Span
	Attached int
	Solvent  string
}

// Read checks the evidence and reads the texts and files it names. path is the case file's name for
// messages; files is the folder of the case file (nil: none can be read). Errors name file and line.
func (e *Evidence) Read(path string, files fs.FS) (*Data, error) {
	d := &Data{Path: path}
	for _, step := range []func(*Evidence, fs.FS) error{
		d.readFormula, d.readPieces, d.readMass, d.readInfrared, d.readCarbon, d.readProton,
	} {
		if err := step(e, files); err != nil {
			return nil, err
		}
	}
	d.Elements = e.Elements
	d.markSolvents()
	return d, nil
}

func (d *Data) readFormula(e *Evidence, _ fs.FS) error {
	if e.Formula.Written() {
		f, err := molecule.ParseFormula(e.Formula.Value)
		if err != nil {
			return e.Formula.Errorf(d.Path, "formula: %v", err)
		}
		d.Formula = &f
	}
	switch e.Valences.Value {
	case "", "usual":
		d.Valences = isomer.Usual
	case "standard":
		d.Valences = isomer.Standard
	default:
		return e.Valences.Errorf(d.Path, "valences: expected usual or standard, found %q", e.Valences.Value)
	}
	return nil
}

func (d *Data) readPieces(e *Evidence, _ fs.FS) error {
	read := func(key string, texts []rules.Text) (out []*pattern.Query, words []string, err error) {
		for _, t := range texts {
			p, err := compilePiece(t.Value)
			if err != nil {
				return nil, nil, t.Errorf(d.Path, "%s: %v", key, err)
			}
			out, words = append(out, p), append(words, t.Value)
		}
		return out, words, nil
	}
	var err error
	if d.Contains, d.ContainsText, err = read("contains", e.Contains); err != nil {
		return err
	}
	d.Lacks, d.LacksText, err = read("lacks", e.Lacks)
	return err
}

// listedAll reads the key listed.
func listedAll(path string, t rules.Text) (bool, error) {
	switch t.Value {
	case "", "main":
		return false, nil
	case "all":
		return true, nil
	}
	return false, t.Errorf(path, "listed: expected all or main, found %q", t.Value)
}

// ions are the names understood, without brackets and spaces.
var ions = map[string]formula.Ion{
	"": formula.IonM, "M": formula.IonM, "M+": formula.IonM, "M+.": formula.IonM, "M.+": formula.IonM, "M+•": formula.IonM,
	"M+H": formula.IonMH, "M+H+": formula.IonMH, "MH+": formula.IonMH, "M+Na": formula.IonMNa, "M+Na+": formula.IonMNa,
	"M+NH4": formula.IonMNH4, "M+NH4+": formula.IonMNH4, "M-H": formula.IonMlessH, "M-H-": formula.IonMlessH,
}

func (d *Data) readMass(e *Evidence, files fs.FS) error {
	m := e.Mass
	if m == nil {
		return nil
	}
	d.HasMass = true
	if m.MolecularIon < 0 || m.MolecularIon > 5000 || m.MolarMass < 0 || m.MolarMass > 5000 {
		return m.Errorf("mass: expected a molecular_ion or molar_mass up to 5000")
	}
	d.MolecularIon, d.MolarMass = m.MolecularIon, m.MolarMass
	if x := m.Exact; x != nil {
		ion, ok := ions[strings.NewReplacer("[", "", "]", "", " ", "", "−", "-").Replace(x.Ion.Value)]
		if !ok {
			return x.Ion.Errorf(d.Path, "ion: expected M+., M+H, M+Na, M+NH4 or M-H, found %q", x.Ion.Value)
		}
		if x.MZ <= 1 || x.MZ > 5000 || x.PPM < 0 || x.PPM > 1000 {
			return x.Errorf("exact: expected mz from 1 to 5000 and ppm up to 1000")
		}
		d.Exact = append(d.Exact, formula.ExactMass{MZ: x.MZ, Ion: ion, PPM: x.PPM})
	}
	for _, p := range m.Peaks {
		if len(p) != 2 || p[0] <= 0 || p[1] < 0 {
			return m.Errorf("peaks: expected pairs [m/z, relative intensity], such as [[43, 100], [87, 35]]")
		}
		d.Peaks = append(d.Peaks, formula.Peak{MZ: p[0], Intensity: p[1]})
	}
	var err error
	if d.PeaksAll, err = listedAll(d.Path, m.Listed); err != nil {
		return err
	}
	if m.Text.Written() {
		peaks, err := parsePeaks(m.Text.Value)
		if err != nil {
			return m.Text.Errorf(d.Path, "text: %v", err)
		}
		d.Peaks = append(d.Peaks, peaks...)
	}
	if m.File.Written() {
		scan, err := readScan(files, d.Path, m.File)
		if err != nil {
			return err
		}
		for _, x := range scan.points {
			d.Peaks = append(d.Peaks, formula.Peak{MZ: x.x, Intensity: x.y})
		}
	}
	scalePeaks(d.Peaks)
	return nil
}

// scalePeaks brings the largest peak to 100 where a file counts otherwise.
func scalePeaks(peaks []formula.Peak) {
	top := 0.0
	for _, p := range peaks {
		top = max(top, p.Intensity)
	}
	if top <= 0 || top > 90 && top <= 101 {
		return
	}
	for i := range peaks {
		peaks[i].Intensity *= 100 / top
	}
}

func (d *Data) readInfrared(e *Evidence, files fs.FS) error {
	ir := e.Infrared
	if ir == nil {
		return nil
	}
	var err error
	if d.BandsAll, err = listedAll(d.Path, ir.Listed); err != nil {
		return err
	}
	for _, b := range ir.Bands {
		s, ok := strengthOf(b.Strength)
		if !ok {
			return b.Strength.Errorf(d.Path, "strength: expected strong, medium, weak or none, found %q", b.Strength.Value)
		}
		if b.Shape.Written() && b.Shape.Value != "broad" && b.Shape.Value != "sharp" {
			return b.Shape.Errorf(d.Path, "shape of a band: expected broad or sharp, found %q", b.Shape.Value)
		}
		d.Bands = append(d.Bands, Band{Span: b.At, Strength: s, Broad: b.Shape.Value == "broad" || b.At.High-b.At.Low > 250})
	}
	if ir.Text.Written() {
		bands, err := parseBands(ir.Text.Value)
		if err != nil {
			return ir.Text.Errorf(d.Path, "text: %v", err)
		}
		d.Bands = append(d.Bands, bands...)
	}
	if ir.File.Written() {
		scan, err := readScan(files, d.Path, ir.File)
		if err != nil {
			return err
		}
		d.Bands = append(d.Bands, scan.bands()...)
	}
	for _, b := range d.Bands {
		if b.Low < 100 || b.High > 5000 {
			return &rules.Error{Path: d.Path, Line: e.Line, Text: "infrared: a band at " + b.Span.String() + " lies outside 100 to 5000 cm-1"}
		}
	}
	return nil
}

var attachedNames = map[string]int{"": -1, "C": 0, "CH": 1, "CH2": 2, "CH3": 3}

func (d *Data) readCarbon(e *Evidence, files fs.FS) error {
	s := e.Carbon
	if s == nil {
		return nil
	}
	var err error
	if d.CarbonAll, err = listedAll(d.Path, s.Listed); err != nil {
		return err
	}
	d.CarbonSolvent = s.Solvent.Value
	for _, x := range s.Signals {
		n, ok := attachedNames[x.Attached.Value]
		if !ok {
			return x.Attached.Errorf(d.Path, "attached: expected C, CH, CH2 or CH3, found %q", x.Attached.Value)
		}
		if x.At.Low < -50 || x.At.High > 260 {
			return x.Errorf("carbon: %s ppm lies outside -50 to 260", x.At)
		}
		d.Carbon = append(d.Carbon, Carbon{Span: x.At, Attached: n})
	}
	if s.Text.Written() {
		more, err := parseCarbonText(s.Text.Value)
		if err != nil {
			return s.Text.Errorf(d.Path, "text: %v", err)
		}
		d.Carbon = append(d.Carbon, more...)
	}
	if s.File.Written() {
		scan, err := readScan(files, d.Path, s.File)
		if err != nil {
			return err
		}
		for _, p := range scan.tops(0.04) {
			d.Carbon = append(d.Carbon, Carbon{Span: Span{p.x, p.x, true}, Attached: -1})
		}
	}
	slices.SortStableFunc(d.Carbon, func(a, b Carbon) int { return compareDown(a.Mid(), b.Mid()) })
	return nil
}

func compareDown(a, b float64) int {
	switch {
	case a > b:
		return -1
	case a < b:
		return 1
	}
	return 0
}

func (d *Data) readProton(e *Evidence, files fs.FS) error {
	s := e.Proton
	if s == nil {
		return nil
	}
	var err error
	if d.ProtonAll, err = listedAll(d.Path, s.Listed); err != nil {
		return err
	}
	d.ProtonSolvent, d.ProtonMHz = s.Solvent.Value, s.MHz
	for _, x := range s.Signals {
		if _, ok := shapes[x.Shape.Value]; !ok && x.Shape.Written() {
			return x.Shape.Errorf(d.Path, "shape: expected one of %s, found %q", shapeNames, x.Shape.Value)
		}
		if x.At.Low < -15 || x.At.High > 25 {
			return x.Errorf("proton: %s ppm lies outside -15 to 25", x.At)
		}
		if x.H < 0 || x.Ratio < 0 || x.H > 200 || math.IsNaN(x.Ratio) {
			return x.Errorf("proton: H and ratio are positive numbers")
		}
		d.Proton = append(d.Proton, Proton{Span: x.At, Shape: x.Shape.Value, J: x.J, H: x.H, Ratio: x.Ratio})
	}
	if s.Text.Written() {
		more, err := parseProtonText(s.Text.Value)
		if err != nil {
			return s.Text.Errorf(d.Path, "text: %v", err)
		}
		d.Proton = append(d.Proton, more...)
	}
	if s.File.Written() {
		scan, err := readScan(files, d.Path, s.File)
		if err != nil {
			return err
		}
		d.Proton = append(d.Proton, scan.protons()...)
	}
	slices.SortStableFunc(d.Proton, func(a, b Proton) int { return compareDown(a.Mid(), b.Mid()) })
	absolute, relative := 0, 0
	for _, x := range d.Proton {
		if x.H > 0 {
			absolute++
		}
		if x.Ratio > 0 {
			relative++
		}
	}
	if absolute > 0 && relative > 0 {
		return s.Errorf("proton: give H for all signals or ratio for all, not a mixture")
	}
	return nil
}
