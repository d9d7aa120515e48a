-- The application's role reads and writes rows; it owns nothing. Later tables get the same grants.
GRANT USAGE ON SCHEMA public TO bowkeeper_app;--> statement-breakpoint
GRANT SELECT, INSERT, UPDATE, DELETE ON ALL TABLES IN SCHEMA public TO bowkeeper_app;--> statement-breakpoint
ALTER DEFAULT PRIVILEGES IN SCHEMA public GRANT SELECT, INSERT, UPDATE, DELETE ON TABLES TO bowkeeper_app;--> statement-breakpoint
-- The readiness check compares the migrations that ran with those the code knows.
GRANT USAGE ON SCHEMA drizzle TO bowkeeper_app;--> statement-breakpoint
GRANT SELECT ON ALL TABLES IN SCHEMA drizzle TO bowkeeper_app;--> statement-breakpoint
-- The trail only grows.
REVOKE UPDATE, DELETE ON trail FROM bowkeeper_app;--> statement-breakpoint
-- An operator is never deleted by the application.
REVOKE DELETE ON operator FROM bowkeeper_app;--> statement-breakpoint
-- Isolation also holds for the owner of the tables.
CREATE FUNCTION force_row_level_security() RETURNS void LANGUAGE plpgsql AS $$
DECLARE t record;
BEGIN
	FOR t IN
		SELECT c.oid::regclass AS name FROM pg_class c
		WHERE c.relnamespace = 'public'::regnamespace AND c.relkind IN ('r', 'p')
			AND c.relrowsecurity AND NOT c.relforcerowsecurity
	LOOP
		EXECUTE format('ALTER TABLE %s FORCE ROW LEVEL SECURITY', t.name);
	END LOOP;
END $$;--> statement-breakpoint
REVOKE ALL ON FUNCTION force_row_level_security() FROM PUBLIC;--> statement-breakpoint
SELECT force_row_level_security();--> statement-breakpoint
-- An operator always has an owner. The lock on the operator's row lets only one such change run at a
-- time, so that two owners can not both leave at once.
CREATE FUNCTION keep_an_owner() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
	IF OLD.role <> 'owner' OR (TG_OP = 'UPDATE' AND NEW.role = 'owner' AND NEW.operator_id = OLD.operator_id) THEN
		RETURN NULL;
	END IF;
	PERFORM 1 FROM operator WHERE id = OLD.operator_id FOR UPDATE;
	IF NOT EXISTS (SELECT 1 FROM member WHERE operator_id = OLD.operator_id AND role = 'owner') THEN
		RAISE EXCEPTION 'operator % would be left without an owner', OLD.operator_id
			USING ERRCODE = 'BK001', CONSTRAINT = 'member_keep_an_owner';
	END IF;
	RETURN NULL;
END $$;--> statement-breakpoint
CREATE TRIGGER member_keep_an_owner AFTER UPDATE OR DELETE ON member
	FOR EACH ROW EXECUTE FUNCTION keep_an_owner();
