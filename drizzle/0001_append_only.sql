-- What has been said stays said: versions and the record are added to, never changed.
CREATE FUNCTION refuse_update() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  RAISE EXCEPTION 'rows of % are never changed; add a new version', TG_TABLE_NAME USING ERRCODE = 'integrity_constraint_violation';
END $$;
--> statement-breakpoint
CREATE TRIGGER alignment_append_only BEFORE UPDATE ON alignment FOR EACH ROW EXECUTE FUNCTION refuse_update();
--> statement-breakpoint
CREATE TRIGGER annotation_version_append_only BEFORE UPDATE ON annotation_version FOR EACH ROW EXECUTE FUNCTION refuse_update();
--> statement-breakpoint
CREATE TRIGGER analysis_plan_append_only BEFORE UPDATE OF body, version, study_id, team_id, reason ON analysis_plan FOR EACH ROW EXECUTE FUNCTION refuse_update();
--> statement-breakpoint
CREATE TRIGGER audit_entry_append_only BEFORE UPDATE ON audit_entry FOR EACH ROW EXECUTE FUNCTION refuse_update();
--> statement-breakpoint
CREATE TRIGGER raw_file_append_only BEFORE UPDATE ON raw_file FOR EACH ROW EXECUTE FUNCTION refuse_update();
--> statement-breakpoint
-- The record cannot be shortened while its team exists (a team's own end takes it along).
CREATE FUNCTION refuse_audit_delete() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF EXISTS (SELECT 1 FROM team WHERE id = OLD.team_id) THEN
    RAISE EXCEPTION 'entries of the record are never removed' USING ERRCODE = 'integrity_constraint_violation';
  END IF;
  RETURN OLD;
END $$;
--> statement-breakpoint
CREATE TRIGGER audit_entry_no_delete BEFORE DELETE ON audit_entry FOR EACH ROW EXECUTE FUNCTION refuse_audit_delete();
--> statement-breakpoint
-- A tag's recording belongs to the tag's session.
CREATE FUNCTION check_annotation_session() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF NOT EXISTS (SELECT 1 FROM recording r WHERE r.id = NEW.recording_id AND r.session_id = NEW.session_id) THEN
    RAISE EXCEPTION 'the recording is not of this session' USING ERRCODE = 'foreign_key_violation';
  END IF;
  RETURN NEW;
END $$;
--> statement-breakpoint
CREATE TRIGGER annotation_session_matches BEFORE INSERT OR UPDATE ON annotation FOR EACH ROW EXECUTE FUNCTION check_annotation_session();
--> statement-breakpoint
-- Versions count up by one: a lost update shows itself as a refused row.
CREATE FUNCTION check_next_annotation_version() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF NEW.version <> 1 + coalesce((SELECT max(version) FROM annotation_version WHERE annotation_id = NEW.annotation_id), 0) THEN
    RAISE EXCEPTION 'version % does not follow the last one', NEW.version USING ERRCODE = 'serialization_failure';
  END IF;
  RETURN NEW;
END $$;
--> statement-breakpoint
CREATE TRIGGER annotation_version_follows BEFORE INSERT ON annotation_version FOR EACH ROW EXECUTE FUNCTION check_next_annotation_version();
