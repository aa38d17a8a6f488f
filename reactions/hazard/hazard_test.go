package hazard

import (
	"slices"
	"strings"
	"testing"

	"shelfward/molecule/pattern"
	"shelfward/molecule/smiles"
	"shelfward/reactions/reagent"
	"shelfward/rules"
)

func data(t testing.TB) *Data {
	t.Helper()
	d, err := Builtin()
	if err != nil {
		t.Fatal(err)
	}
	return d
}

func pictograms(l Label) string {
	var codes []string
	for _, p := range l.Pictograms {
		codes = append(codes, p.Code)
	}
	return strings.Join(codes, " ")
}

// TestLabel checks precedence on known labels. Expected pictograms: the rules of UN GHS 1.4.10.5.3
// applied by hand; methanol, sodium hydroxide, toluene, maleic anhydride as their usual labels show.
func TestLabel(t *testing.T) {
	d := data(t)
	for _, c := range []struct{ name, codes, pictograms, signal, statements string }{
		{"methanol", "H225 H301 H311 H331 H370", "GHS02 GHS06 GHS08", "Danger", "H225 H301 H311 H331 H370"},
		{"skull drops the exclamation mark", "H301 H315 H335", "GHS06", "Danger", "H301 H335 H315"},
		{"corrosion drops it for irritation only", "H314 H315 H335", "GHS05 GHS07", "Danger", "H314 H315 H335"},
		{"corrosion to metal drops nothing", "H290 H315", "GHS05 GHS07", "Warning", "H290 H315"},
		{"respiratory sensitiser drops it for skin", "H334 H317", "GHS08", "Danger", "H334 H317"},
		{"but not for the rest", "H334 H317 H302", "GHS07 GHS08", "Danger", "H334 H302 H317"},
		{"burns cover eye damage", "H314 H318", "GHS05", "Danger", "H314"},
		{"lasting harm covers harm", "H410 H400", "GHS09", "Warning", "H410"},
		{"toluene", "H225 H304 H315 H336 H361d H373", "GHS02 GHS07 GHS08", "Danger", "H225 H304 H315 H336 H361d H373"},
		{"irritant", "H319", "GHS07", "Warning", "H319"},
		{"nothing", "", "", "", ""},
		{"pictogram without signal word", "H411", "GHS09", "", "H411"},
		{"letters are kept", "H360FD", "GHS08", "Danger", "H360FD"},
	} {
		l := d.Label(Codes(c.codes))
		var codes []string
		for _, s := range l.Statements {
			codes = append(codes, s.Code)
		}
		slices.Sort(codes)
		want := Codes(c.statements)
		slices.Sort(want)
		if pictograms(l) != c.pictograms || l.Signal != c.signal || !slices.Equal(codes, want) {
			t.Errorf("%s: got %s / %s / %v, want %s / %s / %v", c.name, pictograms(l), l.Signal, codes, c.pictograms, c.signal, want)
		}
	}
	if l := d.Label([]string{"H999"}); len(l.Unknown) != 1 {
		t.Errorf("an unknown code is lost: %+v", l)
	}
}

func TestSort(t *testing.T) {
	got := strings.Join(data(t).Sort(Codes("H319 H225 H302 H260 H225 H360FD H411 H314")), " ")
	if want := "H260 H360FD H225 H314 H302 H319 H411"; got != want {
		t.Errorf("got %s, want %s", got, want)
	}
}

// TestGravityTotal checks that the order is total: no two base codes share a place.
func TestGravityTotal(t *testing.T) {
	d := data(t)
	seen := map[int]string{}
	for _, code := range d.ghs.order {
		if other, taken := seen[d.Gravity(code)]; taken {
			t.Errorf("%s and %s have the same gravity", code, other)
		}
		seen[d.Gravity(code)] = code
	}
}

func TestStatement(t *testing.T) {
	d := data(t)
	for code, want := range map[string]string{
		"H225": "Highly flammable liquid and vapour", "EUH014": "Reacts violently with water",
		"H360FD": "May damage fertility. May damage the unborn child", "H350i": "May cause cancer by inhalation",
	} {
		if s, ok := d.Statement(code); !ok || s.Text != want {
			t.Errorf("%s: got %q", code, s.Text)
		}
	}
	if s, _ := d.Statement("H360FD"); s.Base != "H360" || s.Signal != "Danger" {
		t.Errorf("got %+v", s)
	}
	for code, want := range map[string]string{"H225x": "did you mean H225", "225": "did you mean H225", "flammable": "unknown hazard code"} {
		if err := d.CheckCode(code); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: got %v, want %q", code, err, want)
		}
	}
}

func TestPrecautions(t *testing.T) {
	d := data(t)
	var codes []string
	for _, p := range d.Precautions([]string{"H225"}) {
		codes = append(codes, p.Code)
	}
	if !slices.Contains(codes, "P210") || slices.Contains(codes, "P284") {
		t.Errorf("got %v", codes)
	}
	if len(d.Precautions(nil)) != 0 {
		t.Error("precautions without a hazard")
	}
}

func substance(t testing.TB, name string) Substance {
	t.Helper()
	tb, err := reagent.Builtin()
	if err != nil {
		t.Fatal(err)
	}
	s := Substance{Name: name}
	if r, ok := tb.Find(name); ok {
		s.Reagent = r
		s.Molecule, _ = r.Molecule()
	}
	return s
}

// TestClashes holds pairs that chemists are warned of, and pairs that must stay silent. Source: the
// tables named in rules/incompatible.yaml.
func TestClashes(t *testing.T) {
	d := data(t)
	for _, c := range []struct{ a, b, gives string }{
		{"sodium cyanide", "hydrochloric acid", "toxic gas"},
		{"sodium azide", "dichloromethane", "explosion"},
		{"sodium hydride", "dimethylformamide", "explosion"},
		{"bleach", "hydrochloric acid", "toxic gas"},
		{"bleach", "acetone", "toxic gas"},
		{"bleach", "ammonium chloride", "explosion"},
		{"potassium permanganate", "ethanol", "fire"},
		{"lithium aluminium hydride", "water", "flammable gas"},
		{"nitric acid", "acetone", "explosion"},
		{"sodium", "chloroform", "explosion"},
		{"acetyl chloride", "water", "toxic gas"},
		{"sodium hydrogencarbonate", "hydrochloric acid", "gas"},
		{"hydrogen peroxide", "acetone", "explosion"},
		{"palladium on carbon", "methanol", "fire"},
		{"magnesium sulfate", "ethyl acetate", ""},
		{"sodium chloride", "water", ""},
		{"toluene", "ethyl acetate", ""},
		{"sodium borohydride", "triethylamine", ""},
	} {
		clashes := d.Clashes([]Substance{substance(t, c.a), substance(t, c.b)}, nil)
		switch {
		case c.gives == "" && len(clashes) > 0:
			t.Errorf("%s and %s: got %s, want silence", c.a, c.b, clashes[0].Says())
		case c.gives != "" && (len(clashes) != 1 || !slices.Contains(clashes[0].Gives, c.gives)):
			t.Errorf("%s and %s: got %v, want %s", c.a, c.b, clashes, c.gives)
		}
	}
}

func TestClashesOrder(t *testing.T) {
	d := data(t)
	list := []Substance{substance(t, "ethyl acetate"), substance(t, "sodium hydroxide"), substance(t, "sodium azide"), substance(t, "chloroform")}
	clashes := d.Clashes(list, nil)
	if len(clashes) < 2 || !slices.Contains(clashes[0].Gives, "explosion") {
		t.Errorf("the gravest pair does not come first: %v", clashes)
	}
	for _, c := range clashes {
		if d.Source(c.Source) == "" {
			t.Errorf("%s: no source", c.Says())
		}
	}
}

func TestWatched(t *testing.T) {
	d := data(t)
	for name, want := range map[string]int{
		"acetic anhydride": 1, "thionyl chloride": 1, "sulfuric acid": 2, "acetone": 2, "sodium cyanide": 1, "ethyl acetate": 0, "water": 0,
	} {
		if got := d.Watched(substance(t, name)); len(got) != want {
			t.Errorf("%s: got %v, want %d flags", name, got, want)
		}
	}
	m, err := smiles.Read("O=C1CCCO1")
	if err != nil {
		t.Fatal(err)
	}
	if got := d.Watched(Substance{Name: "a lactone", Molecule: m}); len(got) != 1 {
		t.Errorf("by structure: got %v", got)
	}
}

func TestCautions(t *testing.T) {
	d := data(t)
	for _, text := range []string{d.StandingCaution(), d.ShortCaution()} {
		if !strings.Contains(text, "risk assessment") || !strings.Contains(text, "safety data sheets") {
			t.Errorf("the caution does not defer to people and data sheets: %q", text)
		}
	}
}

// TestGroupsExist checks that the functional groups named in incompatible.yaml stand in groups.yaml.
func TestGroupsExist(t *testing.T) {
	var file struct {
		Groups []map[string]any `yaml:"groups"`
	}
	if err := rules.ReadInto(rules.Files(), "groups.yaml", &file); err != nil {
		t.Fatal(err)
	}
	known := map[string]bool{}
	for _, g := range file.Groups {
		id, _ := g["id"].(string)
		known[id] = true
	}
	for _, g := range data(t).groups {
		for _, id := range g.groups {
			if !known[id] {
				t.Errorf("group %s: no functional group %q in groups.yaml", g.id, id)
			}
		}
	}
}

// TestClashesByStructure finds clashes of compounds that no list names, by their groups.
func TestClashesByStructure(t *testing.T) {
	groups := pattern.NewGroups()
	for id, text := range map[string]string{"ketone": "[C:1]=[O:2]", "acid-chloride": "[C:1](=[O:2])[Cl:3]", "azide": "[N:1]=[N+:2]=[N-:3]"} {
		where := pattern.Where{}
		if id == "ketone" {
			where["1"] = []string{"carbon neighbours 2"}
		}
		if err := groups.Add(id, id, []string{text}, where, nil); err != nil {
			t.Fatal(err)
		}
	}
	mol := func(name, structure string) Substance {
		m, err := smiles.Read(structure)
		if err != nil {
			t.Fatal(err)
		}
		return Substance{Name: name, Molecule: m}
	}
	d := data(t)
	for _, c := range []struct {
		a, b  Substance
		gives string
	}{
		{mol("a ketone", "CCCC(=O)CCC"), substance(t, "hydrogen peroxide"), "explosion"},
		{mol("an acid chloride", "CCCCCCC(=O)Cl"), substance(t, "water"), "toxic gas"},
		{mol("an azide", "CCCCCCCCN=[N+]=[N-]"), substance(t, "dichloromethane"), "explosion"},
		{mol("a ketone", "CCCC(=O)CCC"), substance(t, "magnesium sulfate"), ""},
	} {
		clashes := d.Clashes([]Substance{c.a, c.b}, groups)
		switch {
		case c.gives == "" && len(clashes) > 0:
			t.Errorf("%s and %s: got %s, want silence", c.a.Name, c.b.Name, clashes[0].Says())
		case c.gives != "" && (len(clashes) != 1 || !slices.Contains(clashes[0].Gives, c.gives)):
			t.Errorf("%s and %s: got %v, want %s", c.a.Name, c.b.Name, clashes, c.gives)
		}
	}
}
