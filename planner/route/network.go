package route

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"slices"

	"github.com/dominikbraun/graph"

	"shelfward/planner/search"
)

// Network returns the explored network of a plan that was just made: every molecule opened, every way
// found to make it and what that consumes; edges run the way the material does. Unlike a route it may
// hold circles. A plan read from a file has none.
func (p *Plan) Network() (graph.Graph[string, string], error) {
	if p.chemistry == nil {
		return nil, errors.New("the explored network is there only for a plan that was just made")
	}
	return p.chemistry.network()
}

// NetworkDOT writes the explored network in the DOT language, its lines sorted.
func (p *Plan) NetworkDOT(w io.Writer) error {
	g, err := p.Network()
	if err != nil {
		return err
	}
	return writeDOT(w, g)
}

func (c *chemistry) network() (graph.Graph[string, string], error) {
	c.mu.RLock()
	defer c.mu.RUnlock()
	g := graph.New(graph.StringHash, graph.Directed())
	keys := make([]search.Key, 0, len(c.options))
	for k := range c.options {
		keys = append(keys, k)
	}
	slices.SortFunc(keys, func(a, b search.Key) int { return bytes.Compare(a[:], b[:]) })
	for _, k := range keys {
		product, err := c.vertex(g, k)
		if err != nil {
			return nil, err
		}
		for i, ways := range c.options[k] {
			way := &ways[0]
			id := fmt.Sprintf("%s #%d", product, i+1)
			if err := g.AddVertex(id, graph.VertexAttribute("label", way.step.Transform.Name), graph.VertexAttribute("shape", "plaintext")); err != nil {
				return nil, err
			}
			for _, child := range way.children {
				m, err := c.vertex(g, child.Key)
				if err != nil {
					return nil, err
				}
				if err := g.AddEdge(m, id); err != nil && err != graph.ErrEdgeAlreadyExists {
					return nil, err
				}
			}
			if err := g.AddEdge(id, product); err != nil {
				return nil, err
			}
		}
	}
	return g, nil
}

// vertex adds a molecule by its canonical SMILES, once; what stands on the shelf is a box.
func (c *chemistry) vertex(g graph.Graph[string, string], k search.Key) (string, error) {
	text := c.world.Write(c.molecules[k])
	shape := "ellipse"
	if m := c.materials[k]; m != nil && m.OnShelf {
		shape = "box"
	}
	err := g.AddVertex(text, graph.VertexAttribute("label", text), graph.VertexAttribute("shape", shape))
	if err == graph.ErrVertexAlreadyExists {
		err = nil
	}
	return text, err
}
