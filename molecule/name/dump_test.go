package name

import (
	"bufio"
	"fmt"
	"os"
	"strings"
	"testing"

	"shelfward/molecule/smiles"
)

// TestDump writes the names of the structures in the file SHELFWARD_NAMES, one SMILES a line, to the
// file of the same name with .out behind it, for the comparison in testdata/names.
func TestDump(t *testing.T) {
	path := os.Getenv("SHELFWARD_NAMES")
	if path == "" {
		t.Skip("SHELFWARD_NAMES names no file")
	}
	in, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer in.Close()
	out, err := os.Create(path + ".out")
	if err != nil {
		t.Fatal(err)
	}
	defer out.Close()
	scan := bufio.NewScanner(in)
	for scan.Scan() {
		fields := strings.Fields(scan.Text())
		if len(fields) == 0 {
			continue
		}
		name := ""
		if m, err := smiles.Read(fields[0]); err == nil {
			name = Of(m)
			if os.Getenv("SHELFWARD_STEREO") != "" {
				n, complete := OfWithStereo(m)
				if name = n; !complete {
					name = ""
				}
			}
			if name == "" && os.Getenv("SHELFWARD_UNREAD") != "" && nameable(m) {
				if n := written(m); n != "" {
					r, err := Read(n)
					why := "read as another"
					if err != nil {
						why = err.Error()
					} else {
						why += " " + smiles.Write(r)
					}
					fmt.Fprintf(os.Stderr, "%s | %s | %s\n", fields[0], n, why)
				}
			}
		}
		fmt.Fprintf(out, "%s\t%s\n", fields[0], name)
	}
}
