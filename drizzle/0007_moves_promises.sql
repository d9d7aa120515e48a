-- Moves and decisions are written once; of an order in a slot's move only what became of it changes.
REVOKE UPDATE, DELETE ON order_move, slot_move, kept_slot, slot_move_order FROM bowkeeper_app;--> statement-breakpoint
GRANT UPDATE (state, fault, done_at) ON slot_move_order TO bowkeeper_app;--> statement-breakpoint
-- A ticket is for its slot for ever; another slot is another ticket.
REVOKE UPDATE ON ticket FROM bowkeeper_app;--> statement-breakpoint
GRANT UPDATE (status, used_at, used_by) ON ticket TO bowkeeper_app;--> statement-breakpoint

-- A ticket that was moved stays so, whatever becomes of its order.
CREATE FUNCTION keep_moved_ticket() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
	IF OLD.status = 'moved' AND NEW.status <> 'moved' THEN
		RAISE EXCEPTION 'ticket % was moved', OLD.id USING ERRCODE = 'BK009', CONSTRAINT = 'ticket_keep_moved';
	END IF;
	RETURN NEW;
END $$;--> statement-breakpoint
CREATE TRIGGER ticket_keep_moved BEFORE UPDATE ON ticket
	FOR EACH ROW EXECUTE FUNCTION keep_moved_ticket();--> statement-breakpoint

-- At the end of its transaction a paid order has a ticket for each of its places, in its own slot and
-- in no other, whether the order was written or a ticket.
CREATE OR REPLACE FUNCTION paid_order_has_tickets() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE
	ordered uuid := CASE WHEN TG_TABLE_NAME = 'ticket' THEN (to_jsonb(NEW) ->> 'order_id')::uuid ELSE NEW.id END;
	here bigint; elsewhere bigint; wanted integer; at_slot uuid;
BEGIN
	SELECT o.places, o.slot_id INTO wanted, at_slot FROM "order" o
		WHERE o.operator_id = NEW.operator_id AND o.id = ordered AND o.status = 'paid';
	IF wanted IS NULL THEN RETURN NULL; END IF;
	SELECT count(*) FILTER (WHERE t.slot_id = at_slot), count(*) FILTER (WHERE t.slot_id <> at_slot)
		INTO here, elsewhere FROM ticket t
		WHERE t.operator_id = NEW.operator_id AND t.order_id = ordered AND t.status <> 'moved';
	IF here <> wanted OR elsewhere <> 0 THEN
		RAISE EXCEPTION 'paid order % lacks tickets', ordered
			USING ERRCODE = 'BK006', CONSTRAINT = 'order_paid_has_tickets';
	END IF;
	RETURN NULL;
END $$;--> statement-breakpoint
CREATE CONSTRAINT TRIGGER ticket_paid_order_has_tickets AFTER INSERT OR UPDATE OF status ON ticket
	DEFERRABLE INITIALLY DEFERRED FOR EACH ROW EXECUTE FUNCTION paid_order_has_tickets();--> statement-breakpoint

-- An order goes to another slot only while it is paid, and with the record of who moved it.
CREATE FUNCTION order_move_recorded() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
	IF OLD.status <> 'paid' OR NEW.status <> 'paid' OR NOT EXISTS (SELECT 1 FROM order_move m
		WHERE m.operator_id = NEW.operator_id AND m.order_id = NEW.id
		AND m.from_slot_id = OLD.slot_id AND m.to_slot_id = NEW.slot_id) THEN
		RAISE EXCEPTION 'order % goes to another slot without a move', NEW.id
			USING ERRCODE = 'BK010', CONSTRAINT = 'order_move_recorded';
	END IF;
	RETURN NULL;
END $$;--> statement-breakpoint
CREATE CONSTRAINT TRIGGER order_move_recorded AFTER UPDATE OF slot_id ON "order"
	DEFERRABLE INITIALLY DEFERRED FOR EACH ROW
	WHEN (OLD.slot_id IS DISTINCT FROM NEW.slot_id)
	EXECUTE FUNCTION order_move_recorded();--> statement-breakpoint
SELECT force_row_level_security();
