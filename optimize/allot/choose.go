package allot

import (
	"context"
	"errors"
	"fmt"
	"runtime"
	"slices"
	"sync"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
	"tickdrawer/optimize/search"
)

const (
	firstList = 32   // fits listed for a stage at first
	lastList  = 4096 // and at most
	maxNodes  = 2_000_000
)

// tie is how close two sums of shares of allowances count as equal.
const tie = 1e-9

// price is what a choice is judged by, in this order; prices add.
type price struct {
	parts int
	cost  inventory.Micros
	used  float64
}

func (p price) plus(q price) price { return price{p.parts + q.parts, p.cost + q.cost, p.used + q.used} }

// below reports whether p comes before q.
func (p price) below(q price) bool {
	if p.parts != q.parts {
		return p.parts < q.parts
	}
	if p.cost != q.cost {
		return p.cost < q.cost
	}
	return p.used < q.used-tie
}

func priceOf(f *optimize.Fit, basis optimize.Basis) price {
	return price{f.Parts, f.Cost, f.Used(basis)}
}

// listed is the first fits of a stage by price.
type listed struct {
	fits []optimize.Fit
	all  bool // there are no more
}

// choice is one fit for every stage.
type choice struct {
	fits   []optimize.Fit
	proven bool // no other choice that the stock covers comes before it
}

// chooseFits returns the fits, one a stage, that the lots cover together for
// the boards, fewest parts first, then least cost, then least allowance used in
// sum; nil fits where there are none. The lists of the stages grow until the
// best choice is shown to need nothing that they leave out.
func chooseFits(ctx context.Context, stages []optimize.Stage, lots []inventory.Lot, boards int64) (choice, error) {
	if !timersSuffice(stages, lots, boards) {
		return choice{proven: true}, nil
	}
	stock := newStock(lots)
	for length := firstList; ; length *= 4 {
		lists, err := listFits(ctx, stages, lots, boards, length)
		if err != nil {
			return choice{}, err
		}
		complete := true
		for _, list := range lists {
			if len(list.fits) == 0 {
				return choice{proven: true}, nil
			}
			complete = complete && list.all
		}
		c := combination{stages: stages, lists: lists, stock: stock, boards: boards}
		c.solve()
		found := choice{fits: c.best, proven: !c.cut && (complete || c.best != nil && c.covers())}
		if found.proven || length >= lastList || complete {
			return found, nil
		}
	}
}

// listFits returns the first fits of every stage, the stages side by side on the
// processors there are.
func listFits(ctx context.Context, stages []optimize.Stage, lots []inventory.Lot, boards int64, length int) ([]listed, error) {
	lists := make([]listed, len(stages))
	errs := make([]error, len(stages))
	var wait sync.WaitGroup
	turns := make(chan struct{}, runtime.GOMAXPROCS(0))
	for i, stage := range stages {
		wait.Go(func() {
			turns <- struct{}{}
			defer func() { <-turns }()
			spec := stage.Spec
			spec.Boards = boards
			lists[i].fits, lists[i].all, errs[i] = search.Best(ctx, spec, lots, length)
			if errs[i] != nil {
				errs[i] = fmt.Errorf("stage %s: %w", stage.Name, errs[i])
			}
		})
	}
	wait.Wait()
	return lists, errors.Join(errs...)
}

// combination is the search for one fit a stage over lists.
type combination struct {
	stages []optimize.Stage
	lists  []listed
	stock  *stock
	boards int64
	rest   []price // rest[i]: the least price of stages i and after
	at     []optimize.Fit
	best   []optimize.Fit
	total  price // of best
	nodes  int
	cut    bool // the node limit ended it
}

func (c *combination) solve() {
	c.rest = make([]price, len(c.stages)+1)
	for i := len(c.stages) - 1; i >= 0; i-- {
		c.rest[i] = c.rest[i+1].plus(priceOf(&c.lists[i].fits[0], c.stages[i].Spec.Basis))
	}
	c.at = make([]optimize.Fit, len(c.stages))
	c.descend(0, price{})
}

func (c *combination) descend(stage int, so price) {
	if stage == len(c.stages) {
		c.best, c.total = slices.Clone(c.at), so
		return
	}
	for i := range c.lists[stage].fits {
		fit := &c.lists[stage].fits[i]
		with := so.plus(priceOf(fit, c.stages[stage].Spec.Basis))
		if c.best != nil && !with.plus(c.rest[stage+1]).below(c.total) {
			return // the list ascends
		}
		if c.nodes++; c.nodes > maxNodes {
			c.cut = true
			return
		}
		if c.stock.take(fit, c.boards) {
			c.at[stage] = *fit
			c.descend(stage+1, with)
			c.stock.giveBack(fit, c.boards)
		}
	}
}

// covers reports whether nothing that the lists leave out could come before the
// best choice: it would cost at least the end of its list.
func (c *combination) covers() bool {
	for i, list := range c.lists {
		if list.all {
			continue
		}
		bound := priceOf(&list.fits[len(list.fits)-1], c.stages[i].Spec.Basis)
		for j := range c.lists {
			if j != i {
				bound = bound.plus(priceOf(&c.lists[j].fits[0], c.stages[j].Spec.Basis))
			}
		}
		if bound.below(c.total) {
			return false
		}
	}
	return true
}

// stock counts what is left while a choice is built: by lot, and by pool for
// what serves alike.
type stock struct {
	left  map[inventory.LotID]int64 // by lot, or by a pool's first lot
	pools map[inventory.LotID]optimize.Pool
}

func newStock(lots []inventory.Lot) *stock {
	s := &stock{left: map[inventory.LotID]int64{}, pools: map[inventory.LotID]optimize.Pool{}}
	for _, lot := range lots {
		s.left[lot.ID] = lot.Available()
	}
	for _, pool := range search.Pools(lots) {
		s.pools[pool.Lot().ID] = pool
		s.left[pool.Lot().ID] = pool.Available
	}
	return s
}

// take books the fit for the boards and reports whether the stock covers it;
// where it does not, nothing is booked.
func (s *stock) take(f *optimize.Fit, boards int64) bool {
	usage := f.Usage()
	for lot, pieces := range usage {
		if s.left[lot] < pieces*boards {
			return false
		}
	}
	for lot, pieces := range usage {
		s.left[lot] -= pieces * boards
	}
	return true
}

func (s *stock) giveBack(f *optimize.Fit, boards int64) {
	for lot, pieces := range f.Usage() {
		s.left[lot] += pieces * boards
	}
}
