package cli

import "shelfward/planner/route"

// noSheet says why there is no sheet: no route (status 3), or a target that stands on the shelf.
func (app *App) noSheet(j *job, p *route.Plan) error {
	if app.JSON {
		doubts := append([]string{}, p.Doubts...)
		if len(p.Routes) == 0 {
			doubts = append(doubts, "no route was found: there is nothing to write a sheet for")
		}
		object := emptySheet(doubts)
		object["target"] = map[string]any{"smiles": p.Target.SMILES, "name": p.Target.Name, "formula": p.Target.Formula}
		if len(p.Routes) > 0 {
			object["code"] = p.Routes[0].Code
		}
		if err := printJSON(app.Out, object); err != nil {
			return err
		}
		return nothingFound(p)
	}
	app.header(j)
	if err := p.WriteText(app.Out); err != nil {
		return err
	}
	return nothingFound(p)
}

// emptySheet is the object of a sheet without steps.
func emptySheet(doubts []string) map[string]any {
	return map[string]any{"code": "", "target": map[string]any{"smiles": "", "name": "", "formula": ""}, "make_g": 0, "comes_out_g": []float64{},
		"steps": []any{}, "doubts": doubts, "caution": "", "text": ""}
}
