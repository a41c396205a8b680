package optimize

import (
	"cmp"
	"slices"

	"tickdrawer/inventory"
)

// Pool is lots that serve alike: packages of one timer, inverters, diodes of one
// part number. A plan counts their pieces together and draws the lots in order.
type Pool struct {
	Name      string
	Lots      []inventory.Lot // not empty: known cost before unknown, cheaper first, then by number
	Available int64
}

// Lot returns the lot that is drawn first; a Fit stands for the pool by it.
func (p Pool) Lot() inventory.Lot { return p.Lots[0] }

// Pools returns the lots with available pieces gathered by name, sorted by name.
// Lots that name calls "" are left out.
func Pools(lots []inventory.Lot, name func(inventory.Lot) string) []Pool {
	byName := map[string]*Pool{}
	for _, lot := range lots {
		called := name(lot)
		if called == "" || lot.Available() <= 0 {
			continue
		}
		pool := byName[called]
		if pool == nil {
			pool = &Pool{Name: called}
			byName[called] = pool
		}
		pool.Lots = append(pool.Lots, lot)
		pool.Available += lot.Available()
	}
	pools := make([]Pool, 0, len(byName))
	for _, pool := range byName {
		slices.SortFunc(pool.Lots, func(a, b inventory.Lot) int {
			return cmp.Or(compareCosts(a.UnitCost, b.UnitCost), cmp.Compare(a.ID, b.ID))
		})
		pools = append(pools, *pool)
	}
	slices.SortFunc(pools, func(a, b Pool) int { return cmp.Compare(a.Name, b.Name) })
	return pools
}

// compareCosts orders known costs ascending, then the unknown.
func compareCosts(a, b *inventory.Micros) int {
	switch {
	case a == nil && b == nil:
		return 0
	case a == nil:
		return 1
	case b == nil:
		return -1
	}
	return cmp.Compare(*a, *b)
}
