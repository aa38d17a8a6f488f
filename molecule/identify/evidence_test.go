package identify

import (
	"strings"
	"testing"
	"testing/fstest"

	"shelfward/molecule/spectra"
)

// TestEvidenceErrors: mistakes are answered with file, line and what was expected.
func TestEvidenceErrors(t *testing.T) {
	for _, c := range []struct{ text, want string }{
		{"evidence:\n  formulla: C2H6O\n", "x.yaml:2"},
		{"evidence:\n  formula: C2X6O\n", "x.yaml:2:12: formula:"},
		{"evidence:\n  valences: odd\n", "x.yaml:2:13: valences: expected usual or standard"},
		{"evidence:\n  elements: {C: 58.2, Q: 3}\n", "x.yaml:2:23: elements: \"Q\" is not an element symbol"},
		{"evidence:\n  elements: {C: 158}\n", "x.yaml:2:17: C: 158 lies outside"},
		{"evidence:\n  elements: {O: 20}\n", "oxygen is never measured"},
		{"evidence:\n  mass:\n    exact: {mz: 145.0859, ion: M+K}\n", "x.yaml:3:32: ion: expected"},
		{"evidence:\n  mass:\n    peaks: [[43]]\n", "peaks: expected pairs"},
		{"evidence:\n  infrared:\n    - {at: 1712, strength: huge}\n", "x.yaml:3:28: strength: expected"},
		{"evidence:\n  infrared:\n    - {at: 1712}\n    - {att: 1800}\n", "x.yaml:4"},
		{"evidence:\n  infrared:\n    - {at: 17}\n", "lies outside 100 to 5000"},
		{"evidence:\n  proton:\n    signals:\n      - {at: 2.47, shape: x}\n", "x.yaml:4:27: shape: expected one of"},
		{"evidence:\n  proton:\n    signals:\n      - {at: 2.47, H: 2}\n      - {at: 1.2, ratio: 3}\n", "not a mixture"},
		{"evidence:\n  proton:\n    signals:\n      - {at: abc}\n", "x.yaml:4:14: at: expected a number or a range"},
		{"evidence:\n  carbon:\n    signals:\n      - {at: 20.1, attached: CH4}\n", "x.yaml:4:30: attached: expected C, CH, CH2 or CH3"},
		{"evidence:\n  carbon:\n    listed: some\n", "listed: expected all or main"},
		{"evidence:\n  contains: ['C(=O']\n", "x.yaml:2:15: contains:"},
		{"evidence:\n  carbon:\n    file: none.jdx\n", "x.yaml:3:11: file: cannot read none.jdx"},
	} {
		cs, err := DecodeCase("x.yaml", []byte(c.text))
		if err == nil {
			_, err = cs.Evidence.Read("x.yaml", fstest.MapFS{})
		}
		if err == nil || !strings.Contains(err.Error(), c.want) {
			t.Errorf("%q: error %v, want it to hold %q", c.text, err, c.want)
		}
	}
}

// TestEvidenceForms: runs, ranges, ions and texts in all their spellings.
func TestEvidenceForms(t *testing.T) {
	text := `evidence:
  elements: {C: [58.2, 58.4], H: 8.4, N: 0, tolerance: 0.3, others: none}
  mass:
    exact: {mz: 145.0859, ion: '[M+H]+', ppm: 5}
    peaks: [[43, 100], [87, 35]]
  infrared: {listed: all, text: '2500-3300 (s, br), 1712 (s) cm-1'}
  proton:
    solvent: CDCl3
    text: '1H NMR (400 MHz, CDCl3): 7.26, 2.47 (t, J = 7.2 Hz, 2H), 2.14 (s, 3H), 7.17-7.22 (m, 5H), 6.95 (dt, J = 15.7, 6.4 Hz, 1H)'
  carbon: {text: '208.9 (C), 30.1, 22.5 (CH2)'}
`
	c, err := DecodeCase("x.yaml", []byte(text))
	if err != nil {
		t.Fatal(err)
	}
	d, err := c.Evidence.Read("x.yaml", nil)
	if err != nil {
		t.Fatal(err)
	}
	if n := len(d.Elements.Analysis); n != 3 || !d.Elements.NoOthers || d.Elements.Tolerance != 0.3 {
		t.Errorf("elements: %+v", d.Elements)
	}
	if len(d.Exact) != 1 || d.Exact[0].Ion != 1 {
		t.Errorf("exact: %+v", d.Exact)
	}
	if !d.BandsAll || len(d.Bands) != 2 || !d.Bands[0].Broad || d.Bands[1].Strength != spectra.Strong {
		t.Errorf("bands: %+v", d.Bands)
	}
	if len(d.Proton) != 5 || d.Proton[0].Solvent == "" || d.Proton[2].H != 1 || len(d.Proton[2].J) != 2 || d.Proton[1].Low != 7.17 {
		t.Errorf("proton: %+v", d.Proton)
	}
	if len(d.Carbon) != 3 || d.Carbon[0].Attached != 0 || d.Carbon[1].Attached != -1 || d.Carbon[2].Attached != 2 {
		t.Errorf("carbon: %+v", d.Carbon)
	}
}

// TestJCAMP reads a curve in plain and packed form and a peak table.
func TestJCAMP(t *testing.T) {
	head := "##TITLE=x\n##JCAMP-DX=4.24\n##DATA TYPE=INFRARED SPECTRUM\n##XUNITS=1/CM\n##YUNITS=ABSORBANCE\n##FIRSTX=1700\n##LASTX=1710\n##NPOINTS=6\n##XFACTOR=1\n##YFACTOR=0.1\n"
	for _, c := range []struct{ name, body string }{
		{"plain", "##XYDATA=(X++(Y..Y))\n1700 0 1 5\n1706 9 2 0\n##END=\n"},
		{"packed", "##XYDATA=(X++(Y..Y))\n1700@AE\n1706IB@\n##END=\n"},
		{"differences", "##XYDATA=(X++(Y..Y))\n1700@JN\n1704EMpk\n##END=\n"},
	} {
		s, line, err := parseJCAMP(head + c.body)
		if err != nil {
			t.Errorf("%s: line %d: %v", c.name, line, err)
			continue
		}
		var ys []float64
		for _, p := range s.points {
			ys = append(ys, p.y*10)
		}
		if c.name != "differences" && (len(ys) != 6 || ys[3] < 8.99 || ys[3] > 9.01) {
			t.Errorf("%s: %v", c.name, ys)
		}
		if c.name == "differences" && (len(ys) != 6 || ys[3] < 8.99 || ys[3] > 9.01) {
			t.Errorf("%s: %v", c.name, ys)
		}
		if b := s.bands(); len(b) != 1 || b[0].Low != 1706 || b[0].Strength != spectra.Strong {
			t.Errorf("%s: bands %+v", c.name, b)
		}
	}
	s, _, err := parseJCAMP("##TITLE=ms\n##NPOINTS=2\n##PEAK TABLE=(XY..XY)\n43, 999 87,350\n##END=\n")
	if err != nil || len(s.points) != 2 || s.points[1].x != 87 {
		t.Errorf("peak table: %+v, %v", s, err)
	}
	for _, bad := range []string{"", "no file", "##XYDATA=(X++(Y..Y))\n17..5 a\n", "##NPOINTS=99999999999\n", "##PEAKTABLE=(XY..XY)\n43\n"} {
		if _, _, err := parseJCAMP(bad); err == nil {
			t.Errorf("%q: no error", bad)
		}
	}
}

// FuzzReaders: no text makes a reader panic.
func FuzzReaders(f *testing.F) {
	for _, s := range []string{"7.97 (d, J = 8.5 Hz, 2H), 3.93 (s, 3H)", "##XYDATA=(X++(Y..Y))\n1700@AE\n1706IB@\n", "1721 (s), 1594 cm-1", "((((", "J = 3"} {
		f.Add(s)
	}
	f.Fuzz(func(t *testing.T, s string) {
		_, _ = parseProtonText(s)
		_, _ = parseCarbonText(s)
		_, _ = parseBands(s)
		_, _ = parsePeaks(s)
		_, _, _ = parseJCAMP(s)
		if c, err := DecodeCase("x.yaml", []byte("evidence:\n  "+s)); err == nil && c.Evidence != nil {
			_, _ = c.Evidence.Read("x.yaml", nil)
		}
	})
}
