package sqlite

import (
	"context"
	"fmt"
	"strings"
	"testing"

	"tickdrawer/inventory"
)

// busyDrawer returns a drawer of two lots with 10 and 5 pieces. Kit 1 holds 4 of
// lot 1; kit 2 took 3 of lot 2 and brought 1 back; kit 3 is planned.
func busyDrawer(t *testing.T) *Drawer {
	t.Helper()
	ctx := context.Background()
	d := stocked(t, 10, 5)
	held := planned(t, d, inventory.Pick{Lot: 1, Quantity: 4})
	out := planned(t, d, inventory.Pick{Lot: 2, Quantity: 3})
	planned(t, d, inventory.Pick{Lot: 1, Quantity: 2})
	if err := d.Reserve(ctx, held); err != nil {
		t.Fatal(err)
	}
	if _, err := d.Pull(ctx, out); err != nil {
		t.Fatal(err)
	}
	if _, err := d.PutBack(ctx, out, 2, 1); err != nil {
		t.Fatal(err)
	}
	return d
}

// movement returns the SQL that adds a movement.
func movement(verb, id, kind string, lot, delta, balance int, kit string) string {
	return fmt.Sprintf(`%s INTO movement (id, at, who, kind, lot_id, delta, balance, kit_id, link)
		VALUES (%s, '2026-03-14T12:00:00.000000Z', 'x', '%s', %d, %d, %d, %s, zeroblob(32))`, verb, id, kind, lot, delta, balance, kit)
}

// partWith returns the SQL that adds a part like part 1 with one field changed.
func partWith(field, value string) string {
	fields := strings.Split("id key kind value tolerance_minus tolerance_plus part_number rating_v rating_w dielectric tempco_ppm package forward_v saturation_a ideality series_ohm", " ")
	for i, name := range fields {
		switch name {
		case "id", "key":
			fields[i] = "99"
		case field:
			fields[i] = value
		}
	}
	return "INSERT INTO part SELECT " + strings.Join(fields, ", ") + " FROM part WHERE id = 1"
}

// Each statement goes round the program: the database alone must refuse it, and
// nothing may have changed.
func TestDatabaseRefusesByItself(t *testing.T) {
	for _, c := range []struct{ name, sql, says string }{
		{"a movement changed", "UPDATE movement SET delta = 11 WHERE id = 1", "never changed"},
		{"a movement deleted", "DELETE FROM movement WHERE id = 1", "never deleted"},
		{"every movement deleted", "DELETE FROM movement", "never deleted"},
		{"a movement replaced", movement("INSERT OR REPLACE", "1", "receipt", 1, 5, 15, "NULL"), "never replaced"},
		{"a movement replaced by the other word", movement("REPLACE", "2", "receipt", 1, 5, 15, "NULL"), "never replaced"},
		{"a movement upserted", movement("INSERT", "1", "receipt", 1, 5, 15, "NULL") + " ON CONFLICT (id) DO UPDATE SET delta = 5", "never replaced"},
		{"a movement before the first", movement("INSERT", "-1", "receipt", 1, 5, 15, "NULL"), "CHECK"},
		{"a movement before another", movement("INSERT", "50", "count", 1, 5, 15, "NULL") + ";" + movement("INSERT", "40", "count", 1, 5, 20, "NULL"), "comes last"},
		{"a movement of nothing", movement("INSERT", "NULL", "count", 1, 0, 10, "NULL"), "CHECK"},
		{"a movement that leaves another balance", movement("INSERT", "NULL", "count", 1, 1, 12, "NULL"), "continues"},
		{"a movement of no lot", movement("INSERT", "NULL", "count", 99, 1, 1, "NULL"), "continues"},
		{"a movement of no kind", movement("INSERT", "NULL", "gift", 1, 1, 11, "NULL"), "FOREIGN KEY"},
		{"a receipt of less than nothing", movement("INSERT", "NULL", "receipt", 1, -1, 9, "NULL"), "CHECK"},
		{"on hand below zero", movement("INSERT", "NULL", "count", 2, -4, -1, "NULL"), "CHECK"},
		{"on hand below reserved", movement("INSERT", "NULL", "count", 1, -7, 3, "NULL"), "CHECK"},
		{"on hand below reserved, passed over", movement("INSERT OR IGNORE", "NULL", "count", 1, -7, 3, "NULL"), "leaves what is reserved"},
		{"more than a lot may hold", movement("INSERT", "NULL", "count", 1, 1_000_000_000_000, 1_000_000_000_010, "NULL"), "CHECK"},
		{"a pull for no kit", movement("INSERT", "NULL", "pull", 1, -1, 9, "NULL"), "CHECK"},
		{"a pull from a lot that the kit does not pick", movement("INSERT", "NULL", "pull", 1, -1, 9, "2"), "no more than its picks"},
		{"a pull that brings pieces in", movement("INSERT", "NULL", "pull", 2, 1, 4, "2"), "CHECK"},
		{"a kit pulled twice", movement("INSERT", "NULL", "pull", 2, -3, 0, "2"), "CHECK"},
		{"a kit pulled twice, passed over", movement("INSERT OR IGNORE", "NULL", "pull", 2, -3, 0, "2"), "no more than its picks"},
		{"more brought back than is out", movement("INSERT", "NULL", "putback", 2, 3, 6, "2"), "CHECK"},
		{"more brought back than is out, passed over", movement("INSERT OR IGNORE", "NULL", "putback", 2, 3, 6, "2"), "no more than it took"},
		{"a movement without a link", "INSERT INTO movement (at, who, kind, lot_id, delta, balance, link) VALUES ('2026-03-14T12:00:00.000000Z', 'x', 'count', 1, 1, 11, x'00')", "CHECK"},
		{"a time of another form", "INSERT INTO movement (at, who, kind, lot_id, delta, balance, link) VALUES ('yesterday', 'x', 'count', 1, 1, 11, zeroblob(32))", "CHECK"},

		{"pieces put into a lot", "UPDATE lot SET on_hand = 100 WHERE id = 1", "movements alone"},
		{"pieces taken from a lot, passed over", "UPDATE OR IGNORE lot SET on_hand = 4 WHERE id = 1", "movements alone"},
		{"pieces held without a kit", "UPDATE lot SET reserved = 9 WHERE id = 1", "reservations alone"},
		{"pieces freed without their kit", "UPDATE lot SET reserved = 0 WHERE id = 1", "reservations alone"},
		{"a lot that begins with pieces", "INSERT INTO lot (part_id, bin, measured, note, on_hand) VALUES (1, 'Z', 0, '', 5)", "begins empty"},
		{"a lot that begins reserved", "INSERT INTO lot (part_id, bin, measured, note, reserved) VALUES (1, 'Z', 0, '', 5)", "begins empty"},
		{"a lot of the same part in the same bin", "INSERT INTO lot (part_id, bin, measured, note) SELECT part_id, bin, measured, '' FROM lot", "never replaced"},
		{"a lot replaced", "INSERT OR REPLACE INTO lot (id, part_id, bin, measured, note) VALUES (1, 1, 'Z', 0, '')", "never replaced"},
		{"a lot deleted", "DELETE FROM lot WHERE id = 1", "never deleted"},
		{"a lot given another part", "UPDATE lot SET part_id = 2 WHERE id = 1", "keeps its number and part"},
		{"a lot given another number", "UPDATE lot SET id = 9 WHERE id = 1", "keeps its number and part"},
		{"a lot of no part", "INSERT INTO lot (part_id, bin, measured, note) VALUES (99, 'Z', 0, '')", "FOREIGN KEY"},
		{"a measured value below zero", "UPDATE lot SET measured = -1 WHERE id = 1", "CHECK"},
		{"a measured value that is text", "UPDATE lot SET measured = 'much' WHERE id = 1", "cannot store TEXT"},
		{"an endless measured value", "UPDATE lot SET measured = 9e999 WHERE id = 1", "CHECK"},
		{"a cost below zero", "UPDATE lot SET unit_cost_micros = -1 WHERE id = 1", "CHECK"},

		{"a part changed", "UPDATE part SET value = 4700 WHERE id = 1", "never changed"},
		{"a part deleted", "DELETE FROM part WHERE id = 1", "never deleted"},
		{"a part of no kind", partWith("kind", "'coil'"), "CHECK"},
		{"a part of less than no value", partWith("value", "-1"), "CHECK"},
		{"a part of endless value", partWith("value", "9e999"), "CHECK"},
		{"a tolerance of less than nothing", partWith("tolerance_minus", "-0.1"), "CHECK"},
		{"a tolerance that leaves nothing", partWith("tolerance_minus", "1"), "CHECK"},
		{"a tolerance of less than nothing upwards", partWith("tolerance_plus", "-0.1"), "CHECK"},
		{"a tolerance of one side", partWith("tolerance_plus", "NULL"), "CHECK"},
		{"a rated voltage below zero", partWith("rating_v", "-1"), "CHECK"},
		{"a rated power below zero", partWith("rating_w", "-1"), "CHECK"},
		{"a forward voltage below zero", partWith("forward_v", "-1"), "CHECK"},
		{"a saturation current below zero", partWith("saturation_a", "-1"), "CHECK"},
		{"an ideality below zero", partWith("ideality", "-1"), "CHECK"},
		{"a series resistance below zero", partWith("series_ohm", "-1"), "CHECK"},
		{"an endless temperature coefficient", partWith("tempco_ppm", "-9e999"), "CHECK"},
		{"a part before the first", strings.Replace(partWith("key", "99"), "SELECT 99", "SELECT -1", 1), "CHECK"},
		{"a part without a figure", partWith("rating_v", "NULL"), "NOT NULL"},
		{"a file without its content's sum", "INSERT INTO intake (name, sha256, booked_at, who) VALUES ('x', '', '2026-03-14T12:00:00.000000Z', 'x')", "CHECK"},
		{"a file booked some day", "INSERT INTO intake (name, sha256, booked_at, who) SELECT 'x', sha256, 'some day', 'x' FROM intake", "CHECK"},
		{"a booked file changed", "UPDATE intake SET sha256 = 'x' WHERE id = 1", "never changed"},
		{"a booked file deleted", "DELETE FROM intake WHERE id = 1", "never deleted"},

		{"a file before the first", "INSERT INTO intake SELECT -1, 'x', sha256, booked_at, who FROM intake", "CHECK"},
		{"a movement of no file", "INSERT INTO movement (at, who, kind, lot_id, delta, balance, intake_id, link) VALUES ('2026-03-14T12:00:00.000000Z', 'x', 'count', 1, 1, 11, 99, zeroblob(32))", "FOREIGN KEY"},
		{"a movement of no kit", movement("INSERT", "NULL", "count", 1, 1, 11, "99"), "FOREIGN KEY"},

		{"a kit that begins pulled", "INSERT INTO kit (job, boards, wanted, state, created_at, plan) VALUES ('x', 1, 1, 'pulled', '2026-03-14T12:00:00.000000Z', x'')", "begins planned"},
		{"more boards than are wanted", "INSERT INTO kit (job, boards, wanted, state, created_at, plan) VALUES ('x', 2, 1, 'planned', '2026-03-14T12:00:00.000000Z', x'')", "CHECK"},
		{"fewer boards than none", "INSERT INTO kit (job, boards, wanted, state, created_at, plan) VALUES ('x', -1, 1, 'planned', '2026-03-14T12:00:00.000000Z', x'')", "CHECK"},
		{"a kit planned some day", "INSERT INTO kit (job, boards, wanted, state, created_at, plan) VALUES ('x', 1, 1, 'planned', 'some day', x'')", "CHECK"},
		{"a kit deleted", "DELETE FROM kit WHERE id = 3", "never deleted"},
		{"a kit given another's number", "UPDATE OR REPLACE kit SET id = 3 WHERE id = 2", "keeps its number"},
		{"a kit before the first", "INSERT INTO kit SELECT -1, job, boards, wanted, 'planned', created_at, plan FROM kit WHERE id = 3", "CHECK"},
		{"a pick of no kit", "INSERT INTO pick (kit_id, lot_id, quantity, designators) VALUES (99, 1, 1, '[]')", "FOREIGN KEY"},
		{"a pick from no lot", "INSERT INTO pick (kit_id, lot_id, quantity, designators) VALUES (3, 99, 1, '[]')", "FOREIGN KEY"},
		{"a kit in no state", "UPDATE kit SET state = 'lost' WHERE id = 3", "from this state to that"},
		{"a pulled kit planned again", "UPDATE kit SET state = 'planned' WHERE id = 2", "from this state to that"},
		{"a kit released while it holds pieces", "UPDATE kit SET state = 'released' WHERE id = 1", "holds nothing"},
		{"a kit called pulled", "UPDATE kit SET state = 'pulled' WHERE id = 3", "took all its picks"},
		{"a pick called pulled", "UPDATE pick SET pulled = 2 WHERE kit_id = 3", "by movements"},
		{"a pick called put back", "UPDATE pick SET returned = 3 WHERE kit_id = 2", "by movements"},
		{"a pick made smaller", "UPDATE pick SET quantity = 1 WHERE kit_id = 3", "by movements"},
		{"a pick that begins pulled", "INSERT INTO pick (kit_id, lot_id, quantity, pulled, designators) VALUES (3, 2, 1, 1, '[]')", "nothing pulled"},
		{"a pick added to a pulled kit", "INSERT INTO pick (kit_id, lot_id, quantity, designators) VALUES (2, 1, 1, '[]')", "nothing pulled"},
		{"a pick of nothing", "INSERT INTO pick (kit_id, lot_id, quantity, designators) VALUES (3, 2, 0, '[]')", "CHECK"},
		{"references that are no list", "INSERT INTO pick (kit_id, lot_id, quantity, designators) VALUES (3, 2, 1, 'R1 R2')", "CHECK"},
		{"nothing held", "UPDATE kit SET state = 'reserved' WHERE id = 3; INSERT INTO reservation VALUES (3, 1, 0)", "CHECK"},
		{"a reserved pick deleted", "DELETE FROM pick WHERE kit_id = 1", "never deleted"},
		{"a pulled pick deleted", "DELETE FROM pick WHERE kit_id = 2", "never deleted"},

		{"pieces held for a planned kit", "INSERT INTO reservation VALUES (3, 1, 2)", "reserved kit"},
		{"pieces held twice for a kit", "INSERT INTO reservation VALUES (1, 1, 4)", "never replaced"},
		{"a reservation replaced", "INSERT OR REPLACE INTO reservation VALUES (1, 1, 1)", "never replaced"},
		{"a reservation changed", "UPDATE reservation SET quantity = 1", "never changed"},
		{"more held than is on hand", "UPDATE kit SET state = 'reserved' WHERE id = 3; INSERT INTO pick (kit_id, lot_id, quantity, designators) VALUES (3, 2, 4, '[]'); INSERT INTO reservation VALUES (3, 2, 4)", "CHECK"},
		{"more held than is on hand, passed over", "UPDATE kit SET state = 'reserved' WHERE id = 3; INSERT INTO pick (kit_id, lot_id, quantity, designators) VALUES (3, 2, 4, '[]'); INSERT OR IGNORE INTO reservation VALUES (3, 2, 4)", "no more is reserved"},
		{"more held than the kit has still to take", "UPDATE kit SET state = 'reserved' WHERE id = 3; INSERT INTO reservation VALUES (3, 1, 3)", "no more than it has still to take"},
	} {
		t.Run(c.name, func(t *testing.T) {
			d := busyDrawer(t)
			before := contents(t, d)
			tx, err := d.db.Begin()
			if err != nil {
				t.Fatal(err)
			}
			if _, err := tx.Exec(c.sql); err == nil {
				t.Error("it was allowed")
			} else if !strings.Contains(err.Error(), c.says) {
				t.Errorf("refused with %q, want it to say %q", err, c.says)
			}
			if err := tx.Rollback(); err != nil {
				t.Fatal(err)
			}
			if after := contents(t, d); after != before {
				t.Errorf("the drawer has changed:\n%s\nwas:\n%s", after, before)
			}
			wantSound(t, d)
		})
	}
}

// Another program may not set the pragmas that this one does: SQLite's own shell
// has foreign keys and recursive triggers off.
func TestNothingIsReplacedOrDeletedByAProgramWithoutThePragmas(t *testing.T) {
	for _, c := range []struct{ name, sql, says string }{
		{"a movement", movement("INSERT OR REPLACE", "1", "receipt", 1, 5, 15, "NULL"), "never replaced"},
		{"a movement changed", "UPDATE OR REPLACE movement SET id = 2 WHERE id = 1", "never changed"},
		{"a movement deleted", "DELETE FROM movement WHERE id = 4", "never deleted"},
		{"a lot deleted", "DELETE FROM lot WHERE id = 1", "never deleted"},
		{"a part deleted", "DELETE FROM part WHERE id = 1", "never deleted"},
		{"a booked file deleted", "DELETE FROM intake", "never deleted"},
		{"a kit deleted", "DELETE FROM kit WHERE id = 2", "never deleted"},
		{"a pick deleted", "DELETE FROM pick WHERE kit_id = 2", "never deleted"},
		{"a lot by its number", "INSERT OR REPLACE INTO lot (id, part_id, bin, measured, note) VALUES (1, 1, 'Z', 0, '')", "never replaced"},
		{"a lot by its place", "INSERT OR REPLACE INTO lot (part_id, bin, measured, note) SELECT part_id, bin, measured, '' FROM lot WHERE id = 1", "never replaced"},
		{"a lot by another that is moved there", "INSERT INTO lot (part_id, bin, measured, note) VALUES (1, 'Z', 0, ''); UPDATE OR REPLACE lot SET bin = 'A1' WHERE bin = 'Z'", "never replaced"},
		{"a lot before the first", "INSERT INTO lot (id, part_id, bin, measured, note) VALUES (-1, 1, 'Z', 0, '')", "CHECK"},
		{"a part by its number", "INSERT OR REPLACE " + strings.TrimPrefix(strings.Replace(partWith("key", "99"), "SELECT 99", "SELECT 1", 1), "INSERT "), "never replaced"},
		{"a part by its key", "INSERT OR REPLACE INTO part SELECT 99, key, kind, 7, NULL, NULL, part_number, 0, 0, '', NULL, '', 0, 0, 0, 0 FROM part WHERE id = 1", "never replaced"},
		{"a booked file", "INSERT OR REPLACE INTO intake SELECT id, 'other.csv', sha256, booked_at, who FROM intake", "never replaced"},
		{"a kit", "INSERT OR REPLACE INTO kit SELECT id, job, boards, wanted, 'planned', created_at, plan FROM kit WHERE id = 2", "never replaced"},
		{"a pick of a planned kit", "INSERT OR REPLACE INTO pick (kit_id, lot_id, quantity, designators) VALUES (3, 1, 9, '[]')", "never replaced"},
		{"a pick of a reserved kit", "INSERT OR REPLACE INTO pick (kit_id, lot_id, quantity, designators) VALUES (1, 1, 9, '[]')", "never replaced"},
		{"a kit by another", "UPDATE OR REPLACE kit SET id = 2 WHERE id = 3", "keeps its number"},
		{"a reservation", "INSERT OR REPLACE INTO reservation VALUES (1, 1, 1)", "never replaced"},
	} {
		t.Run(c.name, func(t *testing.T) {
			d := busyDrawer(t)
			before := contents(t, d)
			if _, err := d.db.Exec("PRAGMA recursive_triggers = off; PRAGMA foreign_keys = off"); err != nil {
				t.Fatal(err)
			}
			tx, err := d.db.Begin()
			if err != nil {
				t.Fatal(err)
			}
			if _, err := tx.Exec(c.sql); err == nil {
				t.Error("it was allowed")
			} else if !strings.Contains(err.Error(), c.says) {
				t.Errorf("refused with %q, want it to say %q", err, c.says)
			}
			if err := tx.Rollback(); err != nil {
				t.Fatal(err)
			}
			if after := contents(t, d); after != before {
				t.Errorf("the drawer has changed:\n%s\nwas:\n%s", after, before)
			}
		})
	}
}

// contents returns all that the drawer holds, for comparing.
func contents(t testing.TB, d *Drawer) string {
	t.Helper()
	ctx := context.Background()
	lots, err := d.Lots(ctx)
	if err != nil {
		t.Fatal(err)
	}
	movements, err := d.Movements(ctx, Filter{})
	if err != nil {
		t.Fatal(err)
	}
	var b strings.Builder
	for _, lot := range lots {
		cost := "unstated"
		if lot.UnitCost != nil {
			cost = fmt.Sprint(*lot.UnitCost)
		}
		fmt.Fprintln(&b, "lot", lot.ID, lot.Part.Key(), lot.Bin, lot.Measured, cost, lot.Note, lot.OnHand, lot.Reserved)
	}
	for _, m := range movements {
		fmt.Fprintln(&b, "movement", m.ID, m.At, m.Who, m.Kind, m.Lot, m.Delta, m.Balance, m.Kit, m.Source)
	}
	heads, err := d.Kits(ctx)
	if err != nil {
		t.Fatal(err)
	}
	for _, head := range heads {
		kit, err := d.Kit(ctx, head.ID)
		if err != nil {
			t.Fatal(err)
		}
		fmt.Fprintln(&b, "kit", kit.ID, kit.Job, kit.Boards, kit.Wanted, kit.State, kit.Picks)
	}
	return b.String()
}
