package network

import (
	"fmt"
	"math"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
)

// MaxParts is the most parts that a network can have: the usage of a network is
// kept in a fixed array of this length.
const MaxParts = 12

// MaxNetworks is the most networks that a forest holds: about a gigabyte.
const MaxNetworks = 16_000_000

// Piece is a lot as networks draw on it.
type Piece struct {
	Lot  inventory.Lot
	Uses int64 // most pieces that one board may take, ≥ 1
}

// node is a network: a leaf, or head joined to tail by the operator. The tail
// of a series node is a series node when there are more than two members, so
// that members read head, tail.head, ...; likewise for parallel.
type node struct {
	value      float64
	cost       inventory.Micros
	head, tail int32
	operator   optimize.Operator
	parts      uint8
}

// Forest holds every network of up to a number of parts. Nodes are numbered by
// the number of parts, then in the order of enumeration; leaves are the pieces.
type Forest struct {
	pieces   []Piece
	nodes    []node
	start    []int             // start[n]: number of the first node with n parts; start[0] = start[1] = 0
	addition optimize.Operator // that adds values: series for resistors, parallel for capacitors
}

// Grow returns the forest of every network of up to maxParts pieces. Pieces are
// of one kind, resistors or capacitors, with a positive value; polarised
// capacitors never stand in series. The order of the pieces decides ties. The
// error (inventory.Invalid) says what is no piece, or that there are more than
// MaxNetworks networks.
func Grow(pieces []Piece, maxParts int) (*Forest, error) {
	if maxParts < 1 || maxParts > MaxParts {
		return nil, fmt.Errorf("a network has 1 to %d parts, not %d", MaxParts, maxParts)
	}
	if atLeast := fewestNetworks(len(pieces), maxParts); atLeast > MaxNetworks {
		return nil, tooMany(len(pieces), maxParts)
	}
	f := &Forest{pieces: pieces, start: []int{0, 0}, addition: optimize.Series}
	for i, piece := range pieces {
		value := piece.Lot.Value()
		if !(value > 0) || math.IsInf(value, 0) {
			return nil, fmt.Errorf("lot %d has no positive value", piece.Lot.ID)
		}
		if piece.Lot.Part.Kind != pieces[0].Lot.Part.Kind {
			return nil, fmt.Errorf("a network is of one kind, not of %s and %s", pieces[0].Lot.Part.Kind, piece.Lot.Part.Kind)
		}
		leaf := node{value: value, head: int32(i), operator: optimize.Leaf, parts: 1}
		if piece.Lot.UnitCost != nil {
			leaf.cost = *piece.Lot.UnitCost
		}
		f.nodes = append(f.nodes, leaf)
	}
	if len(pieces) > 0 && pieces[0].Lot.Part.Kind == inventory.Capacitor {
		f.addition = optimize.Parallel
	}
	f.start = append(f.start, len(f.nodes))
	for n := 2; n <= maxParts; n++ {
		if !f.join(optimize.Series, n) || !f.join(optimize.Parallel, n) {
			return nil, tooMany(len(pieces), n)
		}
		f.start = append(f.start, len(f.nodes))
	}
	return f, nil
}

// labelled is how many networks n unlike parts form (OEIS A006351), from n = 0.
var labelled = [...]float64{0, 1, 2, 8, 52, 472, 5504}

// fewestNetworks returns a number that the networks of so many parts surpass
// where every lot has a piece: those of unlike parts, each used once.
func fewestNetworks(lots, parts int) float64 {
	parts = min(parts, lots, len(labelled)-1)
	choices := 1.0
	for i := range parts {
		choices *= float64(lots-i) / float64(i+1)
	}
	return choices * labelled[parts]
}

func tooMany(lots, parts int) error {
	return inventory.Errorf(inventory.Invalid, "%d lots form more than %d networks of %d parts: allow fewer parts in a position", lots, MaxNetworks, parts)
}

// join appends every network of n parts whose outer operator is the given one
// and reports whether they stay within MaxNetworks.
func (f *Forest) join(operator optimize.Operator, n int) bool {
	for h := 1; h <= n/2; h++ {
		for head := f.start[h]; head < f.start[h+1]; head++ {
			if f.nodes[head].operator == operator || !f.joinable(head, operator) {
				continue
			}
			// A tail is never smaller than the head, by its number.
			for tail := max(head, f.start[n-h]); tail < f.start[n-h+1]; tail++ {
				first := tail
				if f.nodes[tail].operator == operator {
					first = int(f.nodes[tail].head)
				}
				if first < head || !f.joinable(tail, operator) || !f.enough(head, tail) {
					continue
				}
				f.nodes = append(f.nodes, f.joined(operator, head, tail))
			}
			if len(f.nodes) > MaxNetworks {
				return false
			}
		}
	}
	return true
}

func (f *Forest) joined(operator optimize.Operator, head, tail int) node {
	a, b := &f.nodes[head], &f.nodes[tail]
	value := a.value + b.value
	if operator != f.addition {
		value = a.value * b.value / (a.value + b.value)
	}
	return node{
		value: value, cost: a.cost + b.cost, head: int32(head), tail: int32(tail),
		operator: operator, parts: a.parts + b.parts,
	}
}

// joinable reports whether the node may be a member under the operator: nothing
// polarised stands in series.
func (f *Forest) joinable(number int, operator optimize.Operator) bool {
	if operator != optimize.Series || f.addition == optimize.Series {
		return true
	}
	ok := true
	f.leaves(number, func(piece int) { ok = ok && !f.pieces[piece].Lot.Part.Polarised() })
	return ok
}

// enough reports whether the pieces cover the two nodes together.
func (f *Forest) enough(head, tail int) bool {
	var used [MaxParts]int32
	n := 0
	add := func(piece int) { used[n] = int32(piece); n++ }
	f.leaves(head, add)
	f.leaves(tail, add)
	for i := 0; i < n; i++ {
		uses := int64(1)
		for j := 0; j < i; j++ {
			if used[j] == used[i] {
				uses++
			}
		}
		if uses > f.pieces[used[i]].Uses {
			return false
		}
	}
	return true
}

// leaves calls visit with the piece of every leaf, left to right.
func (f *Forest) leaves(number int, visit func(piece int)) {
	n := &f.nodes[number]
	if n.operator == optimize.Leaf {
		visit(int(n.head))
		return
	}
	f.leaves(int(n.head), visit)
	f.leaves(int(n.tail), visit)
}

// Len returns how many networks of exactly the given number of parts there are.
func (f *Forest) Len(parts int) int { return f.start[parts+1] - f.start[parts] }

// Network returns the node as a tree of lots.
func (f *Forest) Network(number int32) optimize.Network {
	n := &f.nodes[number]
	tree := optimize.Network{Operator: n.operator, Value: n.value}
	if n.operator == optimize.Leaf {
		tree.Lot = f.pieces[n.head].Lot
		return tree
	}
	for {
		tree.Members = append(tree.Members, f.Network(n.head))
		tail := &f.nodes[n.tail]
		if tail.operator != n.operator {
			tree.Members = append(tree.Members, f.Network(n.tail))
			return tree
		}
		n = tail
	}
}
