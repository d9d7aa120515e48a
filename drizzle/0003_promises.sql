-- Promises that tables and checks alone can not hold.
CREATE EXTENSION IF NOT EXISTS btree_gist;--> statement-breakpoint
-- Slots of one zone that are not called off never overlap; they may touch.
ALTER TABLE slot ADD CONSTRAINT slot_no_overlap EXCLUDE USING gist (
	operator_id WITH =, zone_id WITH =, tstzrange(starts_at, ends_at, '[)') WITH &&
) WHERE (status <> 'called_off');--> statement-breakpoint
-- Written once: no change, no deletion.
REVOKE UPDATE, DELETE ON bow_window, payment, ledger_entry, document FROM bowkeeper_app;--> statement-breakpoint
REVOKE DELETE ON plan, zone, computation, "order", order_line, ticket, refund, payment_event,
	weather_call, weather_call_slot, document_series FROM bowkeeper_app;--> statement-breakpoint
REVOKE UPDATE ON order_line, weather_call, weather_call_slot FROM bowkeeper_app;--> statement-breakpoint

-- A plan version that was ever live never changes; only its state moves.
CREATE FUNCTION keep_live_plan() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
	IF OLD.live_since IS NOT NULL AND (NEW.body, NEW.version, NEW.site_id, NEW.operator_id, NEW.live_since)
		IS DISTINCT FROM (OLD.body, OLD.version, OLD.site_id, OLD.operator_id, OLD.live_since) THEN
		RAISE EXCEPTION 'plan version % was live and does not change', OLD.version
			USING ERRCODE = 'BK002', CONSTRAINT = 'plan_keep_live';
	END IF;
	RETURN NEW;
END $$;--> statement-breakpoint
CREATE TRIGGER plan_keep_live BEFORE UPDATE ON plan
	FOR EACH ROW EXECUTE FUNCTION keep_live_plan();--> statement-breakpoint

-- A slot's own interval and window are fixed when it is made; moving one is a new slot.
CREATE FUNCTION keep_slot_interval() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
	IF (NEW.operator_id, NEW.zone_id, NEW.starts_at, NEW.ends_at)
		IS DISTINCT FROM (OLD.operator_id, OLD.zone_id, OLD.starts_at, OLD.ends_at) THEN
		RAISE EXCEPTION 'slot % does not move', OLD.id USING ERRCODE = 'BK003', CONSTRAINT = 'slot_keep_interval';
	END IF;
	IF OLD.status = 'called_off' AND NEW.status <> 'called_off' THEN
		RAISE EXCEPTION 'slot % was called off', OLD.id USING ERRCODE = 'BK003', CONSTRAINT = 'slot_keep_called_off';
	END IF;
	RETURN NEW;
END $$;--> statement-breakpoint
CREATE TRIGGER slot_keep_interval BEFORE UPDATE ON slot
	FOR EACH ROW EXECUTE FUNCTION keep_slot_interval();--> statement-breakpoint

-- A slot's held and sold places follow its orders; the check on the slot refuses one too many.
CREATE FUNCTION count_places() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE
	held_before integer := 0; sold_before integer := 0;
	held_after integer := CASE WHEN NEW.status = 'pending' THEN NEW.places ELSE 0 END;
	sold_after integer := CASE WHEN NEW.status = 'paid' THEN NEW.places ELSE 0 END;
	state text;
BEGIN
	IF TG_OP = 'UPDATE' THEN
		IF (NEW.operator_id, NEW.places, NEW.currency, NEW.total_minor)
			IS DISTINCT FROM (OLD.operator_id, OLD.places, OLD.currency, OLD.total_minor) THEN
			RAISE EXCEPTION 'what order % bought does not change', OLD.id
				USING ERRCODE = 'BK004', CONSTRAINT = 'order_keep_bought';
		END IF;
		held_before := CASE WHEN OLD.status = 'pending' THEN OLD.places ELSE 0 END;
		sold_before := CASE WHEN OLD.status = 'paid' THEN OLD.places ELSE 0 END;
		IF NEW.slot_id <> OLD.slot_id THEN
			UPDATE slot SET held = held - held_before, sold = sold - sold_before
				WHERE operator_id = OLD.operator_id AND id = OLD.slot_id;
			held_before := 0; sold_before := 0;
		END IF;
	END IF;
	IF held_after = held_before AND sold_after = sold_before THEN RETURN NULL; END IF;
	UPDATE slot SET held = held + held_after - held_before, sold = sold + sold_after - sold_before
		WHERE operator_id = NEW.operator_id AND id = NEW.slot_id
		RETURNING status INTO state;
	IF (sold_after > sold_before AND state = 'called_off') OR (held_after > held_before AND state <> 'open') THEN
		RAISE EXCEPTION 'slot % takes no orders', NEW.slot_id
			USING ERRCODE = 'BK005', CONSTRAINT = 'order_slot_open';
	END IF;
	RETURN NULL;
END $$;--> statement-breakpoint
CREATE TRIGGER order_count_places AFTER INSERT OR UPDATE ON "order"
	FOR EACH ROW EXECUTE FUNCTION count_places();--> statement-breakpoint

-- At the end of its transaction a paid order has a ticket for each of its places.
CREATE FUNCTION paid_order_has_tickets() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
	IF EXISTS (SELECT 1 FROM "order" o WHERE o.operator_id = NEW.operator_id AND o.id = NEW.id
		AND o.status = 'paid' AND o.places <> (SELECT count(*) FROM ticket t
			WHERE t.operator_id = o.operator_id AND t.order_id = o.id AND t.status <> 'moved')) THEN
		RAISE EXCEPTION 'paid order % lacks tickets', NEW.id
			USING ERRCODE = 'BK006', CONSTRAINT = 'order_paid_has_tickets';
	END IF;
	RETURN NULL;
END $$;--> statement-breakpoint
CREATE CONSTRAINT TRIGGER order_paid_has_tickets AFTER INSERT OR UPDATE ON "order"
	DEFERRABLE INITIALLY DEFERRED FOR EACH ROW EXECUTE FUNCTION paid_order_has_tickets();--> statement-breakpoint

-- Refunds of a payment that did not fail never come to more than was paid.
CREATE FUNCTION refund_within_payment() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE paid bigint; paid_currency text; going_back bigint;
BEGIN
	IF TG_OP = 'UPDATE' AND (NEW.amount_minor, NEW.currency, NEW.payment_id, NEW.order_id, NEW.operator_id)
		IS DISTINCT FROM (OLD.amount_minor, OLD.currency, OLD.payment_id, OLD.order_id, OLD.operator_id) THEN
		RAISE EXCEPTION 'refund % does not change its amount', OLD.id
			USING ERRCODE = 'BK007', CONSTRAINT = 'refund_within_payment';
	END IF;
	-- Refunds of one order are judged one after another: the lock on its row.
	PERFORM 1 FROM "order" WHERE operator_id = NEW.operator_id AND id = NEW.order_id FOR UPDATE;
	SELECT amount_minor, currency INTO paid, paid_currency FROM payment
		WHERE operator_id = NEW.operator_id AND id = NEW.payment_id AND order_id = NEW.order_id;
	SELECT coalesce(sum(amount_minor), 0) INTO going_back FROM refund
		WHERE operator_id = NEW.operator_id AND payment_id = NEW.payment_id AND status <> 'failed' AND id <> NEW.id;
	IF NEW.status <> 'failed' THEN going_back := going_back + NEW.amount_minor; END IF;
	IF paid IS NULL OR paid_currency <> NEW.currency OR going_back > paid THEN
		RAISE EXCEPTION 'refunds of payment % would exceed it', NEW.payment_id
			USING ERRCODE = 'BK007', CONSTRAINT = 'refund_within_payment';
	END IF;
	RETURN NEW;
END $$;--> statement-breakpoint
CREATE TRIGGER refund_within_payment BEFORE INSERT OR UPDATE ON refund
	FOR EACH ROW EXECUTE FUNCTION refund_within_payment();--> statement-breakpoint

-- A document takes the next number of its series. The series' row is locked until the commit, so that
-- a rollback gives the number back and no other document has gone past it.
CREATE FUNCTION number_document() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE series document_series;
BEGIN
	UPDATE document_series SET last_sequence = last_sequence + 1
		WHERE operator_id = NEW.operator_id AND id = NEW.series_id AND kind = NEW.kind
		RETURNING * INTO series;
	IF series.id IS NULL THEN
		RAISE EXCEPTION 'no series % of kind %', NEW.series_id, NEW.kind
			USING ERRCODE = 'BK008', CONSTRAINT = 'document_numbered';
	END IF;
	NEW.sequence := series.last_sequence;
	NEW.number := series.prefix || lpad(series.last_sequence::text, 5, '0');
	RETURN NEW;
END $$;--> statement-breakpoint
CREATE TRIGGER document_numbered BEFORE INSERT ON document
	FOR EACH ROW EXECUTE FUNCTION number_document();--> statement-breakpoint
CREATE FUNCTION keep_series() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
	IF TG_OP = 'INSERT' THEN
		IF NEW.last_sequence <> 0 THEN
			RAISE EXCEPTION 'a series starts at nothing' USING ERRCODE = 'BK008', CONSTRAINT = 'document_series_steps';
		END IF;
	ELSIF NEW.last_sequence <> OLD.last_sequence + 1
		OR (NEW.operator_id, NEW.id, NEW.kind, NEW.year, NEW.prefix)
			IS DISTINCT FROM (OLD.operator_id, OLD.id, OLD.kind, OLD.year, OLD.prefix) THEN
		RAISE EXCEPTION 'a series goes up by one' USING ERRCODE = 'BK008', CONSTRAINT = 'document_series_steps';
	END IF;
	RETURN NEW;
END $$;--> statement-breakpoint
CREATE TRIGGER document_series_steps BEFORE INSERT OR UPDATE ON document_series
	FOR EACH ROW EXECUTE FUNCTION keep_series();--> statement-breakpoint
CREATE FUNCTION series_has_document() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
	IF NOT EXISTS (SELECT 1 FROM document WHERE operator_id = NEW.operator_id AND series_id = NEW.id
		AND sequence = NEW.last_sequence) THEN
		RAISE EXCEPTION 'number % of series % has no document', NEW.last_sequence, NEW.prefix
			USING ERRCODE = 'BK008', CONSTRAINT = 'document_series_gapless';
	END IF;
	RETURN NULL;
END $$;--> statement-breakpoint
CREATE CONSTRAINT TRIGGER document_series_gapless AFTER UPDATE ON document_series
	DEFERRABLE INITIALLY DEFERRED FOR EACH ROW EXECUTE FUNCTION series_has_document();--> statement-breakpoint
SELECT force_row_level_security();
