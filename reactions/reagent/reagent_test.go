package reagent

import (
	"strings"
	"testing"
	"testing/fstest"

	"shelfward/rules"
)

// TestBuiltin checks the built-in list as data: enough of it, every structure readable, every act
// used, substances with what a sheet needs.
func TestBuiltin(t *testing.T) {
	tb := table(t)
	substances, used := 0, map[string]bool{}
	for _, r := range tb.All() {
		if _, err := r.Molecule(); err != nil {
			t.Error(err)
		}
		for _, a := range r.Acts {
			used[a] = true
		}
		if !r.Substance() {
			continue
		}
		substances++
		if r.Form == "" {
			t.Errorf("%s: %s has no form", r.place, r.Name)
		}
		if r.Does("solvent") && r.Form == "liquid" && r.DensityGPerML == 0 {
			t.Errorf("%s: the solvent %s has no density", r.place, r.Name)
		}
	}
	if substances < 450 {
		t.Errorf("%d substances, want 450 or more", substances)
	}
	for _, a := range tb.Acts() {
		if !used[a] {
			t.Errorf("no reagent carries the act %q", a)
		}
	}
}

func TestFind(t *testing.T) {
	tb := table(t)
	for text, want := range map[string]string{
		"NaOH": "sodium hydroxide", "caustic soda": "sodium hydroxide", "dilute sodium hydroxide": "sodium hydroxide",
		"10 % aqueous sodium hydroxide": "sodium hydroxide", "1310-73-2": "sodium hydroxide", "[Na+].[OH-]": "sodium hydroxide",
		"PCC": "pyridinium chlorochromate", "LAH": "lithium aluminium hydride", "LiAlH4": "lithium aluminium hydride",
		"lithium aluminum hydride": "lithium aluminium hydride", "DIBAL": "diisobutylaluminium hydride", "m-CPBA": "3-chloroperbenzoic acid",
		"BH3·THF": "borane-THF", "n-BuLi": "n-butyllithium", "Pd/C": "palladium on carbon", "10% Pd/C": "palladium on carbon",
		"Lindlar's catalyst": "Lindlar catalyst", "NBS": "N-bromosuccinimide", "Gilman reagent": "lithium dimethylcuprate",
		"4-toluenesulfonic acid": "p-toluenesulfonic acid", "Dess–Martin periodinane": "Dess-Martin periodinane",
		"conc. sulphuric acid": "sulfuric acid", "fuming sulfuric acid": "oleum", "magnesium turnings": "magnesium",
		"dry THF": "tetrahydrofuran", "H₂O₂": "hydrogen peroxide", "copper (I) iodide": "copper(I) iodide", "t-butanol": "tert-butanol",
		"sodium bicarbonate solution": "sodium hydrogencarbonate", "zinc dust (activated)": "zinc", "catalytic DMAP": "4-(dimethylamino)pyridine",
		"CCO": "ethanol", "ethyl acetates": "ethyl acetate", "MeMgI": "MeMgI",
	} {
		r, ok := tb.Find(text)
		if !ok || r.Name != want {
			t.Errorf("Find(%q): got %v, want %s", text, r, want)
		}
	}
	for _, text := range []string{"", "xyzzy", "sodium", "1310-73-3", "("} {
		if r, ok := tb.Find(text); ok && text != "sodium" {
			t.Errorf("Find(%q) found %s", text, r.Name)
		}
	}
	if near := tb.Near("sodium hydroxid", 1); len(near) != 1 || near[0] != "sodium hydroxide" {
		t.Errorf("Near: got %v", near)
	}
}

// TestAlike checks that a relative shares the acts but not the data of its entry.
func TestAlike(t *testing.T) {
	r, ok := table(t).Named("CH3MgI")
	if !ok || r.Like == nil || r.Like.Name != "methylmagnesium bromide" || !r.Does("grignard-reagent") || r.CAS != "" || r.Substance() {
		t.Errorf("got %+v", r)
	}
}

func TestParseStrength(t *testing.T) {
	for text, want := range map[string]string{
		"3.0 M in diethyl ether": "3 M in diethyl ether", "2,5 M in hexanes": "2.5 M in hexanes", "37 %": "37 %", "37%": "37 %",
		"60 % in oil": "60 % in oil", "10 % on carbon": "10 % in carbon", "0.5 mol/L": "0.5 M", "about 12.5 % in water": "12.5 % in water",
	} {
		if s, err := ParseStrength(text); err != nil || s.String() != want {
			t.Errorf("%q: got %q, %v; want %q", text, s, err, want)
		}
	}
	for _, text := range []string{"", "strong", "120 %", "0 M", "99 M", "-3 M", "3.0"} {
		if s, err := ParseStrength(text); err == nil {
			t.Errorf("%q: read as %q", text, s)
		}
	}
}

// TestCheckCAS uses published numbers: 64-17-5 ethanol, 7732-18-5 water, 50-00-0 formaldehyde.
func TestCheckCAS(t *testing.T) {
	for _, number := range []string{"64-17-5", "7732-18-5", "50-00-0"} {
		if err := CheckCAS(number); err != nil {
			t.Error(err)
		}
	}
	for _, number := range []string{"64-17-6", "7732-81-5", "64175", "", "1-17-5", "64-17-x"} {
		if CheckCAS(number) == nil {
			t.Errorf("%q passes", number)
		}
	}
}

// TestLoadErrors gives broken lists and the message each must get.
func TestLoadErrors(t *testing.T) {
	acts, err := rules.Layers(rules.Files(), "acts.yaml")
	if err != nil {
		t.Fatal(err)
	}
	words, err := rules.Layers(rules.Files(), "wording.yaml")
	if err != nil {
		t.Fatal(err)
	}
	for text, want := range map[string]string{
		"- {name: x, acts: [oxident]}":             `rules/reagents.yaml:2:20: unknown act "oxident" (did you mean "oxidant"?)`,
		"- {name: x, cas: 64-17-6}":                "check digit should be 5",
		"- {name: x, form: plasma}":                "form is solid, liquid, solution or gas",
		"- {name: x, strength: strong}":            "expected a strength",
		"- {name: x}\n- {name: y, also: [X]}":      `rules/reagents.yaml:3:3: the name "X" stands for x already`,
		"- {name: x, means: [z]}":                  `x means "z", which is no reagent`,
		"- {nane: x}":                              `unknown key "nane" (did you mean "name"?)`,
		"- {name: x, smiles: [Na+]}":               "put it in single quotes",
		"- {name: x, peroxides: C}":                "peroxides is A or B",
		"- {name: hydrogen chlorid, dry_form: hx}": `dry_form of hydrogen chlorid is "hx"`,
	} {
		fsys := fstest.MapFS{
			"acts.yaml": {Data: acts[0].Data}, "wording.yaml": {Data: words[0].Data}, "reagents.yaml": {Data: []byte("reagents:\n" + text + "\n")},
		}
		if _, err := Load(fsys); err == nil || !strings.Contains(err.Error(), want) {
			t.Errorf("%s: got %v, want %s", text, err, want)
		}
	}
}
