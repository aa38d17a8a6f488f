package route

import (
	"bytes"
	"fmt"
	"io"
	"slices"
	"strings"

	"github.com/dominikbraun/graph"
	"github.com/dominikbraun/graph/draw"
)

// benchOrder sorts steps so that each stands after those that make its reactants, stably: among steps
// that could come next, the one with the lower index does. makes[i] names what step i makes and
// takes[i] what it consumes. An error means that the steps run in a circle.
func benchOrder(makes []string, takes [][]string) ([]int, error) {
	g := graph.New(graph.IntHash, graph.Directed(), graph.PreventCycles())
	by := map[string]int{}
	for i, m := range makes {
		by[m] = i
		if err := g.AddVertex(i); err != nil {
			return nil, err
		}
	}
	for i, list := range takes {
		for _, t := range list {
			j, made := by[t]
			if !made {
				continue
			}
			if err := g.AddEdge(j, i); err != nil && err != graph.ErrEdgeAlreadyExists {
				return nil, fmt.Errorf("the steps run in a circle at %s: %w", t, err)
			}
		}
	}
	return graph.StableTopologicalSort(g, func(a, b int) bool { return a < b })
}

// Graph returns the bipartite graph of molecules and steps of a route, edges running the way the
// material does.
func (r *Route) Graph() (graph.Graph[string, string], error) {
	g := graph.New(graph.StringHash, graph.Directed(), graph.PreventCycles())
	molecule := func(smiles, name string, onShelf bool) error {
		label, shape := smiles, "ellipse"
		if name != "" {
			label = name
		}
		if onShelf {
			shape = "box"
		}
		err := g.AddVertex(smiles, graph.VertexAttribute("label", label), graph.VertexAttribute("shape", shape))
		if err == graph.ErrVertexAlreadyExists {
			return nil
		}
		return err
	}
	for i := range r.Steps {
		s := &r.Steps[i]
		id := fmt.Sprintf("step %d", s.Number)
		if err := g.AddVertex(id, graph.VertexAttribute("label", fmt.Sprintf("%d %s", s.Number, s.Name)), graph.VertexAttribute("shape", "plaintext")); err != nil {
			return nil, err
		}
		for j, m := range s.Reactants {
			if err := molecule(m, s.ReactantNames[j], s.MadeBy[j] == 0); err != nil {
				return nil, err
			}
			if err := g.AddEdge(m, id); err != nil && err != graph.ErrEdgeAlreadyExists {
				return nil, err
			}
		}
		if err := molecule(s.Product, s.ProductName, false); err != nil {
			return nil, err
		}
		if err := g.AddEdge(id, s.Product); err != nil {
			return nil, err
		}
	}
	return g, nil
}

// DOT writes the graph of the route in the DOT language, its lines sorted, so that the same route gives
// the same bytes.
func (r *Route) DOT(w io.Writer) error {
	g, err := r.Graph()
	if err != nil {
		return err
	}
	return writeDOT(w, g)
}

// writeDOT writes a graph with its lines sorted, because the library walks a map.
func writeDOT(w io.Writer, g graph.Graph[string, string]) error {
	var b bytes.Buffer
	if err := draw.DOT(g, &b, draw.GraphAttribute("rankdir", "BT")); err != nil {
		return err
	}
	var head, body []string
	for _, line := range strings.Split(b.String(), "\n") {
		switch text := strings.TrimSpace(line); {
		case strings.HasPrefix(text, "\""):
			body = append(body, "\t"+text)
		case text != "" && text != "}":
			head = append(head, line)
		}
	}
	slices.Sort(body)
	_, err := fmt.Fprintf(w, "%s\n%s\n}\n", strings.Join(head, "\n"), strings.Join(body, "\n"))
	return err
}
