package isomer

import (
	"context"

	"shelfward/molecule"
)

func pieceOf(name string, m *molecule.Molecule) (Piece, error) { panic("being written") }

func enumerate(ctx context.Context, p Problem, opt Options, yield func(s *Structure) bool) (Result, error) {
	panic("being written")
}

func estimate(ctx context.Context, p Problem, probes int, seed uint64) (Size, error) {
	panic("being written")
}
