ALTER TABLE "radios" ADD COLUMN "ramps" boolean DEFAULT false NOT NULL;--> statement-breakpoint
ALTER TABLE "radios" ADD COLUMN "slope_step_hz_per_s" double precision;--> statement-breakpoint
ALTER TABLE "radios" ADD COLUMN "max_slope_hz_per_s" double precision;--> statement-breakpoint
ALTER TABLE "radios" ADD COLUMN "plan_mode" text DEFAULT 'fewest' NOT NULL;--> statement-breakpoint
ALTER TABLE "radios" ADD COLUMN "cadence_s" double precision;--> statement-breakpoint
ALTER TABLE "radios" ADD COLUMN "converter_lo_hz" double precision;--> statement-breakpoint
ALTER TABLE "radios" ADD COLUMN "converter_inverts" boolean DEFAULT false NOT NULL;--> statement-breakpoint
ALTER TABLE "radios" ADD CONSTRAINT "radios_ramp_stated" CHECK (("radios"."slope_step_hz_per_s" IS NULL OR "radios"."slope_step_hz_per_s" > 0) AND ("radios"."max_slope_hz_per_s" IS NULL OR "radios"."max_slope_hz_per_s" > 0)
    AND (NOT "radios"."ramps" OR ("radios"."slope_step_hz_per_s" IS NOT NULL AND "radios"."max_slope_hz_per_s" IS NOT NULL AND "radios"."slope_step_hz_per_s" <= "radios"."max_slope_hz_per_s")));--> statement-breakpoint
ALTER TABLE "radios" ADD CONSTRAINT "radios_plan_mode_stated" CHECK ("radios"."plan_mode" IN ('fewest', 'cadence') AND ("radios"."cadence_s" IS NULL OR "radios"."cadence_s" > 0) AND ("radios"."plan_mode" = 'fewest' OR "radios"."cadence_s" IS NOT NULL));--> statement-breakpoint
ALTER TABLE "radios" ADD CONSTRAINT "radios_converter_side" CHECK (CASE WHEN "radios"."converter_lo_hz" IS NULL THEN NOT "radios"."converter_inverts"
    WHEN "radios"."converter_inverts" THEN "radios"."converter_lo_hz" > "radios"."tune_high_hz" ELSE "radios"."converter_lo_hz" > 0 AND "radios"."converter_lo_hz" < "radios"."tune_low_hz" END);