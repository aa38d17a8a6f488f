package shelf

import (
	"bufio"
	"errors"
	"fmt"
	"io"
	"os"
	"path/filepath"
	"slices"
	"strings"
	"unicode/utf8"

	"shelfward/molecule/molfile"
	"shelfward/molecule/smiles"
	"shelfward/rules"
)

// rowSource gives the rows of a file one at a time: a row, or the mistake found in its place. io.EOF
// ends it; another error means that the file cannot be read on.
type rowSource interface {
	next() (row, *rules.Error, error)
}

// openRows opens a file that may be of any length: a table (.csv, .tsv, .txt), SMILES one a line (.smi,
// .smiles) or an SD file (.sdf, .sd, .mol).
func openRows(path string) (rowSource, io.Closer, error) {
	info, err := os.Stat(path)
	switch {
	case err != nil:
		return nil, nil, fmt.Errorf("%s: cannot read: no such file", path)
	case !info.Mode().IsRegular():
		return nil, nil, fmt.Errorf("%s: expected a file, found a folder or a device", path)
	}
	f, err := os.Open(path)
	if err != nil {
		return nil, nil, fmt.Errorf("%s: cannot read: %v", path, errors.Unwrap(err))
	}
	src, err := rowsOf(path, f)
	if err != nil {
		f.Close()
		return nil, nil, err
	}
	return src, f, nil
}

func rowsOf(path string, f io.ReadSeeker) (rowSource, error) {
	switch strings.ToLower(filepath.Ext(path)) {
	case ".csv", ".tsv", ".txt":
		in, err := textOf(f)
		if err != nil {
			return nil, fmt.Errorf("%s: cannot read: %v", path, err)
		}
		return newTable(path, in)
	case ".smi", ".smiles":
		return &smilesRows{path: path, in: bufio.NewReaderSize(f, 1<<16)}, nil
	case ".sdf", ".sd", ".mol":
		return &molRows{path: path, in: molfile.NewReader(f)}, nil
	}
	return nil, fmt.Errorf("%s: expected a table (.csv, .tsv), SMILES one a line (.smi) or an SD file (.sdf)", path)
}

// textOf returns the file as UTF-8, as decodeText does: the whole file is looked through first, because
// one byte decides how all of it is read.
func textOf(f io.ReadSeeker) (io.Reader, error) {
	valid, err := validUTF8(f)
	if err != nil {
		return nil, err
	}
	if _, err := f.Seek(0, io.SeekStart); err != nil {
		return nil, err
	}
	in := bufio.NewReaderSize(f, 1<<16)
	if head, _ := in.Peek(3); string(head) == "\xef\xbb\xbf" {
		if _, err := in.Discard(3); err != nil {
			return nil, err
		}
	}
	if valid {
		return in, nil
	}
	return &windowsText{in: in}, nil
}

// validUTF8 says whether the whole text is UTF-8.
func validUTF8(f io.Reader) (bool, error) {
	buf := make([]byte, 1<<20)
	kept := 0 // bytes of a character cut by the end of the last piece
	for {
		n, err := io.ReadFull(f, buf[kept:])
		piece := buf[:kept+n]
		if err == io.EOF || err == io.ErrUnexpectedEOF {
			return utf8.Valid(piece), nil
		}
		if err != nil {
			return false, err
		}
		whole := len(piece)
		for back := 1; back <= utf8.UTFMax && whole > 0; back++ {
			if utf8.RuneStart(piece[len(piece)-back]) {
				if !utf8.FullRune(piece[len(piece)-back:]) {
					whole = len(piece) - back
				}
				break
			}
		}
		if !utf8.Valid(piece[:whole]) {
			return false, nil
		}
		kept = copy(buf, piece[whole:])
	}
}

// windowsText turns Windows-1252 into UTF-8.
type windowsText struct {
	in   *bufio.Reader
	left string
}

func (w *windowsText) Read(p []byte) (int, error) {
	if w.left == "" {
		buf := make([]byte, 1<<15)
		n, err := w.in.Read(buf)
		if n == 0 {
			return 0, err
		}
		w.left = windows1252Text(buf[:n])
	}
	n := copy(p, w.left)
	w.left = w.left[n:]
	return n, nil
}

// maxSMILESLine bounds a line of a file of SMILES.
const maxSMILESLine = 1 << 16

// smilesRows reads SMILES one a line; what follows the first blank is the name. Lines that begin with #
// and a first line that names the columns are passed over.
type smilesRows struct {
	path string
	in   *bufio.Reader
	line int
}

func (s *smilesRows) next() (row, *rules.Error, error) {
	for {
		text, err := s.in.ReadSlice('\n')
		if err == io.EOF && len(text) == 0 {
			return row{}, nil, io.EOF
		}
		s.line++
		r := row{path: s.path, line: s.line, value: map[string]string{}}
		if err == bufio.ErrBufferFull {
			for err == bufio.ErrBufferFull {
				_, err = s.in.ReadSlice('\n')
			}
			return r, r.errorf("the line is longer than %d characters", maxSMILESLine), nil
		}
		if err != nil && err != io.EOF {
			return r, nil, err
		}
		structure, name := splitSMILES(decodeText(text))
		if structure == "" || structure[0] == '#' || s.line == 1 && strings.EqualFold(structure, "smiles") {
			continue
		}
		r.value["smiles"], r.value["name"] = structure, name
		return r, nil, nil
	}
}

// splitSMILES parts a line into the structure and what follows it.
func splitSMILES(line string) (structure, rest string) {
	line = strings.TrimSpace(line)
	if i := strings.IndexAny(line, " \t"); i >= 0 {
		return line[:i], strings.TrimSpace(line[i:])
	}
	return line, ""
}

// molRows reads an SD file: the structure, the title as the name, and data fields under the names of
// columns.
type molRows struct {
	path string
	in   *molfile.Reader
}

func (s *molRows) next() (row, *rules.Error, error) {
	rec, err := s.in.Next()
	var bad *molfile.Error
	if errors.As(err, &bad) {
		r := row{path: s.path, line: bad.Line}
		return r, r.errorf("%s", bad.Message), nil
	}
	if err != nil {
		return row{}, nil, err
	}
	r := row{path: s.path, line: rec.Line, value: map[string]string{}, molecule: rec.Molecule}
	for _, f := range rec.Fields {
		if name := columnName(f.Name); name == "smiles" || slices.Contains(columns, name) && r.value[name] != "" {
			continue // the drawn structure counts; the first field of a name does
		}
		r.set(columnName(f.Name), strings.Join(strings.Fields(decodeText([]byte(f.Value))), " "))
	}
	if r.value["name"] == "" {
		r.value["name"] = decodeText([]byte(rec.Title))
	}
	return r, nil, nil
}

// settle writes the structure that a record was drawn with into its row.
func (r *row) settle() {
	if r.molecule != nil {
		r.value["smiles"] = smiles.Write(r.molecule)
	}
}
