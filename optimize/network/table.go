package network

import (
	"cmp"
	"slices"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
)

// sameValue is how close two values of networks of the same pieces must be,
// relative, to be one value computed along two ways: the rounding of at most
// MaxParts additions and divisions stays below it.
const sameValue = 1e-14

// Table is every network of one number of parts, sorted by value, then by
// number. Its rows are what the search calls a network by.
type Table struct {
	Parts    int
	Values   []float64
	Costs    []inventory.Micros
	numbers  []int32
	forest   *Forest
	cheapest []inventory.Micros // of each span of a balanced tree over the rows, see CheapestIn
}

// Table returns the networks of exactly the given number of parts. Of networks
// with the same value and the same usage of lots one stands, the first.
func (f *Forest) Table(parts int) *Table {
	t := f.structures(parts)
	if parts > 2 { // two pieces have no two ways to one value
		t.numbers = f.distinct(t.numbers)
	}
	t.fill()
	return t
}

// Structures returns the networks of exactly the given number of parts, every
// one: networks of one value and usage can differ in how far tolerances move
// them.
func (f *Forest) Structures(parts int) *Table {
	t := f.structures(parts)
	t.fill()
	return t
}

func (f *Forest) structures(parts int) *Table {
	t := &Table{Parts: parts, forest: f}
	for number := f.start[parts]; number < f.start[parts+1]; number++ {
		t.numbers = append(t.numbers, int32(number))
	}
	slices.SortFunc(t.numbers, func(a, b int32) int {
		return cmp.Or(cmp.Compare(f.nodes[a].value, f.nodes[b].value), cmp.Compare(a, b))
	})
	return t
}

// fill reads the rows' values and costs.
func (t *Table) fill() {
	t.Values = make([]float64, len(t.numbers))
	t.Costs = make([]inventory.Micros, len(t.numbers))
	for row, number := range t.numbers {
		t.Values[row] = t.forest.nodes[number].value
		t.Costs[row] = t.forest.nodes[number].cost
	}
	t.cheapest = make([]inventory.Micros, spanCount(len(t.numbers)))
	t.fillCheapest(1, 0, len(t.numbers))
}

// ByCost returns the rows in at most so many tables of ascending cost, none of
// them empty; rows of one cost stay together. Each is sorted by value as the
// whole is.
func (t *Table) ByCost(most int) []*Table {
	ascending := slices.Clone(t.Costs)
	slices.Sort(ascending)
	var parts []*Table
	for from := 0; from < len(ascending); {
		to := len(ascending)
		if left := most - len(parts); left > 1 {
			to = from + max(1, (len(ascending)-from)/left)
		}
		for to < len(ascending) && ascending[to] == ascending[to-1] {
			to++
		}
		least, most := ascending[from], ascending[to-1]
		parts = append(parts, t.Only(func(row int) bool { return t.Costs[row] >= least && t.Costs[row] <= most }))
		from = to
	}
	return parts
}

// Only returns the rows that keep tells, sorted as the whole is.
func (t *Table) Only(keep func(row int) bool) *Table {
	some := &Table{Parts: t.Parts, forest: t.forest}
	for row, number := range t.numbers {
		if keep(row) {
			some.numbers = append(some.numbers, number)
		}
	}
	some.fill()
	return some
}

// Number returns the number of the row's network in its forest: fewer parts
// come first.
func (t *Table) Number(row int) int32 { return t.numbers[row] }

// distinct drops from the sorted numbers those whose value and usage an earlier
// one has, keeping the lowest number of each.
func (f *Forest) distinct(numbers []int32) []int32 {
	kept := numbers[:0:0]
	for start := 0; start < len(numbers); {
		end := start + 1
		for end < len(numbers) && f.nodes[numbers[end]].value <= f.nodes[numbers[end-1]].value*(1+sameValue) {
			end++
		}
		group := slices.Clone(numbers[start:end])
		slices.Sort(group)
		seen := map[[MaxParts]int32]bool{}
		for _, number := range group {
			usage := f.usage(number)
			if !seen[usage] {
				seen[usage] = true
				kept = append(kept, number)
			}
		}
		start = end
	}
	slices.SortFunc(kept, func(a, b int32) int {
		return cmp.Or(cmp.Compare(f.nodes[a].value, f.nodes[b].value), cmp.Compare(a, b))
	})
	return kept
}

// usage returns the pieces of the node, sorted, from index 0; the rest is -1.
func (f *Forest) usage(number int32) [MaxParts]int32 {
	var usage [MaxParts]int32
	n := 0
	f.leaves(int(number), func(piece int) { usage[n] = int32(piece); n++ })
	slices.Sort(usage[:n])
	for i := n; i < MaxParts; i++ {
		usage[i] = -1
	}
	return usage
}

// Len returns the number of rows.
func (t *Table) Len() int { return len(t.numbers) }

// Network returns the row's network as a tree of lots.
func (t *Table) Network(row int) optimize.Network { return t.forest.Network(t.numbers[row]) }

// Pieces appends to used the piece of every leaf of the row's network.
func (t *Table) Pieces(row int, used []int32) []int32 {
	return t.forest.appendPieces(int(t.numbers[row]), used)
}

func (f *Forest) appendPieces(number int, used []int32) []int32 {
	n := &f.nodes[number]
	if n.operator == optimize.Leaf {
		return append(used, n.head)
	}
	return f.appendPieces(int(n.tail), f.appendPieces(int(n.head), used))
}

// A span is rows [from, to) of a table. The whole table is span 1; span k is
// halved at Middle into spans 2k and 2k+1, down to single rows.

// Middle returns where a span of rows is halved.
func Middle(from, to int) int { return from + (to-from+1)/2 }

// Spans returns the size of an array indexed by the numbers of the table's spans.
func (t *Table) Spans() int { return len(t.cheapest) }

// CheapestIn returns the least cost of a network in the span with the number.
func (t *Table) CheapestIn(span int) inventory.Micros { return t.cheapest[span] }

func (t *Table) fillCheapest(span, from, to int) inventory.Micros {
	if from >= to {
		return 0
	}
	least := t.Costs[from]
	if to-from > 1 {
		middle := Middle(from, to)
		least = min(t.fillCheapest(2*span, from, middle), t.fillCheapest(2*span+1, middle, to))
	}
	t.cheapest[span] = least
	return least
}

// spanCount returns the size of an array indexed by the spans over n rows.
func spanCount(n int) int {
	count := 2
	for n > 1 {
		n = (n + 1) / 2
		count *= 2
	}
	return count
}
