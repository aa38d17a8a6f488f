package identify

import (
	"fmt"
	"io/fs"
	"math"
	"strconv"
	"strings"

	"shelfward/molecule/spectra"
	"shelfward/rules"
)

// point is one (x, y) of a scan or a peak table.
type point struct{ x, y float64 }

// scan is a JCAMP-DX data block. The standard: McDonald and Wilks, Appl. Spectrosc. 42 (1988) 151.
type scan struct {
	points        []point
	table         bool // a peak table rather than a curve
	xUnit, yUnit  string
	dataType      string
	transmittance bool
}

// maxScanPoints bounds the memory that a file can ask for.
const maxScanPoints = 1 << 20

// readScan reads the file named in a case file, relative to the case file's folder.
func readScan(files fs.FS, path string, name rules.Text) (*scan, error) {
	if files == nil {
		return nil, name.Errorf(path, "file: %s cannot be read here", name.Value)
	}
	data, err := fs.ReadFile(files, strings.TrimPrefix(name.Value, "./"))
	if err != nil {
		return nil, name.Errorf(path, "file: cannot read %s", name.Value)
	}
	s, line, err := parseJCAMP(string(data))
	if err != nil {
		return nil, &rules.Error{Path: name.Value, Line: line, Text: err.Error()}
	}
	return s, nil
}

// parseJCAMP reads the first data block with XYDATA, XYPOINTS or a PEAK TABLE.
func parseJCAMP(text string) (s *scan, line int, err error) {
	s = &scan{}
	var firstX, lastX, deltaX float64
	xFactor, yFactor := 1.0, 1.0
	points := 0
	lines := strings.Split(strings.ReplaceAll(text, "\r\n", "\n"), "\n")
	for i := 0; i < len(lines); i++ {
		key, val, ok := labelled(lines[i])
		if !ok {
			continue
		}
		switch key {
		case "XUNITS":
			s.xUnit = strings.ToUpper(val)
		case "YUNITS":
			s.yUnit = strings.ToUpper(val)
			s.transmittance = strings.Contains(s.yUnit, "TRANS")
		case "DATATYPE":
			s.dataType = strings.ToUpper(val)
		case "FIRSTX", "LASTX", "DELTAX", "XFACTOR", "YFACTOR", "NPOINTS":
			f, err := strconv.ParseFloat(val, 64)
			if err != nil {
				return nil, i + 1, fmt.Errorf("%s: expected a number, found %q", key, val)
			}
			switch key {
			case "FIRSTX":
				firstX = f
			case "LASTX":
				lastX = f
			case "DELTAX":
				deltaX = f
			case "XFACTOR":
				xFactor = f
			case "YFACTOR":
				yFactor = f
			case "NPOINTS":
				if f < 0 || f > maxScanPoints {
					return nil, i + 1, fmt.Errorf("NPOINTS: at most %d points are read", maxScanPoints)
				}
				points = int(f)
			}
		case "PEAKTABLE", "XYPOINTS":
			s.table = key == "PEAKTABLE"
			return s.finish(readPairs(s, lines, i+1, xFactor, yFactor))
		case "XYDATA":
			if deltaX == 0 && points > 1 {
				deltaX = (lastX - firstX) / float64(points-1)
			}
			return s.finish(readCurve(s, lines, i+1, firstX, deltaX, yFactor))
		}
	}
	return nil, 1, fmt.Errorf("no ##XYDATA=, ##XYPOINTS= or ##PEAK TABLE= found: expected a JCAMP-DX file")
}

func (s *scan) finish(line int, err error) (*scan, int, error) {
	if err == nil && len(s.points) == 0 {
		err = fmt.Errorf("the data block holds no points")
	}
	return s, line, err
}

// labelled splits '##LABEL= value'; spaces, dashes, slashes and underlines in labels do not count.
func labelled(line string) (key, val string, ok bool) {
	t := strings.TrimSpace(line)
	if !strings.HasPrefix(t, "##") {
		return "", "", false
	}
	key, val, ok = strings.Cut(t[2:], "=")
	key = strings.NewReplacer(" ", "", "-", "", "/", "", "_", "", ".", "").Replace(strings.ToUpper(key))
	if cut := strings.Index(val, "$$"); cut >= 0 {
		val = val[:cut]
	}
	return key, strings.TrimSpace(val), ok
}

// readPairs reads 'x, y' pairs.
func readPairs(s *scan, lines []string, from int, xFactor, yFactor float64) (int, error) {
	for i := from; i < len(lines); i++ {
		t := lines[i]
		if cut := strings.Index(t, "$$"); cut >= 0 {
			t = t[:cut]
		}
		if strings.HasPrefix(strings.TrimSpace(t), "##") {
			return i, nil
		}
		fields := strings.FieldsFunc(t, func(r rune) bool { return r == ',' || r == ' ' || r == '\t' || r == ';' })
		if len(fields)%2 != 0 {
			return i + 1, fmt.Errorf("expected pairs 'x, y', found %q", clip(t))
		}
		for k := 0; k+1 < len(fields); k += 2 {
			x, err1 := strconv.ParseFloat(fields[k], 64)
			y, err2 := strconv.ParseFloat(fields[k+1], 64)
			if err1 != nil || err2 != nil || math.IsNaN(x+y) || math.IsInf(x+y, 0) {
				return i + 1, fmt.Errorf("expected pairs 'x, y', found %q", clip(t))
			}
			s.points = append(s.points, point{x * xFactor, y * yFactor})
			if len(s.points) > maxScanPoints {
				return i + 1, fmt.Errorf("more than %d points", maxScanPoints)
			}
		}
	}
	return len(lines), nil
}

// readCurve reads (X++(Y..Y)): each line an x, then y values one step apart, as plain numbers (AFFN)
// or in the squeezed, difference and duplicate forms (ASDF).
func readCurve(s *scan, lines []string, from int, firstX, deltaX, yFactor float64) (int, error) {
	pending := false // the next line repeats the last y as a check
	for i := from; i < len(lines); i++ {
		t := lines[i]
		if cut := strings.Index(t, "$$"); cut >= 0 {
			t = t[:cut]
		}
		t = strings.TrimSpace(t)
		if strings.HasPrefix(t, "##") {
			return i, nil
		}
		if t == "" {
			continue
		}
		ys, endsInDifference, err := lineValues(t)
		if err != nil {
			return i + 1, err
		}
		if pending && len(ys) > 0 {
			ys = ys[1:]
		}
		pending = endsInDifference
		for _, y := range ys {
			s.points = append(s.points, point{firstX + float64(len(s.points))*deltaX, y * yFactor})
		}
		if len(s.points) > maxScanPoints {
			return i + 1, fmt.Errorf("more than %d points", maxScanPoints)
		}
	}
	return len(lines), nil
}

const (
	squeezed   = "@ABCDEFGHIabcdefghi"
	difference = "%JKLMNOPQRjklmnopqr"
	duplicate  = "STUVWXYZs"
)

// pseudoDigit returns the signed first digit that a letter of the set stands for.
func pseudoDigit(set string, c byte) (string, bool) {
	i := strings.IndexByte(set, c)
	switch {
	case i < 0:
		return "", false
	case i < 10:
		return strconv.Itoa(i), true
	}
	return "-" + strconv.Itoa(i-9), true
}

// lineValues reads the y values of one line; the leading x is passed over.
func lineValues(t string) (ys []float64, endsInDifference bool, err error) {
	i := 0
	token := func(prefix string) (float64, error) {
		start := i
		for i < len(t) && (t[i] >= '0' && t[i] <= '9' || t[i] == '.' || (t[i] == 'E' || t[i] == 'e') && i+1 < len(t) && (t[i+1] == '+' || t[i+1] == '-')) {
			if t[i] == 'E' || t[i] == 'e' {
				i++
			}
			i++
		}
		f, err := strconv.ParseFloat(prefix+t[start:i], 64)
		if err != nil || math.IsNaN(f) || math.IsInf(f, 0) {
			return 0, fmt.Errorf("expected data of the form x y y y, found %q", clip(t))
		}
		return f, nil
	}
	seenX, last, lastDiff := false, 0.0, 0.0
	for i < len(t) {
		c := t[i]
		if c == ' ' || c == '\t' || c == ',' {
			i++
			continue
		}
		if d, ok := pseudoDigit(difference, c); ok && seenX {
			i++
			v, err := token(d)
			if err != nil {
				return nil, false, err
			}
			last, lastDiff, endsInDifference = last+v, v, true
			ys = append(ys, last)
			continue
		}
		if k := strings.IndexByte(duplicate, c); k >= 0 && seenX && len(ys) > 0 {
			i++
			v, err := token(strconv.Itoa(k + 1))
			if err != nil {
				return nil, false, err
			}
			if v > 1<<16 {
				return nil, false, fmt.Errorf("a run of %v equal values is too long", v)
			}
			for range int(v) - 1 {
				if endsInDifference {
					last += lastDiff
				}
				ys = append(ys, last)
			}
			continue
		}
		prefix := ""
		if d, ok := pseudoDigit(squeezed, c); ok && seenX {
			prefix = d
			i++
		} else if c == '+' || c == '-' {
			prefix = string(c)
			i++
		}
		v, err := token(prefix)
		if err != nil {
			return nil, false, err
		}
		if !seenX {
			seenX = true
			continue
		}
		last, endsInDifference = v, false
		ys = append(ys, v)
	}
	return ys, endsInDifference, nil
}

// tops returns the local maxima above the fraction of the highest, or the table itself.
func (s *scan) tops(fraction float64) []point {
	if s.table {
		return s.points
	}
	top := 0.0
	for _, p := range s.points {
		top = max(top, p.y)
	}
	var out []point
	for i := 1; i+1 < len(s.points); i++ {
		if p := s.points[i]; p.y >= fraction*top && p.y > s.points[i-1].y && p.y >= s.points[i+1].y {
			out = append(out, p)
		}
	}
	return out
}

// bands turns an infrared scan into bands; depth below the top of a transmittance curve, or height
// of an absorbance curve, against the strongest band gives the strength.
func (s *scan) bands() []Band {
	c := &scan{points: append([]point(nil), s.points...), table: s.table}
	if s.transmittance {
		top := math.Inf(-1)
		for _, p := range c.points {
			top = max(top, p.y)
		}
		for i := range c.points {
			c.points[i].y = top - c.points[i].y
		}
	}
	strongest := 0.0
	for _, p := range c.points {
		strongest = max(strongest, p.y)
	}
	var out []Band
	for _, p := range c.tops(0.12) {
		b := Band{Span: Span{p.x, p.x, true}, Strength: spectra.Weak}
		switch {
		case p.y > 0.6*strongest:
			b.Strength = spectra.Strong
		case p.y > 0.3*strongest:
			b.Strength = spectra.Medium
		}
		if p.x >= 400 && p.x <= 4500 {
			out = append(out, b)
		}
	}
	return out
}

// protons cuts a 1H curve into signals with their integrals; a peak table gives single lines.
func (s *scan) protons() []Proton {
	if s.table {
		var out []Proton
		for _, p := range s.points {
			out = append(out, Proton{Span: Span{p.x, p.x, true}, Ratio: max(p.y, 1e-6)})
		}
		return out
	}
	top := 0.0
	for _, p := range s.points {
		top = max(top, p.y)
	}
	var out []Proton
	var area, lo, hi float64
	open := false
	for _, p := range s.points {
		switch above := p.y > 0.01*top; {
		case above && !open:
			open, area, lo, hi = true, p.y, p.x, p.x
		case above:
			area, lo, hi = area+p.y, min(lo, p.x), max(hi, p.x)
		case open:
			open = false
			out = append(out, Proton{Span: Span{lo, hi, true}, Ratio: area})
		}
	}
	return out
}
