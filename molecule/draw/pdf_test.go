package draw

import (
	"bytes"
	"strings"
	"testing"

	"shelfward/molecule/smiles"
)

// TestPDF writes a structure with a charge, an index and a wedge: one page of the size of the drawing, text as
// text, the same bytes every time.
func TestPDF(t *testing.T) {
	m, err := smiles.Read("C[C@H]([NH3+])C(=O)[O-]")
	if err != nil {
		t.Fatal(err)
	}
	d := Structure(m, Options{Style: Screen})
	var first, second bytes.Buffer
	if err := d.WritePDF(&first); err != nil {
		t.Fatal(err)
	}
	if err := d.WritePDF(&second); err != nil {
		t.Fatal(err)
	}
	if !bytes.Equal(first.Bytes(), second.Bytes()) {
		t.Error("two writings of one drawing differ")
	}
	for _, want := range []string{"%PDF-", "/Count 1", "/BaseFont /Helvetica"} {
		if !strings.Contains(first.String(), want) {
			t.Errorf("no %q in the file", want)
		}
	}
}

func TestWinAnsi(t *testing.T) {
	if got := winAnsi("−5 °C → 漢"); got != "\x965 \xb0C -> ?" {
		t.Errorf("%q", got)
	}
}
