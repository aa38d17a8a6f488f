package shelf

import (
	"encoding/binary"
	"encoding/json"
	"errors"
	"fmt"
	"io"
	"os"
	"runtime/debug"
	"strings"
	"sync"
	"time"

	bolt "go.etcd.io/bbolt"
	bolterrors "go.etcd.io/bbolt/errors"

	"shelfward/molecule"
	"shelfward/rules"
)

// Index is a shelf of any size in a file: the rows as they were written, and where the molecules,
// names and CAS numbers stand. It opens at once whatever its size, and a look-up reads a few pages.
//
// The file is a bbolt database: a B+ tree in one file that is mapped into memory and read in place. It
// fits because an index is written once, in sorted order, and then only read, by several runs at a time;
// because it keeps several tables in one file (rows, keys, names, numbers), names in order; and because
// it is plain Go. A log-structured store is made for writing all the time and keeps a folder of files; a
// constant hash file has no order and ends at 4 GB.
//
// An Index is safe for concurrent use.
type Index struct {
	path string
	db   *bolt.DB
	head header
	read reader

	mu       sync.Mutex
	sessions []*session // not in use
	items    map[uint32]*Item
	trouble  error // the first thing that could not be read
}

// The tables of an index.
var (
	tableHead  = []byte("head")  // "head": the header as JSON
	tableRows  = []byte("rows")  // number of the row, 4 bytes: savedRow as JSON
	tableKeys  = []byte("keys")  // key, 16 bytes: for every row with it, 4 bytes of number and 1 of identities
	tableNames = []byte("names") // name in small letters, 0, number of the row: nothing
	tableCAS   = []byte("cas")   // CAS number, 0, number of the row: nothing
)

// identities says as which identities of its molecule a row stands under a key.
type identities uint8

const (
	asExact identities = 1 << iota
	asFlat             // without stereo marks
	asSeen             // salts and shifting hydrogens seen through
	asBare             // both
)

// header describes an index.
type header struct {
	Format     int      `json:"format"`
	Files      []string `json:"files"` // that were read
	Rows       int      `json:"rows"`
	Structures int      `json:"structures"` // rows whose structure is known
	Distinct   int      `json:"distinct"`   // structures, each once
	Sample     []uint32 `json:"sample"`     // rows that stand for all where looking at each would take too long
	Tally      tally    `json:"tally"`
	Check      []check  `json:"check"` // keys of some rows: another version of the program makes others
}

type check struct {
	Row uint32 `json:"row"`
	Key string `json:"key"`
}

// indexFormat counts the layouts of the file.
const indexFormat = 2

// savedRow is one row as it was written.
type savedRow struct {
	File  int               `json:"f,omitempty"`
	Line  int               `json:"l"`
	Value map[string]string `json:"v"`
	Extra [][2]string       `json:"x,omitempty"`
}

// session is a view of the database for one goroutine at a time.
type session struct {
	tx                     *bolt.Tx
	rows, keys, names, cas *bolt.Bucket
}

// magic stands at byte 16 of every bbolt file.
var magic = []byte{0xed, 0xda, 0x0c, 0xed}

// IsIndex says whether the file at path is an index, by its first bytes.
func IsIndex(path string) bool {
	f, err := os.Open(path)
	if err != nil {
		return false
	}
	defer f.Close()
	head := make([]byte, 20)
	if _, err := io.ReadFull(f, head); err != nil {
		return false
	}
	return string(head[16:]) == string(magic)
}

// OpenIndex opens an index file. Errors are one line: no index, damaged, or made by another version.
func OpenIndex(path string, known *Known) (x *Index, err error) {
	defer debug.SetPanicOnFault(debug.SetPanicOnFault(true))
	again := fmt.Errorf("%s: this index is damaged or cut short: make it again with `shelfward shelf import`", path)
	defer func() {
		if recover() != nil { // the library's, on a page that cannot be
			x, err = nil, again
		}
	}()
	db, err := bolt.Open(path, 0o644, &bolt.Options{ReadOnly: true, Timeout: 5 * time.Second})
	switch {
	case errors.Is(err, os.ErrNotExist), errors.Is(err, os.ErrPermission):
		return nil, fmt.Errorf("%s: cannot read this index: %v", path, errors.Unwrap(err))
	case errors.Is(err, bolterrors.ErrTimeout):
		return nil, fmt.Errorf("%s: this index is being written by another program", path)
	case err != nil:
		return nil, again
	}
	x = &Index{path: path, db: db, read: reader{known: known}, items: map[uint32]*Item{}}
	if err := x.readHead(); err != nil {
		x.Close()
		return nil, err
	}
	return x, nil
}

// readHead reads and checks the header; it panics on a file that is damaged.
func (x *Index) readHead() error {
	s := x.session()
	if s == nil {
		panic("no tables")
	}
	defer x.put(s) // so that the file can be closed
	info, err := os.Stat(x.path)
	if err != nil {
		return err
	}
	data := s.tx.Bucket(tableHead).Get(tableHead)
	if info.Size() < s.tx.Size() || json.Unmarshal(data, &x.head) != nil {
		panic("cut short")
	}
	other := fmt.Errorf("%s: this index was made by another version of the program: make it again with `shelfward shelf import`", x.path)
	if x.head.Format != indexFormat {
		return other
	}
	for _, c := range x.head.Check {
		it := x.item(s, c.Row)
		if it == nil || it.Molecule == nil || it.Molecule.Key().String() != c.Key {
			return other
		}
	}
	return nil
}

// Close gives the file back. The index must not be used any more.
func (x *Index) Close() error {
	x.mu.Lock()
	defer x.mu.Unlock()
	for _, s := range x.sessions {
		_ = s.tx.Rollback() // a view has nothing to lose
	}
	x.sessions = nil
	return x.db.Close()
}

// Len is the number of rows.
func (x *Index) Len() int { return x.head.Rows }

// Err returns the first trouble met in a look-up, nil if there was none: look-ups answer as if what
// cannot be read were not there, so whoever used the index asks at the end.
func (x *Index) Err() error {
	x.mu.Lock()
	defer x.mu.Unlock()
	return x.trouble
}

func (x *Index) fail(err error) {
	x.mu.Lock()
	defer x.mu.Unlock()
	if x.trouble == nil {
		x.trouble = err
	}
}

// session takes a view; nil if the tables are not there.
func (x *Index) session() *session {
	x.mu.Lock()
	if n := len(x.sessions); n > 0 {
		s := x.sessions[n-1]
		x.sessions = x.sessions[:n-1]
		x.mu.Unlock()
		return s
	}
	x.mu.Unlock()
	tx, err := x.db.Begin(false)
	if err != nil {
		return nil
	}
	s := &session{tx: tx, rows: tx.Bucket(tableRows), keys: tx.Bucket(tableKeys), names: tx.Bucket(tableNames), cas: tx.Bucket(tableCAS)}
	if s.rows == nil || s.keys == nil || s.names == nil || s.cas == nil || tx.Bucket(tableHead) == nil {
		_ = tx.Rollback()
		return nil
	}
	return s
}

func (x *Index) put(s *session) {
	x.mu.Lock()
	x.sessions = append(x.sessions, s)
	x.mu.Unlock()
}

// view runs f on a session; a page that cannot be is kept as the index's trouble.
func (x *Index) view(f func(*session)) {
	s := x.session()
	fault := debug.SetPanicOnFault(true) // a page number that points nowhere is a damaged file, too
	defer func() {
		debug.SetPanicOnFault(fault)
		broken := recover() != nil
		if s == nil || broken {
			x.fail(fmt.Errorf("%s: this index is damaged: make it again with `shelfward shelf import`", x.path))
		}
		if s != nil {
			x.put(s) // after a bad page, too: a view has no state but its tables
		}
	}()
	if s != nil {
		f(s)
	}
}

// rowsOf lists the rows under a key with one of the identities asked for.
func (s *session) rowsOf(k molecule.Key, as identities) (rows []uint32) {
	for list := s.keys.Get(k[:]); len(list) >= 5; list = list[5:] {
		if identities(list[4])&as != 0 {
			rows = append(rows, binary.BigEndian.Uint32(list))
		}
	}
	return rows
}

// has says whether a molecule with the key stands in the index, under one of the identities.
func (x *Index) has(k molecule.Key, as identities) (found bool) {
	x.view(func(s *session) { found = len(s.rowsOf(k, as)) > 0 })
	return found
}

// find lists the items under a key.
func (x *Index) find(k molecule.Key, as identities) (items []*Item) {
	x.view(func(s *session) { items = x.list(s, s.rowsOf(k, as)) })
	return items
}

func (x *Index) list(s *session, rows []uint32) (items []*Item) {
	for _, row := range rows {
		if it := x.item(s, row); it != nil {
			items = append(items, it)
		}
	}
	return items
}

// findName lists the items with a name or synonym in small letters.
func (x *Index) findName(name string) (items []*Item) {
	x.view(func(s *session) { items = x.list(s, rowsUnder(s.names, name)) })
	return items
}

// findCAS lists the items with a CAS number.
func (x *Index) findCAS(number string) (items []*Item) {
	x.view(func(s *session) { items = x.list(s, rowsUnder(s.cas, number)) })
	return items
}

// rowsUnder lists the rows behind a text.
func rowsUnder(b *bolt.Bucket, text string) (rows []uint32) {
	prefix := text + "\x00"
	c := b.Cursor()
	for k, _ := c.Seek([]byte(prefix)); len(k) == len(prefix)+4 && string(k[:len(prefix)]) == prefix; k, _ = c.Next() {
		rows = append(rows, binary.BigEndian.Uint32(k[len(prefix):]))
	}
	return rows
}

// containing lists up to most items whose name or a synonym has a part in small letters.
func (x *Index) containing(part string, most int) (items []*Item) {
	x.view(func(s *session) {
		taken := map[uint32]bool{}
		c := s.names.Cursor()
		for k, _ := c.First(); len(k) > 5 && len(items) < most; k, _ = c.Next() {
			row := binary.BigEndian.Uint32(k[len(k)-4:])
			if !taken[row] && strings.Contains(string(k[:len(k)-5]), part) {
				taken[row] = true
				items = append(items, x.list(s, []uint32{row})...)
			}
		}
	})
	return items
}

// maxKept is how many items are kept once read; then the memory is given back.
const maxKept = 20_000

// item reads one row as a shelf file's row is read, with what the lists know today.
func (x *Index) item(s *session, number uint32) *Item {
	x.mu.Lock()
	it := x.items[number]
	x.mu.Unlock()
	if it != nil {
		return it
	}
	var key [4]byte
	binary.BigEndian.PutUint32(key[:], number)
	var saved savedRow
	if json.Unmarshal(s.rows.Get(key[:]), &saved) != nil || saved.File >= len(x.head.Files) || saved.Value == nil {
		panic("row") // view says what it means
	}
	r := row{path: x.head.Files[saved.File], line: saved.Line, value: saved.Value}
	for _, f := range saved.Extra {
		r.extra = append(r.extra, Field{f[0], f[1]})
	}
	rep := x.read.item(r)
	if rep.Item == nil {
		x.fail(fmt.Errorf("%s: a row of this index is understood no more (%w): make the index again with `shelfward shelf import`", x.path, rules.ErrorList(rep.Errors).Err()))
		return nil
	}
	x.mu.Lock()
	defer x.mu.Unlock()
	if have := x.items[number]; have != nil {
		return have // the same row is the same item everywhere
	}
	if len(x.items) >= maxKept {
		clear(x.items)
	}
	x.items[number] = rep.Item
	return rep.Item
}

// each hands out the items in the order of the rows until use says no.
func (x *Index) each(use func(*Item) bool) {
	for number := range x.head.Rows {
		var it *Item
		x.view(func(s *session) { it = x.item(s, uint32(number)) })
		if it != nil && !use(it) || x.Err() != nil {
			return
		}
	}
}

// sample lists the structures that stand for the whole index.
func (x *Index) sample() (list []sampled) {
	x.view(func(s *session) {
		for _, row := range x.head.Sample {
			if it := x.item(s, row); it != nil && it.Molecule != nil {
				list = append(list, sampled{it.Molecule.Key(), row, it.Molecule})
			}
		}
	})
	return list
}

// bareKey is the seen-through identity without stereo marks.
func bareKey(m *molecule.Molecule) molecule.Key {
	if m.HasStereo() {
		m = m.WithoutStereo()
	}
	return m.SeenThroughKey()
}

// keysOf gives the distinct keys of a molecule, each with the identities it is.
func keysOf(m *molecule.Molecule) (keys []molecule.Key, as []identities) {
	for i, k := range []molecule.Key{m.Key(), m.FlatKey(), m.SeenThroughKey(), bareKey(m)} {
		at := 0
		for at < len(keys) && keys[at] != k {
			at++
		}
		if at == len(keys) {
			keys, as = append(keys, k), append(as, 0)
		}
		as[at] |= 1 << i
	}
	return keys, as
}
