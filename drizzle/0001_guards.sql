-- What the tables cannot say by themselves: what is kept is never changed or removed, states follow one another only as in
-- db/states.ts, and the indexes and extensions that Drizzle does not write. This stops mistakes and the application's own
-- faults; whoever owns the database is caught by verifying the chains, not stopped.

CREATE EXTENSION IF NOT EXISTS pg_trgm;
CREATE EXTENSION IF NOT EXISTS unaccent;

-- The words that a column may hold ---------------------------------------------------------------------------

ALTER TABLE "revisions" ADD CONSTRAINT "revisions_state_known"
  CHECK (state IN ('draft', 'signed', 'witnessed', 'returned', 'superseded', 'voided'));
ALTER TABLE "entries" ADD CONSTRAINT "entries_state_known"
  CHECK (state IN ('draft', 'signed', 'witnessed', 'returned', 'superseded', 'voided'));
ALTER TABLE "person_roles" ADD CONSTRAINT "person_roles_role_known"
  CHECK (role IN ('researcher', 'witness', 'supervisor', 'administrator'));
ALTER TABLE "user" ADD CONSTRAINT "user_decimal_sign_known" CHECK (decimal_sign IN ('.', ','));
ALTER TABLE "user" ADD CONSTRAINT "user_email_lower_case" CHECK (email = lower(email));
ALTER TABLE "notebooks" ADD CONSTRAINT "notebooks_code_form" CHECK (code ~ '^[A-Z][A-Z0-9]{1,7}$');
ALTER TABLE "signatures" ADD CONSTRAINT "signatures_kind_known" CHECK (kind IN ('author', 'witness'));
ALTER TABLE "attachment_chunks" ADD CONSTRAINT "attachment_chunks_size" CHECK (octet_length(bytes) BETWEEN 1 AND 1048576);

-- Rows that stay as they were written ------------------------------------------------------------------------

CREATE FUNCTION refuse_change() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  RAISE EXCEPTION '% on "%" is refused: its rows stay as they were written', TG_OP, TG_TABLE_NAME
    USING ERRCODE = 'integrity_constraint_violation';
END $$;

DO $$
DECLARE kept text;
BEGIN
  FOREACH kept IN ARRAY ARRAY['events', 'signed_contents', 'signatures', 'attachments', 'results',
    'block_solves', 'updates', 'stray_updates', 'contributors', 'findings', 'yjs_clients'] LOOP
    EXECUTE format('CREATE TRIGGER %I BEFORE UPDATE OR DELETE ON %I FOR EACH ROW EXECUTE FUNCTION refuse_change()', kept || '_stay', kept);
    EXECUTE format('CREATE TRIGGER %I BEFORE TRUNCATE ON %I FOR EACH STATEMENT EXECUTE FUNCTION refuse_change()', kept || '_stay_whole', kept);
  END LOOP;
  FOREACH kept IN ARRAY ARRAY['user', 'notebooks', 'entries', 'revisions', 'revision_attachments', 'openings',
    'audit_heads', 'constants', 'signing_keys', 'invitations', 'outbox', 'migrations'] LOOP
    EXECUTE format('CREATE TRIGGER %I BEFORE DELETE ON %I FOR EACH ROW EXECUTE FUNCTION refuse_change()', kept || '_remain', kept);
    EXECUTE format('CREATE TRIGGER %I BEFORE TRUNCATE ON %I FOR EACH STATEMENT EXECUTE FUNCTION refuse_change()', kept || '_remain_whole', kept);
  END LOOP;
END $$;

-- Bytes may come and go only until the file has its row in "attachments".
CREATE FUNCTION guard_chunk() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE file text;
BEGIN
  IF TG_OP = 'DELETE' THEN file := OLD.attachment_id; ELSE file := NEW.attachment_id; END IF;
  IF TG_OP = 'UPDATE' OR EXISTS (SELECT FROM attachments WHERE id = file) THEN
    RAISE EXCEPTION '% on "attachment_chunks" is refused: the bytes of a file stay as they arrived', TG_OP
      USING ERRCODE = 'integrity_constraint_violation';
  END IF;
  IF TG_OP = 'DELETE' THEN RETURN OLD; END IF;
  RETURN NEW;
END $$;
CREATE TRIGGER attachment_chunks_stay BEFORE INSERT OR UPDATE OR DELETE ON "attachment_chunks"
  FOR EACH ROW EXECUTE FUNCTION guard_chunk();
CREATE TRIGGER attachment_chunks_stay_whole BEFORE TRUNCATE ON "attachment_chunks"
  FOR EACH STATEMENT EXECUTE FUNCTION refuse_change();

-- Rows of which only named columns change --------------------------------------------------------------------

-- The trigger's arguments are the columns that may change.
CREATE FUNCTION refuse_other_columns() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE
  before jsonb := to_jsonb(OLD);
  after jsonb := to_jsonb(NEW);
  name text;
BEGIN
  FOREACH name IN ARRAY TG_ARGV LOOP
    before := before - name;
    after := after - name;
  END LOOP;
  IF before IS DISTINCT FROM after THEN
    RAISE EXCEPTION 'UPDATE on "%" is refused: only % may change', TG_TABLE_NAME, array_to_string(TG_ARGV, ', ')
      USING ERRCODE = 'integrity_constraint_violation';
  END IF;
  RETURN NEW;
END $$;

CREATE TRIGGER entries_columns BEFORE UPDATE ON "entries"
  FOR EACH ROW EXECUTE FUNCTION refuse_other_columns('revision_number', 'state', 'witness_id');
CREATE TRIGGER notebooks_columns BEFORE UPDATE ON "notebooks"
  FOR EACH ROW EXECUTE FUNCTION refuse_other_columns('title', 'about', 'next_number');
CREATE TRIGGER revision_attachments_columns BEFORE UPDATE ON "revision_attachments"
  FOR EACH ROW EXECUTE FUNCTION refuse_other_columns('struck_at', 'struck_reason', 'struck_by');
CREATE TRIGGER openings_columns BEFORE UPDATE ON "openings"
  FOR EACH ROW EXECUTE FUNCTION refuse_other_columns('opened_at', 'whole_at');
CREATE TRIGGER signing_keys_columns BEFORE UPDATE ON "signing_keys"
  FOR EACH ROW EXECUTE FUNCTION refuse_other_columns('retired_at');
CREATE TRIGGER invitations_columns BEFORE UPDATE ON "invitations"
  FOR EACH ROW EXECUTE FUNCTION refuse_other_columns('used_at');
CREATE TRIGGER outbox_columns BEFORE UPDATE ON "outbox"
  FOR EACH ROW EXECUTE FUNCTION refuse_other_columns('sent_at');
-- A new value of a constant is a new row; only which one new blocks take may change.
CREATE TRIGGER constants_columns BEFORE UPDATE ON "constants"
  FOR EACH ROW EXECUTE FUNCTION refuse_other_columns('current');

CREATE FUNCTION guard_user() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF NEW.id <> OLD.id OR NEW.created_at <> OLD.created_at THEN
    RAISE EXCEPTION 'UPDATE on "user" is refused: an id is for good' USING ERRCODE = 'integrity_constraint_violation';
  END IF;
  IF OLD.closed_at IS NOT NULL AND NEW.closed_at IS DISTINCT FROM OLD.closed_at THEN
    RAISE EXCEPTION 'UPDATE on "user" is refused: a closed account stays closed' USING ERRCODE = 'integrity_constraint_violation';
  END IF;
  RETURN NEW;
END $$;
CREATE TRIGGER user_guard BEFORE UPDATE ON "user" FOR EACH ROW EXECUTE FUNCTION guard_user();

CREATE FUNCTION guard_numbers() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF NEW.next_number NOT IN (OLD.next_number, OLD.next_number + 1) THEN
    RAISE EXCEPTION 'UPDATE on "notebooks" is refused: entry numbers run without a gap' USING ERRCODE = 'integrity_constraint_violation';
  END IF;
  RETURN NEW;
END $$;
CREATE TRIGGER notebooks_numbers BEFORE UPDATE ON "notebooks" FOR EACH ROW EXECUTE FUNCTION guard_numbers();

CREATE FUNCTION guard_heads() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF NEW.id <> OLD.id OR NEW.seq <> OLD.seq + 1 THEN
    RAISE EXCEPTION 'UPDATE on "audit_heads" is refused: a head moves one event at a time' USING ERRCODE = 'integrity_constraint_violation';
  END IF;
  RETURN NEW;
END $$;
CREATE TRIGGER audit_heads_step BEFORE UPDATE ON "audit_heads" FOR EACH ROW EXECUTE FUNCTION guard_heads();

-- Events follow the head: no gap, no second chain.
CREATE FUNCTION guard_event() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE head record;
BEGIN
  SELECT seq, hash INTO head FROM audit_heads WHERE id = 'store';
  IF NEW.seq <> head.seq + 1 OR NEW.previous_hash <> head.hash THEN
    RAISE EXCEPTION 'INSERT on "events" is refused: it does not follow the last event' USING ERRCODE = 'integrity_constraint_violation';
  END IF;
  RETURN NEW;
END $$;
CREATE TRIGGER events_follow BEFORE INSERT ON "events" FOR EACH ROW EXECUTE FUNCTION guard_event();

-- Revisions --------------------------------------------------------------------------------------------------

CREATE FUNCTION guard_revision() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE
  before jsonb := to_jsonb(OLD);
  after jsonb := to_jsonb(NEW);
  free text[];
  name text;
BEGIN
  IF NEW.state <> OLD.state AND (OLD.state, NEW.state) NOT IN (
    ('draft', 'signed'), ('draft', 'voided'), ('signed', 'witnessed'), ('signed', 'returned'), ('witnessed', 'superseded')
  ) THEN
    RAISE EXCEPTION 'UPDATE on "revisions" is refused: % does not follow %', NEW.state, OLD.state
      USING ERRCODE = 'integrity_constraint_violation';
  END IF;
  -- Which words for search were derived when is no part of the content.
  free := ARRAY['state', 'derived_seq'];
  IF OLD.state = 'draft' THEN
    free := free || ARRAY['title', 'done_on', 'late_reason', 'last_seq', 'last_typed_at', 'page_token', 'page_bytes'];
  END IF;
  IF NEW.state <> OLD.state THEN
    free := free || CASE NEW.state
      WHEN 'signed' THEN ARRAY['signed_at']
      WHEN 'witnessed' THEN ARRAY['witnessed_at']
      WHEN 'returned' THEN ARRAY['returned_at', 'returned_by', 'return_reason']
      WHEN 'voided' THEN ARRAY['voided_at', 'void_reason']
      ELSE ARRAY[]::text[] END;
  END IF;
  FOREACH name IN ARRAY free LOOP
    before := before - name;
    after := after - name;
  END LOOP;
  IF before IS DISTINCT FROM after THEN
    RAISE EXCEPTION 'UPDATE on "revisions" is refused: in state % only % may change', OLD.state, array_to_string(free, ', ')
      USING ERRCODE = 'integrity_constraint_violation';
  END IF;
  IF NEW.last_seq < OLD.last_seq THEN
    RAISE EXCEPTION 'UPDATE on "revisions" is refused: numbers of updates only grow' USING ERRCODE = 'integrity_constraint_violation';
  END IF;
  RETURN NEW;
END $$;
CREATE TRIGGER revisions_guard BEFORE UPDATE ON "revisions" FOR EACH ROW EXECUTE FUNCTION guard_revision();

CREATE FUNCTION demand_draft() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE found text;
BEGIN
  SELECT state INTO found FROM revisions WHERE id = NEW.revision_id;
  IF found <> 'draft' THEN
    RAISE EXCEPTION '% on "%" is refused: the revision is %', TG_OP, TG_TABLE_NAME, found
      USING ERRCODE = 'integrity_constraint_violation';
  END IF;
  RETURN NEW;
END $$;
CREATE TRIGGER updates_into_draft BEFORE INSERT ON "updates" FOR EACH ROW EXECUTE FUNCTION demand_draft();
CREATE TRIGGER revision_attachments_in_draft BEFORE INSERT OR UPDATE ON "revision_attachments"
  FOR EACH ROW EXECUTE FUNCTION demand_draft();

CREATE FUNCTION begin_as_draft() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF NEW.state <> 'draft' THEN
    RAISE EXCEPTION 'INSERT on "revisions" is refused: a revision begins as a draft' USING ERRCODE = 'integrity_constraint_violation';
  END IF;
  RETURN NEW;
END $$;
CREATE TRIGGER revisions_begin BEFORE INSERT ON "revisions" FOR EACH ROW EXECUTE FUNCTION begin_as_draft();

-- The head of the audit trail, before its first event ---------------------------------------------------------

INSERT INTO "audit_heads" (id, seq, hash) VALUES ('store', 0, repeat('0', 64));

-- Indexes for finding ----------------------------------------------------------------------------------------

CREATE INDEX "compound_names_trigrams" ON "compound_names" USING gin (compared gin_trgm_ops);
CREATE INDEX "entries_author" ON "entries" (author_id);
CREATE INDEX "entries_newest" ON "entries" (created_at DESC, id DESC);
CREATE INDEX "events_at" ON "events" (at);
CREATE INDEX "failures_at" ON "failures" (at);
