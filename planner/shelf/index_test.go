package shelf

import (
	"bufio"
	"bytes"
	"context"
	"errors"
	"math"
	"os"
	"path/filepath"
	"reflect"
	"runtime"
	"runtime/debug"
	"strings"
	"testing"
	"time"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
	"shelfward/planner/shelf/invented"
	"shelfward/rules"
)

// importFile makes an index of files beside them.
func importFile(t testing.TB, o ImportOptions, files ...string) (string, ImportReport) {
	t.Helper()
	to := filepath.Join(t.TempDir(), "made.index")
	rep, err := Import(context.Background(), rules.Files(), files, to, known(t), o)
	if err != nil {
		t.Fatal(err)
	}
	return to, rep
}

func loadShelf(t testing.TB, files ...string) *Shelf {
	t.Helper()
	s, err := Load(rules.Files(), files, "", known(t))
	if err != nil {
		t.Fatal(err)
	}
	t.Cleanup(func() {
		for _, x := range s.indexes {
			x.Close()
		}
	})
	return s
}

func write(t testing.TB, name, text string) string {
	t.Helper()
	path := filepath.Join(t.TempDir(), name)
	if err := os.WriteFile(path, []byte(text), 0o644); err != nil {
		t.Fatal(err)
	}
	return path
}

func mustRead(t testing.TB, s string) *molecule.Molecule {
	t.Helper()
	m, err := smiles.Read(s)
	if err != nil {
		t.Fatalf("%s: %v", s, err)
	}
	return m
}

// invent writes a file of count invented structures.
func invent(t testing.TB, path string, seed uint64, count int) {
	t.Helper()
	f, err := os.Create(path)
	if err == nil {
		err = errors.Join(invented.Write(f, seed, count), f.Close())
	}
	if err != nil {
		t.Fatal(err)
	}
}

const mixedRows = "smiles;cas;name;synonyms;amount;price;pack;currency;hazards;Batch;note\n" +
	"CCC=O;123-38-6;propanal;;1 L;40;1 L;EUR;;7;\"two\nlines\"\n" +
	";;mystery powder;;5 g;;;;H302;;\n" +
	"C[C@H](N)C(=O)O;;;Ala;25 g;12,5;25 g;EUR;none;;\n" +
	"CC(N)C(=O)O;;;;25 g;;;;;;\n" +
	"OC(=O)C(C)N;;second bottle;;5 g;;;;;;\n" +
	"[Na+].CC([O-])=O;127-09-3;sodium acetate;;1 kg;20;1 kg;EUR;;;\n" +
	"Oc1ccccn1;;2-hydroxypyridine;;10 g;;;;;;\n"

// TestIndexAnswersAsFile: a shelf read from a table and from an index of it give the same items for
// every identity, name and number, and the same sample and prices.
func TestIndexAnswersAsFile(t *testing.T) {
	file := write(t, "s.csv", mixedRows)
	index, rep := importFile(t, ImportOptions{Workers: 2}, file)
	if rep.Rows != 7 || rep.Structures != 6 || rep.Bad != 0 {
		t.Fatalf("report %+v, want 7 rows, 6 structures", rep)
	}
	plain, indexed := loadShelf(t, file), loadShelf(t, index)
	if plain.Len() != indexed.Len() || plain.Structures() != indexed.Structures() {
		t.Errorf("%d rows, %d structures; want %d, %d", indexed.Len(), indexed.Structures(), plain.Len(), plain.Structures())
	}
	for _, s := range []string{"CCC=O", "C[C@H](N)C(=O)O", "C[C@@H](N)C(=O)O", "CC(N)C(=O)O", "CC(=O)O", "O=c1cccc[nH]1", "CCCC"} {
		m := mustRead(t, s)
		same(t, s, plain.Find(m), indexed.Find(m))
		same(t, s+" flat", plain.FindFlat(m), indexed.FindFlat(m))
		if a, b := plain.Has(m), indexed.Has(m); a != b || a != (len(plain.Find(m)) > 0) {
			t.Errorf("%s: has %v and %v, find says %v", s, a, b, len(plain.Find(m)) > 0)
		}
		a, b := plain.OtherMarks(m), indexed.OtherMarks(m)
		if (a == nil) != (b == nil) || a != nil && a.Key() != b.Key() {
			t.Errorf("%s: other marks differ", s)
		}
	}
	for _, word := range []string{"Propanal", "123-38-6", "ala", "mystery powder", "propionaldehyde", "acetic acid", "sodium ethanoate", "nothing"} {
		same(t, word, plain.FindText(word), indexed.FindText(word))
	}
	same(t, "part", plain.Containing("YST", 9), indexed.Containing("YST", 9))
	if !reflect.DeepEqual(plain.tally, indexed.tally) {
		t.Errorf("prices %+v, want %+v", indexed.tally, plain.tally)
	}
	if a, b := keyList(plain.Sample()), keyList(indexed.Sample()); a != b || len(plain.Sample()) != 5 {
		t.Errorf("samples differ: %s, want %s", b, a)
	}
	var all []*Item
	indexed.Each(func(it *Item) bool { all = append(all, it); return true })
	same(t, "all", plain.items, all)
	if err := indexed.Err(); err != nil {
		t.Error(err)
	}
}

func same(t *testing.T, what string, want, got []*Item) {
	t.Helper()
	if len(want) != len(got) {
		t.Errorf("%s: %d items, want %d", what, len(got), len(want))
		return
	}
	for i := range want {
		a, b := *want[i], *got[i]
		if a.Molecule != nil && (b.Molecule == nil || a.Molecule.Key() != b.Molecule.Key()) {
			t.Errorf("%s: another structure", what)
		}
		a.Molecule, b.Molecule = nil, nil
		if math.IsNaN(a.Price) && math.IsNaN(b.Price) {
			a.Price, b.Price = 0, 0
		}
		if !reflect.DeepEqual(a, b) {
			t.Errorf("%s: item\n%+v, want\n%+v", what, b, a)
		}
	}
}

func keyList(list []*molecule.Molecule) string {
	var sb strings.Builder
	for _, m := range list {
		sb.WriteString(m.Key().String()[:8] + " ")
	}
	return sb.String()
}

// TestSampleOfLargeShelf: the sample of an index is that of the same rows in memory, bounded, and does
// not depend on the order of the rows.
func TestSampleOfLargeShelf(t *testing.T) {
	file := filepath.Join(t.TempDir(), "many.smi")
	invent(t, file, 5, 3000)
	index, rep := importFile(t, ImportOptions{Workers: 2}, file)
	if rep.Structures != 3000 {
		t.Fatalf("%+v", rep)
	}
	list := loadShelf(t, index).Sample()
	if len(list) == 0 || len(list) > maxSample {
		t.Fatalf("sample of %d", len(list))
	}
	data, err := os.ReadFile(file)
	if err != nil {
		t.Fatal(err)
	}
	lines := strings.SplitAfter(string(data), "\n")
	var forwards, backwards sample
	for i := range lines[:3000] {
		a, _ := splitSMILES(lines[i])
		b, _ := splitSMILES(lines[2999-i])
		forwards.add(uint32(i), mustRead(t, a))
		backwards.add(uint32(i), mustRead(t, b))
	}
	chosen := map[molecule.Key]bool{}
	for _, s := range forwards.chosen() {
		chosen[s.key] = true
	}
	for _, s := range backwards.chosen() {
		if !chosen[s.key] {
			t.Fatal("the sample depends on the order")
		}
	}
	for i, s := range forwards.chosen() {
		if s.key != list[i].Key() {
			t.Fatal("the sample of the index is another one")
		}
	}
}

// TestImportSameBytes: any number of workers writes the same file.
func TestImportSameBytes(t *testing.T) {
	file := filepath.Join(t.TempDir(), "many.smi")
	invent(t, file, 6, 2000)
	mixed := write(t, "s.csv", mixedRows)
	var first []byte
	for _, workers := range []int{1, 2, 7} {
		index, _ := importFile(t, ImportOptions{Workers: workers}, file, mixed)
		data, err := os.ReadFile(index)
		if err != nil {
			t.Fatal(err)
		}
		if first == nil {
			first = data
		}
		if !bytes.Equal(first, data) {
			t.Errorf("%d workers write other bytes", workers)
		}
	}
}

// TestImportBadRows: every mistake is reported with its line; nothing is written unless they are
// skipped, and what stood under the name before stays.
func TestImportBadRows(t *testing.T) {
	for _, c := range []struct{ name, text, lines string }{
		{"s.smi", "SMILES NAME\nCCO ethanol\n# note\nC(C\n\nCCC=O x\nC1CC\n", "4 7"},
		{"s.csv", "name,smiles\nethanol,CCO\nx,C(C\n\"y,CC\nz,CCC,3\n", "3 4 5"},
		{"s.sdf", sdRecord("methane", "C") + sdRecord("x", "Qq") + sdRecord("ethanol", "N"), "12 15"},
	} {
		file, to := write(t, c.name, c.text), filepath.Join(t.TempDir(), "kept.index")
		if err := os.WriteFile(to, []byte("old"), 0o644); err != nil {
			t.Fatal(err)
		}
		var lines []string
		o := ImportOptions{Workers: 2, Bad: func(e *rules.Error) {
			lines = append(lines, strings.TrimPrefix(strings.SplitN(e.Error(), ": ", 2)[0], file+":"))
		}}
		_, err := Import(context.Background(), rules.Files(), []string{file}, to, known(t), o)
		if !errors.Is(err, ErrBadRows) || strings.Join(lines, " ") != c.lines {
			t.Errorf("%s: error %v, lines %s; want bad rows, %s", c.name, err, lines, c.lines)
		}
		if data, _ := os.ReadFile(to); string(data) != "old" {
			t.Errorf("%s: the file that was there is gone", c.name)
		}
		o.SkipBad, lines = true, nil
		rep, err := Import(context.Background(), rules.Files(), []string{file}, to, known(t), o)
		if err != nil || rep.Bad != len(strings.Fields(c.lines)) || strings.Join(lines, " ") != c.lines {
			t.Errorf("%s: skipping: %v, %+v, lines %s", c.name, err, rep, lines)
		}
		if left, _ := filepath.Glob(filepath.Join(filepath.Dir(to), ".shelfward-*")); len(left) > 0 {
			t.Errorf("%s: left behind %v", c.name, left)
		}
		if s := loadShelf(t, to); rep.Rows != s.Len() {
			t.Errorf("%s: %d rows, want %d", c.name, s.Len(), rep.Rows)
		}
	}
}

// sdRecord is a record of a lone atom.
func sdRecord(title, element string) string {
	return title + "\n\n\n  1  0  0  0  0  0  0  0  0  0999 V2000\n" +
		"    0.0000    0.0000    0.0000 " + element + strings.Repeat(" ", 3-len(element)) + " 0  0\nM  END\n$$$$\n"
}

// TestImportCancelled: nothing appears under the name.
func TestImportCancelled(t *testing.T) {
	file, to := filepath.Join(t.TempDir(), "many.smi"), filepath.Join(t.TempDir(), "x.index")
	invent(t, file, 6, 3000)
	ctx, cancel := context.WithCancel(context.Background())
	_, err := Import(ctx, rules.Files(), []string{file}, to, known(t), ImportOptions{Workers: 2, Progress: func(int) { cancel() }})
	if !errors.Is(err, context.Canceled) {
		t.Errorf("error %v, want cancelled", err)
	}
	if names, _ := filepath.Glob(filepath.Join(filepath.Dir(to), "*")); len(names) > 0 {
		t.Errorf("left behind %v", names)
	}
}

// TestDamagedIndex: an index cut short or with bytes changed never panics: it is refused, or its trouble
// is told at the end, or the change lay in bytes that nothing reads.
func TestDamagedIndex(t *testing.T) {
	file := filepath.Join(t.TempDir(), "many.smi")
	invent(t, file, 7, 400)
	index, _ := importFile(t, ImportOptions{Workers: 2}, file)
	whole, err := os.ReadFile(index)
	if err != nil {
		t.Fatal(err)
	}
	refused := 0
	try := func(what string, data []byte) {
		path := write(t, "bad.index", string(data))
		x, err := OpenIndex(path, known(t))
		if err != nil {
			if strings.Contains(err.Error(), "\n") || !strings.HasPrefix(err.Error(), path) {
				t.Errorf("%s: error %v", what, err)
			}
			refused++
			return
		}
		defer x.Close()
		x.each(func(it *Item) bool {
			if it.Molecule != nil {
				x.has(it.Molecule.Key(), asExact)
			}
			return true
		})
		x.containing("invented-0001", 5)
	}
	for size := 0; size < len(whole); size += len(whole)/7 + 1 {
		try("cut", whole[:size])
	}
	if refused != 7 {
		t.Errorf("%d of 7 cut files refused", refused)
	}
	for at := 0; at < len(whole); at += len(whole) / 40 {
		data := bytes.Clone(whole)
		for i := at; i < min(at+64, len(data)); i++ {
			data[i] ^= 0x5a
		}
		try("changed", data)
	}
}

// TestTableInPieces: a table larger than the window is read as in one piece, whatever stands at the
// seams.
func TestTableInPieces(t *testing.T) {
	var sb strings.Builder
	sb.WriteString("name;note\r\n")
	want := 0
	for sb.Len() < 2*chunkBytes+aheadBytes {
		want++
		sb.WriteString("row;\"" + strings.Repeat("é", 300+want%7) + "\r\nx\"\r\n")
	}
	tab, err := newTable("big.csv", bufio.NewReaderSize(strings.NewReader(sb.String()), 1000))
	if err != nil {
		t.Fatal(err)
	}
	got := 0
	for {
		r, bad, err := tab.next()
		if err != nil {
			break
		}
		if bad != nil || r.line != 2*got+2 || r.value["note"] != strings.Repeat("é", 300+(got+1)%7)+"\nx" {
			t.Fatalf("row %d, line %d: %v, %.40q", got, r.line, bad, r.value["note"])
		}
		got++
	}
	if got != want {
		t.Errorf("%d rows, want %d", got, want)
	}
}

// TestWindowsTextInPieces: which encoding a file has is decided by all of it.
func TestWindowsTextInPieces(t *testing.T) {
	plain := "name,note\nacetone," + strings.Repeat("é", 1<<20)
	for _, c := range []struct{ text, want string }{{plain, plain}, {plain + "\xfc", windows1252Text([]byte(plain + "\xfc"))}} {
		in, err := textOf(strings.NewReader(c.text))
		if err != nil {
			t.Fatal(err)
		}
		var got bytes.Buffer
		if _, err := got.ReadFrom(in); err != nil || got.String() != c.want {
			t.Errorf("%d bytes, want %d (%v)", got.Len(), len(c.want), err)
		}
	}
}

// FuzzImport: no file of rows panics, and what is left out is counted.
func FuzzImport(f *testing.F) {
	f.Add("s.csv", mixedRows)
	f.Add("s.smi", "CCO ethanol\nC(C\n")
	f.Add("s.sdf", sdRecord("methane", "C"))
	k, err := knownOnce()
	if err != nil {
		f.Fatal(err)
	}
	f.Fuzz(func(t *testing.T, name, text string) {
		src, err := rowsOf("f"+filepath.Ext(name), strings.NewReader(text))
		if err != nil {
			return
		}
		im := &importer{read: reader{known: k}}
		for range 10_000 {
			r, bad, err := src.next()
			if err != nil {
				return
			}
			p := pending{row: r}
			if bad != nil {
				p.bad = []*rules.Error{bad}
			}
			if im.work(0, &p); p.made == nil && len(p.bad) == 0 {
				t.Fatalf("a row of %q was lost without a word", text)
			}
		}
	})
}

// TestMillion imports 1,000,000 invented structures and measures what the index promises: the time
// and memory of the import, opening, membership. SHELFWARD_SLOW=1 runs it; -v prints the figures.
// SHELFWARD_MILLION names a folder where the file and the index stay.
func TestMillion(t *testing.T) {
	if os.Getenv("SHELFWARD_SLOW") == "" {
		t.Skip("imports 1,000,000 structures: SHELFWARD_SLOW=1 runs it")
	}
	dir := os.Getenv("SHELFWARD_MILLION")
	if dir == "" {
		dir = t.TempDir()
	}
	const count = 1_000_000
	file, to := filepath.Join(dir, "million.smi"), filepath.Join(dir, "million.index")
	invent(t, file, 1, count)
	debug.FreeOSMemory()
	began := time.Now()
	rep, err := Import(context.Background(), rules.Files(), []string{file}, to, known(t), ImportOptions{Workers: runtime.GOMAXPROCS(0)})
	if err != nil || rep.Structures != count {
		t.Fatalf("%+v, %v", rep, err)
	}
	took := time.Since(began)
	var memory runtime.MemStats
	runtime.ReadMemStats(&memory)
	info, err := os.Stat(to)
	if err != nil {
		t.Fatal(err)
	}
	began = time.Now()
	x, err := OpenIndex(to, known(t))
	if err != nil {
		t.Fatal(err)
	}
	defer x.Close()
	opened := time.Since(began)
	g, err := invented.NewGenerator(1, 0)
	if err != nil {
		t.Fatal(err)
	}
	var list []*molecule.Molecule
	for range 1000 { // the first draws, which all stand in the file
		if m := g.Next(); m != nil {
			m.Key()
			list = append(list, m)
		}
	}
	hits := 0
	began = time.Now()
	for _, m := range list {
		if x.has(m.Key(), asExact) {
			hits++
		}
	}
	each := time.Since(began) / time.Duration(len(list))
	t.Logf("%d structures: import %.0f s, %d MiB held at most, %d MiB file; opened in %.1f ms; membership %.2f µs (%d of %d there)",
		count, took.Seconds(), memory.HeapSys>>20, info.Size()>>20, opened.Seconds()*1000, each.Seconds()*1e6, hits, len(list))
	if took > 5*time.Minute || memory.HeapSys > 2<<30 || opened > time.Second || each > 50*time.Microsecond || hits != len(list) {
		t.Error("beyond what is promised: 5 minutes, 2 GiB, 1 s to open, microseconds a look-up, every one found")
	}
}
