// Package canon labels coloured graphs with stereo marks canonically: two graphs get the same
// certificate exactly when a renumbering maps one to the other, colours and stereo included. It is
// complete: no two different graphs share a certificate (its 128-bit hash may collide by chance).
// It takes plain arrays and knows no chemistry.
//
// Method: refinement to an equitable partition, individualisation and a search tree pruned by the
// automorphisms found (B. McKay, Congr. Numer. 30 (1981) 45; B. McKay, A. Piperno, J. Symb.
// Comput. 60 (2014) 94). Stereo signs are part of the refinement and of the certificate, so that
// an automorphism here always keeps stereo.
package canon

import (
	"math/bits"
	"slices"
)

// Neighbor is one entry of a packed adjacency: the atom across and the bond between.
type Neighbor = struct{ Atom, Bond int32 }

// Center is a tetrahedral mark: four ligands, at most one of them negative (not an atom), and
// the sense in which the last three run seen from the first.
type Center struct {
	Atom      int32
	Ligands   [4]int32
	Clockwise bool
}

// Axis is a double bond with ends A and B; LigandA is a neighbour of A and OtherA its other one or
// -1, likewise at B. Together says that LigandA and LigandB lie on one side.
type Axis struct {
	A, B            int32
	LigandA, OtherA int32
	LigandB, OtherB int32
	Together        bool
}

// Graph is what is labelled. The neighbours of a are Neighbors[First[a]:First[a+1]].
type Graph struct {
	Colours     []uint64
	First       []int32
	Neighbors   []Neighbor
	BondColours []uint8
	Centers     []Center
	Axes        []Axis
}

// Labelling is the result of Label.
type Labelling struct {
	Ranks  []int32 // atom -> place in the canonical order; its capacity spans Orbits, which lies behind it
	Orbits []int32 // atom -> lowest atom equivalent to it
	Hash   [2]uint64
}

// component is a connected piece while it is labelled.
type component struct {
	atoms []int32 // local -> atom of the whole graph
	order []int32 // place -> local
	orbit []int32 // local -> lowest local
	cert  []uint32
	cols  []uint64
}

// Label labels g. Cost: microseconds for ordinary molecules; cages and highly symmetric graphs
// cost a few refinements per generator of their symmetry group.
func (w *Worker) Label(g *Graph) *Labelling {
	n := len(g.Colours)
	out := &Labelling{}
	room := make([]int32, 2*n)
	out.Ranks, out.Orbits = room[:n], room[n:]
	pieces := w.split(g)
	if pieces == 1 {
		w.search.run(g)
		s := &w.search
		for i, a := range s.best.order {
			out.Ranks[a] = int32(i)
		}
		s.orbits(out.Orbits)
		out.Hash = hashPiece(hashSeed, s.best.colours(g, w), s.best.cert)
		return out
	}
	list := make([]component, pieces)
	for k := range list {
		w.labelPiece(g, int32(k), &list[k])
	}
	joinPieces(list, out)
	return out
}

// labelPiece copies one component into a graph of its own and labels it.
func (w *Worker) labelPiece(g *Graph, k int32, c *component) {
	sub := w.extract(g, k, c)
	w.search.run(sub)
	s := &w.search
	c.order = slices.Clone(s.best.order)
	c.cert = slices.Clone(s.best.cert)
	c.cols = slices.Clone(s.best.colours(sub, w))
	c.orbit = make([]int32, len(c.atoms))
	s.orbits(c.orbit)
}

// joinPieces orders the components, large ones first and then by colours and certificate, numbers
// the atoms through and joins the orbits of equal components.
func joinPieces(list []component, out *Labelling) {
	slices.SortStableFunc(list, func(x, y component) int {
		if c := len(y.atoms) - len(x.atoms); c != 0 {
			return c
		}
		if c := slices.Compare(x.cols, y.cols); c != 0 {
			return c
		}
		return slices.Compare(x.cert, y.cert)
	})
	hash, place := hashSeed, int32(0)
	for k := range list {
		c := &list[k]
		for _, local := range c.order {
			out.Ranks[c.atoms[local]] = place
			place++
		}
		for local, o := range c.orbit {
			out.Orbits[c.atoms[local]] = c.atoms[o]
		}
		hash = hashPiece(hash, c.cols, c.cert)
	}
	for k := 0; k < len(list); {
		end := k + 1
		for end < len(list) && slices.Equal(list[end].cols, list[k].cols) && slices.Equal(list[end].cert, list[k].cert) {
			end++
		}
		if end > k+1 {
			joinEqual(list[k:end], out)
		}
		k = end
	}
	out.Hash = hash
}

// joinEqual makes corresponding atoms of equal components equivalent.
func joinEqual(list []component, out *Labelling) {
	lowest := make([]int32, len(out.Orbits))
	for i := range lowest {
		lowest[i] = int32(i)
	}
	for place := range list[0].order {
		m := int32(1 << 30)
		for k := range list {
			m = min(m, out.Orbits[list[k].atoms[list[k].order[place]]])
		}
		for k := range list {
			o := out.Orbits[list[k].atoms[list[k].order[place]]]
			lowest[o] = min(lowest[o], m)
		}
	}
	for k := range list {
		for _, a := range list[k].atoms {
			out.Orbits[a] = lowest[out.Orbits[a]]
		}
	}
}

var hashSeed = [2]uint64{0x9ae16a3b2f90404f, 0xc949c7defebee6d5}

// hashPiece mixes the colours and the certificate of one component into h, in two lanes.
func hashPiece(h [2]uint64, colours []uint64, cert []uint32) [2]uint64 {
	h = hashWord(h, uint64(len(colours))<<32|uint64(len(cert)))
	for _, c := range colours {
		h = hashWord(h, c)
	}
	for i := 0; i+1 < len(cert); i += 2 {
		h = hashWord(h, uint64(cert[i])<<32|uint64(cert[i+1]))
	}
	if len(cert)%2 == 1 {
		h = hashWord(h, uint64(cert[len(cert)-1]))
	}
	return h
}

func hashWord(h [2]uint64, x uint64) [2]uint64 {
	hi, lo := bits.Mul64(h[0]^x, 0x9e3779b97f4a7c15)
	a := hi ^ lo ^ h[1]
	hi, lo = bits.Mul64(h[1]+(x^0xd6e8feb86659fd93), 0xe7037ed1a0b428db)
	b := hi ^ lo + bits.RotateLeft64(h[0], 29)
	return [2]uint64{a, b}
}
