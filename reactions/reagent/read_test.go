package reagent

import (
	"flag"
	"os"
	"strings"
	"testing"

	"shelfward/molecule"
)

var update = flag.Bool("update", false, "rewrite the readings in testdata/conditions")

const textbook = "../../testdata/conditions/textbook.txt"

func table(t testing.TB) *Table {
	t.Helper()
	tb, err := Builtin()
	if err != nil {
		t.Fatal(err)
	}
	return tb
}

// TestTextbookConditions reads every wording of the table, which must all be understood.
func TestTextbookConditions(t *testing.T) {
	data, err := os.ReadFile(textbook)
	if err != nil {
		t.Fatal(err)
	}
	tb := table(t)
	lines := strings.Split(string(data), "\n")
	count := 0
	for i := 0; i+1 < len(lines); i++ {
		want, ok := strings.CutPrefix(lines[i+1], "=> ")
		if !ok || strings.HasPrefix(lines[i], "#") {
			continue
		}
		count++
		d := tb.Read(lines[i], nil)
		if len(d.NotUnderstood) > 0 {
			t.Errorf("line %d: %q: not understood: %q", i+1, lines[i], d.NotUnderstood)
		}
		got := dump(d)
		if *update {
			lines[i+1] = "=> " + got
		} else if got != want {
			t.Errorf("line %d: %q\n got  %s\n want %s", i+1, lines[i], got, want)
		}
	}
	if count < 500 {
		t.Errorf("only %d wordings in %s", count, textbook)
	}
	if *update {
		if err := os.WriteFile(textbook, []byte(strings.Join(lines, "\n")), 0o644); err != nil {
			t.Fatal(err)
		}
	}
}

// TestNotUnderstood lists what must be reported, word by word.
func TestNotUnderstood(t *testing.T) {
	tb := table(t)
	for text, want := range map[string]string{
		"unobtainium chloride, heat":               "unobtainium chloride",
		"hexanoic acid, reflux":                    "hexanoic acid",
		"magnesium, frobnicated ether, then water": "frobnicated",
		"sodium hydroxide; xyzzy; then plugh acid": "xyzzy; plugh acid",
		"CN": "cn",
	} {
		if got := strings.Join(tb.Read(text, nil).NotUnderstood, "; "); got != want {
			t.Errorf("%q: not understood %q, want %q", text, got, want)
		}
	}
}

// TestNames resolves what the table does not know by the caller's names, the longest run first.
func TestNames(t *testing.T) {
	known := &molecule.Molecule{}
	names := func(name string) (*molecule.Molecule, bool) {
		return known, name == "hexanoic acid" || name == "hexanoic"
	}
	d := table(t).Read("excess hexanoic acid, sulfuric acid (catalytic)", names)
	if got, want := dump(d), "hexanoic acid, sulfuric acid {catalytic excess}"; got != want {
		t.Errorf("got %s, want %s", got, want)
	}
	if m := d.Stages[0].Mentions[0]; m.Molecule != known || !m.Excess || m.Reagent != nil {
		t.Errorf("got %+v", m)
	}
}

// TestMentionWords checks that a word is laid to the substance it describes.
func TestMentionWords(t *testing.T) {
	d := table(t).Read("magnesium, dry ether, excess acetone, sulfuric acid (catalytic), conc. hydrochloric acid, 2 M NaOH, sodium amide (2 equivalents)", nil)
	m := d.Stages[0].Mentions
	if len(m) != 7 {
		t.Fatalf("got %s", dump(d))
	}
	if m[0].Dry || !m[1].Dry || !m[2].Excess || m[2].Dry || !m[3].Catalytic || !m[4].Concentrated || m[5].Strength.MolarM != 2 || m[6].Equivalents != 2 {
		t.Errorf("got %+v", m)
	}
}

// TestWordsOfTheirOwn checks that a piece without a substance belongs to the one before it.
func TestWordsOfTheirOwn(t *testing.T) {
	d := table(t).Read("pyridine, piperidine, catalytic; aqueous ammonia, large excess; lithium aluminium hydride, 0.25 equivalent, cold", nil)
	m := d.Stages[0].Mentions
	if len(m) != 4 || m[0].Catalytic || !m[1].Catalytic || !m[2].Excess || m[3].Equivalents != 0.25 || m[3].Excess {
		t.Errorf("got %+v", m)
	}
}

// TestFactsOfActs checks the facts that follow from the substances.
func TestFactsOfActs(t *testing.T) {
	tb := table(t)
	for text, facts := range map[string]string{
		"dilute hydrochloric acid":  "acid aqueous dilute",
		"sodium ethoxide, ethanol":  "base",
		"NBS, AIBN, CCl4":           "initiator",
		"toluene":                   "",
		"HBr":                       "acid",
		"hydrobromic acid":          "acid aqueous",
		"sulfuric acid, 96 %":       "acid",
		"sodium hydroxide, no heat": "base",
	} {
		if got := strings.Join(tb.Read(text, nil).Stages[0].Facts, " "); got != facts {
			t.Errorf("%q: facts %q, want %q", text, got, facts)
		}
	}
}

// TestChoices spells alternatives out.
func TestChoices(t *testing.T) {
	tb := table(t)
	for text, want := range map[string]string{
		"benzoyl peroxide or air, toluene":                      "dibenzoyl peroxide+toluene | oxygen+toluene",
		"ozone; zinc and acetic acid, or dimethyl sulfide":      "ozone+zinc+acetic acid | ozone+dimethyl sulfide",
		"heat, no solvent (or dimethylformamide)":               " | N,N-dimethylformamide",
		"sodium hydroxide, water":                               "sodium hydroxide+water",
		"lithium aluminium hydride, ether (or hydrogen, Pd/C)":  "lithium aluminium hydride+diethyl ether | hydrogen+palladium on carbon",
		"hydrogen, palladium on carbon (or platinum oxide)":     "hydrogen+palladium on carbon | hydrogen+platinum oxide",
		"sodium or potassium hydroxide, methanol":               "sodium hydroxide+methanol | potassium hydroxide+methanol",
		"copper(I) chloride or bromide":                         "copper(I) chloride | copper(I) bromide",
		"hydrochloric or hydrobromic acid":                      "hydrochloric acid | hydrobromic acid",
		"nitric and sulfuric acids, 50 C":                       "nitric acid+sulfuric acid",
		"aluminium chloride, iron(III) chloride or zinc iodide": "aluminium chloride+iron(III) chloride | aluminium chloride+zinc iodide",
	} {
		var choices []string
		for _, c := range tb.Read(text, nil).Stages[0].Choices() {
			var names []string
			for _, m := range c {
				names = append(names, m.Name())
			}
			choices = append(choices, strings.Join(names, "+"))
		}
		if got := strings.Join(choices, " | "); got != want {
			t.Errorf("%q: got %s, want %s", text, got, want)
		}
	}
}

func FuzzRead(f *testing.F) {
	f.Add("magnesium, dry ether (a note), then dilute acid; 0-5 C; pH 6; or 2 equiv NaOH/H2O")
	f.Add("((([[[,;,;or or or then then")
	f.Add("(i) x (ii) y 3 M HCl -78 to °C")
	tb := table(f)
	f.Fuzz(func(t *testing.T, text string) {
		for _, s := range tb.Read(text, nil).Stages {
			for _, choice := range s.Choices() {
				if len(choice) > len(s.Mentions) {
					t.Errorf("%q: a choice holds more than the stage", text)
				}
			}
		}
	})
}

func BenchmarkRead(b *testing.B) {
	tb := table(b)
	for b.Loop() {
		tb.Read("magnesium turnings, dry diethyl ether, then dilute hydrochloric acid, 0-5 C", nil)
	}
}
