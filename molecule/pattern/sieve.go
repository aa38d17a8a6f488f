package pattern

// Sieve holds what many queries ask of a molecule side by side in memory, so that those that cannot occur
// in it are passed over without being looked at: of hundreds of patterns a molecule has room for dozens.
// It is immutable and safe to share.
type Sieve struct {
	asks []features
}

// NewSieve makes a sieve of queries, which must not change any more.
func NewSieve(queries []*Query) *Sieve {
	v := &Sieve{asks: make([]features, len(queries))}
	for i, q := range queries {
		v.asks[i] = q.screened().features
	}
	return v
}

// Next returns the first query from place from on that s may have, -1 if there is none.
func (v *Sieve) Next(s *Subject, from int) int {
	for i := from; i < len(v.asks); i++ {
		if v.asks[i].within(&s.features) {
			return i
		}
	}
	return -1
}
