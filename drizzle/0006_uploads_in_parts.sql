CREATE TABLE "element_upload_held" (
	"upload_id" uuid NOT NULL,
	"line" integer NOT NULL,
	"element_set_id" uuid NOT NULL,
	CONSTRAINT "element_upload_held_upload_id_line_element_set_id_pk" PRIMARY KEY("upload_id","line","element_set_id")
);
--> statement-breakpoint
DROP INDEX "element_sets_upload";--> statement-breakpoint
ALTER TABLE "element_uploads" ALTER COLUMN "sha256" DROP NOT NULL;--> statement-breakpoint
ALTER TABLE "element_upload_held" ADD CONSTRAINT "element_upload_held_upload_id_element_uploads_id_fk" FOREIGN KEY ("upload_id") REFERENCES "public"."element_uploads"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "element_upload_held" ADD CONSTRAINT "element_upload_held_element_set_id_element_sets_id_fk" FOREIGN KEY ("element_set_id") REFERENCES "public"."element_sets"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "element_upload_held_set" ON "element_upload_held" USING btree ("element_set_id");--> statement-breakpoint
CREATE INDEX "element_uploads_open" ON "element_uploads" USING btree ("created_at") WHERE "element_uploads"."state" IN ('receiving','reading');--> statement-breakpoint
CREATE INDEX "element_uploads_sha256" ON "element_uploads" USING btree ("sha256");--> statement-breakpoint
CREATE INDEX "element_sets_upload" ON "element_sets" USING btree ("upload_id","line_number","id");--> statement-breakpoint
INSERT INTO "element_upload_parts" ("upload_id", "number", "bytes") SELECT "id", 0, "original" FROM "element_uploads";--> statement-breakpoint
INSERT INTO "element_upload_notes" ("upload_id", "kind", "line", "name", "code", "message")
SELECT u."id", k."kind", (n."note" ->> 'line')::integer, n."note" ->> 'name', n."note" ->> 'code', n."note" ->> 'message'
FROM "element_uploads" AS u
CROSS JOIN LATERAL (VALUES ('refusal', u."refusals"), ('warning', u."warnings")) AS k("kind", "notes")
CROSS JOIN LATERAL jsonb_array_elements(k."notes") WITH ORDINALITY AS n("note", "place")
ORDER BY u."created_at", u."id", k."kind", n."place";--> statement-breakpoint
UPDATE "element_uploads" SET "finished_at" = "created_at", "read_bytes" = "total_bytes" WHERE "state" NOT IN ('receiving', 'reading');--> statement-breakpoint
ALTER TABLE "element_uploads" DROP COLUMN "original";--> statement-breakpoint
ALTER TABLE "element_uploads" DROP COLUMN "refusals";--> statement-breakpoint
ALTER TABLE "element_uploads" DROP COLUMN "warnings";