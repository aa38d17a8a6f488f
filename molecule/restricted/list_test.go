package restricted

import (
	"bufio"
	"fmt"
	"os"
	"strings"
	"testing"

	"shelfward/molecule/smiles"
)

// TestPrintKeys is the maintainer's way from an official list to opaque keys: set SHELFWARD_LIST to a
// file of lines 'class SMILES' that stays outside the repository, and paste what is printed.
func TestPrintKeys(t *testing.T) {
	path := os.Getenv("SHELFWARD_LIST")
	if path == "" {
		t.Skip("SHELFWARD_LIST is not set")
	}
	f, err := os.Open(path)
	if err != nil {
		t.Fatal(err)
	}
	defer f.Close()
	for sc := bufio.NewScanner(f); sc.Scan(); {
		fields := strings.Fields(sc.Text())
		if len(fields) < 2 || strings.HasPrefix(fields[0], "#") {
			continue
		}
		m, err := smiles.Read(fields[1])
		if err != nil {
			t.Errorf("%s: %v", sc.Text(), err)
			continue
		}
		for _, part := range plain(m) {
			if part.NumAtoms() > 1 {
				fmt.Println(fields[0], Key(part))
			}
		}
	}
}
