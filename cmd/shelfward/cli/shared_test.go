package cli

import (
	"io"
	"io/fs"
	"os"
	"path/filepath"
	"strings"
	"sync"

	"shelfward/planner"
	"shelfward/reactions"
)

// loaded keeps what commands of the tests load from the built-in rules: the book, and the rooms of the
// built-in shelf and of the demonstration. Rooms and books are immutable.
var loaded struct {
	sync.Mutex
	book  *reactions.Book
	rooms map[string]*planner.Room
}

// sharedApp is an App that loads the same things once.
func sharedApp(in io.Reader, out, errOut io.Writer) *App {
	app := &App{In: in, Out: out, ErrOut: errOut}
	app.loadBook = func(files fs.FS) (*reactions.Book, error) {
		if len(app.RuleDirs) > 0 {
			return reactions.Load(files)
		}
		loaded.Lock()
		defer loaded.Unlock()
		var err error
		if loaded.book == nil {
			loaded.book, err = reactions.Load(files)
		}
		return loaded.book, err
	}
	app.openRoom = func(files fs.FS, shelves []string, dir string) (*planner.Room, error) {
		abs, err := filepath.Abs(dir)
		if err != nil || len(app.RuleDirs) > 0 || len(shelves) > 0 && filepath.Base(abs) != "demo" {
			return planner.Open(files, shelves, dir)
		}
		key := ""
		if len(shelves) > 0 {
			key = strings.Join(append([]string{abs}, shelves...), "|")
		}
		loaded.Lock()
		defer loaded.Unlock()
		if room := loaded.rooms[key]; room != nil {
			return room, nil
		}
		room, err := planner.Open(files, shelves, dir)
		if err == nil {
			if loaded.rooms == nil {
				loaded.rooms = map[string]*planner.Room{}
			}
			loaded.rooms[key] = room
		}
		return room, err
	}
	return app
}

// folder guards the working directory, which belongs to the whole process.
var folder sync.Mutex

// inFolder runs f with another working directory.
func inFolder(dir string, f func() int) int {
	folder.Lock()
	defer folder.Unlock()
	here, err := os.Getwd()
	if err != nil {
		panic(err)
	}
	if err := os.Chdir(dir); err != nil {
		panic(err)
	}
	defer os.Chdir(here)
	return f()
}
