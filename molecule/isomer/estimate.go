package isomer

import (
	"context"
	"math"
	"math/rand/v2"
	"sync/atomic"
)

// probe descends at random: at each prefix it keeps one of the surviving ways to write the next row.
type probe struct {
	collector
	rand  *rand.Rand
	found int    // ways to write the row
	kept  search // one of them, each with the same chance
	leafs int    // structures found at the end of the descent
}

func (p *probe) node(s *search, depth int) verdict {
	if len(p.problem.Lacks) > 0 && p.work.banned(s, depth) {
		return skip
	}
	p.found++
	if p.rand.IntN(p.found) == 0 {
		p.kept = *s
	}
	return skip
}

func (p *probe) leaf(s *search) bool {
	if p.work.finish(s) != nil {
		p.leafs++
	}
	return true
}

// once makes one descent into plan pl and returns its estimate of the number of structures.
func (p *probe) once(pl *plan) float64 {
	var s search
	s.start(pl, p)
	size := 1.0
	for depth := 0; depth < pl.units; depth++ {
		p.found = 0
		s.visit(depth)
		if p.found == 0 {
			return 0
		}
		size *= float64(p.found)
		s = p.kept
	}
	p.leafs = 0
	s.visit(pl.units)
	return size * float64(p.leafs)
}

func estimate(ctx context.Context, pr Problem, probes int, seed uint64) (Size, error) {
	bare := pr
	bare.Accept = nil
	c, err := compile(bare)
	if err != nil {
		return Size{}, err
	}
	var halt atomic.Bool
	p := &probe{collector: collector{ctx: ctx, halt: &halt, problem: c}, rand: rand.New(rand.NewPCG(seed, 1))}
	var plans []*plan
	c.plans(func(pl *plan) bool {
		plans = append(plans, pl)
		return ctx.Err() == nil
	})
	var size Size
	if len(plans) == 0 {
		return size, ctx.Err()
	}
	var variance float64
	each := max(2, probes/len(plans))
	for _, pl := range plans {
		var sum, squares float64
		n := 0
		for ; n < each && ctx.Err() == nil; n++ {
			x := p.once(pl)
			sum += x
			squares += x * x
		}
		if n == 0 {
			return size, ctx.Err()
		}
		size.Probes += n
		size.Structures += sum / float64(n)
		variance += (squares/float64(n) - sum*sum/float64(n*n)) / float64(n)
	}
	size.Error = math.Sqrt(max(variance, 0))
	return size, ctx.Err()
}
