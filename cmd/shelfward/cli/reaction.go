package cli

import (
	"bufio"
	"bytes"
	"fmt"
	"io"
	"strings"

	"shelfward/molecule"
	"shelfward/molecule/molfile"
	"shelfward/molecule/smiles"
)

// maxReactionBytes bounds what is read as one reaction: far above any drawing, far below a memory.
const maxReactionBytes = 4 << 20

// reaction reads the argument of judge: reaction SMILES, the name of a .rxn file, or '-'.
func (app *App) reaction(text string) (reactants, products []*molecule.Molecule, err error) {
	if text != "-" && !isReactionFile(text) {
		return readReaction(text)
	}
	in, closeIn, err := app.open(text)
	if err != nil {
		return nil, nil, err
	}
	defer closeIn()
	data, err := io.ReadAll(io.LimitReader(in, maxReactionBytes+1))
	name := fileLabel(text)
	switch {
	case err != nil:
		return nil, nil, usageError("%s: cannot read: %v", name, plainReason(err))
	case len(data) > maxReactionBytes:
		return nil, nil, usageError("%s: longer than %d bytes; one reaction was expected", name, maxReactionBytes)
	case len(bytes.TrimSpace(data)) == 0:
		return nil, nil, usageError("%s: a reaction such as A.B>>C was expected, found nothing", name)
	case isReactionFile(text) || bytes.HasPrefix(data, []byte("$RXN")):
		return reactionFile(name, bytes.NewReader(data))
	}
	line, _ := bufio.NewReader(bytes.NewReader(data)).ReadString('\n')
	return readReaction(strings.TrimSpace(line))
}

func isReactionFile(text string) bool { return strings.HasSuffix(strings.ToLower(text), ".rxn") }

// fileLabel is how messages call a file argument.
func fileLabel(path string) string {
	if path == "-" {
		return "standard input"
	}
	return path
}

// reactionFile takes agents drawn over the arrow as reactants, as readReaction does.
func reactionFile(name string, in io.Reader) (reactants, products []*molecule.Molecule, err error) {
	r, err := molfile.ReadReaction(in)
	if err != nil {
		return nil, nil, usageError("%s: %v", name, err)
	}
	for _, list := range [][]*molfile.Record{r.Reactants, r.Agents} {
		for _, rec := range list {
			reactants = append(reactants, rec.Molecule)
		}
	}
	for _, rec := range r.Products {
		products = append(products, rec.Molecule)
	}
	if len(reactants) == 0 || len(products) == 0 {
		return nil, nil, usageError("%s: a reaction with molecules on both sides was expected, found %d reactants and %d products", name, len(reactants), len(products))
	}
	return reactants, products, nil
}

// readReaction reads 'A.B>>C'; what stands between the two '>' is read with the reactants.
func readReaction(text string) (reactants, products []*molecule.Molecule, err error) {
	sides := strings.Split(text, ">")
	if len(sides) != 3 {
		return nil, nil, usageError("%s: a reaction 'A.B>>C' was expected", quoted(text))
	}
	for i, side := range sides {
		side = strings.TrimSpace(side)
		if side == "" {
			if i != 1 {
				return nil, nil, usageError("%s: the %s side is empty", quoted(text), [3]string{"left", "", "right"}[i])
			}
			continue
		}
		m, err := smiles.Read(side)
		if err != nil {
			return nil, nil, usageError("%s: %v", quoted(side), err)
		}
		if i == 2 {
			products = append(products, m)
		} else {
			reactants = append(reactants, m)
		}
	}
	return reactants, products, nil
}

// reactionAnswer writes a reaction, read from a file or still a line of reaction SMILES, as a reaction file.
func reactionAnswer(it item, v3000 bool) converted {
	x := it.reaction
	if x == nil {
		text, title, trouble := splitLine(it.line)
		if trouble == "" {
			var err error
			if x, err = reactionLine(text); err != nil {
				trouble = err.Error()
			}
		}
		if trouble != "" {
			return converted{title: title, trouble: trouble}
		}
		x.Title = title
	}
	for _, list := range [][]*molfile.Record{x.Reactants, x.Agents, x.Products} {
		for i, r := range list {
			list[i] = drawn(r)
		}
	}
	write := molfile.WriteReaction
	if v3000 {
		write = molfile.WriteReactionV3000
	}
	var text strings.Builder
	if err := write(&text, x); err != nil {
		return converted{title: x.Title, trouble: err.Error()}
	}
	return converted{value: text.String(), title: x.Title}
}

// reactionLine reads 'A.B>C>D' with every molecule a record of its own; either side may be empty.
func reactionLine(text string) (*molfile.Reaction, error) {
	sides := strings.Split(text, ">")
	if len(sides) != 3 {
		return nil, fmt.Errorf("%s: a reaction 'A.B>>C' was expected", quoted(text))
	}
	x := &molfile.Reaction{}
	for i, list := range []*[]*molfile.Record{&x.Reactants, &x.Agents, &x.Products} {
		if sides[i] == "" {
			continue
		}
		m, err := smiles.Read(sides[i])
		if err != nil {
			return nil, fmt.Errorf("%s: %w", quoted(sides[i]), err)
		}
		for _, part := range m.Split() {
			*list = append(*list, &molfile.Record{Molecule: part})
		}
	}
	return x, nil
}
