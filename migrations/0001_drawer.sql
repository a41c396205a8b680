-- The drawer: parts, lots, movements, kits and what they hold. The rules of the
-- stock are constraints and triggers here, so that no program can break them:
--   0 <= reserved <= on hand, in every lot, after every statement;
--   on hand is the balance of the lot's last movement, and moves by movements alone;
--   reserved is the sum of the open reservations, and moves by them alone;
--   movements are added at the end, never changed, deleted or replaced, and neither
--   is what they speak of;
--   a kit takes out no more than its picks, and brings back no more than it took.

-- +goose Up
PRAGMA application_id = 1952739955; -- "tdrs": tells a drawer from other SQLite files

CREATE TABLE part (
    id              INTEGER PRIMARY KEY CHECK (id > 0), -- here and below: in a trigger before INSERT an id to come is -1
    key             TEXT NOT NULL UNIQUE, -- equal exactly when two parts are the same part
    kind            TEXT NOT NULL CHECK (kind IN ('resistor', 'capacitor', 'diode', 'timer', 'inverter', 'potentiometer', 'other')),
    value           REAL NOT NULL CHECK (value >= 0 AND value < 9e999), -- ohm or farad by kind; 0 for kinds without a value; 9e999 is infinity
    tolerance_minus REAL CHECK (tolerance_minus >= 0 AND tolerance_minus < 1),
    tolerance_plus  REAL CHECK (tolerance_plus >= 0 AND tolerance_plus < 9e999),
    part_number     TEXT NOT NULL,
    rating_v        REAL NOT NULL CHECK (rating_v >= 0 AND rating_v < 9e999), -- here and below 0 is unstated
    rating_w        REAL NOT NULL CHECK (rating_w >= 0 AND rating_w < 9e999),
    dielectric      TEXT NOT NULL,
    tempco_ppm      REAL CHECK (abs(tempco_ppm) < 9e999),
    package         TEXT NOT NULL,
    forward_v       REAL NOT NULL CHECK (forward_v >= 0 AND forward_v < 9e999),
    saturation_a    REAL NOT NULL CHECK (saturation_a >= 0 AND saturation_a < 9e999),
    ideality        REAL NOT NULL CHECK (ideality >= 0 AND ideality < 9e999),
    series_ohm      REAL NOT NULL CHECK (series_ohm >= 0 AND series_ohm < 9e999),
    CHECK ((tolerance_minus IS NULL) = (tolerance_plus IS NULL))
) STRICT;

CREATE TABLE lot (
    id               INTEGER PRIMARY KEY AUTOINCREMENT CHECK (id > 0), -- a number is never given out twice
    part_id          INTEGER NOT NULL REFERENCES part (id),
    bin              TEXT NOT NULL,
    measured         REAL NOT NULL CHECK (measured >= 0 AND measured < 9e999), -- in the part's unit; 0 where not measured
    unit_cost_micros INTEGER CHECK (unit_cost_micros >= 0), -- millionths of the currency; NULL where unstated
    note             TEXT NOT NULL,
    on_hand          INTEGER NOT NULL DEFAULT 0 CHECK (on_hand BETWEEN 0 AND 1000000000000), -- so that no sum overflows
    reserved         INTEGER NOT NULL DEFAULT 0 CHECK (reserved >= 0),
    UNIQUE (part_id, bin, measured),
    CHECK (reserved <= on_hand)
) STRICT;

-- A file that was booked. Times are UTC as RFC 3339 with six decimals, so that
-- their order is the order of the texts.
CREATE TABLE intake (
    id        INTEGER PRIMARY KEY AUTOINCREMENT CHECK (id > 0),
    name      TEXT NOT NULL,
    sha256    TEXT NOT NULL CHECK (length(sha256) = 64), -- of the content, hexadecimal
    booked_at TEXT NOT NULL CHECK (booked_at GLOB '????-??-??T??:??:??.??????Z'),
    who       TEXT NOT NULL
) STRICT;
CREATE INDEX intake_by_content ON intake (sha256);

-- The states and kinds are tables, so that a later migration adds one by a row.
CREATE TABLE kit_state (state TEXT PRIMARY KEY) STRICT, WITHOUT ROWID;
INSERT INTO kit_state VALUES ('planned'), ('reserved'), ('pulled'), ('released');

CREATE TABLE kit (
    id         INTEGER PRIMARY KEY AUTOINCREMENT CHECK (id > 0),
    job        TEXT NOT NULL,
    boards     INTEGER NOT NULL CHECK (boards >= 0),
    wanted     INTEGER NOT NULL CHECK (wanted >= boards),
    state      TEXT NOT NULL REFERENCES kit_state (state),
    created_at TEXT NOT NULL CHECK (created_at GLOB '????-??-??T??:??:??.??????Z'),
    plan       BLOB NOT NULL
) STRICT;

CREATE TABLE pick (
    kit_id      INTEGER NOT NULL REFERENCES kit (id),
    lot_id      INTEGER NOT NULL REFERENCES lot (id),
    quantity    INTEGER NOT NULL CHECK (quantity > 0),
    pulled      INTEGER NOT NULL DEFAULT 0 CHECK (pulled BETWEEN 0 AND quantity),
    returned    INTEGER NOT NULL DEFAULT 0 CHECK (returned BETWEEN 0 AND pulled),
    designators TEXT NOT NULL CHECK (json_valid(designators)), -- a list: the references of one board
    PRIMARY KEY (kit_id, lot_id)
) STRICT, WITHOUT ROWID;

CREATE TABLE reservation ( -- open: pieces promised to a kit
    kit_id   INTEGER NOT NULL,
    lot_id   INTEGER NOT NULL,
    quantity INTEGER NOT NULL CHECK (quantity > 0),
    PRIMARY KEY (kit_id, lot_id),
    FOREIGN KEY (kit_id, lot_id) REFERENCES pick (kit_id, lot_id)
) STRICT, WITHOUT ROWID;
CREATE INDEX reservation_by_lot ON reservation (lot_id);

CREATE TABLE movement_kind (kind TEXT PRIMARY KEY) STRICT, WITHOUT ROWID;
INSERT INTO movement_kind VALUES ('receipt'), ('count'), ('pull'), ('putback');

CREATE TABLE movement (
    id        INTEGER PRIMARY KEY AUTOINCREMENT CHECK (id > 0),
    at        TEXT NOT NULL CHECK (at GLOB '????-??-??T??:??:??.??????Z'),
    who       TEXT NOT NULL,
    kind      TEXT NOT NULL REFERENCES movement_kind (kind),
    lot_id    INTEGER NOT NULL REFERENCES lot (id),
    delta     INTEGER NOT NULL CHECK (delta <> 0),
    balance   INTEGER NOT NULL CHECK (balance >= 0), -- on hand in the lot afterwards
    kit_id    INTEGER REFERENCES kit (id),
    intake_id INTEGER REFERENCES intake (id),
    link      BLOB NOT NULL CHECK (length(link) = 32), -- SHA-256 over the link before and this line
    FOREIGN KEY (kit_id, lot_id) REFERENCES pick (kit_id, lot_id),
    CHECK (kind NOT IN ('pull', 'putback') OR kit_id IS NOT NULL),
    CHECK (kind NOT IN ('receipt', 'putback') OR delta > 0),
    CHECK (kind <> 'pull' OR delta < 0)
) STRICT;
CREATE INDEX movement_by_lot ON movement (lot_id, id);
CREATE INDEX movement_by_kit ON movement (kit_id, lot_id) WHERE kit_id IS NOT NULL;

-- REPLACE fires the triggers on DELETE only where recursive_triggers is on, and
-- foreign keys hold only where foreign_keys is: SQLite's own shell has both off.
-- The triggers named ..._is_not_replaced and ..._is_not_deleted hold in any case.
-- +goose StatementBegin
CREATE TRIGGER part_is_not_replaced BEFORE INSERT ON part
WHEN EXISTS (SELECT 1 FROM part WHERE id = NEW.id OR key = NEW.key)
BEGIN
    SELECT RAISE(ABORT, 'parts are never replaced: this one is there already');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER part_is_not_changed BEFORE UPDATE ON part
BEGIN
    SELECT RAISE(ABORT, 'a part is never changed: the ledger speaks of it');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER part_is_not_deleted BEFORE DELETE ON part
BEGIN
    SELECT RAISE(ABORT, 'parts are never deleted: the ledger speaks of them');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER lot_is_not_replaced BEFORE INSERT ON lot
WHEN EXISTS (SELECT 1 FROM lot WHERE id = NEW.id OR (part_id, bin, measured) = (NEW.part_id, NEW.bin, NEW.measured))
BEGIN
    SELECT RAISE(ABORT, 'lots are never replaced: this one is there already');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER lot_begins_empty BEFORE INSERT ON lot
WHEN NEW.on_hand <> 0 OR NEW.reserved <> 0
BEGIN
    SELECT RAISE(ABORT, 'a lot begins empty: pieces come by movements');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER lot_keeps_its_part BEFORE UPDATE OF id, part_id ON lot
WHEN NEW.id IS NOT OLD.id OR NEW.part_id IS NOT OLD.part_id
BEGIN
    SELECT RAISE(ABORT, 'a lot keeps its number and part: the ledger speaks of it');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER lot_is_not_moved_over_another BEFORE UPDATE OF bin, measured ON lot
WHEN EXISTS (SELECT 1 FROM lot WHERE (part_id, bin, measured) = (NEW.part_id, NEW.bin, NEW.measured) AND id <> NEW.id)
BEGIN
    SELECT RAISE(ABORT, 'lots are never replaced: one of the part lies there already');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER lot_is_not_deleted BEFORE DELETE ON lot
BEGIN
    SELECT RAISE(ABORT, 'lots are never deleted');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER lot_moves_by_movements BEFORE UPDATE OF on_hand ON lot
WHEN NEW.on_hand IS NOT COALESCE((SELECT balance FROM movement WHERE lot_id = NEW.id ORDER BY id DESC LIMIT 1), 0)
BEGIN
    SELECT RAISE(ABORT, 'pieces move by movements alone');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER lot_is_held_by_reservations BEFORE UPDATE OF reserved ON lot
WHEN NEW.reserved IS NOT (SELECT COALESCE(SUM(quantity), 0) FROM reservation WHERE lot_id = NEW.id)
BEGIN
    SELECT RAISE(ABORT, 'pieces are held by reservations alone');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER intake_is_not_replaced BEFORE INSERT ON intake
WHEN EXISTS (SELECT 1 FROM intake WHERE id = NEW.id)
BEGIN
    SELECT RAISE(ABORT, 'booked files are never replaced: the ledger speaks of them');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER intake_is_not_changed BEFORE UPDATE ON intake
BEGIN
    SELECT RAISE(ABORT, 'a booked file is never changed: the ledger speaks of it');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER intake_is_not_deleted BEFORE DELETE ON intake
BEGIN
    SELECT RAISE(ABORT, 'booked files are never deleted: the ledger speaks of them');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER movement_is_not_replaced BEFORE INSERT ON movement
WHEN EXISTS (SELECT 1 FROM movement WHERE id = NEW.id)
BEGIN
    SELECT RAISE(ABORT, 'movements are never replaced');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER movement_continues BEFORE INSERT ON movement
WHEN NEW.balance IS NOT (SELECT on_hand FROM lot WHERE id = NEW.lot_id) + NEW.delta
BEGIN
    SELECT RAISE(ABORT, 'a movement continues the balance of its lot');
END;
-- +goose StatementEnd

-- The statement's own conflict clause rules in its triggers, so that after INSERT
-- OR IGNORE a broken rule here would be passed over: what was done is read back.
-- +goose StatementBegin
CREATE TRIGGER movement_books AFTER INSERT ON movement
BEGIN
    SELECT RAISE(ABORT, 'a movement comes last') WHERE EXISTS (SELECT 1 FROM movement WHERE id > NEW.id);
    UPDATE lot SET on_hand = NEW.balance WHERE id = NEW.lot_id;
    SELECT RAISE(ABORT, 'a movement leaves what is reserved')
    WHERE (SELECT on_hand FROM lot WHERE id = NEW.lot_id) IS NOT NEW.balance;
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER movement_pulls AFTER INSERT ON movement WHEN NEW.kind = 'pull'
BEGIN
    UPDATE pick SET pulled = pulled - NEW.delta WHERE kit_id = NEW.kit_id AND lot_id = NEW.lot_id;
    SELECT RAISE(ABORT, 'a kit takes no more than its picks')
    WHERE (SELECT pulled FROM pick WHERE kit_id = NEW.kit_id AND lot_id = NEW.lot_id)
        IS NOT (SELECT -SUM(delta) FROM movement WHERE kit_id = NEW.kit_id AND lot_id = NEW.lot_id AND kind = 'pull');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER movement_puts_back AFTER INSERT ON movement WHEN NEW.kind = 'putback'
BEGIN
    UPDATE pick SET returned = returned + NEW.delta WHERE kit_id = NEW.kit_id AND lot_id = NEW.lot_id;
    SELECT RAISE(ABORT, 'a kit brings back no more than it took')
    WHERE (SELECT returned FROM pick WHERE kit_id = NEW.kit_id AND lot_id = NEW.lot_id)
        IS NOT (SELECT SUM(delta) FROM movement WHERE kit_id = NEW.kit_id AND lot_id = NEW.lot_id AND kind = 'putback');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER movement_is_not_changed BEFORE UPDATE ON movement
BEGIN
    SELECT RAISE(ABORT, 'movements are never changed');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER movement_is_not_deleted BEFORE DELETE ON movement
BEGIN
    SELECT RAISE(ABORT, 'movements are never deleted');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER kit_is_not_replaced BEFORE INSERT ON kit
WHEN EXISTS (SELECT 1 FROM kit WHERE id = NEW.id)
BEGIN
    SELECT RAISE(ABORT, 'kits are never replaced: this one is there already');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER kit_keeps_its_number BEFORE UPDATE OF id ON kit
WHEN NEW.id IS NOT OLD.id
BEGIN
    SELECT RAISE(ABORT, 'a kit keeps its number: the ledger speaks of it');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER kit_is_not_deleted BEFORE DELETE ON kit
BEGIN
    SELECT RAISE(ABORT, 'kits are never deleted: release one instead');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER kit_begins_planned BEFORE INSERT ON kit
WHEN NEW.state <> 'planned'
BEGIN
    SELECT RAISE(ABORT, 'a kit begins planned');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER kit_goes_on BEFORE UPDATE OF state ON kit
BEGIN
    SELECT RAISE(ABORT, 'a kit does not go from this state to that')
    WHERE (OLD.state, NEW.state) NOT IN (VALUES
        ('planned', 'reserved'), ('planned', 'pulled'),
        ('reserved', 'released'), ('reserved', 'pulled'),
        ('released', 'reserved'), ('released', 'pulled'));
    SELECT RAISE(ABORT, 'a kit that is not reserved holds nothing')
    WHERE NEW.state <> 'reserved' AND EXISTS (SELECT 1 FROM reservation WHERE kit_id = NEW.id);
    SELECT RAISE(ABORT, 'a pulled kit took all its picks')
    WHERE NEW.state = 'pulled' AND EXISTS (SELECT 1 FROM pick WHERE kit_id = NEW.id AND pulled < quantity);
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER pick_is_not_replaced BEFORE INSERT ON pick
WHEN EXISTS (SELECT 1 FROM pick WHERE kit_id = NEW.kit_id AND lot_id = NEW.lot_id)
BEGIN
    SELECT RAISE(ABORT, 'picks are never replaced: the kit has one from this lot');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER pick_is_not_deleted BEFORE DELETE ON pick
BEGIN
    SELECT RAISE(ABORT, 'picks are never deleted: the kit was planned with them');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER pick_begins_whole BEFORE INSERT ON pick
WHEN NEW.pulled <> 0 OR NEW.returned <> 0 OR (SELECT state FROM kit WHERE id = NEW.kit_id) = 'pulled'
BEGIN
    SELECT RAISE(ABORT, 'a pick begins with nothing pulled');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER pick_moves_by_movements BEFORE UPDATE ON pick
WHEN NEW.kit_id IS NOT OLD.kit_id OR NEW.lot_id IS NOT OLD.lot_id OR NEW.quantity IS NOT OLD.quantity OR NEW.designators IS NOT OLD.designators
    OR NEW.pulled IS NOT (SELECT COALESCE(-SUM(delta), 0) FROM movement WHERE kit_id = NEW.kit_id AND lot_id = NEW.lot_id AND kind = 'pull')
    OR NEW.returned IS NOT (SELECT COALESCE(SUM(delta), 0) FROM movement WHERE kit_id = NEW.kit_id AND lot_id = NEW.lot_id AND kind = 'putback')
BEGIN
    SELECT RAISE(ABORT, 'a pick is pulled and put back by movements, and never changed');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER reservation_is_due BEFORE INSERT ON reservation
BEGIN
    SELECT RAISE(ABORT, 'a reservation is made or freed, never replaced')
    WHERE EXISTS (SELECT 1 FROM reservation WHERE kit_id = NEW.kit_id AND lot_id = NEW.lot_id);
    SELECT RAISE(ABORT, 'pieces are held for a reserved kit, no more than it has still to take')
    WHERE NOT EXISTS (SELECT 1 FROM kit JOIN pick ON kit_id = id
        WHERE id = NEW.kit_id AND lot_id = NEW.lot_id AND state = 'reserved' AND NEW.quantity <= quantity - pulled);
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER reservation_holds AFTER INSERT ON reservation
BEGIN
    UPDATE lot SET reserved = reserved + NEW.quantity WHERE id = NEW.lot_id;
    SELECT RAISE(ABORT, 'no more is reserved than is on hand')
    WHERE (SELECT reserved FROM lot WHERE id = NEW.lot_id) IS NOT (SELECT SUM(quantity) FROM reservation WHERE lot_id = NEW.lot_id);
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER reservation_is_not_changed BEFORE UPDATE ON reservation
BEGIN
    SELECT RAISE(ABORT, 'a reservation is made or freed, never changed');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER reservation_frees AFTER DELETE ON reservation
BEGIN
    UPDATE lot SET reserved = reserved - OLD.quantity WHERE id = OLD.lot_id;
END;
-- +goose StatementEnd
