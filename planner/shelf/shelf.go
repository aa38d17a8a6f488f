package shelf

import (
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"strings"

	"shelfward/molecule"
	"shelfward/rules"
)

// BuiltinName stands for the built-in example shelf wherever a shelf file is named.
const BuiltinName = "built-in"

// Shelf is a set of items with its index.
type Shelf struct {
	items []*Item
	known *Known

	exact map[molecule.Key][]*Item
	seen  map[molecule.Key][]*Item
	names map[string][]*Item // folded names and synonyms
	cas   map[string][]*Item
}

// Report says how a shelf file was read, row by row.
type Report struct {
	Path string
	Rows []RowReport
	Errs rules.ErrorList // mistakes of the table as a whole, and of all rows
}

// Items lists the rows that were read.
func (r *Report) Items() []*Item {
	var list []*Item
	for _, row := range r.Rows {
		if row.Item != nil {
			list = append(list, row.Item)
		}
	}
	return list
}

// Err returns the mistakes as one error sorted by line, nil if there are none.
func (r *Report) Err() error { return r.Errs.Err() }

// Read reads the text of a shelf file: YAML if the path ends in .yaml or .yml, a table otherwise. It
// never fails as a whole: what is wrong stands in the report.
func Read(path string, data []byte, known *Known) *Report {
	rep := &Report{Path: path}
	if len(data) > maxFileBytes {
		rep.Errs = rules.ErrorList{{Path: path, Text: fmt.Sprintf("larger than %d MB", maxFileBytes>>20)}}
		return rep
	}
	var rows []row
	if ext := strings.ToLower(filepath.Ext(path)); ext == ".yaml" || ext == ".yml" {
		rows, rep.Errs = yamlRows(path, data)
	} else {
		rows, rep.Errs = csvRows(path, decodeText(data))
	}
	rd := reader{known: known}
	for _, r := range rows {
		row := rd.item(r)
		rep.Rows = append(rep.Rows, row)
		rep.Errs = append(rep.Errs, row.Errors...)
	}
	return rep
}

// Builtin reads the built-in example shelf of a rules file system.
func Builtin(fsys fs.FS, known *Known) (*Report, error) {
	data, err := fs.ReadFile(fsys, "shelf.yaml")
	if err != nil {
		return nil, fmt.Errorf("%s: cannot read: %v", rules.PathOf(fsys, "shelf.yaml"), err)
	}
	rep := Read(rules.PathOf(fsys, "shelf.yaml"), data, known)
	for _, it := range rep.Items() {
		it.File = BuiltinName
	}
	return rep, rep.Err()
}

// Load makes the shelf of a run. files are the values of --shelf in order: paths, or BuiltinName; an
// empty list means the built-in shelf alone. Every row of every file must be readable; otherwise the
// error lists the rows. Names of the built-in shelf are understood in the files even when its items
// are not on the shelf. dir is where relative paths begin, "" for the working directory.
func Load(fsys fs.FS, files []string, dir string, known *Known) (*Shelf, error) {
	builtin, err := Builtin(fsys, known)
	if err != nil {
		return nil, err
	}
	withNames := *known
	withNames.builtin = builtin.Items()
	if len(files) == 0 {
		return New(builtin.Items(), &withNames), nil
	}
	var items []*Item
	var errs rules.ErrorList
	for _, file := range files {
		if file == BuiltinName {
			items = append(items, builtin.Items()...)
			continue
		}
		path := file
		if dir != "" && !filepath.IsAbs(file) {
			path = filepath.Join(dir, file)
		}
		rep, err := ReadFile(path, &withNames)
		if err != nil {
			return nil, err
		}
		errs = append(errs, rep.Errs...)
		items = append(items, rep.Items()...)
	}
	if err := errs.Err(); err != nil {
		return nil, err
	}
	return New(items, &withNames), nil
}

// Check reads one file as Load does, and reports every row.
func Check(fsys fs.FS, path string, known *Known) (*Report, error) {
	builtin, err := Builtin(fsys, known)
	if err != nil {
		return nil, err
	}
	withNames := *known
	withNames.builtin = builtin.Items()
	return ReadFile(path, &withNames)
}

// ReadFile reads a shelf file from disk.
func ReadFile(path string, known *Known) (*Report, error) {
	info, err := os.Stat(path)
	if err != nil {
		return nil, fmt.Errorf("%s: cannot read this shelf file: no such file", path)
	}
	if info.IsDir() {
		return nil, fmt.Errorf("%s: expected a shelf file, found a folder", path)
	}
	data, err := os.ReadFile(path)
	if err != nil {
		return nil, fmt.Errorf("%s: cannot read this shelf file: %v", path, err)
	}
	return Read(path, data, known), nil
}

// New makes a shelf of items.
func New(items []*Item, known *Known) *Shelf {
	s := &Shelf{items: items, known: known, exact: map[molecule.Key][]*Item{}, seen: map[molecule.Key][]*Item{}, names: map[string][]*Item{}, cas: map[string][]*Item{}}
	for _, it := range items {
		if it.Molecule != nil {
			s.exact[it.Molecule.Key()] = append(s.exact[it.Molecule.Key()], it)
			s.seen[it.Molecule.SeenThroughKey()] = append(s.seen[it.Molecule.SeenThroughKey()], it)
		}
		for _, name := range append([]string{it.Name}, it.Synonyms...) {
			if name != "" {
				key := strings.ToLower(name)
				s.names[key] = append(s.names[key], it)
			}
		}
		if it.CAS != "" {
			s.cas[it.CAS] = append(s.cas[it.CAS], it)
		}
	}
	return s
}

// Items lists the items in order. Shared, read only.
func (s *Shelf) Items() []*Item { return s.items }

// Len is the number of items.
func (s *Shelf) Len() int { return len(s.items) }

// Find returns the items of a molecule: those that are exactly it, else those that are it with salts
// and shifting hydrogens seen through, the free form first. Empty if it is not on the shelf.
func (s *Shelf) Find(m *molecule.Molecule) []*Item {
	if list := s.exact[m.Key()]; len(list) > 0 {
		return list
	}
	list := s.seen[m.SeenThroughKey()]
	if len(list) < 2 {
		return list
	}
	var free, salts []*Item
	for _, it := range list {
		if it.Molecule.FreeForm().Key() == it.Molecule.Key() {
			free = append(free, it)
		} else {
			salts = append(salts, it)
		}
	}
	return append(free, salts...)
}

// FindText returns the items of a name, synonym or CAS number; for a name that the list of reagents
// knows, also the items that are that reagent.
func (s *Shelf) FindText(text string) []*Item {
	text = strings.TrimSpace(text)
	if list := s.names[strings.ToLower(text)]; len(list) > 0 {
		return list
	}
	if list := s.cas[text]; len(list) > 0 {
		return list
	}
	re, ok := s.known.Reagents.Named(text)
	if !ok {
		return nil
	}
	var list []*Item
	for _, it := range s.items {
		if it.Reagent == re {
			list = append(list, it)
		}
	}
	return list
}

// Molecules lists the structures on the shelf, each once, in order.
func (s *Shelf) Molecules() []*molecule.Molecule {
	var list []*molecule.Molecule
	taken := map[molecule.Key]bool{}
	for _, it := range s.items {
		if it.Molecule != nil && !taken[it.Molecule.Key()] {
			taken[it.Molecule.Key()] = true
			list = append(list, it.Molecule)
		}
	}
	return list
}
