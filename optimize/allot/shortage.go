package allot

import (
	"context"
	"fmt"
	"slices"
	"strings"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
	"tickdrawer/optimize/search"
)

// shortages returns what is missing for all the boards wanted: of each fixed
// line the pieces that no lot can give, then of each lot the pieces that the
// best choice's fits need beyond what is there, and each stage that nothing in
// the drawer meets.
func shortages(ctx context.Context, job optimize.Job, lots []inventory.Lot, best trial) ([]optimize.Shortage, error) {
	var found []optimize.Shortage
	fixed, short := fixedShares(job.Fixed, lots, job.Boards)
	for i, line := range job.Fixed {
		if short[i] > 0 {
			found = append(found, optimize.Shortage{
				References: line.References, Kind: line.Part.Kind, Value: line.Part.Value, PartNumber: line.Part.PartNumber,
				Short: short[i], Why: "fixed line: " + line.Part.Name(),
			})
		}
	}
	left := without(lots, fixed)
	fits := best.fits
	if fits == nil {
		var unmet []optimize.Shortage
		var err error
		if fits, unmet, err = fitsAlone(ctx, job, left); err != nil {
			return nil, err
		}
		found = append(found, unmet...)
	}
	return append(found, lotShortages(job, left, fits)...), nil
}

// fitsAlone returns for each stage by itself the first fit of one board, and a
// shortage for each stage that has none (its fit is empty).
func fitsAlone(ctx context.Context, job optimize.Job, lots []inventory.Lot) ([]optimize.Fit, []optimize.Shortage, error) {
	fits := make([]optimize.Fit, len(job.Stages))
	var unmet []optimize.Shortage
	for i, stage := range job.Stages {
		spec := stage.Spec
		spec.Boards = 1
		alone, _, err := search.Best(ctx, spec, lots, 1)
		if err != nil {
			return nil, nil, err
		}
		if len(alone) > 0 {
			fits[i] = alone[0]
			continue
		}
		unmet = append(unmet, optimize.Shortage{
			References: []string{stage.Name}, Kind: inventory.Other, Short: job.Boards,
			Why: fmt.Sprintf("no network of up to %d parts a position meets stage %s, not even for one board", spec.PartsEach, stage.Name),
		})
	}
	return fits, unmet, nil
}

// lotShortages returns, by lot or pool, what the fits need for all boards beyond
// what is left.
func lotShortages(job optimize.Job, lots []inventory.Lot, fits []optimize.Fit) []optimize.Shortage {
	stock := newStock(lots)
	need := map[inventory.LotID]int64{}
	references := map[inventory.LotID][]string{}
	byID := map[inventory.LotID]inventory.Lot{}
	var order []inventory.LotID
	for i, stage := range job.Stages {
		for _, place := range places(stage, &fits[i]) {
			id := place.Lot.ID
			if need[id] == 0 {
				order = append(order, id)
				byID[id] = place.Lot
			}
			need[id] += job.Boards
			references[id] = append(references[id], place.Reference)
		}
	}
	slices.Sort(order)
	var found []optimize.Shortage
	for _, id := range order {
		if need[id] <= stock.left[id] {
			continue
		}
		where := fmt.Sprintf("lot %d", id)
		if pool, pooled := stock.pools[id]; pooled && len(pool.Lots) > 1 {
			numbers := make([]string, len(pool.Lots))
			for i, lot := range pool.Lots {
				numbers[i] = fmt.Sprint(lot.ID)
			}
			where = "lots " + strings.Join(numbers, ", ")
		}
		part := byID[id].Part
		slices.SortFunc(references[id], inventory.NaturalCompare)
		found = append(found, optimize.Shortage{
			References: references[id], Kind: part.Kind, Value: byID[id].Value(), PartNumber: part.PartNumber,
			Short: need[id] - stock.left[id],
			Why:   fmt.Sprintf("%s: %d available in %s, %d boards with this fit need %d", part.Name(), stock.left[id], where, job.Boards, need[id]),
		})
	}
	return found
}
