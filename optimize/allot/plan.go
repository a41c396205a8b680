package allot

import (
	"cmp"
	"context"
	"slices"
	"time"

	"tickdrawer/inventory"
	"tickdrawer/optimize"
)

// Plan returns how the available lots build the job: as many of its boards as
// can be, all with the same fits, the fixed lines taken first; then with fewest
// parts, least cost and least allowance used in sum. What is missing for the
// boards wanted is among the shortages. The error names a circuit or timer that
// does not exist; when ctx ends first it is ctx's.
func Plan(ctx context.Context, job optimize.Job, lots []inventory.Lot) (optimize.Plan, error) {
	start := time.Now()
	lots = slices.Clone(lots)
	slices.SortFunc(lots, func(a, b inventory.Lot) int { return cmp.Compare(a.ID, b.ID) })
	plan := optimize.Plan{Job: job}
	best, proven, err := mostBoards(ctx, job, lots)
	if err != nil {
		return plan, err
	}
	plan.Search.Proven = proven
	if best.fits != nil {
		plan.Built = best.boards
		plan.Warnings = fixedWarnings(job.Fixed, lots, best.fixed)
		fill(&plan, best, lots)
	}
	if plan.Built < job.Boards {
		if plan.Shortages, err = shortages(ctx, job, lots, best); err != nil {
			return plan, err
		}
	}
	plan.Search.Elapsed = time.Since(start)
	return plan, nil
}

// trial is an attempt at some number of boards; no fits where it failed.
type trial struct {
	boards int64
	fixed  [][]share // by fixed line
	choice
}

// mostBoards returns the trial with the most boards and whether it is proven
// that no more can be built and that no choice comes before its own. Fewer
// boards need fewer pieces of the same fits, so what can be built has no gap and
// halving finds its end.
func mostBoards(ctx context.Context, job optimize.Job, lots []inventory.Lot) (best trial, proven bool, err error) {
	proven = true
	built, beyond := int64(0), job.Boards+1
	for boards := job.Boards; built+1 < beyond; boards = built + (beyond-built)/2 {
		tried, err := attempt(ctx, job, lots, boards)
		if err != nil {
			return best, false, err
		}
		if tried.fits != nil {
			best, built = tried, boards
		} else {
			beyond = boards
			proven = proven && tried.proven
		}
	}
	return best, proven && (best.fits == nil || best.proven), nil
}

// attempt plans exactly so many boards.
func attempt(ctx context.Context, job optimize.Job, lots []inventory.Lot, boards int64) (trial, error) {
	t := trial{boards: boards}
	var short []int64
	t.fixed, short = fixedShares(job.Fixed, lots, boards)
	if slices.ContainsFunc(short, func(pieces int64) bool { return pieces > 0 }) {
		t.proven = true
		return t, nil
	}
	var err error
	t.choice, err = chooseFits(ctx, job.Stages, without(lots, t.fixed), boards)
	return t, err
}

// without returns the lots less what the fixed lines take.
func without(lots []inventory.Lot, fixed [][]share) []inventory.Lot {
	left := slices.Clone(lots)
	for _, shares := range fixed {
		for _, s := range shares {
			left[s.lot].OnHand -= s.pieces
		}
	}
	return left
}

// drawn is pieces of one lot for one place of the boards.
type drawn struct {
	lot    inventory.LotID
	pieces int64
}

// fill writes the trial into the plan: one variant with its places, and the
// picks.
func fill(plan *optimize.Plan, best trial, lots []inventory.Lot) {
	byID := map[inventory.LotID]inventory.Lot{}
	for _, lot := range lots {
		byID[lot.ID] = lot
	}
	left := without(lots, best.fixed)
	pools := newStock(left).pools
	remaining := map[inventory.LotID]int64{}
	for _, lot := range left {
		remaining[lot.ID] = lot.Available()
	}
	picks := map[inventory.LotID]*optimize.PlannedPick{}
	place := func(reference, position string, draws []drawn) optimize.Place {
		most := draws[0]
		for _, d := range draws {
			pick := picks[d.lot]
			if pick == nil {
				pick = &optimize.PlannedPick{Lot: byID[d.lot]}
				picks[d.lot] = pick
			}
			pick.Quantity += d.pieces
			pick.PerBoard++
			pick.References = append(pick.References, reference)
			if d.pieces > most.pieces {
				most = d
			}
		}
		return optimize.Place{Reference: reference, Position: position, Lot: byID[most.lot]}
	}
	// Networks of unpooled lots are booked before pools are drawn, since a pool
	// only draws what nothing else needs: they are of other kinds.
	draw := func(lot inventory.LotID) []drawn {
		pool, pooled := pools[lot]
		if !pooled {
			remaining[lot] -= best.boards
			return []drawn{{lot, best.boards}}
		}
		var draws []drawn
		for need, i := best.boards, 0; need > 0; i++ {
			id := pool.Lots[i].ID
			if pieces := min(need, remaining[id]); pieces > 0 {
				draws = append(draws, drawn{id, pieces})
				remaining[id] -= pieces
				need -= pieces
			}
		}
		return draws
	}
	variant := optimize.Variant{Boards: best.boards}
	for i, stage := range plan.Job.Stages {
		fitted := optimize.StageFit{Stage: stage.Name, Fit: best.fits[i]}
		for _, p := range places(stage, &best.fits[i]) {
			fitted.Places = append(fitted.Places, place(p.Reference, p.Position, draw(p.Lot.ID)))
		}
		variant.Stages = append(variant.Stages, fitted)
	}
	for i, line := range plan.Job.Fixed {
		for j, draws := range overReferences(best.fixed[i], lots, len(line.References), best.boards) {
			variant.Fixed = append(variant.Fixed, place(line.References[j], "", draws))
		}
	}
	plan.Variants = []optimize.Variant{variant}
	for _, pick := range picks {
		slices.SortFunc(pick.References, inventory.NaturalCompare)
		pick.PerBoard = min(pick.PerBoard, pick.Quantity)
		plan.Picks = append(plan.Picks, *pick)
	}
	slices.SortFunc(plan.Picks, func(a, b optimize.PlannedPick) int {
		return cmp.Or(inventory.NaturalCompare(a.Lot.Bin, b.Lot.Bin), cmp.Compare(a.Lot.ID, b.Lot.ID))
	})
}

// places returns every piece of the fit with its reference and its lot (a
// pool's first lot for what serves alike).
func places(stage optimize.Stage, f *optimize.Fit) []optimize.Place {
	var found []optimize.Place
	for _, placed := range f.Networks {
		var lots []inventory.Lot
		for range placed.Count {
			placed.Network.Lots(func(lot inventory.Lot) { lots = append(lots, lot) })
		}
		base := reference(stage, placed.Position)
		for i, lot := range lots {
			name := base
			if len(lots) > 1 {
				name = member(base, i)
			}
			found = append(found, optimize.Place{Reference: name, Position: placed.Position, Lot: lot})
		}
	}
	if f.Inverter != nil {
		found = append(found, optimize.Place{Reference: reference(stage, "inverter"), Position: "inverter", Lot: *f.Inverter})
	}
	if f.TimerLot != nil {
		found = append(found, optimize.Place{Reference: reference(stage, "timer"), Position: "timer", Lot: *f.TimerLot})
	}
	return found
}

// member returns the reference of one of several pieces at a place: R1a, R1b, or
// fog.rb-a where no designator ends in a digit.
func member(base string, i int) string {
	letter := string(rune('a' + i))
	if last := base[len(base)-1]; last >= '0' && last <= '9' {
		return base + letter
	}
	return base + "-" + letter
}

func reference(stage optimize.Stage, position string) string {
	if name := stage.References[position]; name != "" {
		return name
	}
	return stage.Name + "." + position
}

// overReferences spreads the lots of a fixed line over its references, one piece
// a board each.
func overReferences(shares []share, lots []inventory.Lot, references int, boards int64) [][]drawn {
	spread := make([][]drawn, references)
	at := 0
	used := int64(0) // of shares[at]
	for i := range spread {
		for need := boards; need > 0; {
			pieces := min(need, shares[at].pieces-used)
			if pieces > 0 {
				spread[i] = append(spread[i], drawn{lots[shares[at].lot].ID, pieces})
			}
			need -= pieces
			if used += pieces; used == shares[at].pieces {
				at, used = at+1, 0
			}
		}
	}
	return spread
}
