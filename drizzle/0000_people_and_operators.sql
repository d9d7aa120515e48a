CREATE TABLE "recovery_code" (
	"id" uuid PRIMARY KEY NOT NULL,
	"user_id" uuid NOT NULL,
	"code_hash" text NOT NULL,
	"used_at" timestamp with time zone
);
--> statement-breakpoint
CREATE TABLE "session" (
	"id" text PRIMARY KEY NOT NULL,
	"user_id" uuid NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"second_step_passed" boolean DEFAULT false NOT NULL,
	"user_agent" text DEFAULT '' NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"last_seen_at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "sign_up" (
	"id" uuid PRIMARY KEY NOT NULL,
	"email" text NOT NULL,
	"name" text NOT NULL,
	"operator_name" text NOT NULL,
	"password_hash" text NOT NULL,
	"token_hash" text NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "user" (
	"id" uuid PRIMARY KEY NOT NULL,
	"email" text NOT NULL,
	"name" text NOT NULL,
	"password_hash" text NOT NULL,
	"totp_secret_sealed" text,
	"totp_last_step" integer,
	"second_step_since" timestamp with time zone,
	"platform_admin" boolean DEFAULT false NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "user_token" (
	"id" uuid PRIMARY KEY NOT NULL,
	"user_id" uuid NOT NULL,
	"purpose" text NOT NULL,
	"token_hash" text NOT NULL,
	"new_email" text,
	"expires_at" timestamp with time zone NOT NULL,
	"used_at" timestamp with time zone,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "rate_limit" (
	"key" varchar(255) PRIMARY KEY NOT NULL,
	"points" integer DEFAULT 0 NOT NULL,
	"expire" bigint
);
--> statement-breakpoint
CREATE TABLE "invitation" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"email" text NOT NULL,
	"role" text NOT NULL,
	"token_hash" text NOT NULL,
	"invited_by" uuid NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"accepted_at" timestamp with time zone,
	"withdrawn_at" timestamp with time zone,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "invitation_operator_id_id_key" UNIQUE("operator_id","id")
);
--> statement-breakpoint
ALTER TABLE "invitation" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "member" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"user_id" uuid NOT NULL,
	"role" text NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "member_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "member_operator_id_user_id_key" UNIQUE("operator_id","user_id")
);
--> statement-breakpoint
ALTER TABLE "member" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "operator" (
	"id" uuid PRIMARY KEY NOT NULL,
	"slug" text NOT NULL,
	"name" text NOT NULL,
	"status" text DEFAULT 'open' NOT NULL,
	"suspended_reason" text,
	"require_second_step" boolean DEFAULT false NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "operator_slug_form" CHECK ("operator"."slug" ~ '^[a-z0-9]([a-z0-9-]{0,58}[a-z0-9])?$')
);
--> statement-breakpoint
ALTER TABLE "operator" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "letter" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid,
	"kind" text NOT NULL,
	"to_address" text NOT NULL,
	"subject" text NOT NULL,
	"body_text" text NOT NULL,
	"body_html" text NOT NULL,
	"message_id" text NOT NULL,
	"wipe_when_sent" boolean DEFAULT false NOT NULL,
	"status" text DEFAULT 'waiting' NOT NULL,
	"attempts" integer DEFAULT 0 NOT NULL,
	"last_error" text,
	"sent_at" timestamp with time zone,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "letter_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "letter_message_id_key" UNIQUE("message_id")
);
--> statement-breakpoint
ALTER TABLE "letter" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "trail" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid,
	"at" timestamp with time zone DEFAULT now() NOT NULL,
	"actor_kind" text NOT NULL,
	"actor_user_id" uuid,
	"actor_name" text NOT NULL,
	"action" text NOT NULL,
	"subject_type" text NOT NULL,
	"subject_id" text,
	"before" jsonb,
	"after" jsonb,
	"request_id" text
);
--> statement-breakpoint
ALTER TABLE "trail" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
ALTER TABLE "recovery_code" ADD CONSTRAINT "recovery_code_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."user"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "session" ADD CONSTRAINT "session_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."user"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "user_token" ADD CONSTRAINT "user_token_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."user"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "invitation" ADD CONSTRAINT "invitation_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "invitation" ADD CONSTRAINT "invitation_invited_by_user_id_fk" FOREIGN KEY ("invited_by") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "member" ADD CONSTRAINT "member_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "member" ADD CONSTRAINT "member_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "letter" ADD CONSTRAINT "letter_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "trail" ADD CONSTRAINT "trail_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "recovery_code_user_id_index" ON "recovery_code" USING btree ("user_id");--> statement-breakpoint
CREATE INDEX "session_user_id_index" ON "session" USING btree ("user_id");--> statement-breakpoint
CREATE UNIQUE INDEX "sign_up_token_hash_key" ON "sign_up" USING btree ("token_hash");--> statement-breakpoint
CREATE UNIQUE INDEX "user_email_key" ON "user" USING btree ("email");--> statement-breakpoint
CREATE UNIQUE INDEX "user_token_hash_key" ON "user_token" USING btree ("token_hash");--> statement-breakpoint
CREATE UNIQUE INDEX "invitation_open_key" ON "invitation" USING btree ("operator_id","email") WHERE accepted_at is null and withdrawn_at is null;--> statement-breakpoint
CREATE INDEX "member_user_id_index" ON "member" USING btree ("user_id");--> statement-breakpoint
CREATE UNIQUE INDEX "operator_slug_key" ON "operator" USING btree ("slug");--> statement-breakpoint
CREATE INDEX "letter_operator_id_created_at_index" ON "letter" USING btree ("operator_id","created_at");--> statement-breakpoint
CREATE INDEX "trail_operator_id_id_index" ON "trail" USING btree ("operator_id","id");--> statement-breakpoint
CREATE POLICY "invitation_tenant" ON "invitation" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "member_tenant" ON "member" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "member_own" ON "member" AS PERMISSIVE FOR SELECT TO "bowkeeper_app" USING (user_id = nullif(current_setting('app.user_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "operator_self" ON "operator" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "operator_of_member" ON "operator" AS PERMISSIVE FOR SELECT TO "bowkeeper_app" USING (exists (select 1 from member m where m.operator_id = "operator"."id" and m.user_id = nullif(current_setting('app.user_id', true), '')::uuid));--> statement-breakpoint
CREATE POLICY "operator_by_slug" ON "operator" AS PERMISSIVE FOR SELECT TO "bowkeeper_app" USING (slug = nullif(current_setting('app.operator_slug', true), ''));--> statement-breakpoint
CREATE POLICY "operator_platform" ON "operator" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (coalesce(current_setting('app.platform', true), '') = 'on') WITH CHECK (coalesce(current_setting('app.platform', true), '') = 'on');--> statement-breakpoint
CREATE POLICY "letter_tenant" ON "letter" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id is not distinct from nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id is not distinct from nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "trail_tenant" ON "trail" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id is not distinct from nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id is not distinct from nullif(current_setting('app.operator_id', true), '')::uuid);