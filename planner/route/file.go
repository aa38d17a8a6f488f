package route

import (
	"encoding/json"
	"fmt"
	"os"
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
	return &p, nil
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
	return nil, fmt.Errorf("no route %q in the plan%s", name, near(name, codes))
}
