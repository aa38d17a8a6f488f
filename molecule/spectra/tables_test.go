package spectra

import "testing"

// TestTables reads every built-in table strictly.
func TestTables(t *testing.T) {
	if err := Check(); err != nil {
		t.Fatal(err)
	}
}
