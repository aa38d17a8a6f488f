package rules

import (
	"bytes"
	"errors"
	"fmt"
	"io"
	"reflect"
	"regexp"
	"strconv"
	"strings"

	"gopkg.in/yaml.v3"
)

// Decode reads one YAML document strictly into out, a pointer to a struct, map or slice. path is the
// file's name in messages.
//
// Struct fields are matched by their yaml tag (`yaml:"name"`; without a tag, the field's name in
// lower case; "-" leaves a field out; ",inline" or embedding merges a struct's keys). A tag
// `need:"key: example"` makes a key required; the example is what the message tells the user to
// write. A field of type Place is filled with the place of the mapping.
//
// Types that implement yaml.Unmarshaler (Text among them) read their own node; their error is
// reported at the node. Wrap with it what has two spellings, such as a number or a range.
//
// Unknown keys, keys written twice, missing needed keys and wrong kinds are errors. They are all
// collected: Decode returns an ErrorList sorted by place, or nil. Aliases and merge keys are not
// accepted: they hide what a line means. An empty document leaves out untouched.
func Decode(path string, data []byte, out any) error {
	v := reflect.ValueOf(out)
	if v.Kind() != reflect.Pointer || v.IsNil() {
		panic("rules: Decode needs a pointer to fill")
	}
	d := &decoder{path: path}
	root, err := document(path, data)
	if err != nil {
		return ErrorList{err}
	}
	if root == nil {
		return nil
	}
	d.value(root, v.Elem())
	return d.errs.Err()
}

// document parses the text and returns the root node, nil for an empty document.
func document(path string, data []byte) (*yaml.Node, *Error) {
	dec := yaml.NewDecoder(bytes.NewReader(data))
	var doc yaml.Node
	if err := dec.Decode(&doc); errors.Is(err, io.EOF) {
		return nil, nil
	} else if err != nil {
		return nil, syntaxError(path, err)
	}
	var second yaml.Node
	if err := dec.Decode(&second); err == nil {
		return nil, &Error{Path: path, Line: second.Line, Text: "a second document begins here; a file holds one"}
	} else if !errors.Is(err, io.EOF) {
		return nil, syntaxError(path, err)
	}
	if len(doc.Content) == 0 {
		return nil, nil
	}
	return doc.Content[0], nil
}

var yamlLine = regexp.MustCompile(`^yaml: (?:line (\d+): )?(.*)$`)

// syntaxError turns the YAML library's message into ours. The usual cause in our files is a SMILES
// or pattern that begins with a bracket and stands without quotes.
func syntaxError(path string, err error) *Error {
	e := &Error{Path: path, Text: err.Error()}
	if m := yamlLine.FindStringSubmatch(err.Error()); m != nil {
		e.Line, _ = strconv.Atoi(m[1])
		e.Text = "not valid YAML: " + m[2] + " (a structure or a text with brackets, # or ': ' belongs in single quotes)"
	}
	return e
}

// decoder holds the file's name and the mistakes found so far.
type decoder struct {
	path string
	errs ErrorList
}

func (d *decoder) errorf(n *yaml.Node, format string, args ...any) {
	d.errs = append(d.errs, &Error{Path: d.path, Line: n.Line, Column: n.Column, Text: fmt.Sprintf(format, args...)})
}

var (
	unmarshalerType = reflect.TypeFor[yaml.Unmarshaler]()
	placeType       = reflect.TypeFor[Place]()
	nodeType        = reflect.TypeFor[yaml.Node]()
)

// value fills v from n.
func (d *decoder) value(n *yaml.Node, v reflect.Value) {
	if n.Kind == yaml.AliasNode {
		d.errorf(n, "an alias (*%s) is not accepted here: write the value out", n.Value)
		return
	}
	if v.Type() == nodeType {
		v.Set(reflect.ValueOf(*n))
		return
	}
	if v.CanAddr() && v.Addr().Type().Implements(unmarshalerType) {
		d.unmarshal(n, v.Addr().Interface().(yaml.Unmarshaler))
		return
	}
	switch v.Kind() {
	case reflect.Pointer:
		if n.Tag == "!!null" {
			return
		}
		v.Set(reflect.New(v.Type().Elem()))
		d.value(n, v.Elem())
	case reflect.Struct:
		d.structure(n, v)
	case reflect.Map:
		d.mapping(n, v)
	case reflect.Slice:
		d.slice(n, v)
	case reflect.Array:
		d.array(n, v)
	case reflect.Interface:
		d.anything(n, v)
	default:
		d.scalar(n, v)
	}
}

// unmarshal lets the type read its own node. Errors that already have a place keep it.
func (d *decoder) unmarshal(n *yaml.Node, u yaml.Unmarshaler) {
	err := u.UnmarshalYAML(n)
	var list ErrorList
	var one *Error
	switch {
	case err == nil:
	case errors.As(err, &list):
		for _, e := range list {
			d.atPath(e)
		}
	case errors.As(err, &one):
		d.atPath(one)
	default:
		d.errorf(n, "%s", strings.TrimPrefix(err.Error(), "yaml: "))
	}
}

func (d *decoder) atPath(e *Error) {
	if e.Path == "" {
		e.Path = d.path
	}
	d.errs = append(d.errs, e)
}

// DecodeNode decodes a node strictly into out with the rules of Decode; for UnmarshalYAML methods
// that accept more than one kind of node. Places in the errors lack the path, which Decode adds.
func DecodeNode(n *yaml.Node, out any) error {
	d := &decoder{}
	d.value(n, reflect.ValueOf(out).Elem())
	return d.errs.Err()
}

// structure fills a struct from a mapping.
func (d *decoder) structure(n *yaml.Node, v reflect.Value) {
	fields := fieldsOf(v.Type())
	d.setPlace(n, v)
	if n.Kind != yaml.MappingNode {
		d.errorf(n, "expected keys and values (%s), found %s", strings.Join(firstKeys(fields), ", "), describe(n))
		return
	}
	seen := map[string]int{}
	for i := 0; i+1 < len(n.Content); i += 2 {
		key, val := n.Content[i], n.Content[i+1]
		f, ok := fields.find(key.Value)
		if !ok {
			d.unknownKey(key, fields)
			continue
		}
		if !d.firstTime(key, seen) {
			continue
		}
		d.value(val, v.FieldByIndex(f.index))
	}
	for _, f := range fields {
		if _, ok := seen[f.key]; f.need != "" && !ok {
			d.errorf(n, "the key %q is missing: write %s", f.key, f.need)
		}
	}
}

// firstTime reports whether key is new in its mapping and records the error if it is not.
func (d *decoder) firstTime(key *yaml.Node, seen map[string]int) bool {
	if line, twice := seen[key.Value]; twice {
		d.errorf(key, "the key %q is written twice (first on line %d)", key.Value, line)
		return false
	}
	seen[key.Value] = key.Line
	return true
}

func (d *decoder) unknownKey(key *yaml.Node, fields fieldList) {
	if key.Value == "<<" {
		d.errorf(key, "merge keys (<<) are not accepted: write the keys out")
		return
	}
	if near := Near(key.Value, fields.keys()); near != "" {
		d.errorf(key, "unknown key %q (did you mean %q?)", key.Value, near)
		return
	}
	d.errorf(key, "unknown key %q (known here: %s)", key.Value, strings.Join(fields.keys(), ", "))
}

// setPlace fills the struct's Place field, if it has one.
func (d *decoder) setPlace(n *yaml.Node, v reflect.Value) {
	for i := range v.NumField() {
		if v.Type().Field(i).Type == placeType && v.Field(i).CanSet() {
			v.Field(i).Set(reflect.ValueOf(Place{Path: d.path, Line: n.Line, Column: n.Column}))
			return
		}
	}
}

// mapping fills a map with string or number keys.
func (d *decoder) mapping(n *yaml.Node, v reflect.Value) {
	if n.Tag == "!!null" {
		return
	}
	if n.Kind != yaml.MappingNode {
		d.errorf(n, "expected keys and values, found %s", describe(n))
		return
	}
	v.Set(reflect.MakeMap(v.Type()))
	seen := map[string]int{}
	for i := 0; i+1 < len(n.Content); i += 2 {
		key, val := n.Content[i], n.Content[i+1]
		if !d.firstTime(key, seen) {
			continue
		}
		k := reflect.New(v.Type().Key()).Elem()
		if k.Kind() == reflect.String {
			k.SetString(key.Value)
		} else {
			d.value(key, k)
		}
		e := reflect.New(v.Type().Elem()).Elem()
		d.value(val, e)
		v.SetMapIndex(k, e)
	}
}

// slice fills a slice from a list.
func (d *decoder) slice(n *yaml.Node, v reflect.Value) {
	if n.Tag == "!!null" {
		return
	}
	if n.Kind != yaml.SequenceNode {
		d.errorf(n, "expected a list, found %s: write [%s]", describe(n), listHint(n))
		return
	}
	v.Set(reflect.MakeSlice(v.Type(), len(n.Content), len(n.Content)))
	for i, item := range n.Content {
		d.value(item, v.Index(i))
	}
}

// array fills an array; the list must have its length.
func (d *decoder) array(n *yaml.Node, v reflect.Value) {
	if n.Kind != yaml.SequenceNode || len(n.Content) != v.Len() {
		d.errorf(n, "expected a list of %d, found %s", v.Len(), describe(n))
		return
	}
	for i, item := range n.Content {
		d.value(item, v.Index(i))
	}
}

func listHint(n *yaml.Node) string {
	if n.Kind == yaml.ScalarNode {
		return n.Value
	}
	return "..."
}

// anything leaves the reading to the YAML library; for fields of type any.
func (d *decoder) anything(n *yaml.Node, v reflect.Value) {
	var x any
	if err := n.Decode(&x); err != nil {
		d.errorf(n, "%s", strings.TrimPrefix(err.Error(), "yaml: "))
		return
	}
	if x != nil {
		v.Set(reflect.ValueOf(x))
	}
}

// describe names the kind of a node for a person.
func describe(n *yaml.Node) string {
	switch n.Kind {
	case yaml.SequenceNode:
		return fmt.Sprintf("a list of %d", len(n.Content))
	case yaml.MappingNode:
		return "keys and values"
	}
	switch n.Tag {
	case "!!null":
		return "nothing"
	case "!!int", "!!float":
		return "the number " + n.Value
	case "!!bool":
		return "the word " + n.Value
	}
	return "the text " + strconv.Quote(shorten(n.Value))
}

// shorten keeps messages to one line.
func shorten(s string) string {
	if r := []rune(s); len(r) > 40 {
		return string(r[:37]) + "..."
	}
	return s
}
