-- Several events may be written at once: a table of forty rows that is pasted into a block sets some hundred values. The first
-- of them still follows the head, each other the one before it, and a head moves only to an event that is there.

CREATE OR REPLACE FUNCTION guard_event() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE head record;
BEGIN
  SELECT seq, hash INTO head FROM audit_heads WHERE id = 'store';
  IF NEW.seq > head.seq + 1 THEN
    -- The rows that the same statement has inserted before are seen here.
    SELECT seq, hash INTO head FROM events WHERE seq = NEW.seq - 1;
  END IF;
  IF head.seq IS NULL OR NEW.seq <> head.seq + 1 OR NEW.previous_hash <> head.hash THEN
    RAISE EXCEPTION 'INSERT on "events" is refused: it does not follow the last event' USING ERRCODE = 'integrity_constraint_violation';
  END IF;
  RETURN NEW;
END $$;

CREATE OR REPLACE FUNCTION guard_heads() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE isEvent boolean;
BEGIN
  IF OLD.id = 'store' THEN
    isEvent := EXISTS (SELECT FROM events WHERE seq = NEW.seq AND hash = NEW.hash);
  ELSE
    isEvent := EXISTS (SELECT FROM events WHERE entry_id = OLD.id AND entry_seq = NEW.seq AND entry_hash = NEW.hash);
  END IF;
  IF NEW.id <> OLD.id OR NEW.seq <= OLD.seq OR NOT isEvent THEN
    RAISE EXCEPTION 'UPDATE on "audit_heads" is refused: a head moves on to an event that is there' USING ERRCODE = 'integrity_constraint_violation';
  END IF;
  RETURN NEW;
END $$;
