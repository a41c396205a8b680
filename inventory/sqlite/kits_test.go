package sqlite

import (
	"bytes"
	"context"
	"fmt"
	"path/filepath"
	"slices"
	"sync"
	"testing"

	"tickdrawer/inventory"
)

func TestKitIsKeptAndReturned(t *testing.T) {
	ctx := context.Background()
	d := stocked(t, 10, 20)
	plan := []byte("{\"kit\":\x00\xff}")
	id, err := d.SaveKit(ctx, inventory.Kit{Job: "beacon", Boards: 3, Wanted: 4, Plan: plan, Picks: []inventory.Pick{
		{Lot: 2, Quantity: 6, References: []string{"R2", "R10"}}, {Lot: 1, Quantity: 3, Returned: 2},
	}})
	if err != nil {
		t.Fatal(err)
	}
	kit, err := d.Kit(ctx, id)
	if err != nil {
		t.Fatal(err)
	}
	if kit.ID != id || kit.Job != "beacon" || kit.Boards != 3 || kit.Wanted != 4 || kit.State != inventory.KitPlanned || !kit.CreatedAt.Equal(noon) || !bytes.Equal(kit.Plan, plan) {
		t.Errorf("the kit is %+v", kit)
	}
	if len(kit.Picks) != 2 || kit.Picks[0].Lot != 1 || kit.Picks[0].Returned != 0 || len(kit.Picks[0].References) != 0 ||
		kit.Picks[1].Lot != 2 || kit.Picks[1].Quantity != 6 || !slices.Equal(kit.Picks[1].References, []string{"R2", "R10"}) {
		t.Errorf("its picks are %+v", kit.Picks)
	}
	kits, err := d.Kits(ctx)
	if err != nil || len(kits) != 1 || kits[0].ID != id || kits[0].State != inventory.KitPlanned {
		t.Errorf("the kits are %+v, %v", kits, err)
	}
	_, err = d.Kit(ctx, 9)
	wantReason(t, err, inventory.NotFound, "there is no kit 9", "tickdrawer kits")
}

func TestKitThatMakesNoSenseIsNotKept(t *testing.T) {
	ctx := context.Background()
	d := stocked(t, 10)
	for _, c := range []struct {
		name   string
		kit    inventory.Kit
		reason inventory.Reason
		says   string
	}{
		{"a lot that is not there", inventory.Kit{Picks: []inventory.Pick{{Lot: 1, Quantity: 1}, {Lot: 7, Quantity: 1}}}, inventory.NotFound, "there is no lot 7"},
		{"a pick of nothing", inventory.Kit{Picks: []inventory.Pick{{Lot: 1}}}, inventory.Invalid, "a pick of 0 pieces from lot 1"},
		{"a lot picked twice", inventory.Kit{Picks: []inventory.Pick{{Lot: 1, Quantity: 1}, {Lot: 1, Quantity: 2}}}, inventory.Invalid, "lot 1 is picked twice"},
		{"more boards than wanted", inventory.Kit{Boards: 2, Wanted: 1}, inventory.Invalid, "2 boards of 1 wanted"},
		{"fewer boards than none", inventory.Kit{Boards: -1}, inventory.Invalid, "-1 boards"},
		{"pulled before it is kept", inventory.Kit{State: inventory.KitPulled}, inventory.Invalid, "not pulled"},
		{"reserved with no picks", inventory.Kit{State: inventory.KitReserved}, inventory.Conflict, "no picks"},
		{"reserved with more than is there, without a name", inventory.Kit{State: inventory.KitReserved, Picks: []inventory.Pick{{Lot: 1, Quantity: 11}}}, inventory.Shortage, "the kit cannot be reserved"},
		{"reserved with more than is there", inventory.Kit{Job: "beacon", State: inventory.KitReserved, Picks: []inventory.Pick{{Lot: 1, Quantity: 11}}}, inventory.Shortage, "1 missing"},
	} {
		t.Run(c.name, func(t *testing.T) {
			_, err := d.SaveKit(ctx, c.kit)
			wantReason(t, err, c.reason, c.says)
			if kits, err := d.Kits(ctx); err != nil || len(kits) != 0 {
				t.Errorf("kept all the same: %v %v", kits, err)
			}
		})
	}
}

func TestReservedPiecesAreHeldAndFreed(t *testing.T) {
	ctx := context.Background()
	d := stocked(t, 10, 5)
	first := planned(t, d, inventory.Pick{Lot: 1, Quantity: 7}, inventory.Pick{Lot: 2, Quantity: 5})
	second := planned(t, d, inventory.Pick{Lot: 1, Quantity: 4}, inventory.Pick{Lot: 2, Quantity: 1})
	if err := d.Reserve(ctx, first); err != nil {
		t.Fatal(err)
	}
	if onHand, reserved := lotOf(t, d, 1); onHand != 10 || reserved != 7 {
		t.Errorf("lot 1: %d on hand, %d reserved", onHand, reserved)
	}
	says := []string{
		"beacon cannot be", "nothing was changed",
		"lot 1 (1 kΩ ±1 %, bin A1): 4 wanted, 3 available, 1 missing; 7 reserved by kit 1",
		"lot 2 (2 kΩ ±1 %, bin A2): 1 wanted, 0 available, 1 missing; 5 reserved by kit 1",
	}
	wantReason(t, d.Reserve(ctx, second), inventory.Shortage, says...)
	_, err := d.Pull(ctx, second)
	wantReason(t, err, inventory.Shortage, says...)
	wantReason(t, d.Reserve(ctx, first), inventory.Conflict, "kit 1 is reserved")
	wantReason(t, d.Release(ctx, second), inventory.Conflict, "kit 2 is planned", "nothing to release")
	if err := d.Release(ctx, first); err != nil {
		t.Fatal(err)
	}
	if err := d.Reserve(ctx, second); err != nil {
		t.Fatal(err)
	}
	if _, reserved := lotOf(t, d, 1); reserved != 4 {
		t.Errorf("lot 1: %d reserved, want 4", reserved)
	}
	wantReason(t, d.Reserve(ctx, 9), inventory.NotFound, "there is no kit 9")
	wantReason(t, d.Release(ctx, 9), inventory.NotFound, "there is no kit 9")
	wantSound(t, d)
}

func TestPullBooksOnce(t *testing.T) {
	ctx := context.Background()
	for _, reserved := range []bool{false, true} {
		t.Run(fmt.Sprintf("reserved %v", reserved), func(t *testing.T) {
			d := stocked(t, 10, 5)
			id := planned(t, d, inventory.Pick{Lot: 1, Quantity: 10}, inventory.Pick{Lot: 2, Quantity: 2})
			if reserved {
				if err := d.Reserve(ctx, id); err != nil {
					t.Fatal(err)
				}
			}
			moved, err := d.Pull(ctx, id)
			if err != nil {
				t.Fatal(err)
			}
			if len(moved) != 2 || moved[0].ID != 3 || moved[0].Kind != inventory.MovePull || moved[0].Lot != 1 || moved[0].Delta != -10 || moved[0].Balance != 0 ||
				moved[0].Kit != id || moved[0].Who != "tester" || !moved[0].At.Equal(noon) || moved[0].Bin != "A1" || moved[0].Part.Value != 1000 ||
				moved[1].ID != 4 || moved[1].Delta != -2 || moved[1].Balance != 3 {
				t.Errorf("the movements are %+v", moved)
			}
			before := contents(t, d)
			_, err = d.Pull(ctx, id)
			wantReason(t, err, inventory.Conflict, "kit 1 was pulled already", "tickdrawer putback 1")
			wantReason(t, d.Reserve(ctx, id), inventory.Conflict, "kit 1 is pulled")
			wantReason(t, d.Release(ctx, id), inventory.Conflict, "kit 1 is pulled")
			if after := contents(t, d); after != before {
				t.Errorf("refused, and yet changed:\n%s", after)
			}
			if _, held := lotOf(t, d, 1); held != 0 {
				t.Errorf("%d still held", held)
			}
			wantSound(t, d)
		})
	}
}

func TestPullTakesAllOrNothing(t *testing.T) {
	ctx := context.Background()
	d := stocked(t, 10, 5, 5)
	id := planned(t, d, inventory.Pick{Lot: 1, Quantity: 3}, inventory.Pick{Lot: 2, Quantity: 6}, inventory.Pick{Lot: 3, Quantity: 7})
	before := contents(t, d)
	_, err := d.Pull(ctx, id)
	wantReason(t, err, inventory.Shortage, "lot 2 (2 kΩ ±1 %, bin A2): 6 wanted, 5 available, 1 missing", "lot 3", "2 missing", "plan it again")
	if after := contents(t, d); after != before {
		t.Errorf("refused, and yet changed:\n%s", after)
	}
	_, err = d.Pull(ctx, planned(t, d))
	wantReason(t, err, inventory.Conflict, "no picks")
	_, err = d.Pull(ctx, 9)
	wantReason(t, err, inventory.NotFound, "there is no kit 9")
}

func TestPutBackBringsBackNoMoreThanIsOut(t *testing.T) {
	ctx := context.Background()
	d := stocked(t, 10, 5)
	id := planned(t, d, inventory.Pick{Lot: 1, Quantity: 6}, inventory.Pick{Lot: 2, Quantity: 2})
	_, err := d.PutBack(ctx, id, 0, 0)
	wantReason(t, err, inventory.Conflict, "kit 1 is planned", "only a pulled kit")
	if _, err := d.Pull(ctx, id); err != nil {
		t.Fatal(err)
	}
	if moved, err := d.PutBack(ctx, id, 1, 4); err != nil || len(moved) != 1 || moved[0].Delta != 4 || moved[0].Balance != 8 || moved[0].Kind != inventory.MovePutback {
		t.Fatalf("%+v, %v", moved, err)
	}
	for _, c := range []struct {
		lot      inventory.LotID
		quantity int64
		says     string
	}{{1, 3, "2 of kit 1 are out"}, {1, 0, "at least one"}, {1, -1, "at least one"}, {3, 1, "took nothing from lot 3"}, {0, 2, "of which lot"}} {
		_, err := d.PutBack(ctx, id, c.lot, c.quantity)
		wantReason(t, err, inventory.Invalid, c.says)
	}
	moved, err := d.PutBack(ctx, id, 0, 0)
	if err != nil || len(moved) != 2 || moved[0].Delta != 2 || moved[1].Delta != 2 {
		t.Fatalf("%+v, %v", moved, err)
	}
	_, err = d.PutBack(ctx, id, 0, 0)
	wantReason(t, err, inventory.Conflict, "nothing of kit 1 is out")
	_, err = d.Pull(ctx, id)
	wantReason(t, err, inventory.Conflict, "pulled already")
	for lot, want := range map[inventory.LotID]int64{1: 10, 2: 5} {
		if onHand, _ := lotOf(t, d, lot); onHand != want {
			t.Errorf("lot %d: %d on hand, want %d", lot, onHand, want)
		}
	}
	kit, err := d.Kit(ctx, id)
	if err != nil || kit.Picks[0].Returned != 6 || kit.Picks[1].Returned != 2 {
		t.Errorf("the kit is %+v, %v", kit, err)
	}
	wantSound(t, d)
}

func TestPutBackIntoAFullLotIsRefused(t *testing.T) {
	ctx := context.Background()
	d := stocked(t, 10)
	id := planned(t, d, inventory.Pick{Lot: 1, Quantity: 5})
	if _, err := d.Pull(ctx, id); err != nil {
		t.Fatal(err)
	}
	book(t, d, Intake{Files: []IntakeFile{file("many.csv", inventory.Receipt{Part: ohms(t, 1000), Bin: "A1", Quantity: MostPieces - 5})}})
	_, err := d.PutBack(ctx, id, 0, 0)
	wantReason(t, err, inventory.Invalid, "out of reason")
	wantSound(t, d)
}

func TestMovementsAreFiltered(t *testing.T) {
	ctx := context.Background()
	d := busyDrawer(t)
	for _, c := range []struct {
		name   string
		filter Filter
		want   []inventory.MovementID
	}{
		{"all", Filter{}, []inventory.MovementID{1, 2, 3, 4}},
		{"a lot", Filter{Lot: 2}, []inventory.MovementID{2, 3, 4}},
		{"a kit", Filter{Kit: 2}, []inventory.MovementID{3, 4}},
		{"a lot and a kit that has none of it", Filter{Lot: 1, Kit: 2}, nil},
		{"since their time", Filter{Since: noon}, []inventory.MovementID{1, 2, 3, 4}},
		{"since later", Filter{Since: noon.Add(1000)}, nil},
	} {
		movements, err := d.Movements(ctx, c.filter)
		if err != nil {
			t.Fatal(err)
		}
		var got []inventory.MovementID
		for _, m := range movements {
			got = append(got, m.ID)
		}
		if !slices.Equal(got, c.want) {
			t.Errorf("%s: movements %v, want %v", c.name, got, c.want)
		}
	}
	if movements, _ := d.Movements(ctx, Filter{Lot: 2}); movements[0].Source != "stock.csv" || movements[1].Source != "" || movements[1].Kit != 2 {
		t.Errorf("their causes: %+v", movements)
	}
}

// Two handles, as two programs have them, and several goroutines each.
func TestLastPieceIsPulledByOne(t *testing.T) {
	ctx := context.Background()
	path := filepath.Join(t.TempDir(), "stock.drawer")
	handles := []*Drawer{open(t, path), open(t, path)}
	stock(t, handles[0], 1)
	var kits []inventory.KitID
	for range 8 {
		kits = append(kits, planned(t, handles[0], inventory.Pick{Lot: 1, Quantity: 1}))
	}
	won := make([]bool, len(kits))
	var group sync.WaitGroup
	for i, kit := range kits {
		group.Go(func() {
			var err error
			if i%4 < 2 {
				_, err = handles[i%2].Pull(ctx, kit)
			} else {
				err = handles[i%2].Reserve(ctx, kit)
			}
			if won[i] = err == nil; !won[i] {
				wantReason(t, err, inventory.Shortage, "1 wanted, 0 available")
			}
		})
	}
	group.Wait()
	winners := 0
	for _, w := range won {
		if w {
			winners++
		}
	}
	if winners != 1 {
		t.Errorf("%d kits have the one piece", winners)
	}
	wantSound(t, handles[1])
}
