CREATE TABLE "compound_families" (
	"compound_id" text NOT NULL,
	"family_id" text NOT NULL,
	CONSTRAINT "compound_families_compound_id_family_id_pk" PRIMARY KEY("compound_id","family_id")
);
--> statement-breakpoint
CREATE TABLE "compound_names" (
	"compound_id" text NOT NULL,
	"compound_kind" text NOT NULL,
	"kind" text NOT NULL,
	"shown" text NOT NULL,
	"compared" text NOT NULL,
	"lost" integer,
	CONSTRAINT "compound_names_compound_id_kind_compared_pk" PRIMARY KEY("compound_id","kind","compared")
);
--> statement-breakpoint
CREATE TABLE "constants" (
	"id" text PRIMARY KEY NOT NULL,
	"family_id" text NOT NULL,
	"step" integer NOT NULL,
	"version" integer NOT NULL,
	"pka" text NOT NULL,
	"basis" text NOT NULL,
	"ionic_strength" text,
	"temperature_c" text NOT NULL,
	"uncertainty" text,
	"dh_kj_mol" text,
	"dcp_j_mol_k" text,
	"source" text NOT NULL,
	"from_memory" boolean NOT NULL,
	"nominal" boolean NOT NULL,
	"disputed" text,
	"since" timestamp with time zone NOT NULL,
	"current" boolean NOT NULL
);
--> statement-breakpoint
CREATE TABLE "families" (
	"id" text PRIMARY KEY NOT NULL,
	"name" text NOT NULL,
	"kind" text NOT NULL,
	"formula" text NOT NULL,
	"cas" text,
	"molar_mass" text NOT NULL,
	"z0" integer NOT NULL,
	"neutral_form" integer,
	"forms" jsonb NOT NULL
);
--> statement-breakpoint
CREATE TABLE "hazards" (
	"reagent_id" text PRIMARY KEY NOT NULL,
	"record" jsonb NOT NULL
);
--> statement-breakpoint
CREATE TABLE "ions" (
	"id" text PRIMARY KEY NOT NULL,
	"name" text NOT NULL,
	"formula" text NOT NULL,
	"z" integer NOT NULL,
	"role" text NOT NULL
);
--> statement-breakpoint
CREATE TABLE "mixing" (
	"id" text PRIMARY KEY NOT NULL,
	"severity" text NOT NULL,
	"rule" jsonb NOT NULL,
	"text" text NOT NULL,
	"source" text NOT NULL,
	"from_memory" boolean NOT NULL
);
--> statement-breakpoint
CREATE TABLE "reagents" (
	"id" text PRIMARY KEY NOT NULL,
	"name" text NOT NULL,
	"formula" text NOT NULL,
	"hydrate_waters" text NOT NULL,
	"cas" text,
	"molar_mass" text NOT NULL,
	"gives" jsonb NOT NULL,
	"physical_form" text NOT NULL,
	"density" text,
	"mass_fraction" text,
	"typical_purity" text,
	"source" text NOT NULL,
	"from_memory" boolean NOT NULL,
	"note" text
);
--> statement-breakpoint
CREATE TABLE "account" (
	"id" text PRIMARY KEY NOT NULL,
	"account_id" text NOT NULL,
	"provider_id" text NOT NULL,
	"user_id" text NOT NULL,
	"access_token" text,
	"refresh_token" text,
	"id_token" text,
	"access_token_expires_at" timestamp with time zone,
	"refresh_token_expires_at" timestamp with time zone,
	"scope" text,
	"password" text,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"updated_at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "failures" (
	"id" text PRIMARY KEY NOT NULL,
	"account" text NOT NULL,
	"door" text NOT NULL,
	"at" timestamp with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "invitations" (
	"id" text PRIMARY KEY NOT NULL,
	"code_hash" text NOT NULL,
	"email" text,
	"printed_name" text,
	"roles" text[] NOT NULL,
	"created_at" timestamp with time zone NOT NULL,
	"created_by" text,
	"expires_at" timestamp with time zone NOT NULL,
	"used_at" timestamp with time zone,
	CONSTRAINT "invitations_code_hash_unique" UNIQUE("code_hash")
);
--> statement-breakpoint
CREATE TABLE "locks" (
	"account" text PRIMARY KEY NOT NULL,
	"until" timestamp with time zone NOT NULL,
	"times" integer DEFAULT 0 NOT NULL
);
--> statement-breakpoint
CREATE TABLE "outbox" (
	"id" text PRIMARY KEY NOT NULL,
	"to" text NOT NULL,
	"subject" text NOT NULL,
	"text" text NOT NULL,
	"created_at" timestamp with time zone NOT NULL,
	"sent_at" timestamp with time zone
);
--> statement-breakpoint
CREATE TABLE "person_roles" (
	"person_id" text NOT NULL,
	"role" text NOT NULL,
	"granted_at" timestamp with time zone NOT NULL,
	"granted_by" text,
	CONSTRAINT "person_roles_person_id_role_pk" PRIMARY KEY("person_id","role")
);
--> statement-breakpoint
CREATE TABLE "rate_counters" (
	"key" text NOT NULL,
	"window_start" timestamp with time zone NOT NULL,
	"count" integer NOT NULL,
	CONSTRAINT "rate_counters_key_window_start_pk" PRIMARY KEY("key","window_start")
);
--> statement-breakpoint
CREATE TABLE "session" (
	"id" text PRIMARY KEY NOT NULL,
	"token" text NOT NULL,
	"user_id" text NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"updated_at" timestamp with time zone DEFAULT now() NOT NULL,
	"ip_address" text,
	"user_agent" text,
	CONSTRAINT "session_token_unique" UNIQUE("token")
);
--> statement-breakpoint
CREATE TABLE "settings" (
	"key" text PRIMARY KEY NOT NULL,
	"value" text NOT NULL
);
--> statement-breakpoint
CREATE TABLE "signing_keys" (
	"kid" text PRIMARY KEY NOT NULL,
	"public_jwk" text NOT NULL,
	"sealed_private" text NOT NULL,
	"created_at" timestamp with time zone NOT NULL,
	"retired_at" timestamp with time zone
);
--> statement-breakpoint
CREATE TABLE "user" (
	"id" text PRIMARY KEY NOT NULL,
	"name" text NOT NULL,
	"email" text NOT NULL,
	"email_verified" boolean DEFAULT false NOT NULL,
	"image" text,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"updated_at" timestamp with time zone DEFAULT now() NOT NULL,
	"decimal_sign" text DEFAULT '.' NOT NULL,
	"time_zone" text DEFAULT 'UTC' NOT NULL,
	"closed_at" timestamp with time zone,
	"signing_held_at" timestamp with time zone,
	"signing_held_by" text,
	CONSTRAINT "user_email_unique" UNIQUE("email")
);
--> statement-breakpoint
CREATE TABLE "verification" (
	"id" text PRIMARY KEY NOT NULL,
	"identifier" text NOT NULL,
	"value" text NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"updated_at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "attachment_chunks" (
	"attachment_id" text NOT NULL,
	"index" integer NOT NULL,
	"bytes" "bytea" NOT NULL,
	CONSTRAINT "attachment_chunks_attachment_id_index_pk" PRIMARY KEY("attachment_id","index")
);
--> statement-breakpoint
CREATE TABLE "attachments" (
	"id" text PRIMARY KEY NOT NULL,
	"entry_id" text NOT NULL,
	"name" text NOT NULL,
	"announced_type" text NOT NULL,
	"sniffed_type" text,
	"size" integer NOT NULL,
	"sha256" text NOT NULL,
	"person_id" text NOT NULL,
	"at" timestamp with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "audit_heads" (
	"id" text PRIMARY KEY NOT NULL,
	"seq" bigint NOT NULL,
	"hash" text NOT NULL
);
--> statement-breakpoint
CREATE TABLE "block_solves" (
	"revision_id" text NOT NULL,
	"block_id" text NOT NULL,
	"key" text NOT NULL,
	"person_id" text NOT NULL,
	"at" timestamp with time zone NOT NULL,
	CONSTRAINT "block_solves_revision_id_block_id_key_pk" PRIMARY KEY("revision_id","block_id","key")
);
--> statement-breakpoint
CREATE TABLE "contributors" (
	"entry_id" text NOT NULL,
	"person_id" text NOT NULL,
	"since" timestamp with time zone NOT NULL,
	CONSTRAINT "contributors_entry_id_person_id_pk" PRIMARY KEY("entry_id","person_id")
);
--> statement-breakpoint
CREATE TABLE "entries" (
	"id" text PRIMARY KEY NOT NULL,
	"notebook_id" text NOT NULL,
	"number" integer NOT NULL,
	"author_id" text NOT NULL,
	"created_at" timestamp with time zone NOT NULL,
	"revision_number" integer NOT NULL,
	"state" text NOT NULL,
	"witness_id" text
);
--> statement-breakpoint
CREATE TABLE "events" (
	"seq" bigint PRIMARY KEY NOT NULL,
	"at" timestamp with time zone NOT NULL,
	"person_id" text,
	"printed_name" text,
	"action" text NOT NULL,
	"object_kind" text NOT NULL,
	"object_id" text NOT NULL,
	"entry_id" text,
	"entry_seq" integer,
	"detail" text NOT NULL,
	"previous_hash" text NOT NULL,
	"hash" text NOT NULL,
	"entry_previous_hash" text,
	"entry_hash" text
);
--> statement-breakpoint
CREATE TABLE "findings" (
	"id" text PRIMARY KEY NOT NULL,
	"revision_id" text NOT NULL,
	"person_id" text NOT NULL,
	"content_sha256" text NOT NULL,
	"engine" text NOT NULL,
	"blocks" jsonb NOT NULL,
	"files" jsonb NOT NULL,
	"at" timestamp with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "memberships" (
	"notebook_id" text NOT NULL,
	"person_id" text NOT NULL,
	"granted_at" timestamp with time zone NOT NULL,
	"granted_by" text,
	CONSTRAINT "memberships_notebook_id_person_id_pk" PRIMARY KEY("notebook_id","person_id")
);
--> statement-breakpoint
CREATE TABLE "notebooks" (
	"id" text PRIMARY KEY NOT NULL,
	"code" text NOT NULL,
	"title" text NOT NULL,
	"about" text DEFAULT '' NOT NULL,
	"next_number" integer DEFAULT 1 NOT NULL,
	"created_at" timestamp with time zone NOT NULL,
	"created_by" text,
	CONSTRAINT "notebooks_code_unique" UNIQUE("code")
);
--> statement-breakpoint
CREATE TABLE "occurrences" (
	"revision_id" text NOT NULL,
	"position" integer NOT NULL,
	"entry_id" text NOT NULL,
	"notebook_id" text NOT NULL,
	"compound_id" text NOT NULL,
	"role" text NOT NULL,
	"line" text NOT NULL,
	CONSTRAINT "occurrences_revision_id_position_compound_id_pk" PRIMARY KEY("revision_id","position","compound_id")
);
--> statement-breakpoint
CREATE TABLE "openings" (
	"revision_id" text NOT NULL,
	"person_id" text NOT NULL,
	"session_id" text NOT NULL,
	"content_sha256" text NOT NULL,
	"seq" integer NOT NULL,
	"opened_at" timestamp with time zone NOT NULL,
	"whole_at" timestamp with time zone,
	CONSTRAINT "openings_revision_id_session_id_content_sha256_pk" PRIMARY KEY("revision_id","session_id","content_sha256")
);
--> statement-breakpoint
CREATE TABLE "page_texts" (
	"revision_id" text PRIMARY KEY NOT NULL,
	"entry_id" text NOT NULL,
	"text" text NOT NULL,
	"calculated_ph" text,
	"measured_ph" text
);
--> statement-breakpoint
CREATE TABLE "results" (
	"key" text PRIMARY KEY NOT NULL,
	"engine" text NOT NULL,
	"inputs" text NOT NULL,
	"outcome" text NOT NULL,
	"at" timestamp with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "revision_attachments" (
	"revision_id" text NOT NULL,
	"attachment_id" text NOT NULL,
	"struck_at" timestamp with time zone,
	"struck_reason" text,
	"struck_by" text,
	CONSTRAINT "revision_attachments_revision_id_attachment_id_pk" PRIMARY KEY("revision_id","attachment_id")
);
--> statement-breakpoint
CREATE TABLE "revisions" (
	"id" text PRIMARY KEY NOT NULL,
	"entry_id" text NOT NULL,
	"number" integer NOT NULL,
	"state" text NOT NULL,
	"created_at" timestamp with time zone NOT NULL,
	"created_by" text NOT NULL,
	"begun_because" text,
	"title" text DEFAULT '' NOT NULL,
	"done_on" text,
	"late_reason" text,
	"last_seq" integer DEFAULT 0 NOT NULL,
	"page_token" text,
	"page_bytes" integer DEFAULT 0 NOT NULL,
	"derived_seq" integer DEFAULT -1 NOT NULL,
	"last_typed_at" timestamp with time zone,
	"signed_at" timestamp with time zone,
	"witnessed_at" timestamp with time zone,
	"returned_at" timestamp with time zone,
	"returned_by" text,
	"return_reason" text,
	"voided_at" timestamp with time zone,
	"void_reason" text
);
--> statement-breakpoint
CREATE TABLE "signatures" (
	"id" text PRIMARY KEY NOT NULL,
	"revision_id" text NOT NULL,
	"kind" text NOT NULL,
	"person_id" text NOT NULL,
	"printed_name" text NOT NULL,
	"role" text NOT NULL,
	"meaning" text NOT NULL,
	"at" timestamp with time zone NOT NULL,
	"content_sha256" text NOT NULL,
	"manifest" text NOT NULL,
	"jws" text NOT NULL,
	"kid" text NOT NULL,
	"acknowledgement" text
);
--> statement-breakpoint
CREATE TABLE "signed_contents" (
	"revision_id" text PRIMARY KEY NOT NULL,
	"version" integer NOT NULL,
	"content" text NOT NULL,
	"sha256" text NOT NULL,
	"at" timestamp with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "snapshots" (
	"revision_id" text NOT NULL,
	"seq" integer NOT NULL,
	"state" "bytea" NOT NULL,
	CONSTRAINT "snapshots_revision_id_seq_pk" PRIMARY KEY("revision_id","seq")
);
--> statement-breakpoint
CREATE TABLE "stray_updates" (
	"id" text PRIMARY KEY NOT NULL,
	"revision_id" text NOT NULL,
	"update_id" text NOT NULL,
	"bytes" "bytea" NOT NULL,
	"text" text NOT NULL,
	"person_id" text NOT NULL,
	"at" timestamp with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "typed_values" (
	"revision_id" text NOT NULL,
	"path" text NOT NULL,
	"label" text NOT NULL,
	"value" text NOT NULL,
	"person_id" text NOT NULL,
	"at" timestamp with time zone NOT NULL,
	CONSTRAINT "typed_values_revision_id_path_pk" PRIMARY KEY("revision_id","path")
);
--> statement-breakpoint
CREATE TABLE "updates" (
	"revision_id" text NOT NULL,
	"seq" integer NOT NULL,
	"update_id" text NOT NULL,
	"bytes" "bytea" NOT NULL,
	"person_id" text,
	"session_id" text,
	"at" timestamp with time zone NOT NULL,
	CONSTRAINT "updates_revision_id_seq_pk" PRIMARY KEY("revision_id","seq")
);
--> statement-breakpoint
CREATE TABLE "uploads" (
	"id" text PRIMARY KEY NOT NULL,
	"revision_id" text NOT NULL,
	"person_id" text NOT NULL,
	"started_at" timestamp with time zone NOT NULL,
	"last_at" timestamp with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "yjs_clients" (
	"revision_id" text NOT NULL,
	"client_id" bigint NOT NULL,
	"person_id" text,
	"session_id" text,
	CONSTRAINT "yjs_clients_revision_id_client_id_pk" PRIMARY KEY("revision_id","client_id")
);
--> statement-breakpoint
ALTER TABLE "constants" ADD CONSTRAINT "constants_family_id_families_id_fk" FOREIGN KEY ("family_id") REFERENCES "public"."families"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "account" ADD CONSTRAINT "account_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "person_roles" ADD CONSTRAINT "person_roles_person_id_user_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "session" ADD CONSTRAINT "session_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "attachments" ADD CONSTRAINT "attachments_entry_id_entries_id_fk" FOREIGN KEY ("entry_id") REFERENCES "public"."entries"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "attachments" ADD CONSTRAINT "attachments_person_id_user_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "block_solves" ADD CONSTRAINT "block_solves_revision_id_revisions_id_fk" FOREIGN KEY ("revision_id") REFERENCES "public"."revisions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "block_solves" ADD CONSTRAINT "block_solves_key_results_key_fk" FOREIGN KEY ("key") REFERENCES "public"."results"("key") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "block_solves" ADD CONSTRAINT "block_solves_person_id_user_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "contributors" ADD CONSTRAINT "contributors_entry_id_entries_id_fk" FOREIGN KEY ("entry_id") REFERENCES "public"."entries"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "contributors" ADD CONSTRAINT "contributors_person_id_user_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "entries" ADD CONSTRAINT "entries_notebook_id_notebooks_id_fk" FOREIGN KEY ("notebook_id") REFERENCES "public"."notebooks"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "entries" ADD CONSTRAINT "entries_author_id_user_id_fk" FOREIGN KEY ("author_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "entries" ADD CONSTRAINT "entries_witness_id_user_id_fk" FOREIGN KEY ("witness_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "findings" ADD CONSTRAINT "findings_revision_id_revisions_id_fk" FOREIGN KEY ("revision_id") REFERENCES "public"."revisions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "findings" ADD CONSTRAINT "findings_person_id_user_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "memberships" ADD CONSTRAINT "memberships_notebook_id_notebooks_id_fk" FOREIGN KEY ("notebook_id") REFERENCES "public"."notebooks"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "memberships" ADD CONSTRAINT "memberships_person_id_user_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notebooks" ADD CONSTRAINT "notebooks_created_by_user_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "occurrences" ADD CONSTRAINT "occurrences_revision_id_revisions_id_fk" FOREIGN KEY ("revision_id") REFERENCES "public"."revisions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "occurrences" ADD CONSTRAINT "occurrences_entry_id_entries_id_fk" FOREIGN KEY ("entry_id") REFERENCES "public"."entries"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "occurrences" ADD CONSTRAINT "occurrences_notebook_id_notebooks_id_fk" FOREIGN KEY ("notebook_id") REFERENCES "public"."notebooks"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "openings" ADD CONSTRAINT "openings_revision_id_revisions_id_fk" FOREIGN KEY ("revision_id") REFERENCES "public"."revisions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "openings" ADD CONSTRAINT "openings_person_id_user_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "page_texts" ADD CONSTRAINT "page_texts_revision_id_revisions_id_fk" FOREIGN KEY ("revision_id") REFERENCES "public"."revisions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "page_texts" ADD CONSTRAINT "page_texts_entry_id_entries_id_fk" FOREIGN KEY ("entry_id") REFERENCES "public"."entries"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "revision_attachments" ADD CONSTRAINT "revision_attachments_revision_id_revisions_id_fk" FOREIGN KEY ("revision_id") REFERENCES "public"."revisions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "revision_attachments" ADD CONSTRAINT "revision_attachments_attachment_id_attachments_id_fk" FOREIGN KEY ("attachment_id") REFERENCES "public"."attachments"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "revisions" ADD CONSTRAINT "revisions_entry_id_entries_id_fk" FOREIGN KEY ("entry_id") REFERENCES "public"."entries"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "revisions" ADD CONSTRAINT "revisions_created_by_user_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "signatures" ADD CONSTRAINT "signatures_person_id_user_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "signatures" ADD CONSTRAINT "signatures_revision_id_signed_contents_revision_id_fk" FOREIGN KEY ("revision_id") REFERENCES "public"."signed_contents"("revision_id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "signed_contents" ADD CONSTRAINT "signed_contents_revision_id_revisions_id_fk" FOREIGN KEY ("revision_id") REFERENCES "public"."revisions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "snapshots" ADD CONSTRAINT "snapshots_revision_id_revisions_id_fk" FOREIGN KEY ("revision_id") REFERENCES "public"."revisions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "stray_updates" ADD CONSTRAINT "stray_updates_revision_id_revisions_id_fk" FOREIGN KEY ("revision_id") REFERENCES "public"."revisions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "stray_updates" ADD CONSTRAINT "stray_updates_person_id_user_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "typed_values" ADD CONSTRAINT "typed_values_revision_id_revisions_id_fk" FOREIGN KEY ("revision_id") REFERENCES "public"."revisions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "typed_values" ADD CONSTRAINT "typed_values_person_id_user_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "updates" ADD CONSTRAINT "updates_revision_id_revisions_id_fk" FOREIGN KEY ("revision_id") REFERENCES "public"."revisions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "updates" ADD CONSTRAINT "updates_person_id_user_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "uploads" ADD CONSTRAINT "uploads_revision_id_revisions_id_fk" FOREIGN KEY ("revision_id") REFERENCES "public"."revisions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "uploads" ADD CONSTRAINT "uploads_person_id_user_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "yjs_clients" ADD CONSTRAINT "yjs_clients_revision_id_revisions_id_fk" FOREIGN KEY ("revision_id") REFERENCES "public"."revisions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "yjs_clients" ADD CONSTRAINT "yjs_clients_person_id_user_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "compound_families_family" ON "compound_families" USING btree ("family_id");--> statement-breakpoint
CREATE INDEX "compound_names_compared" ON "compound_names" USING btree ("compared");--> statement-breakpoint
CREATE INDEX "constants_family" ON "constants" USING btree ("family_id","step");--> statement-breakpoint
CREATE INDEX "account_user" ON "account" USING btree ("user_id");--> statement-breakpoint
CREATE INDEX "failures_account" ON "failures" USING btree ("account","at");--> statement-breakpoint
CREATE INDEX "outbox_created" ON "outbox" USING btree ("created_at");--> statement-breakpoint
CREATE INDEX "session_user" ON "session" USING btree ("user_id");--> statement-breakpoint
CREATE INDEX "verification_identifier" ON "verification" USING btree ("identifier");--> statement-breakpoint
CREATE INDEX "attachments_entry" ON "attachments" USING btree ("entry_id");--> statement-breakpoint
CREATE UNIQUE INDEX "entries_number" ON "entries" USING btree ("notebook_id","number");--> statement-breakpoint
CREATE INDEX "entries_state" ON "entries" USING btree ("state");--> statement-breakpoint
CREATE INDEX "events_entry" ON "events" USING btree ("entry_id","entry_seq");--> statement-breakpoint
CREATE INDEX "events_person" ON "events" USING btree ("person_id","seq");--> statement-breakpoint
CREATE INDEX "events_action" ON "events" USING btree ("action","seq");--> statement-breakpoint
CREATE INDEX "findings_revision" ON "findings" USING btree ("revision_id","person_id");--> statement-breakpoint
CREATE INDEX "memberships_person" ON "memberships" USING btree ("person_id");--> statement-breakpoint
CREATE INDEX "occurrences_compound" ON "occurrences" USING btree ("compound_id","entry_id");--> statement-breakpoint
CREATE UNIQUE INDEX "revisions_number" ON "revisions" USING btree ("entry_id","number");--> statement-breakpoint
CREATE UNIQUE INDEX "signatures_kind" ON "signatures" USING btree ("revision_id","kind");--> statement-breakpoint
CREATE UNIQUE INDEX "stray_update_id" ON "stray_updates" USING btree ("revision_id","update_id");--> statement-breakpoint
CREATE UNIQUE INDEX "updates_update_id" ON "updates" USING btree ("revision_id","update_id");--> statement-breakpoint
CREATE INDEX "uploads_last" ON "uploads" USING btree ("last_at");