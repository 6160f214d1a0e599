CREATE TABLE "api_keys" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"name" text NOT NULL,
	"prefix" text NOT NULL,
	"key_hash" text NOT NULL,
	"scope" text NOT NULL,
	"station_id" uuid,
	"created_by_id" uuid,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"last_used_at" timestamp (3) with time zone,
	"revoked_at" timestamp (3) with time zone,
	CONSTRAINT "api_keys_station_bound" CHECK (("api_keys"."scope" = 'station') = ("api_keys"."station_id" IS NOT NULL))
);
--> statement-breakpoint
CREATE TABLE "one_time_links" (
	"token_hash" text PRIMARY KEY NOT NULL,
	"kind" text NOT NULL,
	"person_id" uuid,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"expires_at" timestamp (3) with time zone NOT NULL,
	"used_at" timestamp (3) with time zone,
	CONSTRAINT "one_time_links_person_given" CHECK (("one_time_links"."kind" = 'first-administrator') = ("one_time_links"."person_id" IS NULL))
);
--> statement-breakpoint
CREATE TABLE "people" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"email" text NOT NULL,
	"name" text NOT NULL,
	"password_hash" text,
	"roles" text[] NOT NULL,
	"zone" text DEFAULT 'UTC' NOT NULL,
	"disabled_at" timestamp (3) with time zone,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "people_email_lower" CHECK ("people"."email" = lower("people"."email") AND position('@' in "people"."email") > 1),
	CONSTRAINT "people_roles_known" CHECK ("people"."roles" <@ ARRAY['flight-dynamics','operator','on-call','administrator','reader']::text[] AND cardinality("people"."roles") >= 1)
);
--> statement-breakpoint
CREATE TABLE "sessions" (
	"id_hash" text PRIMARY KEY NOT NULL,
	"person_id" uuid NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"last_seen_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"expires_at" timestamp (3) with time zone NOT NULL,
	"ended_at" timestamp (3) with time zone
);
--> statement-breakpoint
CREATE TABLE "audit" (
	"id" bigserial PRIMARY KEY NOT NULL,
	"at" timestamp (3) with time zone NOT NULL,
	"actor_kind" text NOT NULL,
	"actor_id" text,
	"actor_name" text NOT NULL,
	"action" text NOT NULL,
	"entity_kind" text NOT NULL,
	"entity_id" text NOT NULL,
	"table_id" uuid,
	"reason" text,
	"before" jsonb,
	"after" jsonb
);
--> statement-breakpoint
CREATE TABLE "spacecraft" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"name" text NOT NULL,
	"catalogue_number" text,
	"designator" text,
	"oscillator_ppm" double precision DEFAULT 0 NOT NULL,
	"element_age_limit_hours" double precision DEFAULT 72 NOT NULL,
	"along_track_floor_km" double precision,
	"along_track_growth_km_per_day" double precision,
	"in_use_set_id" uuid,
	"retired_at" timestamp (3) with time zone,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "spacecraft_oscillator_range" CHECK ("spacecraft"."oscillator_ppm" >= 0 AND "spacecraft"."oscillator_ppm" <= 1000),
	CONSTRAINT "spacecraft_age_limit_range" CHECK ("spacecraft"."element_age_limit_hours" > 0)
);
--> statement-breakpoint
CREATE TABLE "links" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"spacecraft_id" uuid NOT NULL,
	"name" text NOT NULL,
	"direction" text NOT NULL,
	"carrier_hz" double precision NOT NULL,
	"band_low_hz" double precision NOT NULL,
	"band_high_hz" double precision NOT NULL,
	"symbol_rate_hz" double precision NOT NULL,
	"modulation" text NOT NULL,
	"detector" text NOT NULL,
	"permitted_loss_db" double precision DEFAULT 0.5 NOT NULL,
	"capture_range_hz" double precision,
	"filter_bandwidth_hz" double precision,
	"rolloff" double precision,
	"limit_hz" double precision,
	"drift_limit_hz_per_s" double precision,
	"jump_limit_hz" double precision,
	"error_rate" double precision DEFAULT 0.00001 NOT NULL,
	"min_elevation_deg" double precision DEFAULT 0 NOT NULL,
	"approve_what_holds" boolean NOT NULL,
	"retired_at" timestamp (3) with time zone,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "links_carrier_in_band" CHECK ("links"."carrier_hz" > 0 AND "links"."band_low_hz" > 0 AND "links"."band_low_hz" <= "links"."carrier_hz" AND "links"."carrier_hz" <= "links"."band_high_hz"),
	CONSTRAINT "links_symbol_rate_positive" CHECK ("links"."symbol_rate_hz" > 0),
	CONSTRAINT "links_permitted_loss_range" CHECK ("links"."permitted_loss_db" > 0 AND "links"."permitted_loss_db" <= 20),
	CONSTRAINT "links_stated_has_limit" CHECK ("links"."detector" <> 'stated' OR "links"."limit_hz" > 0),
	CONSTRAINT "links_min_elevation_range" CHECK ("links"."min_elevation_deg" >= 0 AND "links"."min_elevation_deg" < 90)
);
--> statement-breakpoint
CREATE TABLE "antennas" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"station_id" uuid NOT NULL,
	"name" text NOT NULL,
	"setup_s" double precision DEFAULT 120 NOT NULL,
	"retired_at" timestamp (3) with time zone,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "antennas_setup_range" CHECK ("antennas"."setup_s" BETWEEN 0 AND 86400)
);
--> statement-breakpoint
CREATE TABLE "radios" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"antenna_id" uuid NOT NULL,
	"name" text NOT NULL,
	"transmits" boolean NOT NULL,
	"receives" boolean NOT NULL,
	"tune_low_hz" double precision NOT NULL,
	"tune_high_hz" double precision NOT NULL,
	"step_hz" double precision NOT NULL,
	"offset_hz" double precision DEFAULT 0 NOT NULL,
	"min_dwell_s" double precision DEFAULT 1 NOT NULL,
	"latency_ms" double precision DEFAULT 50 NOT NULL,
	"latency_uncertainty_ms" double precision DEFAULT 0 NOT NULL,
	"reference_ppm" double precision DEFAULT 0 NOT NULL,
	"retired_at" timestamp (3) with time zone,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "radios_range" CHECK ("radios"."tune_low_hz" > 0 AND "radios"."tune_low_hz" < "radios"."tune_high_hz"),
	CONSTRAINT "radios_step_positive" CHECK ("radios"."step_hz" > 0 AND "radios"."min_dwell_s" >= 0 AND "radios"."latency_ms" >= 0 AND "radios"."latency_uncertainty_ms" >= 0 AND "radios"."reference_ppm" >= 0),
	CONSTRAINT "radios_does_something" CHECK ("radios"."transmits" OR "radios"."receives")
);
--> statement-breakpoint
CREATE TABLE "stations" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"name" text NOT NULL,
	"latitude_deg" double precision NOT NULL,
	"longitude_deg" double precision NOT NULL,
	"height_m" double precision NOT NULL,
	"min_elevation_deg" double precision DEFAULT 5 NOT NULL,
	"mask" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"zone" text NOT NULL,
	"publish_at" text DEFAULT '18:00' NOT NULL,
	"publish_lead_minutes" integer DEFAULT 60 NOT NULL,
	"freeze_minutes" integer DEFAULT 10 NOT NULL,
	"clock_error_ms" double precision DEFAULT 0 NOT NULL,
	"retired_at" timestamp (3) with time zone,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "stations_position_range" CHECK ("stations"."latitude_deg" BETWEEN -90 AND 90 AND "stations"."longitude_deg" BETWEEN -180 AND 180 AND "stations"."height_m" BETWEEN -500 AND 9000),
	CONSTRAINT "stations_min_elevation_range" CHECK ("stations"."min_elevation_deg" >= 0 AND "stations"."min_elevation_deg" < 90),
	CONSTRAINT "stations_publish_at_form" CHECK ("stations"."publish_at" ~ '^([01][0-9]|2[0-3]):[0-5][0-9]$'),
	CONSTRAINT "stations_lead_range" CHECK ("stations"."publish_lead_minutes" BETWEEN 1 AND 1440 AND "stations"."freeze_minutes" BETWEEN 0 AND 1440)
);
--> statement-breakpoint
CREATE TABLE "element_sets" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"upload_id" uuid NOT NULL,
	"spacecraft_id" uuid,
	"state" text DEFAULT 'waiting' NOT NULL,
	"name" text,
	"catalogue_number" text,
	"designator" text,
	"epoch" timestamp (3) with time zone NOT NULL,
	"epoch_utc_us" bigint NOT NULL,
	"elements" jsonb NOT NULL,
	"original_text" text NOT NULL,
	"line_number" integer NOT NULL,
	"sha256" text NOT NULL,
	"content_sha256" text NOT NULL,
	"warnings" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"decided_at" timestamp (3) with time zone,
	"decided_by" text,
	"reason" text,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "element_sets_in_use_has_spacecraft" CHECK ("element_sets"."state" NOT IN ('in-use','past') OR "element_sets"."spacecraft_id" IS NOT NULL)
);
--> statement-breakpoint
CREATE TABLE "element_uploads" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"state" text NOT NULL,
	"by" text NOT NULL,
	"person_id" uuid,
	"file_name" text,
	"source" text NOT NULL,
	"format" text,
	"original" "bytea" NOT NULL,
	"sha256" text NOT NULL,
	"total_bytes" integer NOT NULL,
	"accepted" integer DEFAULT 0 NOT NULL,
	"already_held" integer DEFAULT 0 NOT NULL,
	"refused" integer DEFAULT 0 NOT NULL,
	"refusals" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"warnings" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"detail" text,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "passes" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"spacecraft_id" uuid NOT NULL,
	"station_id" uuid NOT NULL,
	"element_set_id" uuid NOT NULL,
	"aos" timestamp (3) with time zone NOT NULL,
	"culmination" timestamp (3) with time zone NOT NULL,
	"los" timestamp (3) with time zone NOT NULL,
	"max_elevation_deg" double precision NOT NULL,
	"gone_at" timestamp (3) with time zone,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "passes_order" CHECK ("passes"."aos" <= "passes"."culmination" AND "passes"."culmination" <= "passes"."los")
);
--> statement-breakpoint
CREATE TABLE "signing_keys" (
	"kid" text PRIMARY KEY NOT NULL,
	"public_jwk" jsonb NOT NULL,
	"private_jwk" jsonb NOT NULL,
	"active" boolean DEFAULT true NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "station_reports" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"revision_id" uuid NOT NULL,
	"outcome" text NOT NULL,
	"reason" text,
	"at" timestamp (3) with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "table_revisions" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"table_id" uuid NOT NULL,
	"number" integer NOT NULL,
	"state" text NOT NULL,
	"verdict" text NOT NULL,
	"radio_id" uuid NOT NULL,
	"element_set_id" uuid NOT NULL,
	"retunes" jsonb NOT NULL,
	"check" jsonb NOT NULL,
	"inputs_digest" text NOT NULL,
	"reason" text,
	"approved_by_id" uuid,
	"approved_by" text,
	"approved_at" timestamp (3) with time zone,
	"seconded_by_id" uuid,
	"seconded_by" text,
	"held_at" timestamp (3) with time zone,
	"published_at" timestamp (3) with time zone,
	"published_by" text,
	"collected_at" timestamp (3) with time zone,
	"superseded_at" timestamp (3) with time zone,
	"withdrawn_at" timestamp (3) with time zone,
	"lapsed_at" timestamp (3) with time zone,
	"canonical" text,
	"digest" text,
	"signature" text,
	"updated_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "table_revisions_number_positive" CHECK ("table_revisions"."number" >= 1),
	CONSTRAINT "table_revisions_published_whole" CHECK ("table_revisions"."state" NOT IN ('published','collected','superseded','withdrawn') OR ("table_revisions"."published_at" IS NOT NULL AND "table_revisions"."canonical" IS NOT NULL AND "table_revisions"."digest" IS NOT NULL AND "table_revisions"."signature" IS NOT NULL))
);
--> statement-breakpoint
CREATE TABLE "tables" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"pass_id" uuid NOT NULL,
	"link_id" uuid NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "alerts" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"kind" text NOT NULL,
	"cause" text NOT NULL,
	"severity" text NOT NULL,
	"state" text DEFAULT 'open' NOT NULL,
	"title" text NOT NULL,
	"detail" text NOT NULL,
	"action" text NOT NULL,
	"spacecraft_id" uuid,
	"station_id" uuid,
	"table_id" uuid,
	"due_at" timestamp (3) with time zone,
	"count" integer DEFAULT 1 NOT NULL,
	"opened_at" timestamp (3) with time zone NOT NULL,
	"acknowledged_at" timestamp (3) with time zone,
	"acknowledged_by_id" uuid,
	"acknowledged_by" text,
	"closed_at" timestamp (3) with time zone,
	"closed_by" text,
	"close_reason" text
);
--> statement-breakpoint
CREATE TABLE "idempotency_keys" (
	"actor" text NOT NULL,
	"key" text NOT NULL,
	"route" text NOT NULL,
	"body_sha256" text NOT NULL,
	"status" integer,
	"answer" jsonb,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "idempotency_keys_actor_key_pk" PRIMARY KEY("actor","key"),
	CONSTRAINT "idempotency_keys_key_length" CHECK (length("idempotency_keys"."key") BETWEEN 1 AND 200)
);
--> statement-breakpoint
CREATE TABLE "mails" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"kind" text NOT NULL,
	"to_name" text NOT NULL,
	"to_address" text NOT NULL,
	"subject" text NOT NULL,
	"text" text NOT NULL,
	"html" text NOT NULL,
	"message_id" text NOT NULL,
	"state" text DEFAULT 'queued' NOT NULL,
	"attempts" integer DEFAULT 0 NOT NULL,
	"last_error" text,
	"alert_id" uuid,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"sent_at" timestamp (3) with time zone
);
--> statement-breakpoint
CREATE TABLE "rate_limits" (
	"key" text PRIMARY KEY NOT NULL,
	"points" integer DEFAULT 0 NOT NULL,
	"expire" timestamp with time zone
);
--> statement-breakpoint
CREATE TABLE "received_mails" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"message_id" text NOT NULL,
	"from_address" text NOT NULL,
	"to_addresses" text[] NOT NULL,
	"subject" text NOT NULL,
	"text" text NOT NULL,
	"html" text,
	"received_at" timestamp (3) with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "settings" (
	"key" text PRIMARY KEY NOT NULL,
	"value" jsonb NOT NULL,
	"updated_at" timestamp (3) with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "slots" (
	"kind" text NOT NULL,
	"entity" text NOT NULL,
	"instant" timestamp (3) with time zone NOT NULL,
	"done_at" timestamp (3) with time zone NOT NULL,
	"outcome" text NOT NULL,
	CONSTRAINT "slots_kind_entity_instant_pk" PRIMARY KEY("kind","entity","instant")
);
--> statement-breakpoint
ALTER TABLE "api_keys" ADD CONSTRAINT "api_keys_station_id_stations_id_fk" FOREIGN KEY ("station_id") REFERENCES "public"."stations"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "api_keys" ADD CONSTRAINT "api_keys_created_by_id_people_id_fk" FOREIGN KEY ("created_by_id") REFERENCES "public"."people"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "one_time_links" ADD CONSTRAINT "one_time_links_person_id_people_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."people"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sessions" ADD CONSTRAINT "sessions_person_id_people_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."people"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "spacecraft" ADD CONSTRAINT "spacecraft_in_use_set_id_element_sets_id_fk" FOREIGN KEY ("in_use_set_id") REFERENCES "public"."element_sets"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "links" ADD CONSTRAINT "links_spacecraft_id_spacecraft_id_fk" FOREIGN KEY ("spacecraft_id") REFERENCES "public"."spacecraft"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "antennas" ADD CONSTRAINT "antennas_station_id_stations_id_fk" FOREIGN KEY ("station_id") REFERENCES "public"."stations"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "radios" ADD CONSTRAINT "radios_antenna_id_antennas_id_fk" FOREIGN KEY ("antenna_id") REFERENCES "public"."antennas"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "element_sets" ADD CONSTRAINT "element_sets_upload_id_element_uploads_id_fk" FOREIGN KEY ("upload_id") REFERENCES "public"."element_uploads"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "element_sets" ADD CONSTRAINT "element_sets_spacecraft_id_spacecraft_id_fk" FOREIGN KEY ("spacecraft_id") REFERENCES "public"."spacecraft"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "element_uploads" ADD CONSTRAINT "element_uploads_person_id_people_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."people"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "passes" ADD CONSTRAINT "passes_spacecraft_id_spacecraft_id_fk" FOREIGN KEY ("spacecraft_id") REFERENCES "public"."spacecraft"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "passes" ADD CONSTRAINT "passes_station_id_stations_id_fk" FOREIGN KEY ("station_id") REFERENCES "public"."stations"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "passes" ADD CONSTRAINT "passes_element_set_id_element_sets_id_fk" FOREIGN KEY ("element_set_id") REFERENCES "public"."element_sets"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "station_reports" ADD CONSTRAINT "station_reports_revision_id_table_revisions_id_fk" FOREIGN KEY ("revision_id") REFERENCES "public"."table_revisions"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "table_revisions" ADD CONSTRAINT "table_revisions_table_id_tables_id_fk" FOREIGN KEY ("table_id") REFERENCES "public"."tables"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "table_revisions" ADD CONSTRAINT "table_revisions_radio_id_radios_id_fk" FOREIGN KEY ("radio_id") REFERENCES "public"."radios"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "table_revisions" ADD CONSTRAINT "table_revisions_element_set_id_element_sets_id_fk" FOREIGN KEY ("element_set_id") REFERENCES "public"."element_sets"("id") ON DELETE restrict ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "table_revisions" ADD CONSTRAINT "table_revisions_approved_by_id_people_id_fk" FOREIGN KEY ("approved_by_id") REFERENCES "public"."people"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "table_revisions" ADD CONSTRAINT "table_revisions_seconded_by_id_people_id_fk" FOREIGN KEY ("seconded_by_id") REFERENCES "public"."people"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "tables" ADD CONSTRAINT "tables_pass_id_passes_id_fk" FOREIGN KEY ("pass_id") REFERENCES "public"."passes"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "tables" ADD CONSTRAINT "tables_link_id_links_id_fk" FOREIGN KEY ("link_id") REFERENCES "public"."links"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "alerts" ADD CONSTRAINT "alerts_spacecraft_id_spacecraft_id_fk" FOREIGN KEY ("spacecraft_id") REFERENCES "public"."spacecraft"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "alerts" ADD CONSTRAINT "alerts_station_id_stations_id_fk" FOREIGN KEY ("station_id") REFERENCES "public"."stations"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "alerts" ADD CONSTRAINT "alerts_table_id_tables_id_fk" FOREIGN KEY ("table_id") REFERENCES "public"."tables"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "alerts" ADD CONSTRAINT "alerts_acknowledged_by_id_people_id_fk" FOREIGN KEY ("acknowledged_by_id") REFERENCES "public"."people"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "mails" ADD CONSTRAINT "mails_alert_id_alerts_id_fk" FOREIGN KEY ("alert_id") REFERENCES "public"."alerts"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
CREATE UNIQUE INDEX "api_keys_prefix_unique" ON "api_keys" USING btree ("prefix");--> statement-breakpoint
CREATE INDEX "api_keys_station" ON "api_keys" USING btree ("station_id");--> statement-breakpoint
CREATE INDEX "api_keys_created_by" ON "api_keys" USING btree ("created_by_id");--> statement-breakpoint
CREATE INDEX "one_time_links_person" ON "one_time_links" USING btree ("person_id");--> statement-breakpoint
CREATE UNIQUE INDEX "people_email_unique" ON "people" USING btree ("email");--> statement-breakpoint
CREATE INDEX "sessions_person" ON "sessions" USING btree ("person_id");--> statement-breakpoint
CREATE INDEX "audit_entity" ON "audit" USING btree ("entity_kind","entity_id");--> statement-breakpoint
CREATE INDEX "audit_table" ON "audit" USING btree ("table_id");--> statement-breakpoint
CREATE INDEX "audit_at" ON "audit" USING btree ("at");--> statement-breakpoint
CREATE UNIQUE INDEX "spacecraft_name_unique" ON "spacecraft" USING btree (lower("name")) WHERE "spacecraft"."retired_at" IS NULL;--> statement-breakpoint
CREATE UNIQUE INDEX "spacecraft_catalogue_number_unique" ON "spacecraft" USING btree ("catalogue_number") WHERE "spacecraft"."retired_at" IS NULL;--> statement-breakpoint
CREATE INDEX "spacecraft_in_use_set" ON "spacecraft" USING btree ("in_use_set_id");--> statement-breakpoint
CREATE UNIQUE INDEX "links_name_unique" ON "links" USING btree ("spacecraft_id",lower("name")) WHERE "links"."retired_at" IS NULL;--> statement-breakpoint
CREATE INDEX "links_spacecraft" ON "links" USING btree ("spacecraft_id");--> statement-breakpoint
CREATE UNIQUE INDEX "antennas_name_unique" ON "antennas" USING btree ("station_id",lower("name")) WHERE "antennas"."retired_at" IS NULL;--> statement-breakpoint
CREATE INDEX "antennas_station" ON "antennas" USING btree ("station_id");--> statement-breakpoint
CREATE UNIQUE INDEX "radios_name_unique" ON "radios" USING btree ("antenna_id",lower("name")) WHERE "radios"."retired_at" IS NULL;--> statement-breakpoint
CREATE INDEX "radios_antenna" ON "radios" USING btree ("antenna_id");--> statement-breakpoint
CREATE UNIQUE INDEX "stations_name_unique" ON "stations" USING btree (lower("name")) WHERE "stations"."retired_at" IS NULL;--> statement-breakpoint
CREATE UNIQUE INDEX "element_sets_content_unique" ON "element_sets" USING btree ("content_sha256");--> statement-breakpoint
CREATE UNIQUE INDEX "element_sets_one_in_use" ON "element_sets" USING btree ("spacecraft_id") WHERE "element_sets"."state" = 'in-use';--> statement-breakpoint
CREATE INDEX "element_sets_spacecraft" ON "element_sets" USING btree ("spacecraft_id","epoch");--> statement-breakpoint
CREATE INDEX "element_sets_upload" ON "element_sets" USING btree ("upload_id");--> statement-breakpoint
CREATE INDEX "element_sets_epoch" ON "element_sets" USING btree ("epoch");--> statement-breakpoint
CREATE INDEX "element_uploads_person" ON "element_uploads" USING btree ("person_id");--> statement-breakpoint
CREATE INDEX "element_uploads_created" ON "element_uploads" USING btree ("created_at");--> statement-breakpoint
CREATE INDEX "passes_spacecraft_station" ON "passes" USING btree ("spacecraft_id","station_id","culmination");--> statement-breakpoint
CREATE INDEX "passes_station" ON "passes" USING btree ("station_id","aos");--> statement-breakpoint
CREATE INDEX "passes_element_set" ON "passes" USING btree ("element_set_id");--> statement-breakpoint
CREATE INDEX "passes_aos" ON "passes" USING btree ("aos");--> statement-breakpoint
CREATE UNIQUE INDEX "signing_keys_one_active" ON "signing_keys" USING btree ("active") WHERE "signing_keys"."active";--> statement-breakpoint
CREATE INDEX "station_reports_revision" ON "station_reports" USING btree ("revision_id");--> statement-breakpoint
CREATE UNIQUE INDEX "table_revisions_number_unique" ON "table_revisions" USING btree ("table_id","number");--> statement-breakpoint
CREATE UNIQUE INDEX "table_revisions_one_open" ON "table_revisions" USING btree ("table_id") WHERE "table_revisions"."state" IN ('drafted','approved','held');--> statement-breakpoint
CREATE UNIQUE INDEX "table_revisions_one_out" ON "table_revisions" USING btree ("table_id") WHERE "table_revisions"."state" IN ('published','collected');--> statement-breakpoint
CREATE INDEX "table_revisions_radio" ON "table_revisions" USING btree ("radio_id");--> statement-breakpoint
CREATE INDEX "table_revisions_element_set" ON "table_revisions" USING btree ("element_set_id");--> statement-breakpoint
CREATE INDEX "table_revisions_approved_by" ON "table_revisions" USING btree ("approved_by_id");--> statement-breakpoint
CREATE INDEX "table_revisions_seconded_by" ON "table_revisions" USING btree ("seconded_by_id");--> statement-breakpoint
CREATE INDEX "table_revisions_state" ON "table_revisions" USING btree ("state");--> statement-breakpoint
CREATE UNIQUE INDEX "tables_pass_link_unique" ON "tables" USING btree ("pass_id","link_id");--> statement-breakpoint
CREATE INDEX "tables_link" ON "tables" USING btree ("link_id");--> statement-breakpoint
CREATE UNIQUE INDEX "alerts_one_per_cause" ON "alerts" USING btree ("cause") WHERE "alerts"."state" <> 'closed';--> statement-breakpoint
CREATE INDEX "alerts_state" ON "alerts" USING btree ("state","opened_at");--> statement-breakpoint
CREATE INDEX "alerts_spacecraft" ON "alerts" USING btree ("spacecraft_id");--> statement-breakpoint
CREATE INDEX "alerts_station" ON "alerts" USING btree ("station_id");--> statement-breakpoint
CREATE INDEX "alerts_table" ON "alerts" USING btree ("table_id");--> statement-breakpoint
CREATE INDEX "alerts_acknowledged_by" ON "alerts" USING btree ("acknowledged_by_id");--> statement-breakpoint
CREATE INDEX "idempotency_keys_created" ON "idempotency_keys" USING btree ("created_at");--> statement-breakpoint
CREATE UNIQUE INDEX "mails_message_id_unique" ON "mails" USING btree ("message_id");--> statement-breakpoint
CREATE INDEX "mails_alert" ON "mails" USING btree ("alert_id");--> statement-breakpoint
CREATE INDEX "mails_state" ON "mails" USING btree ("state","created_at");--> statement-breakpoint
CREATE INDEX "received_mails_at" ON "received_mails" USING btree ("received_at");--> statement-breakpoint
CREATE INDEX "slots_done" ON "slots" USING btree ("done_at");