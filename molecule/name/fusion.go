package name

// nameFusion names two ortho-fused rings by fusion nomenclature (P-25.2); false if it does not know how.
func (w *writer) nameFusion(s *ringSystem) bool { return false }

// fusedAt reads a fusion name at the beginning of s.
func fusedAt(s string) (*skeleton, int) { return nil, 0 }
