-- An order stands where its last move led: it goes to another slot only while it is paid, and with the
-- record of this very move.
CREATE OR REPLACE FUNCTION order_move_recorded() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE last order_move;
BEGIN
	SELECT * INTO last FROM order_move m
		WHERE m.operator_id = NEW.operator_id AND m.order_id = NEW.id
		ORDER BY m.created_at DESC, m.id DESC LIMIT 1;
	IF OLD.status <> 'paid' OR NEW.status <> 'paid' OR last.id IS NULL
		OR (last.from_slot_id, last.to_slot_id) IS DISTINCT FROM (OLD.slot_id, NEW.slot_id) THEN
		RAISE EXCEPTION 'order % goes to another slot without a move', NEW.id
			USING ERRCODE = 'BK010', CONSTRAINT = 'order_move_recorded';
	END IF;
	RETURN NULL;
END $$;
