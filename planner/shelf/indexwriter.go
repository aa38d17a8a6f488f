package shelf

import (
	"bytes"
	"cmp"
	"encoding/binary"
	"encoding/json"
	"fmt"
	"slices"

	bolt "go.etcd.io/bbolt"

	"shelfward/molecule"
)

// indexWriter fills a new index file. Rows go to the file as they come; keys and names wait in memory,
// to be written in order, which fills every page.
type indexWriter struct {
	db    *bolt.DB
	head  header
	rows  [][]byte // saved rows not yet written; the last of them is row head.Rows-1
	keys  []keyEntry
	names []textEntry
	cas   []textEntry
	few   sample
}

// keyEntry says that a row stands under a key, as these identities.
type keyEntry struct {
	key molecule.Key
	row uint32
	as  identities
}

// textEntry says that a row stands under a text.
type textEntry struct {
	text string
	row  uint32
}

const (
	rowsAtOnce = 50_000 // rows written in one transaction
	keysAtOnce = 400_000
	pageBytes  = 4096 // fixed, so that the bytes do not depend on the machine
	checkRows  = 16   // rows whose keys the header keeps
)

func newIndexWriter(path string, files []string) (*indexWriter, error) {
	// nothing is shared with anybody before the file is renamed: one sync at the end is enough
	db, err := bolt.Open(path, 0o644, &bolt.Options{NoSync: true, NoGrowSync: true, NoFreelistSync: true, PageSize: pageBytes})
	if err != nil {
		return nil, err
	}
	w := &indexWriter{db: db, head: header{Format: indexFormat, Files: files}}
	return w, db.Update(func(tx *bolt.Tx) error {
		for _, table := range [][]byte{tableHead, tableRows, tableKeys, tableNames, tableCAS} {
			if _, err := tx.CreateBucket(table); err != nil {
				return err
			}
		}
		return nil
	})
}

// add takes the next row.
func (w *indexWriter) add(m *madeRow) error {
	row := uint32(w.head.Rows)
	w.head.Rows++
	w.rows = append(w.rows, m.saved)
	for i, k := range m.keys {
		w.keys = append(w.keys, keyEntry{k, row, m.as[i]})
	}
	for _, name := range namesOf(m.item) {
		w.names = append(w.names, textEntry{string([]byte(name)), row}) // a copy: the name is part of a large text
	}
	if m.item.CAS != "" {
		w.cas = append(w.cas, textEntry{string([]byte(m.item.CAS)), row})
	}
	if m.item.Molecule != nil {
		w.head.Structures++
		w.head.Tally.add(m.item)
		w.few.add(row, m.item.Molecule)
	}
	if len(w.rows) >= rowsAtOnce {
		return w.flush()
	}
	return nil
}

// flush writes the rows that wait.
func (w *indexWriter) flush() error {
	first := w.head.Rows - len(w.rows)
	err := w.db.Update(func(tx *bolt.Tx) error {
		b := tx.Bucket(tableRows)
		b.FillPercent = 1
		for i, saved := range w.rows {
			if err := b.Put(binary.BigEndian.AppendUint32(nil, uint32(first+i)), saved); err != nil {
				return err
			}
		}
		return nil
	})
	w.rows = w.rows[:0]
	return err
}

// finish writes what waits and closes the file, which is then whole and on the disk.
func (w *indexWriter) finish() error {
	err := w.flush()
	if err == nil {
		err = w.writeKeys()
	}
	for _, t := range []struct {
		table []byte
		list  []textEntry
	}{{tableNames, w.names}, {tableCAS, w.cas}} {
		if err == nil {
			err = w.writeTexts(t.table, t.list)
		}
	}
	if err == nil {
		err = w.writeHead()
	}
	if err == nil {
		err = w.db.Sync()
	}
	if err != nil {
		w.abandon()
		return fmt.Errorf("cannot write the index: %w", err)
	}
	return w.db.Close()
}

// abandon gives up; the file is of no use.
func (w *indexWriter) abandon() { _ = w.db.Close() }

// writeKeys writes the keys in order, the rows of one key together.
func (w *indexWriter) writeKeys() error {
	slices.SortFunc(w.keys, compareKeys)
	for rest := w.keys; len(rest) > 0; {
		err := w.db.Update(func(tx *bolt.Tx) error {
			b := tx.Bucket(tableKeys)
			b.FillPercent = 1
			for n := 0; n < keysAtOnce && len(rest) > 0; n++ {
				k, value := rest[0].key, []byte(nil)
				if slices.ContainsFunc(rest[:sameKey(rest)], func(e keyEntry) bool { return e.as&asExact != 0 }) {
					w.head.Distinct++
				}
				for ; len(rest) > 0 && rest[0].key == k; rest = rest[1:] {
					value = append(binary.BigEndian.AppendUint32(value, rest[0].row), byte(rest[0].as))
				}
				if err := b.Put(bytes.Clone(k[:]), value); err != nil {
					return err
				}
			}
			return nil
		})
		if err != nil {
			return err
		}
	}
	return nil
}

// sameKey counts the entries at the head of a list that have its key.
func sameKey(list []keyEntry) int {
	n := 1
	for n < len(list) && list[n].key == list[0].key {
		n++
	}
	return n
}

// writeTexts writes names or numbers in order.
func (w *indexWriter) writeTexts(table []byte, list []textEntry) error {
	slices.SortFunc(list, func(a, b textEntry) int {
		return cmp.Or(cmp.Compare(a.text, b.text), cmp.Compare(a.row, b.row))
	})
	for rest := range slices.Chunk(list, keysAtOnce) {
		err := w.db.Update(func(tx *bolt.Tx) error {
			b := tx.Bucket(table)
			b.FillPercent = 1
			for _, e := range rest {
				if err := b.Put(binary.BigEndian.AppendUint32(append([]byte(e.text), 0), e.row), nil); err != nil {
					return err
				}
			}
			return nil
		})
		if err != nil {
			return err
		}
	}
	return nil
}

// writeHead writes the header, with the sample and the keys to check.
func (w *indexWriter) writeHead() error {
	chosen := w.few.chosen()
	w.head.Sample = []uint32{}
	for i, s := range chosen {
		w.head.Sample = append(w.head.Sample, s.row)
		if i%max(1, len(chosen)/checkRows) == 0 {
			w.head.Check = append(w.head.Check, check{s.row, s.key.String()})
		}
	}
	data, err := json.Marshal(w.head)
	if err != nil {
		return err
	}
	return w.db.Update(func(tx *bolt.Tx) error { return tx.Bucket(tableHead).Put(tableHead, data) })
}
