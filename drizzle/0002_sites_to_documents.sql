CREATE TABLE "bow_window" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"computation_id" uuid NOT NULL,
	"plan_id" uuid NOT NULL,
	"zone_id" uuid NOT NULL,
	"local_date" date NOT NULL,
	"starts_at" timestamp with time zone NOT NULL,
	"ends_at" timestamp with time zone NOT NULL,
	"peak_share" double precision NOT NULL,
	"peak_arc_deg" double precision NOT NULL,
	CONSTRAINT "bow_window_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "bow_window_interval_key" UNIQUE("operator_id","id","zone_id","starts_at","ends_at"),
	CONSTRAINT "bow_window_order" CHECK (starts_at < ends_at)
);
--> statement-breakpoint
ALTER TABLE "bow_window" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "computation" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"plan_id" uuid NOT NULL,
	"from_date" date NOT NULL,
	"to_date" date NOT NULL,
	"engine_version" text NOT NULL,
	"input_hash" text NOT NULL,
	"state" text DEFAULT 'waiting' NOT NULL,
	"days_done" integer DEFAULT 0 NOT NULL,
	"days_total" integer NOT NULL,
	"fault" text,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"finished_at" timestamp with time zone,
	CONSTRAINT "computation_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "computation_operator_plan_id_key" UNIQUE("operator_id","plan_id","id"),
	CONSTRAINT "computation_input_key" UNIQUE("operator_id","plan_id","input_hash")
);
--> statement-breakpoint
ALTER TABLE "computation" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "picture" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"content_type" text NOT NULL,
	"width_px" integer NOT NULL,
	"height_px" integer NOT NULL,
	"content" "bytea" NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "picture_operator_id_id_key" UNIQUE("operator_id","id")
);
--> statement-breakpoint
ALTER TABLE "picture" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "plan" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"site_id" uuid NOT NULL,
	"version" integer NOT NULL,
	"body" jsonb NOT NULL,
	"state" text DEFAULT 'draft' NOT NULL,
	"live_since" timestamp with time zone,
	"revision" integer DEFAULT 1 NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"changed_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "plan_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "plan_site_version_key" UNIQUE("operator_id","site_id","version"),
	CONSTRAINT "plan_live_since" CHECK ((state = 'draft') = (live_since is null))
);
--> statement-breakpoint
ALTER TABLE "plan" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "site" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"slug" text NOT NULL,
	"name" text NOT NULL,
	"latitude_deg" double precision NOT NULL,
	"longitude_deg" double precision NOT NULL,
	"elevation_m" double precision NOT NULL,
	"time_zone" text NOT NULL,
	"currency" text NOT NULL,
	"description" text DEFAULT '' NOT NULL,
	"arrival" text DEFAULT '' NOT NULL,
	"picture_id" uuid,
	"picture_alt" text DEFAULT '' NOT NULL,
	"gust_limit_ms" double precision DEFAULT 12 NOT NULL,
	"open" boolean DEFAULT false NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "site_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "site_operator_id_slug_key" UNIQUE("operator_id","slug"),
	CONSTRAINT "site_latitude" CHECK ("site"."latitude_deg" between -90 and 90),
	CONSTRAINT "site_longitude" CHECK ("site"."longitude_deg" between -180 and 180),
	CONSTRAINT "site_currency" CHECK ("site"."currency" ~ '^[A-Z]{3}$')
);
--> statement-breakpoint
ALTER TABLE "site" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "zone" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"site_id" uuid NOT NULL,
	"name" text NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "zone_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "zone_operator_site_id_key" UNIQUE("operator_id","site_id","id"),
	CONSTRAINT "zone_site_name_key" UNIQUE("operator_id","site_id","name")
);
--> statement-breakpoint
ALTER TABLE "zone" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "price_category" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"programme_id" uuid NOT NULL,
	"name" text NOT NULL,
	"amount_minor" bigint NOT NULL,
	"tax_category" text DEFAULT 'S' NOT NULL,
	"tax_percent" numeric(5, 2) NOT NULL,
	"minimum_quantity" integer DEFAULT 1 NOT NULL,
	"position" integer DEFAULT 0 NOT NULL,
	"withdrawn" boolean DEFAULT false NOT NULL,
	CONSTRAINT "price_category_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "price_category_amount" CHECK (amount_minor >= 0),
	CONSTRAINT "price_category_tax" CHECK (tax_percent >= 0 and tax_percent < 100)
);
--> statement-breakpoint
ALTER TABLE "price_category" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "programme" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"site_id" uuid NOT NULL,
	"zone_id" uuid NOT NULL,
	"name" text NOT NULL,
	"season_from" date NOT NULL,
	"season_to" date NOT NULL,
	"opening_hours" jsonb NOT NULL,
	"days_off" date[] DEFAULT '{}' NOT NULL,
	"slot_minutes" integer NOT NULL,
	"gap_minutes" integer NOT NULL,
	"grid_minutes" integer NOT NULL,
	"capacity" integer NOT NULL,
	"refund_policy" jsonb NOT NULL,
	"published_at" timestamp with time zone,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "programme_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "programme_season" CHECK (season_from <= season_to),
	CONSTRAINT "programme_capacity" CHECK (capacity > 0)
);
--> statement-breakpoint
ALTER TABLE "programme" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "slot" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"site_id" uuid NOT NULL,
	"zone_id" uuid NOT NULL,
	"programme_id" uuid NOT NULL,
	"window_id" uuid NOT NULL,
	"window_starts_at" timestamp with time zone NOT NULL,
	"window_ends_at" timestamp with time zone NOT NULL,
	"starts_at" timestamp with time zone NOT NULL,
	"ends_at" timestamp with time zone NOT NULL,
	"local_date" date NOT NULL,
	"capacity" integer NOT NULL,
	"held" integer DEFAULT 0 NOT NULL,
	"sold" integer DEFAULT 0 NOT NULL,
	"status" text DEFAULT 'open' NOT NULL,
	"arc_deg" double precision NOT NULL,
	"share" double precision NOT NULL,
	"sun_altitude_deg" double precision NOT NULL,
	"look_azimuth_deg" double precision NOT NULL,
	"drop_diameter_um" double precision NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "slot_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "slot_inside_window" CHECK (starts_at < ends_at and starts_at >= window_starts_at and ends_at <= window_ends_at),
	CONSTRAINT "slot_places" CHECK (held >= 0 and sold >= 0 and held + sold <= capacity)
);
--> statement-breakpoint
ALTER TABLE "slot" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "slot_forecast" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"slot_id" uuid NOT NULL,
	"read_at" timestamp with time zone NOT NULL,
	"direct_normal_irradiance_wm2" double precision NOT NULL,
	"cloud_cover_percent" double precision NOT NULL,
	"precipitation_mm" double precision NOT NULL,
	"precipitation_probability_percent" double precision NOT NULL,
	"temperature_c" double precision NOT NULL,
	"wind_speed_ms" double precision NOT NULL,
	"wind_gusts_ms" double precision NOT NULL,
	"suggestion" text NOT NULL,
	"because" text NOT NULL,
	CONSTRAINT "slot_forecast_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "slot_forecast_slot_key" UNIQUE("operator_id","slot_id")
);
--> statement-breakpoint
ALTER TABLE "slot_forecast" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "weather_call" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"site_id" uuid NOT NULL,
	"decision" text NOT NULL,
	"reason" text NOT NULL,
	"decided_by" uuid NOT NULL,
	"decided_by_name" text NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "weather_call_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "weather_call_reason" CHECK (length(reason) > 0)
);
--> statement-breakpoint
ALTER TABLE "weather_call" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "weather_call_slot" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"weather_call_id" uuid NOT NULL,
	"slot_id" uuid NOT NULL,
	CONSTRAINT "weather_call_slot_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "weather_call_slot_key" UNIQUE("operator_id","weather_call_id","slot_id")
);
--> statement-breakpoint
ALTER TABLE "weather_call_slot" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "order" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"slot_id" uuid NOT NULL,
	"reference" text NOT NULL,
	"channel" text DEFAULT 'web' NOT NULL,
	"status" text DEFAULT 'pending' NOT NULL,
	"visitor_name" text NOT NULL,
	"visitor_email" text NOT NULL,
	"places" integer NOT NULL,
	"currency" text NOT NULL,
	"total_minor" bigint NOT NULL,
	"hold_until" timestamp with time zone NOT NULL,
	"paid_at" timestamp with time zone,
	"closed_at" timestamp with time zone,
	"closed_reason" text,
	"checkout_session_id" text,
	"checkout_url" text,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "order_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "order_reference_key" UNIQUE("operator_id","reference"),
	CONSTRAINT "order_checkout_session_key" UNIQUE("checkout_session_id"),
	CONSTRAINT "order_places" CHECK (places > 0),
	CONSTRAINT "order_total" CHECK (total_minor >= 0)
);
--> statement-breakpoint
ALTER TABLE "order" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "order_line" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"order_id" uuid NOT NULL,
	"price_category_id" uuid NOT NULL,
	"name" text NOT NULL,
	"quantity" integer NOT NULL,
	"unit_gross_minor" bigint NOT NULL,
	"gross_minor" bigint NOT NULL,
	"tax_category" text NOT NULL,
	"tax_percent" numeric(5, 2) NOT NULL,
	CONSTRAINT "order_line_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "order_line_gross" CHECK (quantity > 0 and gross_minor = quantity * unit_gross_minor)
);
--> statement-breakpoint
ALTER TABLE "order_line" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "ticket" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"order_id" uuid NOT NULL,
	"order_line_id" uuid NOT NULL,
	"slot_id" uuid NOT NULL,
	"code" text NOT NULL,
	"status" text DEFAULT 'valid' NOT NULL,
	"used_at" timestamp with time zone,
	"used_by" uuid,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "ticket_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "ticket_code_key" UNIQUE("code"),
	CONSTRAINT "ticket_used" CHECK ((status = 'used') = (used_at is not null))
);
--> statement-breakpoint
ALTER TABLE "ticket" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "ledger_entry" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"balance_transaction_id" text NOT NULL,
	"kind" text NOT NULL,
	"amount_minor" bigint NOT NULL,
	"fee_minor" bigint NOT NULL,
	"net_minor" bigint NOT NULL,
	"currency" text NOT NULL,
	"order_id" uuid,
	"refund_id" uuid,
	"booked_at" timestamp with time zone NOT NULL,
	CONSTRAINT "ledger_entry_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "ledger_entry_transaction_key" UNIQUE("operator_id","balance_transaction_id"),
	CONSTRAINT "ledger_entry_net" CHECK (net_minor = amount_minor - fee_minor)
);
--> statement-breakpoint
ALTER TABLE "ledger_entry" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "payment" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"order_id" uuid NOT NULL,
	"payment_intent_id" text NOT NULL,
	"charge_id" text NOT NULL,
	"amount_minor" bigint NOT NULL,
	"application_fee_minor" bigint DEFAULT 0 NOT NULL,
	"currency" text NOT NULL,
	"received_at" timestamp with time zone NOT NULL,
	CONSTRAINT "payment_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "payment_order_key" UNIQUE("operator_id","order_id"),
	CONSTRAINT "payment_charge_key" UNIQUE("charge_id")
);
--> statement-breakpoint
ALTER TABLE "payment" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "payment_account" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"account_id" text NOT NULL,
	"charges_enabled" boolean DEFAULT false NOT NULL,
	"platform_fee_basis_points" integer DEFAULT 250 NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "payment_account_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "payment_account_operator_key" UNIQUE("operator_id"),
	CONSTRAINT "payment_account_account_id_key" UNIQUE("account_id"),
	CONSTRAINT "payment_account_fee" CHECK (platform_fee_basis_points between 0 and 5000)
);
--> statement-breakpoint
ALTER TABLE "payment_account" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "payment_event" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid,
	"event_id" text NOT NULL,
	"type" text NOT NULL,
	"account_id" text,
	"object_id" text NOT NULL,
	"received_at" timestamp with time zone DEFAULT now() NOT NULL,
	"handled_at" timestamp with time zone,
	CONSTRAINT "payment_event_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "payment_event_event_id_key" UNIQUE("event_id")
);
--> statement-breakpoint
ALTER TABLE "payment_event" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "refund" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"order_id" uuid NOT NULL,
	"payment_id" uuid NOT NULL,
	"amount_minor" bigint NOT NULL,
	"currency" text NOT NULL,
	"status" text DEFAULT 'asked' NOT NULL,
	"reason" text NOT NULL,
	"weather_call_id" uuid,
	"retry_of" uuid,
	"provider_refund_id" text,
	"fault" text,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"done_at" timestamp with time zone,
	CONSTRAINT "refund_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "refund_provider_key" UNIQUE("provider_refund_id"),
	CONSTRAINT "refund_amount" CHECK (amount_minor > 0)
);
--> statement-breakpoint
ALTER TABLE "refund" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "document" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"series_id" uuid NOT NULL,
	"sequence" integer DEFAULT 0 NOT NULL,
	"number" text DEFAULT '' NOT NULL,
	"kind" text NOT NULL,
	"order_id" uuid NOT NULL,
	"original_id" uuid,
	"refund_id" uuid,
	"issue_date" date NOT NULL,
	"supply_date" date NOT NULL,
	"seller" jsonb NOT NULL,
	"buyer" jsonb NOT NULL,
	"currency" text NOT NULL,
	"net_minor" bigint NOT NULL,
	"tax_minor" bigint NOT NULL,
	"gross_minor" bigint NOT NULL,
	"lines" jsonb NOT NULL,
	"taxes" jsonb NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "document_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "document_sequence_key" UNIQUE("operator_id","series_id","sequence"),
	CONSTRAINT "document_number_key" UNIQUE("operator_id","number"),
	CONSTRAINT "document_refund_key" UNIQUE("operator_id","refund_id"),
	CONSTRAINT "document_sum" CHECK (gross_minor = net_minor + tax_minor),
	CONSTRAINT "document_original" CHECK ((kind = 'credit_note') = (original_id is not null))
);
--> statement-breakpoint
ALTER TABLE "document" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "document_series" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"kind" text NOT NULL,
	"year" integer NOT NULL,
	"prefix" text NOT NULL,
	"last_sequence" integer DEFAULT 0 NOT NULL,
	CONSTRAINT "document_series_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "document_series_kind_year_key" UNIQUE("operator_id","kind","year"),
	CONSTRAINT "document_series_prefix_key" UNIQUE("operator_id","prefix")
);
--> statement-breakpoint
ALTER TABLE "document_series" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "seller" (
	"id" uuid PRIMARY KEY NOT NULL,
	"operator_id" uuid NOT NULL,
	"name" text NOT NULL,
	"street" text NOT NULL,
	"postcode" text NOT NULL,
	"city" text NOT NULL,
	"country" text NOT NULL,
	"tax_id" text,
	"email" text NOT NULL,
	CONSTRAINT "seller_operator_id_id_key" UNIQUE("operator_id","id"),
	CONSTRAINT "seller_operator_key" UNIQUE("operator_id")
);
--> statement-breakpoint
ALTER TABLE "seller" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
ALTER TABLE "letter" ADD COLUMN "enclosures" jsonb DEFAULT '[]'::jsonb NOT NULL;--> statement-breakpoint
ALTER TABLE "bow_window" ADD CONSTRAINT "bow_window_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "bow_window" ADD CONSTRAINT "bow_window_computation_fk" FOREIGN KEY ("operator_id","plan_id","computation_id") REFERENCES "public"."computation"("operator_id","plan_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "bow_window" ADD CONSTRAINT "bow_window_zone_fk" FOREIGN KEY ("operator_id","zone_id") REFERENCES "public"."zone"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "computation" ADD CONSTRAINT "computation_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "computation" ADD CONSTRAINT "computation_plan_fk" FOREIGN KEY ("operator_id","plan_id") REFERENCES "public"."plan"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "picture" ADD CONSTRAINT "picture_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "plan" ADD CONSTRAINT "plan_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "plan" ADD CONSTRAINT "plan_site_fk" FOREIGN KEY ("operator_id","site_id") REFERENCES "public"."site"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "site" ADD CONSTRAINT "site_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "site" ADD CONSTRAINT "site_picture_fk" FOREIGN KEY ("operator_id","picture_id") REFERENCES "public"."picture"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "zone" ADD CONSTRAINT "zone_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "zone" ADD CONSTRAINT "zone_site_fk" FOREIGN KEY ("operator_id","site_id") REFERENCES "public"."site"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "price_category" ADD CONSTRAINT "price_category_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "price_category" ADD CONSTRAINT "price_category_programme_fk" FOREIGN KEY ("operator_id","programme_id") REFERENCES "public"."programme"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "programme" ADD CONSTRAINT "programme_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "programme" ADD CONSTRAINT "programme_site_fk" FOREIGN KEY ("operator_id","site_id") REFERENCES "public"."site"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "programme" ADD CONSTRAINT "programme_zone_fk" FOREIGN KEY ("operator_id","site_id","zone_id") REFERENCES "public"."zone"("operator_id","site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "slot" ADD CONSTRAINT "slot_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "slot" ADD CONSTRAINT "slot_window_fk" FOREIGN KEY ("operator_id","window_id","zone_id","window_starts_at","window_ends_at") REFERENCES "public"."bow_window"("operator_id","id","zone_id","starts_at","ends_at") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "slot" ADD CONSTRAINT "slot_programme_fk" FOREIGN KEY ("operator_id","programme_id") REFERENCES "public"."programme"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "slot" ADD CONSTRAINT "slot_zone_fk" FOREIGN KEY ("operator_id","site_id","zone_id") REFERENCES "public"."zone"("operator_id","site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "slot_forecast" ADD CONSTRAINT "slot_forecast_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "slot_forecast" ADD CONSTRAINT "slot_forecast_slot_fk" FOREIGN KEY ("operator_id","slot_id") REFERENCES "public"."slot"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "weather_call" ADD CONSTRAINT "weather_call_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "weather_call" ADD CONSTRAINT "weather_call_site_fk" FOREIGN KEY ("operator_id","site_id") REFERENCES "public"."site"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "weather_call_slot" ADD CONSTRAINT "weather_call_slot_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "weather_call_slot" ADD CONSTRAINT "weather_call_slot_call_fk" FOREIGN KEY ("operator_id","weather_call_id") REFERENCES "public"."weather_call"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "weather_call_slot" ADD CONSTRAINT "weather_call_slot_slot_fk" FOREIGN KEY ("operator_id","slot_id") REFERENCES "public"."slot"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "order" ADD CONSTRAINT "order_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "order" ADD CONSTRAINT "order_slot_fk" FOREIGN KEY ("operator_id","slot_id") REFERENCES "public"."slot"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "order_line" ADD CONSTRAINT "order_line_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "order_line" ADD CONSTRAINT "order_line_order_fk" FOREIGN KEY ("operator_id","order_id") REFERENCES "public"."order"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "order_line" ADD CONSTRAINT "order_line_price_category_fk" FOREIGN KEY ("operator_id","price_category_id") REFERENCES "public"."price_category"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "ticket" ADD CONSTRAINT "ticket_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "ticket" ADD CONSTRAINT "ticket_order_fk" FOREIGN KEY ("operator_id","order_id") REFERENCES "public"."order"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "ticket" ADD CONSTRAINT "ticket_order_line_fk" FOREIGN KEY ("operator_id","order_line_id") REFERENCES "public"."order_line"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "ticket" ADD CONSTRAINT "ticket_slot_fk" FOREIGN KEY ("operator_id","slot_id") REFERENCES "public"."slot"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "ledger_entry" ADD CONSTRAINT "ledger_entry_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "ledger_entry" ADD CONSTRAINT "ledger_entry_order_fk" FOREIGN KEY ("operator_id","order_id") REFERENCES "public"."order"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "ledger_entry" ADD CONSTRAINT "ledger_entry_refund_fk" FOREIGN KEY ("operator_id","refund_id") REFERENCES "public"."refund"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "payment" ADD CONSTRAINT "payment_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "payment" ADD CONSTRAINT "payment_order_fk" FOREIGN KEY ("operator_id","order_id") REFERENCES "public"."order"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "payment_account" ADD CONSTRAINT "payment_account_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "payment_event" ADD CONSTRAINT "payment_event_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "refund" ADD CONSTRAINT "refund_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "refund" ADD CONSTRAINT "refund_order_fk" FOREIGN KEY ("operator_id","order_id") REFERENCES "public"."order"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "refund" ADD CONSTRAINT "refund_payment_fk" FOREIGN KEY ("operator_id","payment_id") REFERENCES "public"."payment"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "refund" ADD CONSTRAINT "refund_weather_call_fk" FOREIGN KEY ("operator_id","weather_call_id") REFERENCES "public"."weather_call"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "refund" ADD CONSTRAINT "refund_retry_fk" FOREIGN KEY ("operator_id","retry_of") REFERENCES "public"."refund"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "document" ADD CONSTRAINT "document_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "document" ADD CONSTRAINT "document_series_fk" FOREIGN KEY ("operator_id","series_id") REFERENCES "public"."document_series"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "document" ADD CONSTRAINT "document_order_fk" FOREIGN KEY ("operator_id","order_id") REFERENCES "public"."order"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "document" ADD CONSTRAINT "document_original_fk" FOREIGN KEY ("operator_id","original_id") REFERENCES "public"."document"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "document" ADD CONSTRAINT "document_refund_fk" FOREIGN KEY ("operator_id","refund_id") REFERENCES "public"."refund"("operator_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "document_series" ADD CONSTRAINT "document_series_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "seller" ADD CONSTRAINT "seller_operator_id_operator_id_fk" FOREIGN KEY ("operator_id") REFERENCES "public"."operator"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "bow_window_zone_index" ON "bow_window" USING btree ("operator_id","zone_id","local_date");--> statement-breakpoint
CREATE INDEX "bow_window_computation_index" ON "bow_window" USING btree ("operator_id","computation_id","local_date");--> statement-breakpoint
CREATE UNIQUE INDEX "plan_one_live_key" ON "plan" USING btree ("operator_id","site_id") WHERE state = 'live';--> statement-breakpoint
CREATE INDEX "price_category_programme_index" ON "price_category" USING btree ("operator_id","programme_id");--> statement-breakpoint
CREATE INDEX "slot_site_index" ON "slot" USING btree ("operator_id","site_id","starts_at");--> statement-breakpoint
CREATE INDEX "slot_programme_index" ON "slot" USING btree ("operator_id","programme_id","starts_at");--> statement-breakpoint
CREATE INDEX "weather_call_site_index" ON "weather_call" USING btree ("operator_id","site_id","created_at");--> statement-breakpoint
CREATE INDEX "weather_call_slot_slot_index" ON "weather_call_slot" USING btree ("operator_id","slot_id");--> statement-breakpoint
CREATE INDEX "order_slot_index" ON "order" USING btree ("operator_id","slot_id","status");--> statement-breakpoint
CREATE INDEX "order_created_index" ON "order" USING btree ("operator_id","created_at");--> statement-breakpoint
CREATE INDEX "order_line_order_index" ON "order_line" USING btree ("operator_id","order_id");--> statement-breakpoint
CREATE INDEX "ticket_order_index" ON "ticket" USING btree ("operator_id","order_id");--> statement-breakpoint
CREATE INDEX "ticket_slot_index" ON "ticket" USING btree ("operator_id","slot_id","status");--> statement-breakpoint
CREATE INDEX "ledger_entry_booked_index" ON "ledger_entry" USING btree ("operator_id","booked_at");--> statement-breakpoint
CREATE UNIQUE INDEX "refund_call_off_key" ON "refund" USING btree ("operator_id","order_id") WHERE reason = 'called_off' and status <> 'failed';--> statement-breakpoint
CREATE INDEX "refund_weather_call_index" ON "refund" USING btree ("operator_id","weather_call_id");--> statement-breakpoint
CREATE UNIQUE INDEX "refund_retry_key" ON "refund" USING btree ("operator_id","retry_of");--> statement-breakpoint
CREATE INDEX "document_order_index" ON "document" USING btree ("operator_id","order_id");--> statement-breakpoint
CREATE POLICY "bow_window_tenant" ON "bow_window" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "computation_tenant" ON "computation" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "picture_tenant" ON "picture" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "plan_tenant" ON "plan" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "site_tenant" ON "site" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "zone_tenant" ON "zone" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "price_category_tenant" ON "price_category" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "programme_tenant" ON "programme" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "slot_tenant" ON "slot" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "slot_forecast_tenant" ON "slot_forecast" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "weather_call_tenant" ON "weather_call" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "weather_call_slot_tenant" ON "weather_call_slot" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "order_tenant" ON "order" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "order_line_tenant" ON "order_line" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "ticket_tenant" ON "ticket" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "ledger_entry_tenant" ON "ledger_entry" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "payment_tenant" ON "payment" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "payment_account_tenant" ON "payment_account" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "payment_account_by_account" ON "payment_account" AS PERMISSIVE FOR SELECT TO "bowkeeper_app" USING (account_id = nullif(current_setting('app.payment_account', true), ''));--> statement-breakpoint
CREATE POLICY "payment_event_tenant" ON "payment_event" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id is not distinct from nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id is not distinct from nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "refund_tenant" ON "refund" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "document_tenant" ON "document" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "document_series_tenant" ON "document_series" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "seller_tenant" ON "seller" AS PERMISSIVE FOR ALL TO "bowkeeper_app" USING (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid) WITH CHECK (operator_id = nullif(current_setting('app.operator_id', true), '')::uuid);