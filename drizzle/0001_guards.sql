-- The trail only grows.
CREATE FUNCTION refuse_change() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  RAISE EXCEPTION 'rows of % are never changed or removed', TG_TABLE_NAME USING ERRCODE = 'integrity_constraint_violation';
END $$;
--> statement-breakpoint
CREATE TRIGGER audit_only_grows BEFORE UPDATE OR DELETE ON audit FOR EACH ROW EXECUTE FUNCTION refuse_change();
--> statement-breakpoint
CREATE TRIGGER audit_not_emptied BEFORE TRUNCATE ON audit FOR EACH STATEMENT EXECUTE FUNCTION refuse_change();
--> statement-breakpoint
-- A published revision keeps its rows and its signature; only where it stands may change.
CREATE FUNCTION keep_published() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF OLD.published_at IS NOT NULL AND (
       NEW.retunes IS DISTINCT FROM OLD.retunes OR NEW."check" IS DISTINCT FROM OLD."check"
    OR NEW.canonical IS DISTINCT FROM OLD.canonical OR NEW.digest IS DISTINCT FROM OLD.digest
    OR NEW.signature IS DISTINCT FROM OLD.signature OR NEW.number IS DISTINCT FROM OLD.number
    OR NEW.verdict IS DISTINCT FROM OLD.verdict OR NEW.published_at IS DISTINCT FROM OLD.published_at) THEN
    RAISE EXCEPTION 'a published revision is never changed; a new one supersedes it' USING ERRCODE = 'integrity_constraint_violation';
  END IF;
  RETURN NEW;
END $$;
--> statement-breakpoint
CREATE TRIGGER table_revisions_keep_published BEFORE UPDATE ON table_revisions FOR EACH ROW EXECUTE FUNCTION keep_published();
