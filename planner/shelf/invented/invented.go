// Package invented makes up shelves of any size from a seed: distinct, ordinary-looking structures built
// from rings, chains and groups. It serves tests and measurements; the program does not use it. Nothing in
// it says that a structure exists or can be bought.
package invented

import (
	"bufio"
	"fmt"
	"io"
	"math/rand/v2"
	"runtime"
	"sync"

	"shelfward/molecule"
	"shelfward/molecule/smiles"
)

// Cores and pieces that invented shelves are built from: ordinary rings, chains and groups. A piece is
// bound by its first atom.
var (
	cores = []string{"c1ccccc1", "c1ccncc1", "c1cncnc1", "c1ccoc1", "c1ccsc1", "c1cc[nH]c1", "c1cn[nH]c1", "c1c[nH]cn1", "c1cscn1", "c1ccc2ccccc2c1",
		"c1ccc2[nH]ccc2c1", "c1ccc2ncccc2c1", "C1CCCCC1", "C1CCCC1", "C1CCNCC1", "C1COCCN1", "C1CNCCN1", "C1CCOCC1", "C1CCNC1", "CCCC", "CCCCC", "CC(C)CC",
		"CCOCC", "CCNCC", "CC=O", "CCC(=O)C", "CC(=O)O", "CC(=O)N", "CCC#N", "CC(C)O"}
	pieces = []string{"C", "CC", "C(C)C", "CCC", "CC(C)C", "C(C)(C)C", "C1CC1", "C1CCCCC1", "F", "Cl", "Br", "O", "OC", "OCC", "N", "NC", "N(C)C", "C#N", "C=O", "C(=O)O",
		"C(=O)OC", "C(=O)OCC", "C(=O)N", "C(C)=O", "CO", "CN", "CCO", "CCN", "CC(=O)O", "C(F)(F)F", "OC(F)(F)F", "SC", "S(C)(=O)=O", "c1ccccc1", "Cc1ccccc1",
		"c1ccncc1", "c1ccccc1OC", "c1ccc(F)cc1", "c1ccoc1", "N1CCOCC1", "N1CCCC1", "NC(C)=O", "OCc1ccccc1", "C=C", "CC=C"}
)

// Generator invents molecules from a seed: a core with one to four pieces, through molecule.Builder.
type Generator struct {
	random        *rand.Rand
	cores, pieces []*molecule.Molecule
	b             molecule.Builder
}

// NewGenerator returns a Generator; the same seed and stream give the same molecules on every machine.
func NewGenerator(seed, stream uint64) (*Generator, error) {
	g := &Generator{random: rand.New(rand.NewPCG(seed, stream))}
	for i, list := range [][]string{cores, pieces} {
		for _, s := range list {
			m, err := smiles.Read(s)
			if err != nil {
				return nil, fmt.Errorf("%s: %w", s, err)
			}
			if i == 0 {
				g.cores = append(g.cores, m)
			} else {
				g.pieces = append(g.pieces, m)
			}
		}
	}
	return g, nil
}

// Next builds one molecule; nil if the pieces drawn do not fit.
func (g *Generator) Next() *molecule.Molecule {
	g.b = molecule.Builder{}
	g.put(g.cores[g.random.IntN(len(g.cores))])
	for range 1 + g.random.IntN(4) {
		at := g.random.IntN(len(g.b.Atoms))
		first := len(g.b.Atoms)
		if g.b.Atoms[at].Hydrogens == 0 {
			continue
		}
		g.put(g.pieces[g.random.IntN(len(g.pieces))])
		g.b.Atoms[at].Hydrogens--
		g.b.Atoms[first].Hydrogens--
		g.b.AddBond(at, first, 1)
	}
	m, err := g.b.Build()
	if err != nil {
		return nil
	}
	return m
}

// put copies a molecule into the builder.
func (g *Generator) put(m *molecule.Molecule) {
	first := len(g.b.Atoms)
	for a := range m.NumAtoms() {
		atom := m.Atom(a)
		atom.Aromatic = false
		g.b.AddAtom(atom)
	}
	for i := range m.NumBonds() {
		bond := m.Bond(i)
		g.b.AddBond(first+int(bond.A), first+int(bond.B), bond.Order)
	}
}

// Write writes count distinct structures as SMILES, one a line with a title.
func Write(w io.Writer, seed uint64, count int) error {
	const perStream = 1000
	out := bufio.NewWriterSize(w, 1<<20)
	taken := map[molecule.Key]bool{}
	for stream := uint64(0); len(taken) < count; {
		lists := make([][]made, runtime.GOMAXPROCS(0))
		var wait sync.WaitGroup
		for i := range lists {
			g, err := NewGenerator(seed, stream)
			if err != nil {
				return err
			}
			stream++
			wait.Go(func() { lists[i] = g.some(perStream) })
		}
		wait.Wait()
		for _, list := range lists {
			for _, x := range list {
				if !taken[x.key] && len(taken) < count {
					taken[x.key] = true
					if _, err := fmt.Fprintf(out, "%s INVENTED-%07d\n", x.text, len(taken)); err != nil {
						return err
					}
				}
			}
		}
	}
	return out.Flush()
}

// made is a structure written.
type made struct {
	key  molecule.Key
	text string
}

// some makes what count draws give.
func (g *Generator) some(count int) (list []made) {
	for range count {
		if m := g.Next(); m != nil {
			list = append(list, made{m.Key(), smiles.Write(m)})
		}
	}
	return list
}
