// Package rules holds the chemistry of the program as YAML data, and what every reader of such data
// needs: the embedded files, user folders laid over them, and strict decoding that answers a mistake
// with its file, its line and the key that was probably meant.
//
// A loader of one kind of data declares Go structs with yaml tags and calls ReadInto:
//
//	type group struct {
//		rules.Place            // filled with the file, line and column of the entry
//		ID      rules.Text     `yaml:"id" need:"id: ester"`
//		Pattern rules.Text     `yaml:"pattern" need:"pattern: 'C(=O)O[CH3]'"`
//		Weight  float64        `yaml:"weight"`
//	}
//	var file struct{ Groups []group `yaml:"groups"` }
//	err := rules.ReadInto(rules.Files(), "groups.yaml", &file)
//
// Later mistakes, found when a pattern is parsed or an id is looked up, are reported at their place
// with Text.Errorf or Place.Errorf and collected in an ErrorList.
//
// The package does not interpret chemistry; it never reads a structure.
package rules

import (
	"embed"
	"errors"
	"fmt"
	"io/fs"
	"os"
	"path"
	"path/filepath"
	"slices"
	"strings"
)

//go:embed *.yaml shifts transforms preferences
var embedded embed.FS

// builtinPrefix stands before the name of an embedded file in messages.
const builtinPrefix = "rules/"

// TransformFolder is the folder of the transforms, one file each, inside a rules file system.
const TransformFolder = "transforms"

// addOnly names the files whose built-in entries a user's folder may add to but never replace: the
// screen for restricted work and the hazard data. Loaders read all layers of these with Layers.
var addOnly = []string{"restricted.yaml", "watched.yaml", "ghs.yaml", "incompatible.yaml", "cautions.yaml", "acts.yaml"}

// Files returns the embedded rules: "reagents.yaml", "transforms/aldol.yaml" and so on. Safe for
// concurrent use.
func Files() fs.FS { return &layered{layers: []layer{builtin}} }

// builtin is the lowest layer.
var builtin = layer{fsys: embedded, prefix: builtinPrefix}

// layer is one source of rule files and what stands before a file's name in messages.
type layer struct {
	fsys   fs.FS
	prefix string
	loose  bool // files beside the transforms folder that are no known data file count as transforms
}

// layered is a file system of several layers, the last one on top.
type layered struct{ layers []layer }

// Overlay returns the embedded rules with user folders laid over them, the last folder on top. A
// folder may hold the same tree as the built-in rules; a YAML file straight in it whose name is not
// that of a built-in data file counts as a transform. A user's transform replaces the built-in one
// of the same file name. Files that protect people (restricted.yaml, ghs.yaml and their like) are
// never replaced: the user's version adds to the built-in one, see Layers. It fails when a folder
// cannot be read.
func Overlay(dirs ...string) (fs.FS, error) {
	l := &layered{layers: []layer{builtin}}
	for _, dir := range dirs {
		info, err := os.Stat(dir)
		if err != nil {
			var pathErr *fs.PathError
			if errors.As(err, &pathErr) {
				err = pathErr.Err
			}
			return nil, fmt.Errorf("%s: cannot read this rules folder: %v", dir, err)
		}
		if !info.IsDir() {
			return nil, fmt.Errorf("%s: expected a folder of rule files, found a file", dir)
		}
		prefix := strings.TrimSuffix(filepath.ToSlash(dir), "/") + "/"
		l.layers = append(l.layers, layer{fsys: os.DirFS(dir), prefix: prefix, loose: true})
	}
	return l, nil
}

// inside translates a name of the whole file system to the name inside the layer.
func (l layer) inside(name string) (string, bool) {
	if _, err := fs.Stat(l.fsys, name); err == nil {
		return name, true
	}
	if dir, base := path.Split(name); l.loose && dir == TransformFolder+"/" && isLooseTransform(base) {
		if _, err := fs.Stat(l.fsys, base); err == nil {
			return base, true
		}
	}
	return "", false
}

// isLooseTransform reports whether a file straight in a user's folder counts as a transform.
func isLooseTransform(base string) bool {
	if !isYAML(base) {
		return false
	}
	_, err := fs.Stat(embedded, base)
	return err != nil
}

func isYAML(name string) bool {
	return strings.HasSuffix(name, ".yaml") || strings.HasSuffix(name, ".yml")
}

// top returns the layer that answers for name, and the name inside it.
func (l *layered) top(name string) (layer, string, bool) {
	if slices.Contains(addOnly, name) {
		inner, ok := l.layers[0].inside(name)
		return l.layers[0], inner, ok
	}
	for i := len(l.layers) - 1; i >= 0; i-- {
		if inner, ok := l.layers[i].inside(name); ok {
			return l.layers[i], inner, true
		}
	}
	return layer{}, "", false
}

// Open opens the topmost version of a file. Folders are listed with ReadDir.
func (l *layered) Open(name string) (fs.File, error) {
	if !fs.ValidPath(name) {
		return nil, &fs.PathError{Op: "open", Path: name, Err: fs.ErrInvalid}
	}
	if lay, inner, ok := l.top(name); ok {
		return lay.fsys.Open(inner)
	}
	return nil, &fs.PathError{Op: "open", Path: name, Err: fs.ErrNotExist}
}

// ReadDir lists the files of all layers in a folder, by name, each once.
func (l *layered) ReadDir(name string) ([]fs.DirEntry, error) {
	var all []fs.DirEntry
	found := false
	add := func(entries []fs.DirEntry, keep func(string) bool) {
		for _, e := range entries {
			same := func(o fs.DirEntry) bool { return o.Name() == e.Name() }
			if keep(e.Name()) && !slices.ContainsFunc(all, same) {
				all = append(all, e)
			}
		}
	}
	for i := len(l.layers) - 1; i >= 0; i-- {
		lay := l.layers[i]
		if entries, err := fs.ReadDir(lay.fsys, name); err == nil {
			found = true
			add(entries, func(base string) bool { return !lay.loose || name != "." || !isLooseTransform(base) })
		}
		if lay.loose && name == TransformFolder {
			entries, _ := fs.ReadDir(lay.fsys, ".")
			add(entries, isLooseTransform)
			found = true
		}
	}
	if !found {
		return nil, &fs.PathError{Op: "readdir", Path: name, Err: fs.ErrNotExist}
	}
	slices.SortFunc(all, func(a, b fs.DirEntry) int { return strings.Compare(a.Name(), b.Name()) })
	return all, nil
}

// PathOf returns the name of a rule file as messages should print it: "rules/groups.yaml" for a
// built-in file, the path on disk for a user's.
func PathOf(fsys fs.FS, name string) string {
	if l, ok := fsys.(*layered); ok {
		if lay, inner, ok := l.top(name); ok {
			return lay.prefix + inner
		}
	}
	return builtinPrefix + name
}

// IsBuiltin reports whether the file that answers for name is one of the program's own.
func IsBuiltin(fsys fs.FS, name string) bool {
	l, ok := fsys.(*layered)
	if !ok {
		return false
	}
	lay, _, found := l.top(name)
	return found && !lay.loose
}

// File is one version of a rule file: the name that messages print, and its text.
type File struct {
	Path string
	Data []byte
}

// Layers returns every layer's version of a file, the built-in one first. Loaders of files that
// users may only add to read them all. A file that no layer has gives an empty list.
func Layers(fsys fs.FS, name string) ([]File, error) {
	l, ok := fsys.(*layered)
	if !ok {
		l = &layered{layers: []layer{{fsys: fsys, prefix: builtinPrefix}}}
	}
	var files []File
	for _, lay := range l.layers {
		if _, err := fs.Stat(lay.fsys, name); err != nil {
			continue
		}
		data, err := fs.ReadFile(lay.fsys, name)
		if err != nil {
			return nil, fmt.Errorf("%s%s: cannot read: %v", lay.prefix, name, err)
		}
		files = append(files, File{Path: lay.prefix + name, Data: data})
	}
	return files, nil
}

// ReadInto reads the topmost version of a file and decodes it strictly into out, see Decode.
func ReadInto(fsys fs.FS, name string, out any) error {
	data, err := fs.ReadFile(fsys, name)
	if err != nil {
		return fmt.Errorf("%s: cannot read: %v", PathOf(fsys, name), err)
	}
	return Decode(PathOf(fsys, name), data, out)
}
