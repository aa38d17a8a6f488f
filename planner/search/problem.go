// Package search finds the k cheapest ways to make a target over a graph of "this is made from
// those" that is opened step by step, and says which of them are proven.
//
// It knows no chemistry: a node is a key, an edge makes one node from several others, a stock says
// which nodes may simply be taken. What is minimised is the cost of the route as a tree: a node used
// twice is paid twice. The limit on the longest run and the items of From that are still owed belong
// to the search state (node, steps left, items owed), so that state graph has no cycle and the k
// cheapest trees are finite in number.
//
// What is promised: the routes come in order of cost, no molecule repeats on its own path, every item
// of From is a leaf whose atoms reach the target, and a route counts as proven only when no unopened
// part of the graph can lead to a cheaper one. The result depends on the input alone, never on the
// number of workers, unless the clock or a cancelled context ended the run.
//
// Sources: Knuth, Inf. Process. Lett. 6 (1977) 1 (costs that rise with every argument); Martelli,
// Montanari, Commun. ACM 21 (1978) 1025 (best-first search of AND/OR graphs); Huang, Chiang, IWPT
// 2005 (lazy k-best); all from memory.
package search

import "context"

// Key names a node.
type Key [16]byte

// MaxFrom is the largest number of items in Options.From, and MaxOwed of all that a route can owe: items,
// one of several, nodes on the way. The sets of what is owed are bit masks, and each doubles the number of
// states.
const (
	MaxFrom = 4
	MaxOwed = 6
)

// Child is one node that an edge consumes.
type Child struct {
	Key Key
}

// Origin says where one atom of the node made comes from: an atom of a child, or nowhere (Child < 0).
type Origin struct{ Child, Atom int32 }

// Variant is one way to carry out an edge with the same children, for instance another reagent.
type Variant struct {
	Weight float64   // what the step adds, in the unit of the cost in use; not negative
	Yield  float64   // fraction above 0 and up to 1; read by PerMole only
	Equiv  []float64 // moles of each child per mole made at full yield; nil means 1 each; read by PerMole only
}

// Edge makes a node from its children. The children are distinct nodes.
type Edge struct {
	Children []Child
	Variants []Variant // never empty; the cheapest counts, the first of equals
	Origins  []Origin  // per atom of the node made
}

// Expansion is all that is known about making one node.
type Expansion struct {
	Edges   []Edge
	Tried   int // ways looked at, for the count in Result
	LeftOut int // ways left out because they may not be shown
	Bytes   int // of memory that the problem keeps for this expansion, estimated from the answer alone
}

// Problem is what the search asks about a graph. Every method must be a pure function of its
// arguments; Expand must be safe for several goroutines at once.
type Problem interface {
	// Expand lists the edges that make k, always in the same order. An error that wraps the context's
	// leaves the node unopened; any other ends the search.
	Expand(ctx context.Context, k Key) (Expansion, error)
	// Leaf returns the cost of taking k from stock, and whether that is possible.
	Leaf(k Key) (cost float64, ok bool)
	// Bound returns facts about k that is not taken as a leaf when what is in owed must still be met
	// below it (bit i is Options.From[i]; the next bit is FromAny if there is any; then Via): steps that any way to it needs along its longest run (at least 1), and a cost
	// that no way to it undercuts.
	Bound(k Key, owed uint8) (minSteps int, cost float64)
	// Guess estimates the cost of making k; it only orders the work.
	Guess(k Key, owed uint8) float64
}

// Tightener is a Problem that also works from the stock towards the target: what that finds raises its
// bounds. Tighten is called between batches; it may open molecules forwards on the given number of
// goroutines and must decide from its arguments alone, so that every run does the same. Afterwards Bound
// may have risen, never fallen.
type Tightener interface {
	Tighten(ctx context.Context, s Standing) (Tightening, error)
}

// Standing is what a Tightener may decide by.
type Standing struct {
	Expanded int     // nodes opened
	Routes   int     // routes that stand, at most the number wanted
	Gap      float64 // between the last route wanted and the bound, infinite while there are too few routes
	Workers  int
}

// Tightening is what one call of Tighten did.
type Tightening struct {
	Opened  int  // molecules opened forwards
	Changed bool // Bound or Guess answer otherwise from now on
}

// Cost says how the cost of a node follows from the chosen variant of an edge and the costs of its
// children. Every one rises (or stays) with each child cost and with the weight.
type Cost uint8

// The costs. Sum adds the weight of the step to the costs of all children. Worst adds it to the
// dearest child: the loss along the branch that loses most, when weights are negative logarithms of
// yields. PerMole is an amount per mole of the node made: children by their equivalents plus the
// step's own weight, divided by the yield.
const (
	Sum Cost = iota
	Worst
	PerMole
)

// otherBranches is the part of the cheaper branches that Worst charges: far below any difference that
// is printed, enough to prefer the shorter of two side branches and to keep ties few.
const otherBranches = 1e-6

// Combine returns the cost of a node from v and the costs of the children.
func (c Cost) Combine(v *Variant, children []float64) float64 {
	switch c {
	case Worst:
		most, sum := 0.0, 0.0
		for _, x := range children {
			sum += x
			most = max(most, x)
		}
		return v.Weight + most + otherBranches*(sum-most)
	case PerMole:
		total := v.Weight
		for i, x := range children {
			if v.Equiv != nil {
				x *= v.Equiv[i]
			}
			total += x
		}
		return total / v.Yield
	}
	total := v.Weight
	for _, x := range children {
		total += x
	}
	return total
}
