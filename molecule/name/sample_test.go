package name

import (
	"bufio"
	"os"
	"strings"
	"testing"

	"shelfward/molecule/smiles"
)

// TestSample holds the writer and the reader to names that an independent reader agreed with; see
// testdata/names/README.md.
func TestSample(t *testing.T) {
	f, err := os.Open("../../testdata/names/sample.tsv")
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	n := 0
	for scan := bufio.NewScanner(f); scan.Scan(); n++ {
		text, want, _ := strings.Cut(scan.Text(), "\t")
		m := mustRead(t, text)
		if got := Of(m); got != want {
			t.Errorf("%s: got %q, want %q", text, got, want)
		}
		r, err := Read(want)
		if err != nil {
			t.Errorf("%s: %v", text, err)
		} else if r.FlatKey() != m.FlatKey() {
			t.Errorf("%s reads as %s, want %s", want, smiles.Write(r), text)
		}
	}
	if n < 400 {
		t.Errorf("only %d rows", n)
	}
}
