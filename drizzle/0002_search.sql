CREATE TABLE "search_ph" (
	"revision_id" text NOT NULL,
	"kind" text NOT NULL,
	"position" integer NOT NULL,
	"entry_id" text NOT NULL,
	"ph" double precision NOT NULL,
	CONSTRAINT "search_ph_revision_id_kind_position_pk" PRIMARY KEY("revision_id","kind","position")
);
--> statement-breakpoint
CREATE TABLE "search_words" (
	"revision_id" text PRIMARY KEY NOT NULL,
	"entry_id" text NOT NULL,
	"words" "tsvector" NOT NULL
);
--> statement-breakpoint
ALTER TABLE "search_ph" ADD CONSTRAINT "search_ph_revision_id_revisions_id_fk" FOREIGN KEY ("revision_id") REFERENCES "public"."revisions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "search_ph" ADD CONSTRAINT "search_ph_entry_id_entries_id_fk" FOREIGN KEY ("entry_id") REFERENCES "public"."entries"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "search_words" ADD CONSTRAINT "search_words_revision_id_revisions_id_fk" FOREIGN KEY ("revision_id") REFERENCES "public"."revisions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "search_words" ADD CONSTRAINT "search_words_entry_id_entries_id_fk" FOREIGN KEY ("entry_id") REFERENCES "public"."entries"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "search_ph_value" ON "search_ph" USING btree ("kind","ph","entry_id");--> statement-breakpoint
CREATE INDEX "search_words_words" ON "search_words" USING gin ("words");--> statement-breakpoint
-- By hand from here: what fills these tables, and the indexes that finding needs besides.

-- Entry number, page (its first line is the title) and names of attachments, without accents. "simple" keeps every word as it
-- is: pages are written in many languages, and a word of the trade must not be cut to a stem.
CREATE FUNCTION put_search_words(revision text) RETURNS void LANGUAGE sql AS $$
  INSERT INTO search_words (revision_id, entry_id, words)
  SELECT t.revision_id, t.entry_id, to_tsvector('simple', unaccent(concat_ws(E'\n',
    n.code || '-' || lpad(e.number::text, 4, '0'),
    r.title,
    t.text,
    (SELECT string_agg(a.name || ' ' || regexp_replace(a.name, '[._-]+', ' ', 'g'), E'\n')
       FROM revision_attachments ra JOIN attachments a ON a.id = ra.attachment_id WHERE ra.revision_id = t.revision_id))))
  FROM page_texts t
  JOIN revisions r ON r.id = t.revision_id
  JOIN entries e ON e.id = t.entry_id
  JOIN notebooks n ON n.id = e.notebook_id
  WHERE t.revision_id = revision
  ON CONFLICT (revision_id) DO UPDATE SET words = excluded.words
$$;

-- A page's readings and results stand in page_texts as numbers parted by spaces, as typed and as solved.
CREATE FUNCTION put_search_ph(revision text, entry text, what text, numbers text) RETURNS void LANGUAGE sql AS $$
  DELETE FROM search_ph WHERE revision_id = revision AND kind = what;
  INSERT INTO search_ph (revision_id, kind, position, entry_id, ph)
  SELECT revision, what, place, entry, replace(word, ',', '.')::double precision
  FROM regexp_split_to_table(coalesce(numbers, ''), '\s+') WITH ORDINALITY AS words (word, place)
  WHERE word ~ '^[+-]?\d{1,3}([.,]\d{1,30})?$'
$$;

CREATE FUNCTION follow_page_text() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  PERFORM put_search_words(NEW.revision_id);
  PERFORM put_search_ph(NEW.revision_id, NEW.entry_id, 'calculated', NEW.calculated_ph);
  PERFORM put_search_ph(NEW.revision_id, NEW.entry_id, 'measured', NEW.measured_ph);
  RETURN NULL;
END $$;
CREATE TRIGGER page_texts_found AFTER INSERT OR UPDATE ON "page_texts" FOR EACH ROW EXECUTE FUNCTION follow_page_text();

CREATE FUNCTION follow_attachment() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  PERFORM put_search_words(NEW.revision_id);
  RETURN NULL;
END $$;
CREATE TRIGGER revision_attachments_found AFTER INSERT ON "revision_attachments" FOR EACH ROW EXECUTE FUNCTION follow_attachment();

CREATE FUNCTION follow_title() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  PERFORM put_search_words(NEW.id);
  RETURN NULL;
END $$;
CREATE TRIGGER revisions_found AFTER UPDATE OF title ON "revisions" FOR EACH ROW
  WHEN (OLD.title IS DISTINCT FROM NEW.title) EXECUTE FUNCTION follow_title();

CREATE INDEX "entries_in_notebook_newest" ON "entries" (notebook_id, created_at DESC, id DESC);
CREATE INDEX "revisions_state" ON "revisions" (state, entry_id);
CREATE INDEX "revisions_done_on" ON "revisions" (done_on, entry_id) WHERE done_on IS NOT NULL;
CREATE INDEX "revisions_signed_at" ON "revisions" (signed_at, entry_id) WHERE signed_at IS NOT NULL;
