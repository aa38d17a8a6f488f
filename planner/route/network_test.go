package route_test

import (
	"bytes"
	"strings"
	"testing"

	"shelfward/planner/route"
)

// TestNetwork: the explored network holds every step of the routes listed, and the same search gives the
// same bytes.
func TestNetwork(t *testing.T) {
	var first string
	for _, workers := range []int{1, 2} {
		p := plan(t, route.Options{MaxExpanded: 4, Count: 2, MaxSteps: 3, Workers: workers})
		g, err := p.Network()
		if err != nil {
			t.Fatal(err)
		}
		for _, s := range p.Routes[0].Steps {
			if _, err := g.Vertex(s.Product); err != nil {
				t.Errorf("the network lacks %s: %v", s.Product, err)
			}
		}
		var b bytes.Buffer
		if err := p.NetworkDOT(&b); err != nil {
			t.Fatal(err)
		}
		if first == "" {
			first = b.String()
		}
		if b.String() != first || !strings.Contains(first, "->") {
			t.Errorf("%d workers: other bytes than one worker, or no edge", workers)
		}
	}
}
