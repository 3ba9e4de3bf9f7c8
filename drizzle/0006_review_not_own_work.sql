-- Nobody decides on own work: not who handed it in (a check of the table), not the session's annotator, and not
-- whoever wrote a tag or an offset of it since the last decision.
CREATE FUNCTION check_review_not_own_work() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE
  last_decision timestamptz;
BEGIN
  IF NEW.reviewer_id IS NULL THEN
    RETURN NEW;
  END IF;
  SELECT max(r.decided_at) INTO last_decision FROM review r WHERE r.session_id = NEW.session_id AND r.round < NEW.round;
  IF EXISTS (SELECT 1 FROM session s WHERE s.id = NEW.session_id AND s.annotator_id = NEW.reviewer_id)
    OR EXISTS (
      SELECT 1 FROM annotation_version v JOIN annotation a ON a.id = v.annotation_id
      WHERE a.session_id = NEW.session_id AND v.author_id = NEW.reviewer_id AND (last_decision IS NULL OR v.created_at > last_decision)
    )
    OR EXISTS (
      SELECT 1 FROM alignment l JOIN recording r ON r.id = l.recording_id
      WHERE r.session_id = NEW.session_id AND l.author_id = NEW.reviewer_id AND (last_decision IS NULL OR l.created_at > last_decision)
    )
  THEN
    RAISE EXCEPTION 'nobody decides on own work' USING ERRCODE = 'check_violation', CONSTRAINT = 'review_not_own_work';
  END IF;
  RETURN NEW;
END $$;
--> statement-breakpoint
CREATE TRIGGER review_not_own_work BEFORE INSERT OR UPDATE OF reviewer_id, decision ON review FOR EACH ROW EXECUTE FUNCTION check_review_not_own_work();
