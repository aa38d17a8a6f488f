package shelf

import (
	"fmt"
	"strings"

	"gopkg.in/yaml.v3"

	"shelfward/rules"
)

// yamlRows reads a shelf in YAML: a list of rows, or the keys defaults (columns for every row) and
// items (the list). Numbers are accepted where a text is meant: an amount or a price may be bare.
func yamlRows(path string, data []byte) ([]row, rules.ErrorList) {
	var doc yaml.Node
	if err := rules.Decode(path, data, &doc); err != nil {
		if list, ok := err.(rules.ErrorList); ok {
			return nil, list
		}
		return nil, rules.ErrorList{{Path: path, Text: err.Error()}}
	}
	list, defaults := &doc, map[string]string{}
	var errs rules.ErrorList
	fail := func(n *yaml.Node, format string, args ...any) {
		errs = append(errs, &rules.Error{Path: path, Line: n.Line, Column: n.Column, Text: fmt.Sprintf(format, args...)})
	}
	if doc.Kind == yaml.MappingNode {
		list = nil
		for i := 0; i+1 < len(doc.Content); i += 2 {
			switch key := doc.Content[i]; key.Value {
			case "items":
				list = doc.Content[i+1]
			case "defaults":
				r := yamlRow(path, doc.Content[i+1], fail)
				defaults = r.value
			default:
				fail(key, "unknown key %q (known here: defaults, items)", key.Value)
			}
		}
	}
	if list == nil || list.Kind != yaml.SequenceNode {
		fail(&doc, "expected a list of rows, or the keys defaults and items")
		return nil, errs
	}
	if len(list.Content) > maxRows {
		fail(list, "more than %d rows", maxRows)
		return nil, errs
	}
	var rows []row
	for _, n := range list.Content {
		r := yamlRow(path, n, fail)
		for column, value := range defaults {
			if r.value[column] == "" {
				r.value[column] = value
			}
		}
		rows = append(rows, r)
	}
	return rows, errs
}

// yamlRow reads one row.
func yamlRow(path string, n *yaml.Node, fail func(*yaml.Node, string, ...any)) row {
	r := row{path: path, line: n.Line, value: map[string]string{}}
	if n.Kind != yaml.MappingNode {
		fail(n, "expected keys and values such as {name: ethanol, amount: 500 mL}")
		return r
	}
	for i := 0; i+1 < len(n.Content); i += 2 {
		key, val := n.Content[i], n.Content[i+1]
		column := columnName(key.Value)
		switch {
		case val.Kind == yaml.SequenceNode && (column == "hazards" || column == "synonyms"):
			var words []string
			for _, w := range val.Content {
				words = append(words, w.Value)
			}
			r.set(column, strings.Join(words, map[string]string{"hazards": " ", "synonyms": ";"}[column]))
		case val.Kind == yaml.SequenceNode:
			fail(val, "%s: expected a text, found a list; a structure that begins with a bracket needs quotes: put it in single quotes", column)
		case val.Kind != yaml.ScalarNode:
			fail(val, "%s: expected a text: put it in single quotes", column)
		case val.Tag == "!!null":
		case r.value[column] != "":
			fail(key, "the key %q is written twice", column)
		default:
			r.set(column, strings.TrimSpace(val.Value))
		}
	}
	return r
}
