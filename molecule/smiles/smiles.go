// Package smiles reads and writes OpenSMILES.
package smiles

import "shelfward/molecule"

// Read reads one SMILES; errors are *Error and point at the character.
func Read(text string) (*molecule.Molecule, error) { panic("todo") }

// Write returns the canonical SMILES, stereo included.
func Write(m *molecule.Molecule) string { panic("todo") }
