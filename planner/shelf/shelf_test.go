package shelf

import (
	"math"
	"os"
	"path/filepath"
	"strings"
	"sync"
	"testing"

	"shelfward/molecule/smiles"
	"shelfward/reactions/hazard"
	"shelfward/reactions/reagent"
	"shelfward/rules"
)

var knownOnce = sync.OnceValues(func() (*Known, error) {
	reagents, err := reagent.Builtin()
	if err != nil {
		return nil, err
	}
	hazards, err := hazard.Builtin()
	return &Known{Reagents: reagents, Hazards: hazards}, err
})

func known(t testing.TB) *Known {
	t.Helper()
	k, err := knownOnce()
	if err != nil {
		t.Fatal(err)
	}
	return k
}

var builtinOnce = sync.OnceValues(func() (*Shelf, error) {
	k, err := knownOnce()
	if err != nil {
		return nil, err
	}
	return Load(rules.Files(), nil, "", k)
})

func builtin(t testing.TB) *Shelf {
	t.Helper()
	s, err := builtinOnce()
	if err != nil {
		t.Fatal(err)
	}
	return s
}

// TestBuiltin checks the example shelf as data: size, no clash, a density for every liquid, hazard
// codes looked up, prices that can be used.
func TestBuiltin(t *testing.T) {
	rep, err := Builtin(rules.Files(), known(t))
	if err != nil {
		t.Fatal(err)
	}
	carbon := 0
	for _, row := range rep.Rows {
		it := row.Item
		for _, note := range row.Notes {
			t.Errorf("line %d, %s: %s", row.Line, it.Name, note)
		}
		if it.Molecule == nil {
			if it.Reagent == nil {
				t.Errorf("line %d: %s is unknown", row.Line, it.Name)
			}
			continue
		}
		if it.Molecule.Formula().Count[6] > 0 {
			carbon++
		}
		if !it.HazardsKnown {
			t.Errorf("%s: hazards never looked up", it.Name)
		}
		if it.Amount.Millilitres > 0 && math.IsNaN(it.StockMol()) {
			t.Errorf("%s: the amount is a volume and the density unknown", it.Name)
		}
		if it.Price >= 0 && math.IsNaN(it.PricePerMol()) {
			t.Errorf("%s: the price cannot be turned into one per mol", it.Name)
		}
	}
	if carbon < 200 {
		t.Errorf("%d items with carbon, want 200 or more", carbon)
	}
}

// table reads rows under a header and returns one line per row: what it became, or the mistake.
func table(t testing.TB, name, text string) []string {
	t.Helper()
	k := *known(t)
	k.builtin = builtin(t).items
	rep := Read(name, []byte(text), &k)
	var lines []string
	for _, row := range rep.Rows {
		switch {
		case len(row.Errors) > 0:
			lines = append(lines, row.Errors[0].Error())
		default:
			it := row.Item
			line := it.Name + "|" + it.CAS + "|" + it.SMILES + "|" + it.ReadAs
			if len(row.Notes) > 0 {
				line += "|" + strings.Join(row.Notes, "; ")
			}
			lines = append(lines, line)
		}
	}
	if len(rep.Rows) == 0 && len(rep.Errs) > 0 {
		lines = append(lines, rep.Errs.Error())
	}
	return lines
}

func TestRead(t *testing.T) {
	for _, c := range []struct{ name, file, text, want string }{
		{"comma", "s.csv", "name,cas,smiles\npropanal,123-38-6,CCC=O", "propanal|123-38-6|CCC=O|SMILES"},
		{"semicolon, decimal comma", "s.csv", "name;cas;density;amount\npropanal;123-38-6;0,80;2,5 L", "propanal|123-38-6|CCC=O|CAS number"},
		{"tab", "s.tsv", "name\tamount\nethyl acetate\t1 L", "ethyl acetate|141-78-6|O=C(OCC)C|name"},
		{"byte order mark", "s.csv", "\xef\xbb\xbfname\nacetone", "acetone|67-64-1|O=C(C)C|name"},
		{"Windows-1252", "s.csv", "name,note\nacetone,f\xfcr die \x84Wartung\x93", "acetone|67-64-1|O=C(C)C|name"},
		{"line ends of two systems", "s.csv", "name,cas\r\nacetone,67-64-1\r\n", "acetone|67-64-1|CC(C)=O|CAS number"},
		{"quoted", "s.csv", "name,note\n\"N,N-dimethylformamide\",\"say \"\"dry\"\"\"", "N,N-dimethylformamide|68-12-2|O=CN(C)C|name"},
		{"synonym", "s.csv", "name\nDMF", "DMF|68-12-2|O=CN(C)C|name"},
		{"SMILES only", "s.csv", "smiles\nCCC=O", "|  |CCC=O|SMILES"},
		{"unknown columns", "s.csv", "name,Batch,CAS Number\nacetone,7,67-64-1", "acetone|67-64-1|CC(C)=O|CAS number"},
		{"blank lines", "s.csv", "name\n\nacetone\n\n", "acetone|67-64-1|O=C(C)C|name"},
		{"unknown name", "s.csv", "name\nmystery powder", "mystery powder||||no list knows this name: the structure is unknown, the row cannot be a starting material"},
		{"hydrate is no clash", "s.csv", "name,smiles,cas\nsodium thiosulfate,[Na+].[Na+].[O-]S(=O)(=S)[O-],10102-17-7", "sodium thiosulfate|10102-17-7|[Na+].[Na+].[O-]S(=O)(=S)[O-]|SMILES"},
		{"stereo marks missing are no clash", "s.csv", "name,smiles\ntrans-cinnamic acid,OC(=O)C=Cc1ccccc1", "trans-cinnamic acid|140-10-3|OC(=O)C=Cc1ccccc1|SMILES"},
		{"wrong check digit", "s.csv", "name,cas\nacetone,67-64-2", "s.csv:2: cas: CAS number 67-64-2: the check digit should be 1; a digit is wrong"},
		{"clash of SMILES and CAS", "s.csv", "name,cas,smiles\nx,67-64-1,CCC=O", "s.csv:2: smiles says CCC=O, cas says CC(C)=O: correct one of them"},
		{"clash of SMILES and name", "s.csv", "name,smiles\nacetone,CCC=O", "s.csv:2: smiles says CCC=O, name says CC(C)=O: correct one of them"},
		{"nothing to go by", "s.csv", "name,amount\n,5 g", "s.csv:2: this row has no name, cas or smiles; one of them is needed"},
		{"bad SMILES", "s.csv", "smiles\nC(C", "s.csv:2: smiles: "},
		{"bad amount", "s.csv", "name,amount\nacetone,a lot", "s.csv:2: amount: expected an amount such as '500 g', '2.5 L' or '2 x 500 mL', found \"a lot\""},
		{"bad hazard", "s.csv", "name,hazards\nacetone,H22", "s.csv:2: hazards: unknown hazard code \"H22\""},
		{"purity over 100", "s.csv", "name,purity\nacetone,120", "s.csv:2: purity: expected a percentage up to 100"},
		{"no useful header", "s.csv", "namen,menge\nacetone,5 g", "s.csv:1: the header has no column smiles, cas or name; one of them is needed (did you mean \"name\" where it says \"namen\"?)"},
		{"column twice", "s.csv", "name,Name\na,b", "s.csv:1: the column \"name\" stands twice"},
		{"empty", "s.csv", "", "s.csv: the file is empty"},
		{"YAML list", "s.yaml", "- {name: acetone, amount: 5 L}", "acetone|67-64-1|O=C(C)C|name"},
		{"YAML with defaults", "s.yaml", "defaults: {currency: EUR}\nitems:\n- name: acetone\n  hazards: [H225, H319]", "acetone|67-64-1|O=C(C)C|name"},
		{"YAML structure without quotes", "s.yaml", "- smiles: [Na+]", "s.yaml:1: this row has no name, cas or smiles; one of them is needed"},
	} {
		t.Run(c.name, func(t *testing.T) {
			got := table(t, c.file, c.text)
			want := strings.ReplaceAll(c.want, "|  |", "||")
			if len(got) != 1 || !strings.HasPrefix(got[0], want) && normal(t, got[0]) != normal(t, want) {
				t.Errorf("got  %q\nwant %q", got, want)
			}
		})
	}
}

// normal writes the structure of a line canonically, so that the table may write it as it likes.
func normal(t testing.TB, line string) string {
	parts := strings.Split(line, "|")
	for i, p := range parts {
		if m, err := smiles.Read(p); err == nil && p != "" && i == 2 {
			parts[i] = smiles.Write(m)
		}
	}
	if len(parts) > 1 && parts[1] == "" {
		parts[0] = strings.TrimSpace(parts[0])
	}
	return strings.Join(parts, "|")
}

// TestReadGoesOn checks that a mistake costs its row only, and that all are reported by line.
func TestReadGoesOn(t *testing.T) {
	rep := Read("s.csv", []byte("name,cas,amount\nacetone,67-64-1,5 L\nacetone,67-64-2,5 L\n\"open,67-64-1,5 L\nethanol,64-17-5,much\nethanol,64-17-5,1 L\na,b,c,d\n"), known(t))
	if got := len(rep.Items()); got != 2 {
		t.Errorf("%d items, want 2", got)
	}
	err := rep.Err()
	if err == nil {
		t.Fatal("no error")
	}
	want := []string{"s.csv:3: cas:", "s.csv:4: a quotation mark is never closed", "s.csv:5: amount:", "s.csv:7: 4 fields under 3 columns"}
	lines := strings.Split(err.Error(), "\n")
	if len(lines) != len(want) {
		t.Fatalf("got %q", lines)
	}
	for i := range want {
		if !strings.HasPrefix(lines[i], want[i]) {
			t.Errorf("got %q, want %q", lines[i], want[i])
		}
	}
}

func TestExtraColumns(t *testing.T) {
	rep := Read("s.csv", []byte("name,Batch\nacetone,7b"), known(t))
	it := rep.Items()[0]
	if len(it.Extra) != 1 || it.Extra[0] != (Field{"batch", "7b"}) {
		t.Errorf("got %v", it.Extra)
	}
}

func TestParseAmount(t *testing.T) {
	for text, want := range map[string]string{
		"500 g": "500 g", "2.5 L": "2.5 L", "2,5 l": "2.5 L", "2 x 500 mL": "1 L", "3×100g": "300 g", "250mg": "250 mg", "0.25 kg": "250 g",
		"1 kg": "1 kg", "100 µL": "0.1 mL", "5 mmol": "5 mmol", "0.5 mol": "500 mmol", "25 ML": "25 mL",
	} {
		a, err := ParseAmount(text)
		if err != nil || a.String() != want {
			t.Errorf("%q: got %s, %v; want %s", text, a, err, want)
		}
	}
	for _, text := range []string{"", "500", "g", "a lot", "0 g", "-5 g", "5 bottles", "1e99 kg", "99999999999999 x 99999999999999999999 kg", "5 g 3"} {
		if a, err := ParseAmount(text); err == nil {
			t.Errorf("%q: read as %s", text, a)
		}
	}
}

// TestForms checks amounts and prices of supplied forms against arithmetic done by hand.
func TestForms(t *testing.T) {
	rows := strings.Join([]string{
		"name,amount,purity,strength,density,price,pack",
		"2-bromopentane,25 g,95,,1.21,22,25 g",
		"ethylmagnesium bromide,100 mL,,3.0 M in diethyl ether,1.02,48,100 mL",
		"sodium hypochlorite solution,2.5 L,,12.5 % in water,1.21,16,2.5 L",
		"ethanol,1 L,,,0.789,12,1 L",
		"hydrogen,10 L,,,,,",
	}, "\n")
	k := *known(t)
	k.builtin = builtin(t).items
	items := Read("s.csv", []byte(rows), &k).Items()
	if len(items) != 5 {
		t.Fatalf("%d items", len(items))
	}
	near := func(what string, got, want float64) {
		if math.Abs(got-want) > 0.005*want || math.IsNaN(got) {
			t.Errorf("%s: got %g, want %g", what, got, want)
		}
	}
	near("2-bromopentane, mol in 25 g of 95 %", items[0].StockMol(), 25*0.95/151.05)
	near("2-bromopentane, g per mol", items[0].GramsPerMol(), 151.05/0.95)
	near("Grignard reagent, mol in 100 mL of 3 M", items[1].StockMol(), 0.3)
	near("Grignard reagent, mL per mol", items[1].MillilitresPerMol(), 333.3)
	near("Grignard reagent, price per mol", items[1].PricePerMol(), 160)
	near("bleach, mL per mol", items[2].MillilitresPerMol(), 74.44/0.125/1.21)
	near("ethanol, price per g", items[3].PricePerGram(), 12/789.0)
	near("hydrogen, mol in 10 L of gas", items[4].StockMol(), 10/24.06)
	if !math.IsNaN(items[4].PricePerMol()) {
		t.Error("hydrogen has a price that nobody gave")
	}
}

// TestHazardsAddUp checks that a row adds codes to those of the list and removes none.
func TestHazardsAddUp(t *testing.T) {
	for hazards, want := range map[string]string{"none": "H225 H319 H336", "H300": "H300 H225 H319 H336", "": "H225 H319 H336"} {
		it := Read("s.csv", []byte("name,hazards\nacetone,"+hazards), known(t)).Items()[0]
		if got := strings.Join(it.Hazards, " "); got != want || !it.HazardsKnown {
			t.Errorf("%q: got %s, want %s", hazards, got, want)
		}
	}
}

func TestFind(t *testing.T) {
	s := builtin(t)
	for structure, want := range map[string]string{
		"CCO": "ethanol", "CCOC(C)=O": "ethyl acetate", "C#N": "sodium cyanide", "CC(=O)O": "acetic acid", "CC(O)=CC(C)=O": "acetylacetone",
		"OC(=O)/C=C/c1ccccc1": "trans-cinnamic acid", "CC(=O)[O-].[Na+]": "sodium acetate", "O=C1NC(=O)c2ccccc12": "potassium phthalimide",
	} {
		m, err := smiles.Read(structure)
		if err != nil {
			t.Fatal(err)
		}
		if list := s.Find(m); len(list) == 0 || list[0].Name != want {
			t.Errorf("%s: got %v, want %s", structure, list, want)
		}
	}
	m, _ := smiles.Read("CCCCCCCCCCCCCCCCCCCCCC(C)C")
	if len(s.Find(m)) != 0 {
		t.Error("found what is not there")
	}
	for text, want := range map[string]string{"MeI": "iodomethane", "67-64-1": "acetone", "NaOH": "sodium hydroxide", "bleach": "sodium hypochlorite solution"} {
		if list := s.FindText(text); len(list) == 0 || list[0].Name != want {
			t.Errorf("%s: got %v, want %s", text, list, want)
		}
	}
}

func TestResolve(t *testing.T) {
	s := builtin(t)
	for text, want := range map[string]string{
		"CCO": "SMILES CCO", "cyclohexanone": "name O=C1CCCCC1", "67-64-1": "CAS number CC(C)=O", "smiles:CO": "SMILES CO",
		"name:carbon monoxide": "name [C-]#[O+]", "DMF": "name CN(C)C=O", " acetone ": "name CC(C)=O", "N": "SMILES N",
	} {
		r, err := s.Resolve(text)
		if err != nil {
			t.Errorf("%q: %v", text, err)
			continue
		}
		method, structure, _ := strings.Cut(want, " ")
		if method == "CAS" {
			method, structure = "CAS number", strings.TrimPrefix(structure, "number ")
		}
		m, err := smiles.Read(structure)
		if err != nil {
			t.Fatal(err)
		}
		if r.As != method || r.Molecule.Key() != m.Key() {
			t.Errorf("%q: read %s as %s, want %s", text, smiles.Write(r.Molecule), r.As, want)
		}
	}
	for text, want := range map[string]string{
		"CO": "write smiles:CO or name:", "CN": "two readings", "DMS": "two readings", "DMP": "two readings", "": "found nothing",
		"cyclohexanon": "cyclohexanone", "67-64-2": "check digit", "name:xyzzy": "is no name", "C(C": "",
	} {
		r, err := s.Resolve(text)
		if err == nil || !strings.Contains(err.Error(), want) || strings.Contains(err.Error(), "\n") {
			t.Errorf("%q: got %v, %v; want %q in one line", text, r.Molecule, err, want)
		}
	}
}

func TestLoad(t *testing.T) {
	dir := t.TempDir()
	good, bad := filepath.Join(dir, "good.csv"), filepath.Join(dir, "bad.csv")
	for path, text := range map[string]string{good: "name\nacetone\n", bad: "name,cas\nacetone,67-64-2\n"} {
		if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
			t.Fatal(err)
		}
	}
	k := known(t)
	s, err := Load(rules.Files(), []string{"good.csv"}, dir, k)
	if err != nil || s.Len() != 1 {
		t.Errorf("a file replaces the built-in shelf: got %v, %v", s, err)
	}
	if s, err = Load(rules.Files(), []string{good, BuiltinName}, "", k); err != nil || s.Len() != 1+builtin(t).Len() {
		t.Errorf("built-in is added back: got %v", err)
	}
	if _, err = Load(rules.Files(), []string{good, bad}, "", k); err == nil || !strings.Contains(err.Error(), "bad.csv:2:") {
		t.Errorf("got %v", err)
	}
	if _, err = Load(rules.Files(), []string{filepath.Join(dir, "absent.csv")}, "", k); err == nil || !strings.Contains(err.Error(), "no such file") {
		t.Errorf("got %v", err)
	}
}

func FuzzReadCSV(f *testing.F) {
	f.Add([]byte("name,cas,smiles,amount\nacetone,67-64-1,CC(C)=O,2 x 500 mL\n"))
	f.Add([]byte("\xef\xbb\xbfname;density\n\"a;b\";0,8\n"))
	f.Add([]byte("name\n\"never closed\n\xff\xfe"))
	k := known(f)
	f.Fuzz(func(t *testing.T, data []byte) {
		rep := Read("f.csv", data, k)
		for _, row := range rep.Rows {
			if row.Item == nil && len(row.Errors) == 0 {
				t.Errorf("line %d is lost without a word", row.Line)
			}
		}
	})
}

func FuzzReadYAML(f *testing.F) {
	f.Add([]byte("- {name: acetone, amount: 5 L}"))
	f.Add([]byte("defaults: {currency: EUR}\nitems: [{smiles: 'CCO', hazards: [H225]}]"))
	f.Add([]byte("items: &a [*a]"))
	k := known(f)
	f.Fuzz(func(t *testing.T, data []byte) {
		Read("f.yaml", data, k)
	})
}

func FuzzResolve(f *testing.F) {
	f.Add("CCO")
	f.Add("name:ethanol")
	f.Add("64-17-5")
	s := builtin(f)
	f.Fuzz(func(t *testing.T, text string) {
		if r, err := s.Resolve(text); err == nil && r.Molecule == nil {
			t.Errorf("%q: neither a structure nor an error", text)
		}
	})
}

// TestSolidOfASolution: a row with a purity is the substance itself, even where the list of reagents
// describes a solution; neither the solution's density nor its hazards belong to it.
func TestSolidOfASolution(t *testing.T) {
	it := Read("s.csv", []byte("name,purity,hazards\nsodium ethoxide,95,H251 H314"), known(t)).Items()[0]
	if it.Strength.Known() || it.DensityGPerML != 0 || strings.Join(it.Hazards, " ") != "H251 H314" {
		t.Errorf("got strength %v, density %g, hazards %v", it.Strength, it.DensityGPerML, it.Hazards)
	}
	it = Read("s.csv", []byte("name\nsodium ethoxide"), known(t)).Items()[0]
	if it.Strength.String() != "21 % in ethanol" {
		t.Errorf("a bare name is the usual solution: got %v", it.Strength)
	}
}

// TestBuiltinForms lists the rows of the example shelf that took their strength from the list though
// they give a structure of their own: they would be sold as something else than they say.
func TestBuiltinForms(t *testing.T) {
	data, err := os.ReadFile("../../rules/shelf.yaml")
	if err != nil {
		t.Fatal(err)
	}
	lines := strings.Split(string(data), "\n")
	for _, it := range builtin(t).items {
		if line := lines[it.Line-1]; strings.Contains(line, "smiles:") && !strings.Contains(line, "strength:") && it.Strength.Known() {
			t.Errorf("%s became %v", it.Name, it.Strength)
		}
	}
}
