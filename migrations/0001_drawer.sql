-- The drawer: parts, lots, movements, kits and what they hold. The rules of the
-- stock are constraints and triggers here, so that no program can break them:
-- 0 <= reserved <= on hand; on hand is the balance of the last movement; reserved
-- is the sum of the open reservations; movements are only ever added.

-- +goose Up
CREATE TABLE part (
    id              INTEGER PRIMARY KEY,
    key             TEXT NOT NULL UNIQUE, -- equal exactly when two parts are the same part
    kind            TEXT NOT NULL CHECK (kind IN ('resistor', 'capacitor', 'diode', 'timer', 'inverter', 'potentiometer', 'other')),
    value           REAL NOT NULL CHECK (value >= 0), -- ohm or farad by kind; 0 for kinds without a value
    tolerance_minus REAL CHECK (tolerance_minus >= 0 AND tolerance_minus < 1),
    tolerance_plus  REAL CHECK (tolerance_plus >= 0),
    part_number     TEXT NOT NULL,
    rating_v        REAL NOT NULL CHECK (rating_v >= 0), -- here and below 0 is unstated
    rating_w        REAL NOT NULL CHECK (rating_w >= 0),
    dielectric      TEXT NOT NULL,
    tempco_ppm      REAL,
    package         TEXT NOT NULL,
    forward_v       REAL NOT NULL CHECK (forward_v >= 0),
    saturation_a    REAL NOT NULL CHECK (saturation_a >= 0),
    ideality        REAL NOT NULL CHECK (ideality >= 0),
    series_ohm      REAL NOT NULL CHECK (series_ohm >= 0),
    CHECK ((tolerance_minus IS NULL) = (tolerance_plus IS NULL))
) STRICT;

CREATE TABLE lot (
    id               INTEGER PRIMARY KEY AUTOINCREMENT, -- a number is never given out twice
    part_id          INTEGER NOT NULL REFERENCES part (id),
    bin              TEXT NOT NULL,
    measured         REAL NOT NULL CHECK (measured >= 0), -- 0 where not measured
    unit_cost_micros INTEGER CHECK (unit_cost_micros >= 0),
    note             TEXT NOT NULL,
    on_hand          INTEGER NOT NULL DEFAULT 0 CHECK (on_hand >= 0),
    reserved         INTEGER NOT NULL DEFAULT 0 CHECK (reserved >= 0),
    UNIQUE (part_id, bin, measured),
    CHECK (reserved <= on_hand)
) STRICT;

CREATE TABLE intake ( -- a file that was booked
    id        INTEGER PRIMARY KEY AUTOINCREMENT,
    name      TEXT NOT NULL,
    sha256    TEXT NOT NULL,
    booked_at TEXT NOT NULL,
    who       TEXT NOT NULL
) STRICT;
CREATE INDEX intake_by_content ON intake (sha256);

CREATE TABLE kit (
    id         INTEGER PRIMARY KEY AUTOINCREMENT,
    job        TEXT NOT NULL,
    boards     INTEGER NOT NULL CHECK (boards >= 0),
    wanted     INTEGER NOT NULL CHECK (wanted >= boards),
    state      TEXT NOT NULL CHECK (state IN ('planned', 'reserved', 'pulled', 'released')),
    created_at TEXT NOT NULL,
    plan       BLOB NOT NULL
) STRICT;

CREATE TABLE pick (
    kit_id      INTEGER NOT NULL REFERENCES kit (id),
    lot_id      INTEGER NOT NULL REFERENCES lot (id),
    quantity    INTEGER NOT NULL CHECK (quantity > 0),
    returned    INTEGER NOT NULL DEFAULT 0 CHECK (returned BETWEEN 0 AND quantity),
    designators TEXT NOT NULL, -- a JSON list: the references of one board
    PRIMARY KEY (kit_id, lot_id)
) STRICT, WITHOUT ROWID;

CREATE TABLE reservation ( -- open: pieces promised to a kit
    kit_id   INTEGER NOT NULL REFERENCES kit (id),
    lot_id   INTEGER NOT NULL REFERENCES lot (id),
    quantity INTEGER NOT NULL CHECK (quantity > 0),
    PRIMARY KEY (kit_id, lot_id)
) STRICT, WITHOUT ROWID;
CREATE INDEX reservation_by_lot ON reservation (lot_id);

CREATE TABLE movement (
    id        INTEGER PRIMARY KEY AUTOINCREMENT,
    at        TEXT NOT NULL,
    who       TEXT NOT NULL,
    kind      TEXT NOT NULL CHECK (kind IN ('receipt', 'count', 'pull', 'putback')),
    lot_id    INTEGER NOT NULL REFERENCES lot (id),
    delta     INTEGER NOT NULL CHECK (delta <> 0),
    balance   INTEGER NOT NULL CHECK (balance >= 0), -- on hand in the lot afterwards
    kit_id    INTEGER REFERENCES kit (id),
    intake_id INTEGER REFERENCES intake (id)
) STRICT;
CREATE INDEX movement_by_lot ON movement (lot_id, id);

-- +goose StatementBegin
CREATE TRIGGER movement_continues BEFORE INSERT ON movement
WHEN NEW.balance IS NOT (SELECT on_hand FROM lot WHERE id = NEW.lot_id) + NEW.delta
BEGIN
    SELECT RAISE(ABORT, 'a movement continues the balance of its lot');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER movement_books AFTER INSERT ON movement
BEGIN
    UPDATE lot SET on_hand = NEW.balance WHERE id = NEW.lot_id;
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER movement_is_not_changed BEFORE UPDATE ON movement
BEGIN
    SELECT RAISE(ABORT, 'movements are never changed');
END;
-- +goose StatementEnd

-- With recursive_triggers on, INSERT OR REPLACE deletes by this trigger too.
-- +goose StatementBegin
CREATE TRIGGER movement_is_not_deleted BEFORE DELETE ON movement
BEGIN
    SELECT RAISE(ABORT, 'movements are never deleted');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER part_is_not_changed BEFORE UPDATE ON part
BEGIN
    SELECT RAISE(ABORT, 'a part is never changed: the ledger speaks of it');
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER lot_keeps_its_part BEFORE UPDATE OF part_id ON lot
WHEN NEW.part_id IS NOT OLD.part_id
BEGIN
    SELECT RAISE(ABORT, 'a lot keeps its part: the ledger speaks of it');
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
CREATE TRIGGER reservation_holds AFTER INSERT ON reservation
BEGIN
    UPDATE lot SET reserved = reserved + NEW.quantity WHERE id = NEW.lot_id;
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER reservation_frees AFTER DELETE ON reservation
BEGIN
    UPDATE lot SET reserved = reserved - OLD.quantity WHERE id = OLD.lot_id;
END;
-- +goose StatementEnd

-- +goose StatementBegin
CREATE TRIGGER reservation_is_not_changed BEFORE UPDATE ON reservation
BEGIN
    SELECT RAISE(ABORT, 'a reservation is made or freed, never changed');
END;
-- +goose StatementEnd
