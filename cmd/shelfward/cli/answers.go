package cli

import (
	"bufio"
	"bytes"
	"crypto/sha256"
	"encoding/hex"
	"encoding/json"
	"fmt"
	"io"
	"io/fs"
	"os"
)

// answerFile keeps the answers to a list of targets, one JSON line each, in the order of the list. Every
// line is written at once and is on the disk before the next: whatever ends the program, the file holds
// whole answers and at most one broken line at its end, which the next run cuts off. The lines say
// themselves what they answer, so that no second file can disagree with them.
type answerFile struct {
	path string
	f    *os.File
	size int64 // what this run knows to stand in the file
}

// openAnswers opens the file for the answers to records, made with the options that job marks. What an
// earlier run left is checked against the list and handed to have, in order.
func openAnswers(path, job string, records []targetRecord, have func(*targetAnswer)) (*answerFile, error) {
	f, err := os.OpenFile(path, os.O_RDWR|os.O_CREATE, 0o644)
	if err != nil {
		return nil, usageError("--out %s: cannot write: %v", path, plainReason(err))
	}
	if info, err := f.Stat(); err != nil || !info.Mode().IsRegular() {
		f.Close()
		return nil, usageError("--out %s: expected a file", path)
	}
	a := &answerFile{path: path, f: f}
	if err := a.check(job, records, have); err != nil {
		f.Close()
		return nil, err
	}
	if err := f.Truncate(a.size); err != nil {
		f.Close()
		return nil, err
	}
	return a, nil
}

// check reads the lines that are there and finds where the next one belongs.
func (a *answerFile) check(job string, records []targetRecord, have func(*targetAnswer)) error {
	in := bufio.NewReaderSize(a.f, 1<<20)
	for i := 0; ; i++ {
		line, err := in.ReadBytes('\n')
		if err == io.EOF { // nothing, or a line that was never finished
			if i == 0 && len(line) > 0 && line[0] != '{' {
				return usageError("--out %s: this file holds something else; name another", a.path)
			}
			return nil
		}
		if err != nil {
			return err
		}
		var t targetAnswer
		switch err := json.Unmarshal(line, &t); {
		case err != nil && in.Buffered() == 0 && i > 0:
			return nil // a last line that the disk lost: it is answered again
		case err != nil || t.Job == "":
			return usageError("--out %s: line %d is no answer to a target; name another file", a.path, i+1)
		case t.Job != job:
			return usageError("--out %s: line %d was answered with other options, rules or shelf; name another file, or remove this one", a.path, i+1)
		case i >= len(records):
			return usageError("--out %s: it holds more answers than there are targets; name another file", a.path)
		case t.Record != records[i].number || t.Input != records[i].mark:
			return usageError("--out %s: line %d answers record %d, which is another target now; name another file", a.path, i+1, t.Record)
		}
		a.size += int64(len(line))
		have(&t)
	}
}

// add writes one answer.
func (a *answerFile) add(t *targetAnswer) error {
	line, err := answerLine(t)
	if err != nil {
		return err
	}
	if info, err := a.f.Stat(); err != nil || info.Size() != a.size {
		return fmt.Errorf("%s: another program writes to this file: stopped before anything was mixed up", a.path)
	}
	if n, err := a.f.WriteAt(line, a.size); err != nil {
		_ = a.f.Truncate(a.size)
		return fmt.Errorf("%s: cannot write (%d of %d bytes): %w", a.path, n, len(line), plainReason(err))
	}
	a.size += int64(len(line))
	return a.f.Sync()
}

func (a *answerFile) close() error { return a.f.Close() }

// answerLine is an answer as one line.
func answerLine(t *targetAnswer) ([]byte, error) {
	var line bytes.Buffer
	enc := json.NewEncoder(&line)
	enc.SetEscapeHTML(false)
	err := enc.Encode(t)
	return line.Bytes(), err
}

// markOf is a short mark of texts.
func markOf(texts ...string) string {
	h := sha256.New()
	for _, t := range texts {
		fmt.Fprintf(h, "%d:%s", len(t), t)
	}
	return hex.EncodeToString(h.Sum(nil)[:8])
}

// jobMark marks everything but the targets that answers depend on: the version, the options, the rules
// laid over the built-in ones, the shelf files.
func (app *App) jobMark(f *planFlags) (string, error) {
	texts := []string{Version, fmt.Sprintf("%+v", *f)}
	for _, dir := range app.RuleDirs {
		err := fs.WalkDir(os.DirFS(dir), ".", func(path string, d fs.DirEntry, err error) error {
			if err != nil || d.IsDir() {
				return err
			}
			texts = append(texts, path)
			return addContent(&texts, dir+string(os.PathSeparator)+path)
		})
		if err != nil {
			return "", err
		}
	}
	for _, file := range append(append([]string{}, app.Shelves...), f.bench) {
		texts = append(texts, file)
		if err := addContent(&texts, file); err != nil {
			return "", err
		}
	}
	return markOf(texts...), nil
}

// markedBytes bounds how much of one file is looked at: all of a file written by hand, the head of an
// index, whose counts and keys stand there.
const markedBytes = maxFileBytes

// addContent adds what a file holds; the name of no file adds nothing.
func addContent(texts *[]string, path string) error {
	f, err := os.Open(path)
	if err != nil {
		return nil
	}
	defer f.Close()
	info, err := f.Stat()
	if err != nil || info.IsDir() {
		return err
	}
	h := sha256.New()
	if _, err := io.CopyN(h, f, markedBytes); err != nil && err != io.EOF {
		return err
	}
	*texts = append(*texts, fmt.Sprint(info.Size()), hex.EncodeToString(h.Sum(nil)))
	return nil
}
