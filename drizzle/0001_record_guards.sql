-- Records that are never changed: versions, signatures, the log, answers. The triggers guard against mistakes and the
-- application's own code; whoever holds the database files can remove them.
CREATE FUNCTION refuse_change() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  RAISE EXCEPTION '% is a record: it cannot be changed or removed', TG_TABLE_NAME USING ERRCODE = 'KL001';
END $$;
--> statement-breakpoint
CREATE TRIGGER entry_version_fixed BEFORE UPDATE OR DELETE ON entry_version FOR EACH ROW EXECUTE FUNCTION refuse_change();
--> statement-breakpoint
CREATE TRIGGER entry_version_kept BEFORE TRUNCATE ON entry_version FOR EACH STATEMENT EXECUTE FUNCTION refuse_change();
--> statement-breakpoint
CREATE TRIGGER signature_fixed BEFORE UPDATE OR DELETE ON signature FOR EACH ROW EXECUTE FUNCTION refuse_change();
--> statement-breakpoint
CREATE TRIGGER signature_kept BEFORE TRUNCATE ON signature FOR EACH STATEMENT EXECUTE FUNCTION refuse_change();
--> statement-breakpoint
CREATE TRIGGER log_record_fixed BEFORE UPDATE OR DELETE ON log_record FOR EACH ROW EXECUTE FUNCTION refuse_change();
--> statement-breakpoint
CREATE TRIGGER log_record_kept BEFORE TRUNCATE ON log_record FOR EACH STATEMENT EXECUTE FUNCTION refuse_change();
--> statement-breakpoint
CREATE TRIGGER answer_fixed BEFORE UPDATE OR DELETE ON answer FOR EACH ROW EXECUTE FUNCTION refuse_change();
--> statement-breakpoint
CREATE TRIGGER answer_kept BEFORE TRUNCATE ON answer FOR EACH STATEMENT EXECUTE FUNCTION refuse_change();
--> statement-breakpoint
CREATE TRIGGER question_kept BEFORE DELETE ON question FOR EACH ROW EXECUTE FUNCTION refuse_change();
--> statement-breakpoint
CREATE FUNCTION keep_leaf() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF TG_OP <> 'UPDATE' THEN
    RAISE EXCEPTION 'an entry is never removed: its leaf number stays used' USING ERRCODE = 'KL001';
  END IF;
  IF NEW.leaf <> OLD.leaf OR NEW.notebook_id <> OLD.notebook_id OR NEW.author_id <> OLD.author_id OR NEW.id <> OLD.id THEN
    RAISE EXCEPTION 'leaf number, notebook and author of an entry are fixed' USING ERRCODE = 'KL001';
  END IF;
  RETURN NEW;
END $$;
--> statement-breakpoint
CREATE TRIGGER entry_leaf_kept BEFORE UPDATE OR DELETE ON entry FOR EACH ROW EXECUTE FUNCTION keep_leaf();
--> statement-breakpoint
CREATE TRIGGER entry_kept BEFORE TRUNCATE ON entry FOR EACH STATEMENT EXECUTE FUNCTION refuse_change();
--> statement-breakpoint
CREATE FUNCTION keep_next_leaf() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF NEW.next_leaf < OLD.next_leaf THEN
    RAISE EXCEPTION 'leaf numbers are never used again' USING ERRCODE = 'KL001';
  END IF;
  RETURN NEW;
END $$;
--> statement-breakpoint
CREATE TRIGGER notebook_next_leaf_kept BEFORE UPDATE ON notebook FOR EACH ROW EXECUTE FUNCTION keep_next_leaf();
--> statement-breakpoint
CREATE FUNCTION keep_trace_bytes() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF TG_OP <> 'UPDATE' THEN
    RAISE EXCEPTION 'a received file is never removed' USING ERRCODE = 'KL001';
  END IF;
  IF NEW.sha256 <> OLD.sha256 OR NEW.bytes <> OLD.bytes OR NEW.file_name <> OLD.file_name OR NEW.notebook_id <> OLD.notebook_id THEN
    RAISE EXCEPTION 'digest, size and name of a received file are fixed' USING ERRCODE = 'KL001';
  END IF;
  RETURN NEW;
END $$;
--> statement-breakpoint
CREATE TRIGGER trace_bytes_kept BEFORE UPDATE OR DELETE ON trace FOR EACH ROW EXECUTE FUNCTION keep_trace_bytes();
--> statement-breakpoint
CREATE TRIGGER trace_kept BEFORE TRUNCATE ON trace FOR EACH STATEMENT EXECUTE FUNCTION refuse_change();
--> statement-breakpoint
-- The journal of the embedded database: every changed row is handed to a temporary table of the connection, from which
-- the client takes it before it commits. On a PostgreSQL server the setting is absent and the triggers do nothing.
CREATE FUNCTION hand_to_journal() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF current_setting('kelvinleaf.journal', true) IS DISTINCT FROM 'on' THEN
    RETURN NULL;
  END IF;
  IF TG_OP = 'DELETE' THEN
    INSERT INTO pg_temp.journal_capture (tbl, op, row_json) VALUES (TG_TABLE_NAME, 'remove', to_jsonb(OLD));
  ELSE
    INSERT INTO pg_temp.journal_capture (tbl, op, row_json) VALUES (TG_TABLE_NAME, 'put', to_jsonb(NEW));
  END IF;
  RETURN NULL;
END $$;
--> statement-breakpoint
DO $$
DECLARE name text;
BEGIN
  -- Jobs and rate counts are made anew; the position is the journal's own.
  FOR name IN SELECT tablename FROM pg_tables WHERE schemaname = 'public' AND tablename NOT IN ('job', 'rate_count', 'journal_position')
  LOOP
    EXECUTE format('CREATE TRIGGER zz_journal AFTER INSERT OR UPDATE OR DELETE ON %I FOR EACH ROW EXECUTE FUNCTION hand_to_journal()', name);
  END LOOP;
END $$;
--> statement-breakpoint
INSERT INTO journal_position (id, seq) VALUES (1, 0);
--> statement-breakpoint
CREATE INDEX entry_words ON entry USING gin (to_tsvector('simple', words));
