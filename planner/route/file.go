package route

import (
	"context"
	"encoding/json"
	"errors"
	"fmt"
	"os"
	"strings"

	"shelfward/reactions"
)

// planVersion is raised when a plan file changes in a way that older readers would misread.
const planVersion = 1

// Save writes the plan as a JSON file.
func (p *Plan) Save(path string) error {
	data, err := json.MarshalIndent(p, "", "  ")
	if err != nil {
		return err
	}
	return os.WriteFile(path, append(data, '\n'), 0o644)
}

// Load reads a plan file. Its routes hold figures and structures only; Restore brings back the steps
// behind them.
func Load(path string) (*Plan, error) {
	data, err := os.ReadFile(path)
	if err != nil {
		return nil, fmt.Errorf("plan file: %w", err)
	}
	var p Plan
	if err := json.Unmarshal(data, &p); err != nil {
		return nil, fmt.Errorf("%s: not a plan file: %v", path, err)
	}
	if p.Version != planVersion {
		return nil, fmt.Errorf("%s: plan version %d; this program reads version %d", path, p.Version, planVersion)
	}
	if p.Target.SMILES == "" {
		return nil, fmt.Errorf("%s: not a plan file: no target", path)
	}
	if p.LeftOut == nil { // written before it was kept
		p.LeftOut = []LeftOut{}
	}
	if p.Explained == nil {
		p.Explained = []Explained{}
	}
	for i := range p.Routes {
		p.Routes[i].fill()
		if err := p.Routes[i].whole(); err != nil {
			return nil, fmt.Errorf("%s: damaged plan: route %d: %w", path, i+1, err)
		}
	}
	return &p, nil
}

// fill makes empty lists of those that an older plan file does not hold.
func (r *Route) fill() {
	for _, list := range []*[]string{&r.Short, &r.StockUnknown, &r.Doubts} {
		if *list == nil {
			*list = []string{}
		}
	}
	if r.Protections == nil {
		r.Protections = []Protection{}
	}
	if r.WaysOut == nil {
		r.WaysOut = []WayOut{}
	}
}

// whole checks what printing takes for granted of a route that was read from a file: lists of equal
// length, and figures for every step.
func (r *Route) whole() error {
	if r.Code == "" {
		return errors.New("the key code is missing")
	}
	for i := range r.Steps {
		s := &r.Steps[i]
		switch {
		case s.Transform == "" || s.Product == "":
			return fmt.Errorf("step %d: transform and product were expected", i+1)
		case len(s.Reactants) == 0:
			return fmt.Errorf("step %d: no reactants", i+1)
		case len(s.ReactantNames) != len(s.Reactants) || len(s.Equivalents) != len(s.Reactants):
			return fmt.Errorf("step %d: %d reactants, %d names and %d equivalents; as many of each were expected", i+1, len(s.Reactants), len(s.ReactantNames), len(s.Equivalents))
		}
	}
	return nil
}

// Route returns the route with a code, or with a number from 1 in a list that is at hand; "" is the
// first.
func (p *Plan) Route(name string) (*Route, error) {
	if len(p.Routes) == 0 {
		return nil, fmt.Errorf("the plan holds no route")
	}
	if name == "" {
		return &p.Routes[0], nil
	}
	for i := range p.Routes {
		if p.Routes[i].Code == name || fmt.Sprint(i+1) == name {
			return &p.Routes[i], nil
		}
	}
	codes := make([]string, len(p.Routes))
	for i := range p.Routes {
		codes[i] = p.Routes[i].Code
	}
	return nil, fmt.Errorf("no route %q in the plan; its codes: %s", name, strings.Join(codes, ", "))
}

// Restore brings back the judged steps and the condition sets behind a plan that was read from a file,
// by working out again how each product is made. It fails if the rules no longer hold a step.
func (p *Plan) Restore(ctx context.Context, w *World) error {
	c := newChemistry(w, p.RankedBy, &filter{world: w}, nil, nil)
	target, err := w.Read(p.Target.SMILES)
	if err != nil {
		return fmt.Errorf("plan: target %s: %w", p.Target.SMILES, err)
	}
	p.Molecule = target
	for i := range p.Routes {
		for j := range p.Routes[i].Steps {
			s := &p.Routes[i].Steps[j]
			if err := c.restore(ctx, s); err != nil {
				return fmt.Errorf("plan: route %s, step %d: %w", p.Routes[i].Code, s.Number, err)
			}
		}
		p.Routes[i].restoreStart(w)
	}
	return nil
}

// restore finds the judged step of s among those that make its product.
func (c *chemistry) restore(ctx context.Context, s *Step) error {
	product, err := c.world.Read(s.Product)
	if err != nil {
		return err
	}
	steps, err := c.world.Book.Expand(ctx, product, c.stocked)
	if err != nil {
		return err
	}
	for _, judged := range steps {
		if judged.Transform.ID != s.Transform || len(judged.Reactants) != len(s.Reactants) || len(judged.Together) != len(s.Together) || !c.consumes(judged, s) {
			continue
		}
		for _, set := range judged.Conditions {
			if set.ID == s.Conditions {
				s.Judged, s.Set, s.Molecule = judged, set, product
				for _, r := range judged.Reactants {
					s.Consumed = append(s.Consumed, r.Molecule)
				}
				return nil
			}
		}
	}
	return fmt.Errorf("the rules loaded no longer hold %s with conditions %s for %s", s.Transform, s.Conditions, s.Product)
}

// consumes says whether a judged step takes the reactants of s, in their order.
func (c *chemistry) consumes(judged *reactions.Step, s *Step) bool {
	for i, r := range judged.Reactants {
		m, err := c.world.Read(s.Reactants[i])
		if err != nil {
			return false
		}
		if ok, _ := meets(m, r.Molecule); !ok {
			return false
		}
	}
	return true
}

// restoreStart looks the starting materials up on the shelf as it is now.
func (r *Route) restoreStart(w *World) {
	for i := range r.StartingMaterials {
		m := &r.StartingMaterials[i]
		if mol, err := w.Read(m.SMILES); err == nil {
			m.Molecule, m.Material = mol, w.Materials.Molecule(mol)
		}
	}
}
