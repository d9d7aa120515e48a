CREATE TABLE "panorama" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"site_id" uuid NOT NULL,
	"picture_id" uuid NOT NULL,
	"projection" text DEFAULT 'cylinder' NOT NULL,
	"marking" jsonb,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "panorama_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "panorama_site_key" UNIQUE("operator_id","site_id")
);
--> statement-breakpoint
ALTER TABLE "panorama" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
ALTER TABLE "panorama" ADD CONSTRAINT "panorama_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "panorama" ADD CONSTRAINT "panorama_site_fk" FOREIGN KEY ("operator_id","site_id") REFERENCES "public"."site"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "panorama" ADD CONSTRAINT "panorama_picture_fk" FOREIGN KEY ("operator_id","picture_id") REFERENCES "public"."picture"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE POLICY "panorama_tenant" ON "panorama" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);