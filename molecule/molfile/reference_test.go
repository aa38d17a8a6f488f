package molfile

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"os"
	"strings"
	"syscall"
	"testing"
	"time"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

// TestReferenceFiles reads files of another toolkit (testdata/reference_files.py) and what we write
// of them, in both forms.
func TestReferenceFiles(t *testing.T) {
	f, err := os.Open("testdata/reference.sdf")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	count := 0
	for r := NewReader(f); ; count++ {
		rec, err := r.Next()
		if err == io.EOF {
			break
		}
		if err != nil {
			t.Error(err)
			continue
		}
		text, _ := rec.Field("SMILES")
		want := read(t, text)
		if rec.Molecule.Key() != want.Key() {
			t.Errorf("record %d: %s read as %s", rec.Number, smiles.Write(want), smiles.Write(rec.Molecule))
			continue
		}
		for name, write := range map[string]func(io.Writer, *Record) error{"V2000": Write, "V3000": WriteV3000} {
			var out bytes.Buffer
			if err := write(&out, rec); err != nil {
				t.Fatal(err)
			}
			back, err := Read(bytes.NewReader(out.Bytes()))
			if err != nil || back.Molecule.Key() != want.Key() || !strings.Contains(out.String(), name) {
				t.Errorf("record %d, %s written as %s: %v\n%s", rec.Number, text, name, err, out.String())
			}
		}
	}
	if count < 170 {
		t.Errorf("only %d records", count)
	}
}

func TestReferenceReactions(t *testing.T) {
	want := "CC(=O)O.CCO>>CCOC(C)=O.O"
	for _, path := range []string{"testdata/reference_2.rxn", "testdata/reference_3.rxn"} {
		f, err := os.Open(path)
		if err != nil {
			t.Fatal(err)
		}
		r, err := ReadReaction(f)
		f.Close()
		if err != nil {
			t.Fatal(path, err)
		}
		if got := reactionText(r); got != want {
			t.Errorf("%s: %s", path, got)
		}
		for name, write := range map[string]func(io.Writer, *Reaction) error{"V2000": WriteReaction, "V3000": WriteReactionV3000} {
			agents := *r
			agents.Agents, agents.Products = r.Products[1:], r.Products[:1]
			var out bytes.Buffer
			if err := write(&out, &agents); err != nil {
				t.Fatal(err)
			}
			back, err := ReadReaction(bytes.NewReader(out.Bytes()))
			if err != nil || reactionText(back)+".O" != want || len(back.Agents) != 1 || back.Reactants[0].Molecule.Atom(0).Class != r.Reactants[0].Molecule.Atom(0).Class {
				t.Errorf("%s as %s: %v\n%s", path, name, err, out.String())
			}
		}
	}
}

// reactionText leaves out the atom classes.
func reactionText(r *Reaction) string {
	part := func(list []*Record) string {
		var texts []string
		for _, x := range list {
			b := x.Molecule.Builder()
			for i := range b.Atoms {
				b.Atoms[i].Class = 0
			}
			m, err := b.Build()
			if err != nil {
				return err.Error()
			}
			texts = append(texts, smiles.Write(m))
		}
		return strings.Join(texts, ".")
	}
	return part(r.Reactants) + ">>" + part(r.Products)
}

// TestLongChain writes more atoms than V2000 holds, with continued lines read back.
func TestLongChain(t *testing.T) {
	b := &molecule.Builder{}
	for i := range 1500 {
		b.AddAtom(molecule.Atom{Element: 6, Hydrogens: molecule.AutoHydrogens})
		if i > 0 {
			b.AddBond(i-1, i, 1)
		}
	}
	m, err := b.Build()
	if err != nil {
		t.Fatal(err)
	}
	var out bytes.Buffer
	if err := Write(&out, &Record{Molecule: m}); err != nil {
		t.Fatal(err)
	}
	text := strings.Replace(out.String(), "M  V30 2 C 0.0000 ", "M  V30 2 C -\nM  V30 0.0000 ", 1)
	back, err := Read(strings.NewReader(text))
	if err != nil || back.Molecule.Key() != m.Key() {
		t.Errorf("read back: %v", err)
	}
}

func TestV3000Errors(t *testing.T) {
	table := func(body string) string {
		return "x\n\n\n  0  0  0     0  0            999 V3000\nM  V30 BEGIN CTAB\n" + body + "M  V30 END CTAB\nM  END\n"
	}
	atoms := "M  V30 BEGIN ATOM\nM  V30 10 C 0 0 0 0\nM  V30 20 O 1 0 0 0 CHG=-1\nM  V30 END ATOM\n"
	good := table("M  V30 COUNTS 2 1 0 0 0\n" + atoms + "M  V30 BEGIN BOND\nM  V30 1 1 10 20\nM  V30 END BOND\nM  V30 BEGIN COLLECTION\nM  V30 MDLV30/STERAC1 ATOMS=(1 10)\nM  V30 END COLLECTION\n")
	rec, err := Read(strings.NewReader(good))
	if err != nil || smiles.Write(rec.Molecule) != "C[O-]" || !rec.Relative {
		t.Fatalf("%v %v", rec, err)
	}
	for _, c := range []struct{ body, message string }{
		{"M  V30 COUNTS 2 x\n", "COUNTS"},
		{"M  V30 COUNTS 3 0 0 0 0\n" + atoms, "the counts line has"},
		{"M  V30 COUNTS 2000000 0 0 0 0\n" + atoms, "at most"},
		{"M  V30 COUNTS 2 1 0 0 0\n" + atoms + "M  V30 BEGIN BOND\nM  V30 1 1 10 30\nM  V30 END BOND\n", "names atom 30"},
		{"M  V30 COUNTS 2 1 0 0 0\n" + atoms + "M  V30 BEGIN BOND\nM  V30 1 9 10 20\nM  V30 END BOND\n", "bond type 9"},
		{"M  V30 COUNTS 1 0 0 0 0\nM  V30 BEGIN ATOM\nM  V30 1 Xx 0 0 0 0\nM  V30 END ATOM\n", "element symbol"},
		{"M  V30 COUNTS 1 0 0 0 0\nM  V30 BEGIN ATOM\nM  V30 1 C 0 a 0 0\nM  V30 END ATOM\n", "coordinate"},
		{"M  V30 COUNTS 2 0 0 0 0\nM  V30 BEGIN ATOM\nM  V30 1 C 0 0 0 0\nM  V30 1 C 0 1 0 0\nM  V30 END ATOM\n", "twice"},
		{"nonsense\n", "expected COUNTS"},
	} {
		_, err := Read(strings.NewReader(table(c.body)))
		var e *Error
		if !errors.As(err, &e) || !strings.Contains(e.Message, c.message) {
			t.Errorf("%q: %v, expected %q", c.body, err, c.message)
		}
	}
}

// processorTime is what this process has used so far: a busy machine does not count.
func processorTime() time.Duration {
	var u syscall.Rusage
	if err := syscall.Getrusage(syscall.RUSAGE_SELF, &u); err != nil {
		panic(err)
	}
	return time.Duration(u.Utime.Nano() + u.Stime.Nano())
}

// TestHostileInput: a megabyte of anything is read or refused within a second.
func TestHostileInput(t *testing.T) {
	head := "x\n\n\n  0  0  0     0  0            999 V3000\nM  V30 BEGIN CTAB\n"
	counts := "M  V30 COUNTS 2000 2000 0 0 0\nM  V30 BEGIN ATOM\n"
	var atoms strings.Builder
	for i := range 2000 {
		fmt.Fprintf(&atoms, "M  V30 %d C %d %d 0 0\n", i+1, i%50, i/50)
	}
	for _, c := range []struct{ start, repeated string }{
		{"", "\n"}, {"", "$$$$\n"}, {"", "x"}, {"", "x\n"}, {"", "\x00"}, {methane, "> <A>\n"}, {methane, "> <A>\n\n"}, {methane + "> <A>\n", "a\n"},
		{methane + "> <A>\n", " \n"}, {"", methane + "$$$$\n"}, {head, "M  V30 -\n"}, {head + "M  V30 COUNTS 1 0 0 0 0\n", "M  V30 BEGIN X\n"},
		{head + counts, "M  V30 1 C 0 0 0 0\n"}, {head + counts + atoms.String() + "M  V30 END ATOM\nM  V30 BEGIN BOND\n", "M  V30 1 1 1 2\n"},
		{head + counts + atoms.String() + "M  V30 END ATOM\nM  V30 BEGIN BOND\n", "M  V30 1 1 1 2\nM  V30 2 1 1 3\n"}, {"$RXN V3000\n\n\n\n", "M  V30 COUNTS 99 99\n"},
	} {
		text := c.start + strings.Repeat(c.repeated, (1<<20-len(c.start))/len(c.repeated))
		start := processorTime()
		for r := NewReader(strings.NewReader(text)); ; {
			if _, err := r.Next(); err == io.EOF {
				break
			}
		}
		ReadReaction(strings.NewReader(text))
		if took := processorTime() - start; took > time.Second {
			t.Errorf("%.20q and 1 MB of %.20q: %v", c.start, c.repeated, took)
		}
	}
}
