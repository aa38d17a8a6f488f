package reactions

import (
	"context"
	"sort"
	"strings"
	"testing"

	"shelfward/molecule"
	"shelfward/rules"
)

// takeOffs lists the protecting groups of which a form is proposed for a molecule.
func takeOffs(t *testing.T, b *Book, target string, stocked Stocked) string {
	t.Helper()
	steps, err := b.Expand(context.Background(), read(t, target), stocked)
	if err != nil {
		t.Fatal(err)
	}
	seen := map[string]bool{}
	for _, s := range steps {
		if g := b.takesOff[s.Transform.ID]; g != nil && !g.Builds {
			seen[g.ID] = true
		}
	}
	var out []string
	for id := range seen {
		out = append(out, id)
	}
	sort.Strings(out)
	return strings.Join(out, " ")
}

// TestProtectInNeed: protected forms are proposed where a step to the same molecule fails for the group,
// and only forms that stand its media.
func TestProtectInNeed(t *testing.T) {
	b, err := Load(rules.Files())
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct{ name, target, has, hasNot string }{
		{"Grignard reagent from a hydroxy halide", "CC(O)CCCCCCO", "tbs thp trityl", "tips ethylene-ketal boc"},
		{"an alkane alcohol has no step that its group spoils", "CO", "", "tbs thp tips trityl"},
		{"an ester reduced beside a ketone", "CC(=O)CCCO", "ethylene-ketal", ""},
		{"a dipeptide", "NCC(=O)NC(C)C(=O)O", "boc", ""},
		{"no group", "CCCCCC", "", "tbs thp boc ethylene-ketal"},
	} {
		got := takeOffs(t, b, c.target, nil)
		for _, id := range strings.Fields(c.has) {
			if !strings.Contains(" "+got+" ", " "+id+" ") {
				t.Errorf("%s: %s is not proposed (%s)", c.name, id, got)
			}
		}
		for _, id := range strings.Fields(c.hasNot) {
			if strings.Contains(" "+got+" ", " "+id+" ") {
				t.Errorf("%s: %s is proposed (%s)", c.name, id, got)
			}
		}
	}
}

// TestTableRemoves: the one table says of every form that the media of some step which takes it off do not
// leave it alone, and that at least three other media do.
func TestTableRemoves(t *testing.T) {
	b, err := Load(rules.Files())
	if err != nil {
		t.Fatal(err)
	}
	level := func(medium, form string) level {
		for _, gl := range b.media.media[medium].groups {
			if gl.group == b.groups.Index(form) {
				return gl.level
			}
		}
		return survives
	}
	for _, g := range b.ProtectingGroups() {
		removes, stands := false, 0
		for _, id := range g.TakeOff {
			for _, c := range b.Transform(id).Conditions {
				for _, m := range c.Media {
					removes = removes || level(m, g.Form) >= competes
				}
			}
		}
		for _, m := range b.media.order {
			if level(m, g.Form) == survives {
				stands++
			}
		}
		if !removes && !g.Builds {
			t.Errorf("%s: no medium that takes it off attacks %s in the tolerance table", g.ID, g.Form)
		}
		if stands < 3 {
			t.Errorf("%s: only %d media leave it alone", g.ID, stands)
		}
		if g.Source == "" || len(g.Shields) == 0 {
			t.Errorf("%s: source or shields are missing", g.ID)
		}
	}
}

// TestTwoGuards: a molecule that carries two protecting groups gets no third, unless it is at hand.
func TestTwoGuards(t *testing.T) {
	b, err := Load(rules.Files())
	if err != nil {
		t.Fatal(err)
	}
	const one = "OCCCC(O)CCO[Si](C)(C)C(C)(C)C"
	const two = "OCCCC(O[Si](C)(C)C(C)(C)C)CCO[Si](C)(C)C(C)(C)C"
	if got := takeOffs(t, b, one, nil); !strings.Contains(got, "thp") {
		t.Errorf("one group on: %q", got)
	}
	if got := takeOffs(t, b, two, nil); got != "" {
		t.Errorf("two groups on: %q", got)
	}
	all := func(*molecule.Molecule) bool { return true }
	if got := takeOffs(t, b, two, all); !strings.Contains(got, "thp") {
		t.Errorf("two groups on, a third at hand: %q", got)
	}
}

// TestFormsChosenToSurvive: the form proposed must stand the medium that asked for it.
func TestFormsChosenToSurvive(t *testing.T) {
	b, err := Load(rules.Files())
	if err != nil {
		t.Fatal(err)
	}
	for _, c := range []struct {
		form, medium string
		stands       bool
	}{
		{"CCCCO[Si](C)(C)C(C)(C)C", "organomagnesium", true},
		{"CCCCO[Si](C)(C)C(C)(C)C", "fluoride", false},
		{"CCCCOC1CCCCO1", "organomagnesium", true},
		{"CCCCOC1CCCCO1", "hot-aqueous-acid", false},
		{"CCC1(C)OCCO1", "hydride-aluminium", true},
		{"CCC1(C)OCCO1", "hot-aqueous-acid", false},
		{"CCNC(=O)OC(C)(C)C", "coupling-reagent", true},
		{"CCNC(=O)OC(C)(C)C", "trifluoroacetic-acid", false},
		{"CCNC(=O)OCc1ccccc1", "hydrogen-palladium", false},
		{"CCNC(=O)OCc1ccccc1", "trifluoroacetic-acid", true},
	} {
		s := b.subject(read(t, c.form))
		e := &guarded{form: s, on: make([]bool, s.M.NumAtoms()), stands: map[string]bool{}}
		for i := range e.on {
			e.on[i] = true
		}
		x := &expander{b: b}
		if got := x.standsAll(e, []string{c.medium}); got != c.stands {
			t.Errorf("%s in %s: stands %v", c.form, c.medium, got)
		}
	}
}
