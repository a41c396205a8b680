package sqlite

import (
	"context"
	"fmt"
	"os"
	"slices"
	"testing"

	"pgregory.net/rapid"

	"tickdrawer/inventory"
)

// model is the drawer as a few maps: what each operation should do, and refuse.
type model struct {
	lots  []modelLot // lot i+1
	kits  []modelKit // kit i+1
	moved int        // movements
}

type modelLot struct {
	ohm              float64
	bin              string
	onHand, reserved int64
}

type modelKit struct {
	state inventory.KitState
	picks []inventory.Pick // by lot
}

func (m *model) lot(ohm float64, bin string) int {
	return slices.IndexFunc(m.lots, func(l modelLot) bool { return l.ohm == ohm && l.bin == bin })
}

// enough reports whether the picks are available when the kit's own
// reservations do not count.
func (m *model) enough(k modelKit) bool {
	for _, pick := range k.picks {
		lot := m.lots[pick.Lot-1]
		available := lot.onHand - lot.reserved
		if k.state == inventory.KitReserved {
			available += pick.Quantity
		}
		if available < pick.Quantity {
			return false
		}
	}
	return true
}

// Random sequences of operations on a drawer and on the model: both accept and
// refuse the same, for the same reason, and hold the same after every step.
func TestDrawerBehavesAsTheModel(t *testing.T) {
	ctx := context.Background()
	rapid.Check(t, func(t *rapid.T) {
		folder, err := os.MkdirTemp("", "model")
		if err != nil {
			t.Fatal(err)
		}
		defer os.RemoveAll(folder)
		d := freshIn(t, folder)
		// The drawer is thrown away: no need to wait for the disk.
		quick := func() {
			if _, err := d.db.Exec("PRAGMA synchronous = off"); err != nil {
				t.Fatal(err)
			}
		}
		quick()
		m := &model{}
		intakes := 0
		refused := func(err error, reason inventory.Reason) {
			t.Helper()
			if got := inventory.ReasonOf(err); got != reason {
				t.Fatalf("%v: reason %d, the model says %d", err, got, reason)
			}
		}
		rowsOf := func(least int64) []inventory.Receipt {
			return rapid.SliceOfN(rapid.Custom(func(t *rapid.T) inventory.Receipt {
				return inventory.Receipt{
					Part:     ohms(t, float64(rapid.IntRange(1, 3).Draw(t, "ohm"))),
					Bin:      rapid.SampledFrom([]string{"", "A"}).Draw(t, "bin"),
					Quantity: rapid.Int64Range(least, 6).Draw(t, "quantity"),
				}
			}), 1, 4).Draw(t, "rows")
		}
		begin := func(r inventory.Receipt) int {
			at := m.lot(r.Part.Value, r.Bin)
			if at < 0 {
				m.lots = append(m.lots, modelLot{ohm: r.Part.Value, bin: r.Bin})
				at = len(m.lots) - 1
			}
			return at
		}
		kitID := func() inventory.KitID {
			return inventory.KitID(rapid.IntRange(1, len(m.kits)+1).Draw(t, "kit")) // one that is not there, too
		}
		kitOf := func(id inventory.KitID) *modelKit {
			if int(id) > len(m.kits) {
				return nil
			}
			return &m.kits[id-1]
		}
		hold := func(k *modelKit, sign int64) {
			for _, pick := range k.picks {
				m.lots[pick.Lot-1].reserved += sign * pick.Quantity
			}
		}

		t.Repeat(map[string]func(*rapid.T){
			"receive": func(t *rapid.T) {
				rows := rowsOf(1)
				dry := rapid.Bool().Draw(t, "dry run")
				intakes++
				got, err := d.Book(ctx, Intake{DryRun: dry, Files: []IntakeFile{file(fmt.Sprint(intakes), rows...)}})
				if err != nil {
					t.Fatal(err)
				}
				before := *m
				before.lots = slices.Clone(m.lots)
				sum := int64(0)
				for _, r := range rows {
					m.lots[begin(r)].onHand += r.Quantity
					sum += r.Quantity
				}
				if got.LotsCreated != len(m.lots)-len(before.lots) || got.QuantityBooked != sum || got.Movements != len(rows) {
					t.Fatalf("booked %+v", got)
				}
				if m.moved += len(rows); dry {
					*m = before
				}
			},
			"count": func(t *rapid.T) {
				rows := rowsOf(0)
				counted := map[int]int64{}
				after := *m
				after.lots = slices.Clone(m.lots)
				old := *m
				m.lots = after.lots
				for _, r := range rows {
					if r.Quantity > 0 || m.lot(r.Part.Value, r.Bin) >= 0 {
						counted[begin(r)] += r.Quantity
					}
				}
				short := false
				for at, pieces := range counted {
					short = short || pieces < m.lots[at].reserved
					if pieces != m.lots[at].onHand {
						m.moved++
					}
					m.lots[at].onHand = pieces
				}
				intakes++
				_, err := d.Book(ctx, Intake{Stocktake: true, Files: []IntakeFile{file(fmt.Sprint(intakes), rows...)}})
				if short {
					*m = old
					refused(err, inventory.Shortage)
				} else if err != nil {
					t.Fatal(err)
				}
			},
			"plan": func(t *rapid.T) {
				if len(m.lots) == 0 {
					t.Skip()
				}
				var picks []inventory.Pick
				for at := range m.lots {
					if n := rapid.Int64Range(-3, 5).Draw(t, "quantity"); n > 0 {
						picks = append(picks, inventory.Pick{Lot: inventory.LotID(at + 1), Quantity: n})
					}
				}
				k := modelKit{state: inventory.KitPlanned, picks: picks}
				state := rapid.SampledFrom([]inventory.KitState{inventory.KitPlanned, inventory.KitReserved}).Draw(t, "state")
				id, err := d.SaveKit(ctx, inventory.Kit{Job: "x", State: state, Picks: picks})
				switch {
				case state == inventory.KitReserved && len(picks) == 0:
					refused(err, inventory.Conflict)
					return
				case state == inventory.KitReserved && !m.enough(k):
					refused(err, inventory.Shortage)
					return
				case err != nil:
					t.Fatal(err)
				}
				if m.kits = append(m.kits, k); int(id) != len(m.kits) {
					t.Fatalf("kit %d, the model says %d", id, len(m.kits))
				}
				if state == inventory.KitReserved {
					hold(&m.kits[id-1], 1)
					m.kits[id-1].state = state
				}
			},
			"reserve": func(t *rapid.T) {
				id := kitID()
				k, err := kitOf(id), d.Reserve(ctx, id)
				switch {
				case k == nil:
					refused(err, inventory.NotFound)
				case k.state == inventory.KitReserved, k.state == inventory.KitPulled, len(k.picks) == 0:
					refused(err, inventory.Conflict)
				case !m.enough(*k):
					refused(err, inventory.Shortage)
				case err != nil:
					t.Fatal(err)
				default:
					hold(k, 1)
					k.state = inventory.KitReserved
				}
			},
			"release": func(t *rapid.T) {
				id := kitID()
				k, err := kitOf(id), d.Release(ctx, id)
				switch {
				case k == nil:
					refused(err, inventory.NotFound)
				case k.state != inventory.KitReserved:
					refused(err, inventory.Conflict)
				case err != nil:
					t.Fatal(err)
				default:
					hold(k, -1)
					k.state = inventory.KitReleased
				}
			},
			"pull": func(t *rapid.T) {
				id := kitID()
				k := kitOf(id)
				got, err := d.Pull(ctx, id)
				switch {
				case k == nil:
					refused(err, inventory.NotFound)
				case k.state == inventory.KitPulled, len(k.picks) == 0:
					refused(err, inventory.Conflict)
				case !m.enough(*k):
					refused(err, inventory.Shortage)
				case err != nil:
					t.Fatal(err)
				default:
					if k.state == inventory.KitReserved {
						hold(k, -1)
					}
					for _, pick := range k.picks {
						m.lots[pick.Lot-1].onHand -= pick.Quantity
					}
					k.state = inventory.KitPulled
					m.moved += len(k.picks)
					if len(got) != len(k.picks) {
						t.Fatalf("%d movements for %d picks", len(got), len(k.picks))
					}
				}
			},
			"put back": func(t *rapid.T) {
				id := kitID()
				k := kitOf(id)
				lot, quantity := inventory.LotID(rapid.IntRange(0, len(m.lots)+1).Draw(t, "lot")), int64(0)
				if lot != 0 {
					quantity = rapid.Int64Range(0, 5).Draw(t, "quantity")
				}
				var want []inventory.Pick // what comes back
				possible := true
				if k != nil {
					for _, pick := range k.picks {
						out := pick.Quantity - pick.Returned
						if lot == 0 && out > 0 {
							want = append(want, inventory.Pick{Lot: pick.Lot, Quantity: out})
						}
						if pick.Lot == lot {
							want = append(want, inventory.Pick{Lot: lot, Quantity: quantity})
							possible = 1 <= quantity && quantity <= out
						}
					}
				}
				_, err := d.PutBack(ctx, id, lot, quantity)
				switch {
				case k == nil:
					refused(err, inventory.NotFound)
				case k.state != inventory.KitPulled, lot == 0 && want == nil:
					refused(err, inventory.Conflict)
				case want == nil, !possible:
					refused(err, inventory.Invalid)
				case err != nil:
					t.Fatal(err)
				default:
					k.picks = slices.Clone(k.picks)
					for _, back := range want {
						m.lots[back.Lot-1].onHand += back.Quantity
						at := slices.IndexFunc(k.picks, func(p inventory.Pick) bool { return p.Lot == back.Lot })
						k.picks[at].Returned += back.Quantity
					}
					m.moved += len(want)
				}
			},
			"close and open": func(t *rapid.T) {
				if err := d.Close(); err != nil {
					t.Fatal(err)
				}
				d = open(t, d.path)
				quick()
			},
			"": func(t *rapid.T) { m.compare(t, d) },
		})
	})
}

// compare fails unless the drawer holds what the model does.
func (m *model) compare(t *rapid.T, d *Drawer) {
	ctx := context.Background()
	wantSound(t, d)
	lots, err := d.Lots(ctx)
	if err != nil {
		t.Fatal(err)
	}
	if len(lots) != len(m.lots) {
		t.Fatalf("%d lots, the model has %d", len(lots), len(m.lots))
	}
	for i, lot := range lots {
		want := m.lots[i]
		if got := (modelLot{lot.Part.Value, lot.Bin, lot.OnHand, lot.Reserved}); got != want || int(lot.ID) != i+1 {
			t.Fatalf("lot %d is %+v, the model says %+v", lot.ID, got, want)
		}
		if lot.Reserved < 0 || lot.Reserved > lot.OnHand {
			t.Fatalf("lot %d: %d reserved of %d", lot.ID, lot.Reserved, lot.OnHand)
		}
	}
	for i, want := range m.kits {
		kit, err := d.Kit(ctx, inventory.KitID(i+1))
		if err != nil {
			t.Fatal(err)
		}
		if kit.State != want.state || len(kit.Picks) != len(want.picks) {
			t.Fatalf("kit %d is %+v, the model says %+v", kit.ID, kit, want)
		}
		for j, pick := range kit.Picks {
			if w := want.picks[j]; pick.Lot != w.Lot || pick.Quantity != w.Quantity || pick.Returned != w.Returned {
				t.Fatalf("kit %d picks %+v, the model says %+v", kit.ID, pick, w)
			}
		}
	}
	movements, err := d.Movements(ctx, Filter{})
	if err != nil || len(movements) != m.moved {
		t.Fatalf("%d movements, the model has %d (%v)", len(movements), m.moved, err)
	}
}
