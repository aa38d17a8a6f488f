package rules

import (
	"reflect"
	"strings"
)

// field is one key of a struct.
type field struct {
	key   string
	index []int  // for reflect.Value.FieldByIndex
	need  string // what to write when it is missing; empty for an optional key
}

type fieldList []field

// fieldsOf lists the keys of a struct type in the order of its fields, inlined structs included.
func fieldsOf(t reflect.Type) fieldList {
	var list fieldList
	for i := range t.NumField() {
		f := t.Field(i)
		name, options, _ := strings.Cut(f.Tag.Get("yaml"), ",")
		switch {
		case name == "-" || f.Type == placeType:
		case f.Type.Kind() == reflect.Struct && (options == "inline" || f.Anonymous && name == ""):
			for _, inner := range fieldsOf(f.Type) {
				inner.index = append([]int{i}, inner.index...)
				list = append(list, inner)
			}
		case f.IsExported():
			if name == "" {
				name = strings.ToLower(f.Name)
			}
			list = append(list, field{key: name, index: []int{i}, need: f.Tag.Get("need")})
		}
	}
	return list
}

func (l fieldList) find(key string) (field, bool) {
	for _, f := range l {
		if f.key == key {
			return f, true
		}
	}
	return field{}, false
}

func (l fieldList) keys() []string {
	keys := make([]string, len(l))
	for i, f := range l {
		keys[i] = f.key
	}
	return keys
}

// firstKeys names a few keys, as a hint to what is meant.
func firstKeys(l fieldList) []string {
	keys := l.keys()
	if len(keys) > 4 {
		keys = append(keys[:4:4], "...")
	}
	return keys
}
