CREATE TABLE "manoeuvres" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"spacecraft_id" uuid NOT NULL,
	"starts_at" timestamp (3) with time zone NOT NULL,
	"ends_at" timestamp (3) with time zone NOT NULL,
	"speed_sigma_mps" double precision NOT NULL,
	"note" text,
	"entered_by" text NOT NULL,
	"cancelled_at" timestamp (3) with time zone,
	"cancelled_by" text,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "manoeuvres_order" CHECK ("manoeuvres"."starts_at" <= "manoeuvres"."ends_at"),
	CONSTRAINT "manoeuvres_speed_range" CHECK ("manoeuvres"."speed_sigma_mps" >= 0 AND "manoeuvres"."speed_sigma_mps" <= 5000)
);
--> statement-breakpoint
CREATE TABLE "publication_rules" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"station_id" uuid NOT NULL,
	"link_id" uuid NOT NULL,
	"publish_at" text,
	"lead_minutes" integer,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "publication_rules_publish_at_form" CHECK ("publication_rules"."publish_at" ~ '^([01][0-9]|2[0-3]):[0-5][0-9]$'),
	CONSTRAINT "publication_rules_lead_range" CHECK ("publication_rules"."lead_minutes" BETWEEN 1 AND 1440)
);
--> statement-breakpoint
CREATE TABLE "quiet_spans" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"station_id" uuid,
	"spacecraft_id" uuid,
	"link_id" uuid,
	"starts_at" timestamp (3) with time zone NOT NULL,
	"ends_at" timestamp (3) with time zone NOT NULL,
	"reason" text NOT NULL,
	"entered_by" text NOT NULL,
	"cancelled_at" timestamp (3) with time zone,
	"cancelled_by" text,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "quiet_spans_of_something" CHECK (num_nonnulls("quiet_spans"."station_id", "quiet_spans"."spacecraft_id", "quiet_spans"."link_id") >= 1),
	CONSTRAINT "quiet_spans_order" CHECK ("quiet_spans"."starts_at" < "quiet_spans"."ends_at")
);
--> statement-breakpoint
CREATE TABLE "element_upload_notes" (
	"id" bigserial PRIMARY KEY NOT NULL,
	"upload_id" uuid NOT NULL,
	"kind" text NOT NULL,
	"line" integer NOT NULL,
	"name" text,
	"code" text NOT NULL,
	"message" text NOT NULL
);
--> statement-breakpoint
CREATE TABLE "element_upload_parts" (
	"upload_id" uuid NOT NULL,
	"number" integer NOT NULL,
	"bytes" "bytea" NOT NULL,
	CONSTRAINT "element_upload_parts_upload_id_number_pk" PRIMARY KEY("upload_id","number")
);
--> statement-breakpoint
CREATE TABLE "antenna_decisions" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"antenna_id" uuid NOT NULL,
	"pass_id" uuid NOT NULL,
	"other_pass_id" uuid NOT NULL,
	"decided_by" text NOT NULL,
	"decided_at" timestamp (3) with time zone NOT NULL,
	"reason" text,
	CONSTRAINT "antenna_decisions_two_passes" CHECK ("antenna_decisions"."pass_id" <> "antenna_decisions"."other_pass_id")
);
--> statement-breakpoint
CREATE TABLE "calendar_addresses" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"token_hash" text NOT NULL,
	"person_id" uuid,
	"station_id" uuid,
	"created_by" text NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"last_used_at" timestamp (3) with time zone,
	"revoked_at" timestamp (3) with time zone,
	CONSTRAINT "calendar_addresses_whose" CHECK (num_nonnulls("calendar_addresses"."person_id", "calendar_addresses"."station_id") = 1)
);
--> statement-breakpoint
CREATE TABLE "servers" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"host" text NOT NULL,
	"pid" integer NOT NULL,
	"role" text NOT NULL,
	"started_at" timestamp (3) with time zone NOT NULL,
	"seen_at" timestamp (3) with time zone NOT NULL,
	"stopped_at" timestamp (3) with time zone
);
--> statement-breakpoint
CREATE TABLE "web_hook_deliveries" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"hook_id" uuid NOT NULL,
	"event" text NOT NULL,
	"body" text NOT NULL,
	"state" text DEFAULT 'queued' NOT NULL,
	"attempts" integer DEFAULT 0 NOT NULL,
	"last_status" integer,
	"last_error" text,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"tried_at" timestamp (3) with time zone
);
--> statement-breakpoint
CREATE TABLE "web_hooks" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"name" text NOT NULL,
	"url" text NOT NULL,
	"secret" text NOT NULL,
	"events" text[] NOT NULL,
	"enabled" boolean DEFAULT true NOT NULL,
	"created_by" text NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"retired_at" timestamp (3) with time zone,
	CONSTRAINT "web_hooks_events_known" CHECK ("web_hooks"."events" <@ ARRAY['table.published','table.superseded','table.withdrawn','alert.opened','alert.closed']::text[] AND cardinality("web_hooks"."events") >= 1)
);
--> statement-breakpoint
DROP INDEX "element_sets_upload";--> statement-breakpoint
ALTER TABLE "spacecraft" ADD COLUMN "priority" integer DEFAULT 0 NOT NULL;--> statement-breakpoint
ALTER TABLE "spacecraft" ADD COLUMN "auto_use" jsonb;--> statement-breakpoint
ALTER TABLE "element_sets" ADD COLUMN "use_at" timestamp (3) with time zone;--> statement-breakpoint
ALTER TABLE "element_sets" ADD COLUMN "use_scheduled_by_id" uuid;--> statement-breakpoint
ALTER TABLE "element_sets" ADD COLUMN "use_scheduled_by" text;--> statement-breakpoint
ALTER TABLE "element_sets" ADD COLUMN "kept_at" timestamp (3) with time zone;--> statement-breakpoint
ALTER TABLE "element_uploads" ADD COLUMN "read_bytes" integer DEFAULT 0 NOT NULL;--> statement-breakpoint
ALTER TABLE "element_uploads" ADD COLUMN "cancel_requested_at" timestamp (3) with time zone;--> statement-breakpoint
ALTER TABLE "element_uploads" ADD COLUMN "finished_at" timestamp (3) with time zone;--> statement-breakpoint
ALTER TABLE "passes" ADD COLUMN "calendar_sequence" integer DEFAULT 0 NOT NULL;--> statement-breakpoint
ALTER TABLE "signing_keys" ADD COLUMN "retired_at" timestamp (3) with time zone;--> statement-breakpoint
ALTER TABLE "table_revisions" ADD COLUMN "stands_down" boolean DEFAULT false NOT NULL;--> statement-breakpoint
ALTER TABLE "manoeuvres" ADD CONSTRAINT "manoeuvres_spacecraft_id_spacecraft_id_fk" FOREIGN KEY ("spacecraft_id") REFERENCES "public"."spacecraft"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "publication_rules" ADD CONSTRAINT "publication_rules_station_id_stations_id_fk" FOREIGN KEY ("station_id") REFERENCES "public"."stations"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "publication_rules" ADD CONSTRAINT "publication_rules_link_id_links_id_fk" FOREIGN KEY ("link_id") REFERENCES "public"."links"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "quiet_spans" ADD CONSTRAINT "quiet_spans_station_id_stations_id_fk" FOREIGN KEY ("station_id") REFERENCES "public"."stations"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "quiet_spans" ADD CONSTRAINT "quiet_spans_spacecraft_id_spacecraft_id_fk" FOREIGN KEY ("spacecraft_id") REFERENCES "public"."spacecraft"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "quiet_spans" ADD CONSTRAINT "quiet_spans_link_id_links_id_fk" FOREIGN KEY ("link_id") REFERENCES "public"."links"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "element_upload_notes" ADD CONSTRAINT "element_upload_notes_upload_id_element_uploads_id_fk" FOREIGN KEY ("upload_id") REFERENCES "public"."element_uploads"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "element_upload_parts" ADD CONSTRAINT "element_upload_parts_upload_id_element_uploads_id_fk" FOREIGN KEY ("upload_id") REFERENCES "public"."element_uploads"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "antenna_decisions" ADD CONSTRAINT "antenna_decisions_antenna_id_antennas_id_fk" FOREIGN KEY ("antenna_id") REFERENCES "public"."antennas"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "antenna_decisions" ADD CONSTRAINT "antenna_decisions_pass_id_passes_id_fk" FOREIGN KEY ("pass_id") REFERENCES "public"."passes"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "antenna_decisions" ADD CONSTRAINT "antenna_decisions_other_pass_id_passes_id_fk" FOREIGN KEY ("other_pass_id") REFERENCES "public"."passes"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "calendar_addresses" ADD CONSTRAINT "calendar_addresses_person_id_people_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."people"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "calendar_addresses" ADD CONSTRAINT "calendar_addresses_station_id_stations_id_fk" FOREIGN KEY ("station_id") REFERENCES "public"."stations"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "web_hook_deliveries" ADD CONSTRAINT "web_hook_deliveries_hook_id_web_hooks_id_fk" FOREIGN KEY ("hook_id") REFERENCES "public"."web_hooks"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "manoeuvres_spacecraft" ON "manoeuvres" USING btree ("spacecraft_id","starts_at");--> statement-breakpoint
CREATE UNIQUE INDEX "publication_rules_station_link_unique" ON "publication_rules" USING btree ("station_id","link_id");--> statement-breakpoint
CREATE INDEX "publication_rules_link" ON "publication_rules" USING btree ("link_id");--> statement-breakpoint
CREATE INDEX "quiet_spans_station" ON "quiet_spans" USING btree ("station_id","starts_at");--> statement-breakpoint
CREATE INDEX "quiet_spans_spacecraft" ON "quiet_spans" USING btree ("spacecraft_id");--> statement-breakpoint
CREATE INDEX "quiet_spans_link" ON "quiet_spans" USING btree ("link_id");--> statement-breakpoint
CREATE INDEX "element_upload_notes_upload" ON "element_upload_notes" USING btree ("upload_id","kind","line","id");--> statement-breakpoint
CREATE UNIQUE INDEX "antenna_decisions_pair_unique" ON "antenna_decisions" USING btree ("antenna_id",least("pass_id", "other_pass_id"),greatest("pass_id", "other_pass_id"));--> statement-breakpoint
CREATE INDEX "antenna_decisions_pass" ON "antenna_decisions" USING btree ("pass_id");--> statement-breakpoint
CREATE INDEX "antenna_decisions_other_pass" ON "antenna_decisions" USING btree ("other_pass_id");--> statement-breakpoint
CREATE UNIQUE INDEX "calendar_addresses_token_unique" ON "calendar_addresses" USING btree ("token_hash");--> statement-breakpoint
CREATE INDEX "calendar_addresses_person" ON "calendar_addresses" USING btree ("person_id");--> statement-breakpoint
CREATE INDEX "calendar_addresses_station" ON "calendar_addresses" USING btree ("station_id");--> statement-breakpoint
CREATE INDEX "servers_seen" ON "servers" USING btree ("seen_at");--> statement-breakpoint
CREATE INDEX "web_hook_deliveries_hook" ON "web_hook_deliveries" USING btree ("hook_id","created_at");--> statement-breakpoint
CREATE INDEX "web_hook_deliveries_state" ON "web_hook_deliveries" USING btree ("state","created_at");--> statement-breakpoint
CREATE UNIQUE INDEX "web_hooks_name_unique" ON "web_hooks" USING btree (lower("name")) WHERE "web_hooks"."retired_at" IS NULL;--> statement-breakpoint
ALTER TABLE "element_sets" ADD CONSTRAINT "element_sets_use_scheduled_by_id_people_id_fk" FOREIGN KEY ("use_scheduled_by_id") REFERENCES "public"."people"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "element_sets_use_at" ON "element_sets" USING btree ("use_at") WHERE "element_sets"."use_at" IS NOT NULL;--> statement-breakpoint
CREATE INDEX "element_sets_use_scheduled_by" ON "element_sets" USING btree ("use_scheduled_by_id");--> statement-breakpoint
CREATE INDEX "element_sets_unassigned" ON "element_sets" USING btree ("state","epoch") WHERE "element_sets"."spacecraft_id" IS NULL;--> statement-breakpoint
CREATE INDEX "element_sets_upload" ON "element_sets" USING btree ("upload_id","line_number");--> statement-breakpoint
ALTER TABLE "spacecraft" ADD CONSTRAINT "spacecraft_priority_range" CHECK ("spacecraft"."priority" BETWEEN 0 AND 100);--> statement-breakpoint
ALTER TABLE "element_sets" ADD CONSTRAINT "element_sets_use_at_waits" CHECK ("element_sets"."use_at" IS NULL OR ("element_sets"."state" IN ('waiting','past') AND "element_sets"."spacecraft_id" IS NOT NULL));