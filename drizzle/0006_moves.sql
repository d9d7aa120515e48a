CREATE TABLE "kept_slot" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"plan_id" uuid NOT NULL,
	"slot_id" uuid NOT NULL,
	"kept_by" uuid NOT NULL,
	"kept_by_name" text NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "kept_slot_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "kept_slot_key" UNIQUE("operator_id","plan_id","slot_id")
);
--> statement-breakpoint
ALTER TABLE "kept_slot" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "order_move" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"order_id" uuid NOT NULL,
	"from_slot_id" uuid NOT NULL,
	"to_slot_id" uuid NOT NULL,
	"wished_by" text NOT NULL,
	"words" text DEFAULT '' NOT NULL,
	"slot_move_id" uuid,
	"moved_by_name" text NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "order_move_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "order_move_slot_move_key" UNIQUE("operator_id","slot_move_id","order_id")
);
--> statement-breakpoint
ALTER TABLE "order_move" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "slot_move" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"from_slot_id" uuid NOT NULL,
	"to_slot_id" uuid NOT NULL,
	"words" text DEFAULT '' NOT NULL,
	"decided_by" uuid NOT NULL,
	"decided_by_name" text NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "slot_move_operator_id_id_key" UNIQUE("operator_id","id")
);
--> statement-breakpoint
ALTER TABLE "slot_move" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "slot_move_order" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"slot_move_id" uuid NOT NULL,
	"order_id" uuid NOT NULL,
	"state" text DEFAULT 'waiting' NOT NULL,
	"fault" text,
	"done_at" timestamp with time zone,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "slot_move_order_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "slot_move_order_key" UNIQUE("operator_id","slot_move_id","order_id"),
	CONSTRAINT "slot_move_order_fault" CHECK ((state = 'failed') = (fault is not null)),
	CONSTRAINT "slot_move_order_done" CHECK ((state = 'waiting') = (done_at is null))
);
--> statement-breakpoint
ALTER TABLE "slot_move_order" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
ALTER TABLE "kept_slot" ADD CONSTRAINT "kept_slot_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "kept_slot" ADD CONSTRAINT "kept_slot_plan_fk" FOREIGN KEY ("operator_id","plan_id") REFERENCES "public"."plan"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "kept_slot" ADD CONSTRAINT "kept_slot_slot_fk" FOREIGN KEY ("operator_id","slot_id") REFERENCES "public"."slot"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "order_move" ADD CONSTRAINT "order_move_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "order_move" ADD CONSTRAINT "order_move_order_fk" FOREIGN KEY ("operator_id","order_id") REFERENCES "public"."order"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "order_move" ADD CONSTRAINT "order_move_from_fk" FOREIGN KEY ("operator_id","from_slot_id") REFERENCES "public"."slot"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "order_move" ADD CONSTRAINT "order_move_to_fk" FOREIGN KEY ("operator_id","to_slot_id") REFERENCES "public"."slot"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "order_move" ADD CONSTRAINT "order_move_slot_move_fk" FOREIGN KEY ("operator_id","slot_move_id") REFERENCES "public"."slot_move"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "slot_move" ADD CONSTRAINT "slot_move_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "slot_move" ADD CONSTRAINT "slot_move_from_fk" FOREIGN KEY ("operator_id","from_slot_id") REFERENCES "public"."slot"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "slot_move" ADD CONSTRAINT "slot_move_to_fk" FOREIGN KEY ("operator_id","to_slot_id") REFERENCES "public"."slot"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "slot_move_order" ADD CONSTRAINT "slot_move_order_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "slot_move_order" ADD CONSTRAINT "slot_move_order_move_fk" FOREIGN KEY ("operator_id","slot_move_id") REFERENCES "public"."slot_move"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "slot_move_order" ADD CONSTRAINT "slot_move_order_order_fk" FOREIGN KEY ("operator_id","order_id") REFERENCES "public"."order"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "kept_slot_slot_index" ON "kept_slot" USING btree ("operator_id","slot_id");--> statement-breakpoint
CREATE INDEX "order_move_order_index" ON "order_move" USING btree ("operator_id","order_id","created_at");--> statement-breakpoint
CREATE INDEX "order_move_from_index" ON "order_move" USING btree ("operator_id","from_slot_id");--> statement-breakpoint
CREATE INDEX "order_move_to_index" ON "order_move" USING btree ("operator_id","to_slot_id");--> statement-breakpoint
CREATE INDEX "slot_move_from_index" ON "slot_move" USING btree ("operator_id","from_slot_id");--> statement-breakpoint
CREATE INDEX "slot_move_to_index" ON "slot_move" USING btree ("operator_id","to_slot_id");--> statement-breakpoint
CREATE INDEX "slot_move_order_order_index" ON "slot_move_order" USING btree ("operator_id","order_id");--> statement-breakpoint
CREATE POLICY "kept_slot_tenant" ON "kept_slot" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "order_move_tenant" ON "order_move" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "slot_move_tenant" ON "slot_move" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "slot_move_order_tenant" ON "slot_move_order" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);