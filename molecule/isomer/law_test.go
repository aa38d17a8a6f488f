package isomer

import (
	"context"
	"fmt"
	"math/rand/v2"
	"os"
	"reflect"
	"sort"
	"strings"
	"sync/atomic"
	"testing"
	"time"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

// lawPieces are pieces for the pruning law.
var lawPieces = []string{
	"[CH2:2]=O", "[CH3:1][OH:1]", "[CH4:1]", "[OH:1][CH:1]=O", "[CH2:2]=[CH2:2]", "[OH][CH:1]", "[OH:1][OH:1]",
	"[CH:1]#[CH:1]", "[CH2:1][CH2:1]", "[NH2][CH2:1]", "[cH:1]1ccccc1", "[CH2:2]=[NH:1]", "[CH3][CH:1]", "[CH]#N", "[CH2:1]1[CH2:1][CH2]1",
}

func lawPiece(t testing.TB, text string) Piece {
	text = strings.NewReplacer("[OH][CH:1]", "[OH][CH2:1]", "[NH2][CH2:1]", "[NH2][CH2:1]", "[CH3][CH:1]", "[CH3][CH3:1]").Replace(text)
	return pieceFrom(t, text)
}

// The pruning law: evidence that cuts branches leaves exactly the structures that a run without it
// gives and that meet the evidence. Ring sizes, hydrogens and pieces are judged here on the molecule.
func TestPruningLaw(t *testing.T) {
	random := rand.New(rand.NewPCG(3, 5))
	formulas := []string{"C6H10O", "C5H8O2", "C4H7NO", "C6H10", "C5H6O", "C4H6N2", "C7H8", "C3H7NO2", "C4H4O2"}
	all := map[string][]*Structure{}
	names := map[string][]string{}
	for _, f := range formulas {
		p := Problem{Formula: formulaOf(t, f)}
		if _, err := Enumerate(context.Background(), p, Options{}, func(s *Structure) bool {
			all[f], names[f] = append(all[f], s.Clone()), append(names[f], label(t, s))
			return true
		}); err != nil {
			t.Fatal(err)
		}
	}
	trials := 250
	if os.Getenv("SHELFWARD_SLOW") != "" {
		trials = 4000
	}
	for trial := 0; trial < trials; trial++ {
		f := formulas[random.IntN(len(formulas))]
		p, words := randomEvidence(t, random, f)
		var want []string
		for i, s := range all[f] {
			if meets(t, s, &p) {
				want = append(want, names[f][i])
			}
		}
		got := keys(t, p)
		sort.Strings(want)
		if !reflect.DeepEqual(got, want) && len(got)+len(want) > 0 {
			t.Fatalf("trial %d, %s, %s: %d structures, want %d; missing %v, too many %v", trial, f, words, len(got), len(want), minus(want, got), minus(got, want))
		}
	}
}

// randomEvidence adds one to three random pieces of evidence.
func randomEvidence(t testing.TB, random *rand.Rand, f string) (Problem, string) {
	p := Problem{Formula: formulaOf(t, f)}
	words := ""
	for n := 1 + random.IntN(3); n > 0; n-- {
		switch random.IntN(9) {
		case 0:
			h, k := random.IntN(4), random.IntN(3)
			p.Carbons[h] = []Range{Exactly(k), AtLeast(k), AtMost(k)}[random.IntN(3)]
			words += fmt.Sprintf("carbons with %d H %v; ", h, p.Carbons[h])
		case 1:
			p.OnHetero = AtMost(random.IntN(2))
			words += fmt.Sprintf("on hetero %v; ", p.OnHetero)
		case 2:
			p.Rings = []Range{Exactly(0), Exactly(1), AtMost(1), AtLeast(1), Between(1, 2)}[random.IntN(5)]
			words += fmt.Sprintf("rings %v; ", p.Rings)
		case 3:
			p.NoRings |= 1 << (3 + random.IntN(4))
			words += fmt.Sprintf("no rings %b; ", p.NoRings)
		case 4:
			p.NoCumulated = true
			words += "not cumulated; "
		case 5:
			p.NoSmallRing = true
			words += "no strained ring; "
		case 6:
			p.Bonds = append(p.Bonds, BondBan{[]molecule.Element{carbon, oxygen, nitrogen}[random.IntN(3)], oxygen, uint8(random.IntN(3))})
			words += fmt.Sprintf("no bond %v; ", p.Bonds)
		case 7:
			x := lawPieces[random.IntN(len(lawPieces))]
			p.Lacks = append(p.Lacks, lawPiece(t, x))
			words += "lacks " + x + "; "
		case 8:
			x := lawPieces[random.IntN(len(lawPieces))]
			p.Contains = append(p.Contains, lawPiece(t, x))
			words += "contains " + x + "; "
		}
	}
	return p, words
}

// meets judges the evidence on the finished molecule.
func meets(t testing.TB, s *Structure, p *Problem) bool {
	m, err := s.Materialise()
	if err != nil {
		t.Fatal(err)
	}
	var carbons [4]int
	hetero := 0
	twos := map[int32]int{}
	for a := 0; a < m.NumAtoms(); a++ {
		at := m.Atom(a)
		if at.Element == carbon {
			carbons[min(at.Hydrogens, 3)]++
		} else {
			hetero += int(at.Hydrogens)
		}
	}
	for h, r := range p.Carbons {
		if !r.Holds(carbons[h]) {
			return false
		}
	}
	if !p.OnHetero.Holds(hetero) || !p.Rings.Holds(m.NumBonds()-m.NumAtoms()+1) {
		return false
	}
	company := func(x molecule.Bond) bool { // bonds inside nitro, N-oxide, isocyanide, azide, P=O, S=O units
		a, b := m.Atom(int(x.A)), m.Atom(int(x.B))
		return a.Charge != 0 && b.Charge != 0 || (a.Charge > 0 || b.Charge > 0) && x.Order == 2 && m.Degree(int(x.A)) == 1 || a.Charge > 0 && x.Order == 2 && m.Degree(int(x.B)) == 1 && b.Element != carbon || b.Charge > 0 && x.Order == 2 && a.Element == nitrogen
	}
	for b := 0; b < m.NumBonds(); b++ {
		if x := m.Bond(b); x.Order == 2 && !company(x) {
			twos[x.A]++
			twos[x.B]++
		}
	}
	for b := 0; b < m.NumBonds(); b++ {
		x := m.Bond(b)
		size := m.SmallestBondRing(b)
		if size > 0 && p.NoRings>>size&1 != 0 {
			return false
		}
		cumulated := x.Order == 2 && (twos[x.A] > 1 || twos[x.B] > 1)
		if p.NoSmallRing && size > 0 && size < 8 && (x.Order == 3 || cumulated) || p.NoCumulated && cumulated {
			return false
		}
		for _, ban := range p.Bonds {
			if !company(x) && ban.between(m.Atom(int(x.A)).Element, m.Atom(int(x.B)).Element).has(x.Order) {
				return false
			}
		}
	}
	var w workspace
	w.structure = *s.Clone()
	w.markAromatic()
	for i, list := range [][]Piece{p.Contains, p.Lacks} {
		for _, x := range list {
			q, err := x.sorted()
			if err != nil {
				t.Fatal(err)
			}
			if w.occurs(&q) != (i == 0) {
				return false
			}
		}
	}
	return true
}

// The choice of the first unit is free: any rarest or not rarest kind gives the same compounds.
func TestAnyRoot(t *testing.T) {
	for _, f := range []string{"C5H8O2", "C7H8", "C3H7NO2", "C5H5N", "C6H12"} {
		p := Problem{Formula: formulaOf(t, f)}
		want := keys(t, p)
		c, err := compile(p)
		if err != nil {
			t.Fatal(err)
		}
		for turn := 1; turn < 4; turn++ {
			var got []string
			var s search
			out := &collector{ctx: context.Background(), halt: new(atomic.Bool), problem: c, give: func(st *Structure) bool {
				got = append(got, label(t, st))
				return true
			}}
			c.plans(func(pl *plan) bool {
				pl.root = 1 + (pl.root-1+uint8(turn))%pl.top
				s.start(pl, out)
				return s.visit(0)
			})
			sort.Strings(got)
			if !reflect.DeepEqual(got, want) {
				t.Errorf("%s, turn %d: %d structures, want %d", f, turn, len(got), len(want))
			}
		}
	}
}

// The order of the results depends on the problem alone.
func TestWorkers(t *testing.T) {
	for _, p := range []Problem{
		{Formula: formulaOf(t, "C7H10O")},
		{Formula: formulaOf(t, "CH4O")},
		{Formula: formulaOf(t, "CH4")},
		{Formula: formulaOf(t, "C10H12O2"), Blocks: readBlocks(t, "[cH:1]1cc[cH:1]cc1 + [CH3:1]")},
	} {
		var want []Structure
		for workers := 1; workers < 5; workers++ {
			var got []Structure
			p.Accept = func(s *Structure) bool {
				s.Score = float64(len(s.Bonds))
				return s.Bonds == nil || s.Bonds[0].Order < 3
			}
			r, err := Enumerate(context.Background(), p, Options{Workers: workers}, func(s *Structure) bool {
				got = append(got, *s.Clone())
				return true
			})
			if err != nil || !r.Complete || r.Generated != int64(len(got)) {
				t.Fatalf("%+v %v", r, err)
			}
			if workers == 1 {
				want = got
			} else if !reflect.DeepEqual(got, want) {
				t.Errorf("%s: %d workers give another list", p.Formula, workers)
			}
		}
	}
}

// What did not run to the end never says so.
func TestLimits(t *testing.T) {
	p := Problem{Formula: formulaOf(t, "C6H8O"), Valences: Standard}
	full := count(t, p)
	for _, workers := range []int{1, 2} {
		for _, limit := range []int64{1, full - 1, full, full + 1} {
			r, err := Enumerate(context.Background(), p, Options{Workers: workers, MaxStructures: limit}, nil)
			if err != nil {
				t.Fatal(err)
			}
			if r.Generated != min(limit, full) || r.Complete != (limit >= full) || r.Complete != (r.Stopped == "") {
				t.Errorf("%d workers, limit %d of %d: %+v", workers, limit, full, r)
			}
		}
		ctx, cancel := context.WithTimeout(context.Background(), 20*time.Millisecond)
		start := time.Now()
		r, err := Enumerate(ctx, Problem{Formula: formulaOf(t, "C12H14O4")}, Options{Workers: workers}, nil)
		cancel()
		if err != nil || r.Complete || r.Stopped == "" {
			t.Errorf("%d workers out of time: %+v %v", workers, r, err)
		}
		if took := time.Since(start); took > 2*time.Second {
			t.Errorf("%d workers took %v to stop", workers, took)
		}
		n := 0
		r, err = Enumerate(context.Background(), p, Options{Workers: workers}, func(*Structure) bool { n++; return n < 7 })
		if err != nil || r.Complete || r.Generated != 7 {
			t.Errorf("%d workers, stopped by the caller: %+v %v", workers, r, err)
		}
	}
}

// Molecules too big to handle are not passed over in silence.
func TestTooBig(t *testing.T) {
	for _, workers := range []int{1, 2} {
		r, err := Enumerate(context.Background(), Problem{Formula: formulaOf(t, "C33H68")}, Options{Workers: workers}, nil)
		if err != nil || r.Complete || r.Generated != 0 || r.Stopped == "" {
			t.Errorf("%+v %v", r, err)
		}
	}
}

func TestEstimate(t *testing.T) {
	for _, f := range []string{"C8H14O", "C10H18", "C9H20O", "C5H9NO2"} {
		p := Problem{Formula: formulaOf(t, f), Valences: Standard}
		exact := float64(count(t, p))
		size, err := Estimate(context.Background(), p, 5000, 1)
		if err != nil {
			t.Fatal(err)
		}
		if size.Structures < exact/1.5 || size.Structures > exact*1.5 {
			t.Errorf("%s: estimate %.0f +- %.0f, exact %.0f", f, size.Structures, size.Error, exact)
		}
		again, _ := Estimate(context.Background(), p, 5000, 1)
		if again != size {
			t.Errorf("%s: the same seed gives %v and %v", f, size, again)
		}
	}
}

func TestBadProblems(t *testing.T) {
	for _, tc := range []struct {
		p    Problem
		want string
	}{
		{Problem{Formula: formulaOf(t, "C2H6Fe")}, "no valence is known for Fe"},
		{Problem{Formula: formulaOf(t, "H2")}, "no atom but hydrogen"},
		{Problem{Formula: formulaOf(t, "C2H6O"), Blocks: []Block{{Piece{Name: "x", Atoms: []PieceAtom{{carbon, 0, 5}}}, 1}}}, "more bonds and hydrogens"},
		{Problem{Formula: formulaOf(t, "C2H6O"), Lacks: []Piece{{Name: "y", Atoms: []PieceAtom{{carbon, 0, 0}, {carbon, 0, 0}}}}}, "several parts"},
	} {
		_, err := Enumerate(context.Background(), tc.p, Options{}, nil)
		if err == nil || !strings.Contains(err.Error(), tc.want) {
			t.Errorf("%v, want %s", err, tc.want)
		}
	}
	for _, f := range []string{"C2H7", "CH6", "C2H5NaO"} {
		r, err := Enumerate(context.Background(), Problem{Formula: formulaOf(t, f)}, Options{}, nil)
		if f != "C2H5NaO" && (err != nil || r.Generated != 0 || !r.Complete) {
			t.Errorf("%s: %+v %v", f, r, err)
		}
	}
}

// Well-known compounds up to nine heavy atoms must be generated when their own carbon kinds and
// exchangeable hydrogens are the evidence.
func TestKnownAppear(t *testing.T) {
	for _, text := range []string{
		"C[N+](=O)[O-]", "CS(C)=O", "CS(C)(=O)=O", "COP(=O)(OC)OC", "CCN=[N+]=[N-]", "CC(C)[N+]#[C-]", "[O-][n+]1ccccc1",
		"C[N+](C)(C)[O-]", "CC#[N+][O-]", "CC=[N+](C)[O-]", "CS(=O)(=O)O", "CS(N)(=O)=O", "COS(=O)OC", "CP(C)(C)=O", "CCOP(=O)OCC", "CP(C)(C)=S",
		"Cc1ccccc1O", "c1ccoc1", "Cc1c[nH]cn1", "c1ccc2c(c1)C2", "O=C1C=CC(=O)C=C1", "Nc1ccc(Cl)cc1", "c1ccc2[nH]ccc2c1",
		"CC(=O)OC=C", "C1CC2CC1CO2", "C=C1CC1", "OB(O)c1ccccc1", "C[Si](C)(C)C#C", "FC(F)(F)c1ccco1", "O=c1cc[nH]c(=O)[nH]1", "CCON=O", "CO[N+](=O)[O-]",
		"N#CC=C", "C1=CC=CC=CC=C1", "c1cc2cccc2c1", "CC1=C(C)C=C1", "S=C=Nc1ccccc1", "O=C=O", "N#N", "CN=C=O", "O", "C", "ClC(Cl)Cl", "I", "OO",
	} {
		m, err := smiles.Read(text)
		if err != nil {
			t.Fatalf("%s: %v", text, err)
		}
		p := Problem{Formula: m.Formula()}
		var carbons [4]int
		hetero := 0
		for a := 0; a < m.NumAtoms(); a++ {
			if at := m.Atom(a); at.Element == carbon {
				carbons[min(at.Hydrogens, 3)]++
			} else {
				hetero += int(at.Hydrogens)
			}
		}
		for h, n := range carbons {
			p.Carbons[h] = Exactly(n)
		}
		p.OnHetero = Exactly(hetero)
		want, found := m.FlatKey(), 0
		if _, err := Enumerate(context.Background(), p, Options{}, func(s *Structure) bool {
			got, err := s.Materialise()
			if err != nil {
				t.Fatal(err)
			}
			if got.FlatKey() == want {
				found++
			}
			return true
		}); err != nil {
			t.Fatal(err)
		}
		if found != 1 {
			t.Errorf("%s is generated %d times", text, found)
		}
	}
}

// Memory stays flat: less than one allocation in ten structures.
func TestFlat(t *testing.T) {
	p := Problem{Formula: formulaOf(t, "C9H14")}
	n := count(t, p)
	if a := testing.AllocsPerRun(1, func() { count(t, p) }); a > float64(n)/10 {
		t.Errorf("%.0f allocations for %d structures", a, n)
	}
}
