package reactions

import (
	"sync"
	"sync/atomic"

	"shelfward/molecule"
)

// Small molecules leave in every expansion: water, the hydrogen halides, methanol, acetic acid. A book keeps
// those up to maxCommon atoms, the first maxKept of them.
const (
	maxCommon = 4
	maxKept   = 4096
)

// commonMolecules is safe for concurrent use.
type commonMolecules struct {
	built sync.Map // molecule.Fingerprint -> *molecule.Molecule
	kept  atomic.Int32
}

// build freezes what b holds, or returns what was frozen before from the same atoms and bonds.
func (c *commonMolecules) build(b *molecule.Builder, f molecule.Fingerprint) (*molecule.Molecule, error) {
	if m, ok := c.built.Load(f); ok {
		return m.(*molecule.Molecule), nil
	}
	m, err := b.Build()
	if err == nil && c.kept.Add(1) <= maxKept {
		c.built.Store(f, m)
	}
	return m, err
}
