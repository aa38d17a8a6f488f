package isomer

import (
	"context"
	"fmt"
	"sync"
	"sync/atomic"
)

// patience is the number of search nodes between two looks at the clock.
const patience = 256

// collector turns finished codes into structures and hands them on.
type collector struct {
	ctx     context.Context
	halt    *atomic.Bool // set when nobody wants more
	problem *compiled
	give    func(s *Structure) bool
	nodes   int
	work    workspace

	splitDepth int // depth at which prefixes become jobs; 0: never
	split      func(s *search, depth int) bool
}

func (c *collector) node(s *search, depth int) verdict {
	c.nodes++
	if c.nodes%patience == 0 && c.over() {
		return stop
	}
	if len(c.problem.Lacks) > 0 && c.work.banned(s, depth) {
		return skip
	}
	if c.splitDepth > 0 && depth == min(c.splitDepth, s.plan.units) {
		if !c.split(s, depth) {
			return stop
		}
		return skip
	}
	return descend
}

// over reports whether the search is to end.
func (c *collector) over() bool {
	if c.ctx.Err() != nil {
		c.halt.Store(true)
	}
	return c.halt.Load()
}

func (c *collector) leaf(s *search) bool {
	st := c.work.finish(s)
	if st == nil || c.problem.Accept != nil && !c.problem.Accept(st) {
		return true
	}
	return c.give(st)
}

func enumerate(ctx context.Context, p Problem, opt Options, yield func(s *Structure) bool) (Result, error) {
	c, err := compile(p)
	if err != nil {
		return Result{}, err
	}
	var result Result
	var halt atomic.Bool
	take := func(s *Structure) bool {
		if opt.MaxStructures > 0 && result.Generated == opt.MaxStructures {
			result.Stopped = fmt.Sprintf("the limit of %d structures was reached", opt.MaxStructures)
			return false
		}
		result.Generated++
		if yield != nil && !yield(s) {
			result.Stopped = "the caller wanted no more"
			return false
		}
		return true
	}
	if opt.Workers > 1 {
		parallel(ctx, c, opt.Workers, &halt, take)
	} else {
		out := &collector{ctx: ctx, halt: &halt, problem: c, give: take}
		var s search
		c.plans(func(p *plan) bool {
			if ctx.Err() != nil {
				return false
			}
			s.start(p, out)
			return s.visit(0)
		})
	}
	if ctx.Err() != nil && result.Stopped == "" {
		result.Stopped = "the time ran out"
	}
	if c.overflow && result.Stopped == "" {
		result.Stopped = fmt.Sprintf("structures of more than %d atoms (those of groups like nitro counted once) are not built", maxUnits)
	}
	result.Complete = result.Stopped == ""
	return result, nil
}

// chunk holds structures on their way from a worker, packed.
type chunk struct {
	atoms []Atom
	bonds []Bond
	ends  []chunkEnd
}

type chunkEnd struct {
	atoms, bonds int
	score        float64
}

const chunkSize = 256

func (k *chunk) add(s *Structure) {
	k.atoms, k.bonds = append(k.atoms, s.Atoms...), append(k.bonds, s.Bonds...)
	k.ends = append(k.ends, chunkEnd{len(k.atoms), len(k.bonds), s.Score})
}

// job is a prefix of codes; its structures arrive in order on out.
type job struct {
	search search
	depth  int
	out    chan *chunk
}

// splitRows is the number of rows that make a job.
const splitRows = 4

// parallel runs the prefixes of splitRows rows as jobs and hands their structures over in the order
// of the jobs. A worker that is ahead waits when its job's channel is full, so memory stays flat;
// jobs are taken in order, so the job that is waited for is always at work.
func parallel(ctx context.Context, c *compiled, workers int, halt *atomic.Bool, take func(*Structure) bool) {
	queue, order := make(chan *job), make(chan *job, 4*workers)
	go func() {
		defer close(queue)
		defer close(order)
		out := &collector{ctx: ctx, halt: halt, problem: c, splitDepth: splitRows}
		out.split = func(s *search, depth int) bool {
			if out.over() {
				return false
			}
			j := &job{search: *s, depth: depth, out: make(chan *chunk, 8)}
			order <- j
			queue <- j
			return true
		}
		var s search
		c.plans(func(p *plan) bool {
			if ctx.Err() != nil {
				return false
			}
			s.start(p, out)
			return s.visit(0)
		})
	}()
	var wait sync.WaitGroup
	for range workers {
		wait.Add(1)
		go func() {
			defer wait.Done()
			for j := range queue {
				j.run(ctx, c, halt)
			}
		}()
	}
	wanted := true
	for j := range order {
		for k := range j.out {
			wanted = wanted && k.each(take)
			if !wanted {
				halt.Store(true)
			}
		}
	}
	wait.Wait()
}

// run searches the job's branch.
func (j *job) run(ctx context.Context, c *compiled, halt *atomic.Bool) {
	defer close(j.out)
	k := &chunk{}
	out := &collector{ctx: ctx, halt: halt, problem: c}
	if out.over() {
		return
	}
	out.give = func(s *Structure) bool {
		k.add(s)
		if len(k.ends) == chunkSize {
			j.out <- k
			k = &chunk{}
		}
		return !halt.Load()
	}
	j.search.out, j.search.spare = out, new([maxUnits]tour)
	j.search.visit(j.depth)
	if len(k.ends) > 0 {
		j.out <- k
	}
}

// each hands the structures of k to take until it returns false.
func (k *chunk) each(take func(*Structure) bool) bool {
	a, b := 0, 0
	for _, e := range k.ends {
		if !take(&Structure{Atoms: k.atoms[a:e.atoms], Bonds: k.bonds[b:e.bonds], Score: e.score}) {
			return false
		}
		a, b = e.atoms, e.bonds
	}
	return true
}
