package shelf

import (
	"fmt"
	"io/fs"
	"os"
	"path/filepath"
	"slices"
	"strings"

	"shelfward/molecule"
	"shelfward/reactions/reagent"
	"shelfward/rules"
)

// BuiltinName stands for the built-in example shelf wherever a shelf file is named.
const BuiltinName = "built-in"

// Shelf is a set of items, in memory and in index files.
type Shelf struct {
	items   []*Item // in memory
	indexes []*Index
	known   *Known

	keys  map[molecule.Key][]under // every key of the items in memory
	names map[string][]*Item       // folded names and synonyms
	cas   map[string][]*Item
	of    map[*reagent.Reagent][]*Item
	tally tally
	few   []*molecule.Molecule

	structures int // distinct ones in memory, and of each index
}

// under is an item under a key, as one or more identities.
type under struct {
	item *Item
	as   identities
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
	var indexes []*Index
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
		if IsIndex(path) {
			x, err := OpenIndex(path, &withNames)
			if err != nil {
				return nil, err
			}
			indexes = append(indexes, x)
			continue
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
	return New(items, &withNames, indexes...), nil
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

// New makes a shelf of items and of indexes that are open.
func New(items []*Item, known *Known, indexes ...*Index) *Shelf {
	s := &Shelf{items: items, known: known, keys: map[molecule.Key][]under{}, names: map[string][]*Item{},
		cas: map[string][]*Item{}, of: map[*reagent.Reagent][]*Item{}}
	for _, it := range items {
		if it.Molecule != nil {
			keys, as := keysOf(it.Molecule)
			if !s.has(it.Molecule.Key(), asExact) {
				s.structures++
			}
			for i, k := range keys {
				s.keys[k] = append(s.keys[k], under{it, as[i]})
			}
			s.tally.add(it)
		}
		for _, name := range namesOf(it) {
			s.names[name] = append(s.names[name], it)
		}
		if it.CAS != "" {
			s.cas[it.CAS] = append(s.cas[it.CAS], it)
		}
		if it.Reagent != nil {
			s.of[it.Reagent] = append(s.of[it.Reagent], it)
		}
	}
	for _, x := range indexes {
		s.tally.merge(x.head.Tally)
		s.structures += x.head.Distinct
	}
	s.indexes = indexes
	s.few = s.choose()
	return s
}

// choose draws the structures that stand for the shelf.
func (s *Shelf) choose() (list []*molecule.Molecule) {
	var few sample
	row := uint32(0)
	for _, it := range s.items {
		if it.Molecule != nil {
			few.add(row, it.Molecule)
		}
		row++
	}
	for _, x := range s.indexes {
		for _, c := range x.sample() {
			few.add(row+c.row, c.m)
		}
		row += uint32(x.Len())
		few.many = few.many || x.head.Distinct > maxSample
	}
	for _, c := range few.chosen() {
		list = append(list, c.m)
	}
	return list
}

// Len is the number of items.
func (s *Shelf) Len() int {
	n := len(s.items)
	for _, x := range s.indexes {
		n += x.Len()
	}
	return n
}

// Structures is the number of structures, each once in memory and in every index.
func (s *Shelf) Structures() int { return s.structures }

// Indexed says whether a part of the shelf is an index file.
func (s *Shelf) Indexed() bool { return len(s.indexes) > 0 }

// Err returns the first trouble that reading from an index met, nil if there was none. What could not be
// read was answered as not on the shelf: whoever gives an answer asks before.
func (s *Shelf) Err() error {
	for _, x := range s.indexes {
		if err := x.Err(); err != nil {
			return err
		}
	}
	return nil
}

// Each hands out the items in order until use says no.
func (s *Shelf) Each(use func(*Item) bool) {
	goOn := true
	for i := 0; i < len(s.items) && goOn; i++ {
		goOn = use(s.items[i])
	}
	for i := 0; i < len(s.indexes) && goOn; i++ {
		s.indexes[i].each(func(it *Item) bool {
			goOn = use(it)
			return goOn
		})
	}
}

// find lists the items under a key as one of the identities.
func (s *Shelf) find(k molecule.Key, as identities) (list []*Item) {
	for _, u := range s.keys[k] {
		if u.as&as != 0 {
			list = append(list, u.item)
		}
	}
	for _, x := range s.indexes {
		list = append(list, x.find(k, as)...)
	}
	return list
}

// Has says whether Find would find m. It reads no row.
func (s *Shelf) Has(m *molecule.Molecule) bool {
	return s.has(m.Key(), asExact) || s.has(m.SeenThroughKey(), asSeen)
}

func (s *Shelf) has(k molecule.Key, as identities) bool {
	for _, u := range s.keys[k] {
		if u.as&as != 0 {
			return true
		}
	}
	for _, x := range s.indexes {
		if x.has(k, as) {
			return true
		}
	}
	return false
}

// Find returns the items of a molecule: those that are exactly it, else those that are it with salts
// and shifting hydrogens seen through, the free form first. Empty if it is not on the shelf.
func (s *Shelf) Find(m *molecule.Molecule) []*Item {
	if list := s.find(m.Key(), asExact); len(list) > 0 {
		return list
	}
	list := s.find(m.SeenThroughKey(), asSeen)
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

// FindFlat returns the items with the constitution of m, whatever their stereo marks.
func (s *Shelf) FindFlat(m *molecule.Molecule) []*Item { return s.find(m.FlatKey(), asFlat) }

// OtherMarks returns the structure of an item that is m but for stereo marks, salts and shifting
// hydrogens: one without marks if there is one, nil if there is none.
func (s *Shelf) OtherMarks(m *molecule.Molecule) *molecule.Molecule {
	var found *molecule.Molecule
	for _, it := range s.find(bareKey(m), asBare) {
		if found == nil || !it.Molecule.HasStereo() {
			found = it.Molecule
		}
	}
	return found
}

// CarbonPrice returns the least price of one mol of carbon among the items with a price (none: false),
// and the most carbon atoms in one molecule of an item without.
func (s *Shelf) CarbonPrice() (perMol float64, priced bool, unpricedCarbon int) {
	return s.tally.CarbonPrice, s.tally.Priced, s.tally.UnpricedCarbon
}

// FindText returns the items of a name, synonym or CAS number; for a name that the list of reagents
// knows, also the items that are that reagent.
func (s *Shelf) FindText(text string) []*Item {
	text = strings.TrimSpace(text)
	if list := s.named(text); len(list) > 0 {
		return list
	}
	if list := s.numbered(text); len(list) > 0 {
		return list
	}
	re, ok := s.known.Reagents.Named(text)
	if !ok {
		return nil
	}
	return s.ofReagent(re)
}

func (s *Shelf) named(name string) []*Item {
	name = strings.ToLower(name)
	list := slices.Clip(s.names[name])
	for _, x := range s.indexes {
		list = append(list, x.findName(name)...)
	}
	return list
}

func (s *Shelf) numbered(cas string) []*Item {
	list := slices.Clip(s.cas[cas])
	for _, x := range s.indexes {
		list = append(list, x.findCAS(cas)...)
	}
	return list
}

// ofReagent lists the items that are a substance of the list of reagents.
func (s *Shelf) ofReagent(re *reagent.Reagent) []*Item {
	list := slices.Clip(s.of[re])
	for _, x := range s.indexes {
		found := x.findName(strings.ToLower(re.Name))
		if m, err := re.Molecule(); err == nil && m != nil {
			found = append(x.find(m.Key(), asExact), found...)
		}
		for _, it := range found {
			if it.Reagent == re && !slices.Contains(list, it) {
				list = append(list, it)
			}
		}
	}
	return list
}

// Containing lists up to most items whose name or a synonym holds a part, capitals aside.
func (s *Shelf) Containing(part string, most int) (list []*Item) {
	part = strings.ToLower(part)
	for _, it := range s.items {
		if len(list) < most && strings.Contains(strings.ToLower(it.Name+" "+strings.Join(it.Synonyms, " ")), part) {
			list = append(list, it)
		}
	}
	for _, x := range s.indexes {
		list = append(list, x.containing(part, most-len(list))...)
	}
	return list
}

// Sample lists structures that stand for the shelf, each once, in order: all of a small shelf, some of
// every size of a large one. Nothing may be concluded from what is not among them.
func (s *Shelf) Sample() []*molecule.Molecule { return s.few }
