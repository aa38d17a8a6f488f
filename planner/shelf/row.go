package shelf

import (
	"fmt"
	"math"
	"slices"
	"strings"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
	"shelfward/reactions/reagent"
	"shelfward/rules"
)

// columns are the keys that the program knows, in the order of the documentation.
var columns = []string{"smiles", "cas", "name", "synonyms", "amount", "purity", "strength", "in", "price", "currency", "pack", "density",
	"hazards", "location", "opened", "tested", "expires", "note"}

// row is one row as written: values by column, with the place.
type row struct {
	path  string
	line  int
	value map[string]string
	extra []Field

	molecule *molecule.Molecule // of a record that was drawn; nil otherwise
}

func (r row) errorf(format string, args ...any) *rules.Error {
	return &rules.Error{Path: r.path, Line: r.line, Text: fmt.Sprintf(format, args...)}
}

// RowReport says how one row was read.
type RowReport struct {
	Line   int
	Item   *Item    // nil if the row could not be read
	Notes  []string // what a user should know: a name that nothing knows, a missing density
	Errors []*rules.Error
}

// reader turns rows into items with what the lists know.
type reader struct {
	known *Known
}

// item reads a row. Errors leave the item nil: a row with a mistake in it is not used.
func (rd reader) item(r row) RowReport {
	rep := RowReport{Line: r.line}
	fail := func(err *rules.Error) { rep.Errors = append(rep.Errors, err) }
	it := &Item{Name: r.value["name"], CAS: r.value["cas"], SMILES: r.value["smiles"], Price: math.NaN(), Currency: r.value["currency"],
		Location: r.value["location"], Opened: r.value["opened"], Tested: r.value["tested"], Expires: r.value["expires"],
		Note: r.value["note"], Extra: r.extra, File: r.path, Line: r.line}
	if it.Name == "" && it.CAS == "" && it.SMILES == "" {
		fail(r.errorf("this row has no name, cas or smiles; one of them is needed"))
		return rep
	}
	for _, s := range strings.Split(r.value["synonyms"], ";") {
		if s = strings.TrimSpace(s); s != "" {
			it.Synonyms = append(it.Synonyms, s)
		}
	}
	rd.identity(r, it, &rep)
	rd.quantities(r, it, &rep)
	rd.hazards(r, it, &rep)
	if len(rep.Errors) == 0 {
		rd.complete(it, &rep)
		rep.Item = it
	}
	return rep
}

// identity finds the structure: from smiles, cas, name in this order of trust, and compares the
// others with it where they are understood.
func (rd reader) identity(r row, it *Item, rep *RowReport) {
	type reading struct {
		column, as string
		m          *molecule.Molecule
	}
	var found []reading
	if it.SMILES != "" {
		m, err := smiles.Read(it.SMILES)
		if err != nil {
			rep.Errors = append(rep.Errors, r.errorf("smiles: %v", err))
			return
		}
		found = append(found, reading{"smiles", "SMILES", m})
	}
	if it.CAS != "" {
		if err := reagent.CheckCAS(it.CAS); err != nil {
			rep.Errors = append(rep.Errors, r.errorf("cas: %v", err))
			return
		}
		if m := rd.known.byCAS(it.CAS); m != nil {
			found = append(found, reading{"cas", "CAS number", m})
		}
	}
	if it.Name != "" {
		m := rd.known.byName(it.Name)
		if re, ok := rd.known.Reagents.Named(it.Name); ok {
			it.Reagent = re
		}
		if m != nil {
			found = append(found, reading{"name", "name", m})
		}
	}
	if len(found) == 0 {
		if it.Reagent == nil {
			rep.Notes = append(rep.Notes, "no list knows this "+what(it)+": the structure is unknown, the row cannot be a starting material")
		}
		return
	}
	it.Molecule, it.ReadAs = found[0].m, found[0].as
	for _, other := range found[1:] {
		if !sameSubstance(it.Molecule, other.m) {
			rep.Errors = append(rep.Errors, r.errorf("%s says %s, %s says %s: correct one of them", found[0].column, smiles.Write(it.Molecule), other.column, smiles.Write(other.m)))
			return
		}
	}
	if it.Reagent != nil && it.Reagent.SMILES != "" && !sameReagent(it.Reagent, it.Molecule) {
		it.Reagent = nil
	}
	if it.Reagent == nil {
		it.Reagent, _ = rd.known.Reagents.ByExact(it.Molecule)
	}
}

// what names what a row gives, for a message.
func what(it *Item) string {
	if it.Name == "" {
		return "CAS number"
	}
	return "name"
}

func sameReagent(re *reagent.Reagent, m *molecule.Molecule) bool {
	rm, err := re.Molecule()
	return err == nil && rm != nil && sameSubstance(rm, m)
}

// sameSubstance compares two structures of one row: stereo marks that one of them lacks, water of
// crystallisation, salts and shifting hydrogens do not make a clash.
func sameSubstance(a, b *molecule.Molecule) bool {
	if a.Key() == b.Key() || a.FlatKey() == b.FlatKey() {
		return true
	}
	return slices.Equal(core(a), core(b))
}

// core lists the seen-through keys of the parts of a substance without water and simple acids, sorted.
func core(m *molecule.Molecule) []string {
	var keys []string
	parts := m.WithoutStereo().FreeForm().Split()
	for _, p := range parts {
		f := p.Formula().String()
		if len(parts) > 1 && (f == "H2O" || f == "HCl" || f == "ClH" || f == "HBr" || f == "BrH") {
			continue
		}
		k := p.SeenThroughKey()
		keys = append(keys, string(k[:]))
	}
	slices.Sort(keys)
	return slices.Compact(keys)
}

// quantities reads amounts, strength, purity, price and density.
func (rd reader) quantities(r row, it *Item, rep *RowReport) {
	read := func(column string, use func(text string) error) {
		if text := r.value[column]; text != "" {
			if err := use(text); err != nil {
				rep.Errors = append(rep.Errors, r.errorf("%s: %v", column, err))
			}
		}
	}
	amount := func(to *Amount) func(string) error {
		return func(text string) (err error) {
			*to, err = ParseAmount(text)
			return err
		}
	}
	read("amount", amount(&it.Amount))
	read("pack", amount(&it.Pack))
	read("purity", func(text string) error {
		x, err := parseNumber(strings.TrimRight(text, " %"))
		if err == nil && (x <= 0 || x > 100) {
			err = fmt.Errorf("expected a percentage up to 100, found %q", text)
		}
		it.PurityFraction = x / 100
		return err
	})
	read("strength", func(text string) (err error) {
		it.Strength, err = reagent.ParseStrength(text)
		return err
	})
	read("in", func(text string) error {
		if !it.Strength.Known() {
			return fmt.Errorf("a solvent without a strength")
		}
		if it.Strength.In != "" && !strings.EqualFold(it.Strength.In, text) {
			return fmt.Errorf("the strength says %q, this column %q", it.Strength.In, text)
		}
		it.Strength.In = text
		return nil
	})
	read("price", func(text string) (err error) {
		it.Price, err = parseNumber(strings.TrimLeft(text, "€$£ "))
		return err
	})
	read("density", func(text string) (err error) {
		it.DensityGPerML, err = parseNumber(strings.TrimSuffix(strings.TrimSuffix(text, "g/mL"), "g/ml"))
		if err == nil && (it.DensityGPerML <= 0 || it.DensityGPerML > 25) {
			err = fmt.Errorf("expected g/mL, found %q", text)
		}
		return err
	})
}

// hazards reads the codes: none is a statement, an empty field is not.
func (rd reader) hazards(r row, it *Item, rep *RowReport) {
	text := strings.TrimSpace(r.value["hazards"])
	if text == "" {
		return
	}
	it.HazardsKnown = true
	if strings.EqualFold(text, "none") {
		return
	}
	for _, code := range strings.FieldsFunc(text, func(c rune) bool { return strings.ContainsRune(" ,;+/", c) }) {
		if err := rd.known.CheckHazard(code); err != nil {
			rep.Errors = append(rep.Errors, r.errorf("hazards: %v (codes separated by spaces, or none)", err))
			return
		}
		if !slices.Contains(it.Hazards, code) {
			it.Hazards = append(it.Hazards, code)
		}
	}
}

// complete fills in what the lists know and the row does not say, and adds the codes that the list of
// reagents has: a row may add hazards, not remove them.
func (rd reader) complete(it *Item, rep *RowReport) {
	if re := it.Reagent; re != nil {
		it.fillFrom(re)
	}
	if it.Name == "" && it.Molecule != nil {
		it.Name = rd.known.nameOf(it.Molecule)
	}
	if it.Price >= 0 && !it.Pack.Known() {
		rep.Notes = append(rep.Notes, "a price without a pack: it cannot be used")
		it.Price = math.NaN()
	}
	if it.Molecule == nil {
		return
	}
	if it.SMILES == "" {
		it.SMILES = smiles.Write(it.Molecule)
	}
	if it.Amount.Known() && math.IsNaN(it.StockMol()) {
		rep.Notes = append(rep.Notes, "the density is missing: the amount cannot be turned into moles")
	}
}

// fillFrom completes the item from its entry in the list of reagents.
func (it *Item) fillFrom(re *reagent.Reagent) {
	if it.Name == "" {
		it.Name = re.Name
	}
	if it.CAS == "" {
		it.CAS = re.CAS
	}
	if it.Molecule == nil && re.SMILES != "" {
		it.Molecule, _ = re.Molecule()
		it.SMILES, it.ReadAs = re.SMILES, "name"
	}
	if re.Form == "solution" && it.PurityFraction > 0 && !it.Strength.Known() {
		return // the substance itself, where the list describes a solution of it
	}
	if !it.Strength.Known() && it.PurityFraction == 0 && re.Form == "solution" {
		it.Strength = re.Strength
	}
	if it.DensityGPerML == 0 {
		it.DensityGPerML = re.DensityGPerML
	}
	if re.HazardsKnown {
		it.HazardsKnown = true
		for _, code := range re.Hazards {
			if !slices.ContainsFunc(it.Hazards, func(c string) bool { return c == code || strings.HasPrefix(c, code) || strings.HasPrefix(code, c) }) {
				it.Hazards = append(it.Hazards, code)
			}
		}
	}
}
