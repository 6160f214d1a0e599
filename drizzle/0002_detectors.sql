ALTER TABLE "links" ADD COLUMN "bandwidth_hz" double precision;--> statement-breakpoint
ALTER TABLE "links" ADD COLUMN "spreading_factor" integer;--> statement-breakpoint
ALTER TABLE "links" ADD COLUMN "es_n0_db" double precision DEFAULT 20 NOT NULL;--> statement-breakpoint
ALTER TABLE "links" ADD CONSTRAINT "links_chirp_has_shape" CHECK ("links"."detector" <> 'chirp' OR ("links"."bandwidth_hz" > 0 AND "links"."spreading_factor" BETWEEN 5 AND 12));