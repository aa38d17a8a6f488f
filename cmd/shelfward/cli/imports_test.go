package cli

import (
	"go/parser"
	"go/token"
	"io/fs"
	"os"
	"path"
	"path/filepath"
	"regexp"
	"slices"
	"strings"
	"testing"
)

const module = "shelfward/"

// allowedImports reads the block ```imports of DEVELOPERS.md: package -> what it may import, and the
// packages in the order of the text.
func allowedImports(t *testing.T) (allowed map[string][]string, order []string) {
	t.Helper()
	data, err := os.ReadFile(root + "/DEVELOPERS.md")
	if err != nil {
		t.Fatal(err)
	}
	_, rest, found := strings.Cut(string(data), "```imports\n")
	block, _, closed := strings.Cut(rest, "```")
	if !found || !closed {
		t.Fatal("DEVELOPERS.md has no block ```imports")
	}
	allowed = map[string][]string{}
	for _, line := range strings.Split(strings.TrimSpace(block), "\n") {
		pkg, list, ok := strings.Cut(line, ":")
		if !ok || allowed[pkg] != nil {
			t.Fatalf("DEVELOPERS.md: line %q: one package and a colon were expected", line)
		}
		allowed[pkg] = append([]string{}, strings.Fields(list)...)
		order = append(order, pkg)
	}
	return allowed, order
}

// imports parses the tree: package folder -> imports of its files, tests left out, the standard
// library left out, our own without the module's name.
func imports(t *testing.T) map[string][]string {
	t.Helper()
	found := map[string][]string{}
	err := filepath.WalkDir(root, func(file string, d fs.DirEntry, err error) error {
		if err != nil {
			return err
		}
		if d.IsDir() && (d.Name() == "testdata" || strings.HasPrefix(d.Name(), ".") && file != root) {
			return filepath.SkipDir
		}
		if d.IsDir() || !strings.HasSuffix(file, ".go") || strings.HasSuffix(file, "_test.go") {
			return nil
		}
		parsed, err := parser.ParseFile(token.NewFileSet(), file, nil, parser.ImportsOnly)
		if err != nil {
			return err
		}
		rel, err := filepath.Rel(root, filepath.Dir(file))
		if err != nil {
			return err
		}
		pkg := filepath.ToSlash(rel)
		found[pkg] = append(found[pkg], []string{}...)
		for _, spec := range parsed.Imports {
			name := strings.Trim(spec.Path.Value, `"`)
			if ours, ok := strings.CutPrefix(name, module); ok {
				found[pkg] = append(found[pkg], ours)
			} else if strings.Contains(strings.Split(name, "/")[0], ".") {
				found[pkg] = append(found[pkg], name)
			}
		}
		return nil
	})
	if err != nil {
		t.Fatal(err)
	}
	return found
}

// TestImports: packages import what DEVELOPERS.md allows, and its order is an order: everything allowed
// stands further up.
func TestImports(t *testing.T) {
	allowed, order := allowedImports(t)
	for i, pkg := range order {
		for _, name := range allowed[pkg] {
			if at := slices.Index(order, name); at > i || at < 0 && !strings.Contains(name, ".") {
				t.Errorf("DEVELOPERS.md: %s may import %s, which does not stand above it", pkg, name)
			}
		}
	}
	found := imports(t)
	if len(found) < 20 {
		t.Fatalf("only %d packages were found", len(found))
	}
	for pkg, list := range found {
		may, ok := allowed[pkg]
		if !ok {
			t.Errorf("package %s is missing from the block ```imports of DEVELOPERS.md", pkg)
			continue
		}
		for _, name := range list {
			if !slices.Contains(may, name) {
				t.Errorf("%s imports %s, which DEVELOPERS.md does not allow", pkg, name)
			}
		}
	}
	for _, pkg := range order {
		if _, ok := found[pkg]; !ok {
			t.Errorf("DEVELOPERS.md lists %s, which does not exist", pkg)
		}
	}
}

// TestDevelopersNames: functions, types and files that DEVELOPERS.md names in code marks exist.
func TestDevelopersNames(t *testing.T) {
	data, err := os.ReadFile(root + "/DEVELOPERS.md")
	if err != nil {
		t.Fatal(err)
	}
	text, _, _ := strings.Cut(string(data), "## Packages and what they may import")
	source := allSource(t)
	name := regexp.MustCompile("`((?:[A-Za-z]+\\.)?[A-Za-z]+)`")
	checked := 0
	for _, m := range name.FindAllStringSubmatch(text, -1) {
		last := strings.TrimPrefix(path.Ext("."+m[1]), ".")
		if last == strings.ToLower(last) && !strings.Contains(m[1], ".") && !strings.Contains(source, "func "+last+"(") && !strings.Contains(source, ") "+last+"(") {
			continue // a command, a key, a package
		}
		checked++
		if !regexp.MustCompile(`(func (\([^)]*\) )?|type |\s)` + regexp.QuoteMeta(last) + `[\[( ]`).MatchString(source) {
			t.Errorf("DEVELOPERS.md names %s, which the source does not hold", m[1])
		}
	}
	if checked < 25 {
		t.Errorf("only %d names were checked", checked)
	}
}

func allSource(t *testing.T) string {
	t.Helper()
	var all strings.Builder
	err := filepath.WalkDir(root, func(file string, d fs.DirEntry, err error) error {
		if err != nil || d.IsDir() || !strings.HasSuffix(file, ".go") || strings.HasSuffix(file, "_test.go") {
			return err
		}
		data, err := os.ReadFile(file)
		all.Write(data)
		return err
	})
	if err != nil {
		t.Fatal(err)
	}
	return all.String()
}
