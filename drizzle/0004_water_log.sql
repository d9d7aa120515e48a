CREATE TABLE "water_entry" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"site_id" uuid NOT NULL,
	"kind" text NOT NULL,
	"done_on" date NOT NULL,
	"next_due_on" date,
	"note" text DEFAULT '' NOT NULL,
	"noted_by" uuid NOT NULL,
	"noted_by_name" text NOT NULL,
	"reminded_at" timestamp with time zone,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "water_entry_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "water_entry_due" CHECK (next_due_on is null or next_due_on >= done_on)
);
--> statement-breakpoint
ALTER TABLE "water_entry" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
ALTER TABLE "water_entry" ADD CONSTRAINT "water_entry_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "water_entry" ADD CONSTRAINT "water_entry_site_fk" FOREIGN KEY ("operator_id","site_id") REFERENCES "public"."site"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "water_entry_site_index" ON "water_entry" USING btree ("operator_id","site_id","kind","done_on");--> statement-breakpoint
CREATE POLICY "water_entry_tenant" ON "water_entry" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);