package cli

import (
	"os"
	"path/filepath"
	"regexp"
	"slices"
	"strings"

	"shelfward/rules"
)

// takeFolders lays the arguments that are folders over the rules and returns the others.
func (app *App) takeFolders(args []string) (ids []string) {
	for _, arg := range args {
		if info, err := os.Stat(arg); err == nil && info.IsDir() {
			app.RuleDirs = append(app.RuleDirs, filepath.Clean(arg))
			continue
		}
		ids = append(ids, arg)
	}
	return ids
}

// blanks finds the places of the user's rule files that still say FILL, as `rules new` wrote them.
func (app *App) blanks() (rules.ErrorList, error) {
	var list rules.ErrorList
	for _, dir := range app.RuleDirs {
		err := filepath.WalkDir(dir, func(path string, d os.DirEntry, err error) error {
			if err != nil || d.IsDir() || !slices.Contains([]string{".yaml", ".yml"}, filepath.Ext(path)) {
				return err
			}
			data, err := os.ReadFile(path)
			if err != nil {
				return usageError("%s: cannot read: %v", path, plainReason(err))
			}
			list = append(list, blanksOf(filepath.ToSlash(path), string(data))...)
			return nil
		})
		if err != nil {
			return nil, err
		}
	}
	return list, nil
}

// blankKey finds the key whose value begins with FILL.
var blankKey = regexp.MustCompile(`([a-z_]+): *[\['"{]*$`)

// blanksOf names the unfilled places of one file, each line once, with the hint that stands behind it.
func blanksOf(path, text string) rules.ErrorList {
	var list rules.ErrorList
	for i, line := range strings.Split(text, "\n") {
		body, hint, _ := strings.Cut(line, " #")
		at := strings.Index(body, "FILL")
		if at < 0 || strings.HasPrefix(strings.TrimSpace(body), "#") {
			continue
		}
		what := "FILL stands for something still to be written"
		if key := blankKey.FindStringSubmatch(body[:at]); key != nil {
			what = key[1] + " is still to be filled in"
		}
		if hint = strings.TrimSpace(hint); hint != "" {
			what += ": " + hint
		}
		list = append(list, &rules.Error{Path: path, Line: i + 1, Column: at + 1, Text: what})
	}
	return list
}

// checkLines prints the mistakes of loading by place; where a line is still blank, that alone is said of it.
func checkLines(mistakes, blanks rules.ErrorList) []string {
	type place struct {
		path string
		line int
	}
	blank := map[place]bool{}
	for _, e := range blanks {
		blank[place{e.Path, e.Line}] = true
	}
	all := slices.Clone(blanks)
	for _, e := range mistakes {
		if !blank[place{e.Path, e.Line}] {
			all = append(all, e)
		}
	}
	all.Err() // sorts by place
	lines := make([]string, len(all))
	for i, e := range all {
		lines[i] = e.Error()
		if e.Detail != "" {
			lines[i] += "\n" + e.Detail
		}
	}
	return lines
}
