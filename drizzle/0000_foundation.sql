CREATE TABLE "entry" (
	"id" uuid PRIMARY KEY NOT NULL,
	"notebook_id" uuid NOT NULL,
	"leaf" integer NOT NULL,
	"title" text NOT NULL,
	"work_date" date NOT NULL,
	"state" text DEFAULT 'draft' NOT NULL,
	"author_id" text NOT NULL,
	"cooldown_id" uuid,
	"head_seq" integer DEFAULT 0 NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"changed_at" timestamp with time zone DEFAULT now() NOT NULL,
	"struck_reason" text,
	"struck_at" timestamp with time zone,
	"request_key" uuid,
	"words" text DEFAULT '' NOT NULL,
	CONSTRAINT "entry_request_key_unique" UNIQUE("request_key"),
	CONSTRAINT "entry_leaf" UNIQUE("notebook_id","leaf")
);
--> statement-breakpoint
CREATE TABLE "entry_contributor" (
	"entry_id" uuid NOT NULL,
	"user_id" text NOT NULL,
	"invited_by" text NOT NULL,
	"since" timestamp with time zone DEFAULT now() NOT NULL,
	"wrote_at" timestamp with time zone,
	"ended_at" timestamp with time zone,
	CONSTRAINT "entry_contributor_entry_id_user_id_pk" PRIMARY KEY("entry_id","user_id")
);
--> statement-breakpoint
CREATE TABLE "entry_device" (
	"entry_id" uuid NOT NULL,
	"device_id" uuid NOT NULL,
	CONSTRAINT "entry_device_entry_id_device_id_pk" PRIMARY KEY("entry_id","device_id")
);
--> statement-breakpoint
CREATE TABLE "entry_draft" (
	"entry_id" uuid PRIMARY KEY NOT NULL,
	"revision" integer NOT NULL,
	"title" text NOT NULL,
	"doc" jsonb NOT NULL,
	"stamps" jsonb NOT NULL,
	"saved_at" timestamp with time zone NOT NULL,
	"saved_by" text NOT NULL,
	"last_save_id" uuid,
	"cut_revision" integer DEFAULT 0 NOT NULL
);
--> statement-breakpoint
CREATE TABLE "entry_version" (
	"id" uuid PRIMARY KEY NOT NULL,
	"entry_id" uuid NOT NULL,
	"seq" integer NOT NULL,
	"canonical" "bytea" NOT NULL,
	"digest" text NOT NULL,
	"previous" text,
	"title" text NOT NULL,
	"reason" text,
	"created_at" timestamp with time zone NOT NULL,
	"created_by" text NOT NULL,
	CONSTRAINT "entry_version_seq" UNIQUE("entry_id","seq")
);
--> statement-breakpoint
CREATE TABLE "trace" (
	"id" uuid PRIMARY KEY NOT NULL,
	"notebook_id" uuid NOT NULL,
	"entry_id" uuid,
	"kind" text NOT NULL,
	"file_name" text NOT NULL,
	"media_type" text NOT NULL,
	"bytes" bigint NOT NULL,
	"sha256" text NOT NULL,
	"state" text NOT NULL,
	"problem" text,
	"rows" bigint DEFAULT 0 NOT NULL,
	"comments" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"upload_id" text NOT NULL,
	"uploaded_by" text NOT NULL,
	"received_at" timestamp with time zone NOT NULL,
	CONSTRAINT "trace_upload" UNIQUE("uploaded_by","entry_id","upload_id")
);
--> statement-breakpoint
CREATE TABLE "trace_column" (
	"trace_id" uuid NOT NULL,
	"position" integer NOT NULL,
	"name" text NOT NULL,
	"symbol" text NOT NULL,
	"unit" text,
	"missing" bigint NOT NULL,
	"minimum" text,
	"maximum" text,
	CONSTRAINT "trace_column_trace_id_position_pk" PRIMARY KEY("trace_id","position")
);
--> statement-breakpoint
CREATE TABLE "job" (
	"id" uuid PRIMARY KEY NOT NULL,
	"kind" text NOT NULL,
	"payload" jsonb NOT NULL,
	"key" text NOT NULL,
	"state" text DEFAULT 'waiting' NOT NULL,
	"attempts" integer DEFAULT 0 NOT NULL,
	"run_after" timestamp with time zone DEFAULT now() NOT NULL,
	"lease_until" timestamp with time zone,
	"problem" text,
	CONSTRAINT "job_key_unique" UNIQUE("key")
);
--> statement-breakpoint
CREATE TABLE "journal_position" (
	"id" integer PRIMARY KEY NOT NULL,
	"seq" bigint NOT NULL
);
--> statement-breakpoint
CREATE TABLE "log_record" (
	"seq" bigint PRIMARY KEY NOT NULL,
	"at" timestamp with time zone NOT NULL,
	"kind" text NOT NULL,
	"actor_id" text,
	"notebook_id" uuid,
	"entry_id" uuid,
	"detail" jsonb NOT NULL
);
--> statement-breakpoint
CREATE TABLE "mail_message" (
	"id" uuid PRIMARY KEY NOT NULL,
	"recipient" text NOT NULL,
	"subject" text NOT NULL,
	"body" text NOT NULL,
	"queued_at" timestamp with time zone DEFAULT now() NOT NULL,
	"sent_at" timestamp with time zone,
	"attempts" integer DEFAULT 0 NOT NULL,
	"next_attempt_at" timestamp with time zone DEFAULT now() NOT NULL,
	"problem" text
);
--> statement-breakpoint
CREATE TABLE "rate_count" (
	"key" text PRIMARY KEY NOT NULL,
	"window_start" timestamp with time zone NOT NULL,
	"count" integer NOT NULL
);
--> statement-breakpoint
CREATE TABLE "security_event" (
	"id" uuid PRIMARY KEY NOT NULL,
	"at" timestamp with time zone DEFAULT now() NOT NULL,
	"kind" text NOT NULL,
	"subject" text NOT NULL,
	"address" text DEFAULT '' NOT NULL
);
--> statement-breakpoint
CREATE TABLE "setting" (
	"key" text PRIMARY KEY NOT NULL,
	"value" jsonb NOT NULL
);
--> statement-breakpoint
CREATE TABLE "cooldown" (
	"id" uuid PRIMARY KEY NOT NULL,
	"notebook_id" uuid NOT NULL,
	"name" text NOT NULL,
	"cryostat" text NOT NULL,
	"started_on" text NOT NULL,
	"ended_on" text,
	"base_temperature" text DEFAULT '' NOT NULL,
	"remarks" text DEFAULT '' NOT NULL,
	"revision" integer DEFAULT 1 NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"created_by" text NOT NULL
);
--> statement-breakpoint
CREATE TABLE "cooldown_device" (
	"cooldown_id" uuid NOT NULL,
	"device_id" uuid NOT NULL,
	CONSTRAINT "cooldown_device_cooldown_id_device_id_pk" PRIMARY KEY("cooldown_id","device_id")
);
--> statement-breakpoint
CREATE TABLE "cooldown_line" (
	"id" uuid PRIMARY KEY NOT NULL,
	"cooldown_id" uuid NOT NULL,
	"position" integer NOT NULL,
	"name" text NOT NULL,
	"contact" text DEFAULT '' NOT NULL,
	"attenuation" text DEFAULT '' NOT NULL,
	"filter" text DEFAULT '' NOT NULL,
	"bias_tee" text DEFAULT '' NOT NULL,
	"instrument" text DEFAULT '' NOT NULL
);
--> statement-breakpoint
CREATE TABLE "device" (
	"id" uuid PRIMARY KEY NOT NULL,
	"notebook_id" uuid NOT NULL,
	"name" text NOT NULL,
	"lot" text DEFAULT '' NOT NULL,
	"wafer" text DEFAULT '' NOT NULL,
	"die" text DEFAULT '' NOT NULL,
	"material" text DEFAULT '' NOT NULL,
	"dimensions" text DEFAULT '' NOT NULL,
	"remarks" text DEFAULT '' NOT NULL,
	"revision" integer DEFAULT 1 NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"created_by" text NOT NULL
);
--> statement-breakpoint
CREATE TABLE "gate" (
	"id" uuid PRIMARY KEY NOT NULL,
	"device_id" uuid NOT NULL,
	"position" integer NOT NULL,
	"name" text NOT NULL,
	"purpose" text DEFAULT '' NOT NULL,
	"width_nm" double precision,
	"length_nm" double precision
);
--> statement-breakpoint
CREATE TABLE "layout" (
	"id" uuid PRIMARY KEY NOT NULL,
	"notebook_id" uuid NOT NULL,
	"name" text NOT NULL,
	"doc" jsonb NOT NULL,
	"created_by" text NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "notebook" (
	"id" uuid PRIMARY KEY NOT NULL,
	"code" text NOT NULL,
	"title" text NOT NULL,
	"description" text DEFAULT '' NOT NULL,
	"next_leaf" integer DEFAULT 1 NOT NULL,
	"late_after_days" integer DEFAULT 3 NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"created_by" text NOT NULL,
	CONSTRAINT "notebook_code_unique" UNIQUE("code")
);
--> statement-breakpoint
CREATE TABLE "notebook_member" (
	"notebook_id" uuid NOT NULL,
	"user_id" text NOT NULL,
	"role" text NOT NULL,
	"since" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "notebook_member_notebook_id_user_id_pk" PRIMARY KEY("notebook_id","user_id")
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
CREATE TABLE "invitation" (
	"id" text PRIMARY KEY NOT NULL,
	"email" text NOT NULL,
	"name" text NOT NULL,
	"role" text DEFAULT 'member' NOT NULL,
	"token_hash" text NOT NULL,
	"invited_by" text,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"used_at" timestamp with time zone,
	"revoked_at" timestamp with time zone
);
--> statement-breakpoint
CREATE TABLE "session" (
	"id" text PRIMARY KEY NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"token" text NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"updated_at" timestamp with time zone DEFAULT now() NOT NULL,
	"ip_address" text,
	"user_agent" text,
	"user_id" text NOT NULL,
	CONSTRAINT "session_token_unique" UNIQUE("token")
);
--> statement-breakpoint
CREATE TABLE "token" (
	"id" text PRIMARY KEY NOT NULL,
	"user_id" text NOT NULL,
	"label" text NOT NULL,
	"token_hash" text NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"last_used_at" timestamp with time zone,
	"revoked_at" timestamp with time zone
);
--> statement-breakpoint
CREATE TABLE "two_factor" (
	"id" text PRIMARY KEY NOT NULL,
	"secret" text NOT NULL,
	"backup_codes" text NOT NULL,
	"user_id" text NOT NULL,
	"verified" boolean DEFAULT true,
	"failed_verification_count" integer DEFAULT 0,
	"locked_until" timestamp with time zone
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
	"two_factor_enabled" boolean DEFAULT false,
	"role" text DEFAULT 'member' NOT NULL,
	"disabled_at" timestamp with time zone,
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
CREATE TABLE "answer" (
	"id" uuid PRIMARY KEY NOT NULL,
	"question_id" uuid NOT NULL,
	"text" text NOT NULL,
	"answered_by" text NOT NULL,
	"answered_at" timestamp with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "challenge" (
	"id" uuid PRIMARY KEY NOT NULL,
	"user_id" text NOT NULL,
	"purpose" text NOT NULL,
	"entry_id" uuid NOT NULL,
	"version_digest" text NOT NULL,
	"shown_digest" text NOT NULL,
	"issued_at" timestamp with time zone NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"used_at" timestamp with time zone
);
--> statement-breakpoint
CREATE TABLE "question" (
	"id" uuid PRIMARY KEY NOT NULL,
	"entry_id" uuid NOT NULL,
	"version_digest" text NOT NULL,
	"block_id" text,
	"quote" text DEFAULT '' NOT NULL,
	"text" text NOT NULL,
	"asked_by" text NOT NULL,
	"asked_at" timestamp with time zone NOT NULL,
	"state" text DEFAULT 'open' NOT NULL,
	"request_key" uuid,
	CONSTRAINT "question_request_key_unique" UNIQUE("request_key")
);
--> statement-breakpoint
CREATE TABLE "signature" (
	"id" uuid PRIMARY KEY NOT NULL,
	"entry_id" uuid NOT NULL,
	"kind" text NOT NULL,
	"version_digest" text NOT NULL,
	"signer_id" text NOT NULL,
	"printed_name" text NOT NULL,
	"meaning" text NOT NULL,
	"signed_at" timestamp with time zone NOT NULL,
	"zone" text NOT NULL,
	"late_reason" text,
	"statement" "bytea" NOT NULL,
	"statement_digest" text NOT NULL,
	"attestation" text NOT NULL,
	CONSTRAINT "signature_once" UNIQUE("version_digest","kind")
);
--> statement-breakpoint
CREATE TABLE "trace_served" (
	"version_digest" text NOT NULL,
	"trace_id" uuid NOT NULL,
	"user_id" text NOT NULL,
	"served_at" timestamp with time zone NOT NULL,
	CONSTRAINT "trace_served_version_digest_trace_id_user_id_pk" PRIMARY KEY("version_digest","trace_id","user_id")
);
--> statement-breakpoint
CREATE TABLE "witness_request" (
	"id" uuid PRIMARY KEY NOT NULL,
	"entry_id" uuid NOT NULL,
	"witness_id" text NOT NULL,
	"requested_by" text NOT NULL,
	"requested_at" timestamp with time zone DEFAULT now() NOT NULL,
	"closed_at" timestamp with time zone,
	CONSTRAINT "witness_request_once" UNIQUE("entry_id","witness_id")
);
--> statement-breakpoint
ALTER TABLE "entry" ADD CONSTRAINT "entry_notebook_id_notebook_id_fk" FOREIGN KEY ("notebook_id") REFERENCES "public"."notebook"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "entry" ADD CONSTRAINT "entry_author_id_user_id_fk" FOREIGN KEY ("author_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "entry" ADD CONSTRAINT "entry_cooldown_id_cooldown_id_fk" FOREIGN KEY ("cooldown_id") REFERENCES "public"."cooldown"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "entry_contributor" ADD CONSTRAINT "entry_contributor_entry_id_entry_id_fk" FOREIGN KEY ("entry_id") REFERENCES "public"."entry"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "entry_contributor" ADD CONSTRAINT "entry_contributor_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "entry_contributor" ADD CONSTRAINT "entry_contributor_invited_by_user_id_fk" FOREIGN KEY ("invited_by") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "entry_device" ADD CONSTRAINT "entry_device_entry_id_entry_id_fk" FOREIGN KEY ("entry_id") REFERENCES "public"."entry"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "entry_device" ADD CONSTRAINT "entry_device_device_id_device_id_fk" FOREIGN KEY ("device_id") REFERENCES "public"."device"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "entry_draft" ADD CONSTRAINT "entry_draft_entry_id_entry_id_fk" FOREIGN KEY ("entry_id") REFERENCES "public"."entry"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "entry_draft" ADD CONSTRAINT "entry_draft_saved_by_user_id_fk" FOREIGN KEY ("saved_by") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "entry_version" ADD CONSTRAINT "entry_version_entry_id_entry_id_fk" FOREIGN KEY ("entry_id") REFERENCES "public"."entry"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "entry_version" ADD CONSTRAINT "entry_version_created_by_user_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "trace" ADD CONSTRAINT "trace_notebook_id_notebook_id_fk" FOREIGN KEY ("notebook_id") REFERENCES "public"."notebook"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "trace" ADD CONSTRAINT "trace_entry_id_entry_id_fk" FOREIGN KEY ("entry_id") REFERENCES "public"."entry"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "trace" ADD CONSTRAINT "trace_uploaded_by_user_id_fk" FOREIGN KEY ("uploaded_by") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "trace_column" ADD CONSTRAINT "trace_column_trace_id_trace_id_fk" FOREIGN KEY ("trace_id") REFERENCES "public"."trace"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "log_record" ADD CONSTRAINT "log_record_actor_id_user_id_fk" FOREIGN KEY ("actor_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "cooldown" ADD CONSTRAINT "cooldown_notebook_id_notebook_id_fk" FOREIGN KEY ("notebook_id") REFERENCES "public"."notebook"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "cooldown" ADD CONSTRAINT "cooldown_created_by_user_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "cooldown_device" ADD CONSTRAINT "cooldown_device_cooldown_id_cooldown_id_fk" FOREIGN KEY ("cooldown_id") REFERENCES "public"."cooldown"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "cooldown_device" ADD CONSTRAINT "cooldown_device_device_id_device_id_fk" FOREIGN KEY ("device_id") REFERENCES "public"."device"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "cooldown_line" ADD CONSTRAINT "cooldown_line_cooldown_id_cooldown_id_fk" FOREIGN KEY ("cooldown_id") REFERENCES "public"."cooldown"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "device" ADD CONSTRAINT "device_notebook_id_notebook_id_fk" FOREIGN KEY ("notebook_id") REFERENCES "public"."notebook"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "device" ADD CONSTRAINT "device_created_by_user_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "gate" ADD CONSTRAINT "gate_device_id_device_id_fk" FOREIGN KEY ("device_id") REFERENCES "public"."device"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "layout" ADD CONSTRAINT "layout_notebook_id_notebook_id_fk" FOREIGN KEY ("notebook_id") REFERENCES "public"."notebook"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "layout" ADD CONSTRAINT "layout_created_by_user_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notebook" ADD CONSTRAINT "notebook_created_by_user_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notebook_member" ADD CONSTRAINT "notebook_member_notebook_id_notebook_id_fk" FOREIGN KEY ("notebook_id") REFERENCES "public"."notebook"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notebook_member" ADD CONSTRAINT "notebook_member_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "account" ADD CONSTRAINT "account_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."user"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "invitation" ADD CONSTRAINT "invitation_invited_by_user_id_fk" FOREIGN KEY ("invited_by") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "session" ADD CONSTRAINT "session_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."user"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "token" ADD CONSTRAINT "token_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "two_factor" ADD CONSTRAINT "two_factor_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."user"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "answer" ADD CONSTRAINT "answer_question_id_question_id_fk" FOREIGN KEY ("question_id") REFERENCES "public"."question"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "answer" ADD CONSTRAINT "answer_answered_by_user_id_fk" FOREIGN KEY ("answered_by") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "challenge" ADD CONSTRAINT "challenge_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "challenge" ADD CONSTRAINT "challenge_entry_id_entry_id_fk" FOREIGN KEY ("entry_id") REFERENCES "public"."entry"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "question" ADD CONSTRAINT "question_entry_id_entry_id_fk" FOREIGN KEY ("entry_id") REFERENCES "public"."entry"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "question" ADD CONSTRAINT "question_asked_by_user_id_fk" FOREIGN KEY ("asked_by") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "signature" ADD CONSTRAINT "signature_entry_id_entry_id_fk" FOREIGN KEY ("entry_id") REFERENCES "public"."entry"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "signature" ADD CONSTRAINT "signature_signer_id_user_id_fk" FOREIGN KEY ("signer_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "trace_served" ADD CONSTRAINT "trace_served_trace_id_trace_id_fk" FOREIGN KEY ("trace_id") REFERENCES "public"."trace"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "trace_served" ADD CONSTRAINT "trace_served_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "witness_request" ADD CONSTRAINT "witness_request_entry_id_entry_id_fk" FOREIGN KEY ("entry_id") REFERENCES "public"."entry"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "witness_request" ADD CONSTRAINT "witness_request_witness_id_user_id_fk" FOREIGN KEY ("witness_id") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "witness_request" ADD CONSTRAINT "witness_request_requested_by_user_id_fk" FOREIGN KEY ("requested_by") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "entry_state" ON "entry" USING btree ("notebook_id","state");--> statement-breakpoint
CREATE INDEX "entry_author" ON "entry" USING btree ("author_id","state");--> statement-breakpoint
CREATE INDEX "entry_cooldown" ON "entry" USING btree ("cooldown_id");--> statement-breakpoint
CREATE INDEX "entry_device_device" ON "entry_device" USING btree ("device_id");--> statement-breakpoint
CREATE INDEX "entry_version_digest" ON "entry_version" USING btree ("digest");--> statement-breakpoint
CREATE INDEX "trace_entry" ON "trace" USING btree ("entry_id");--> statement-breakpoint
CREATE INDEX "trace_sha256" ON "trace" USING btree ("sha256");--> statement-breakpoint
CREATE INDEX "trace_state" ON "trace" USING btree ("state");--> statement-breakpoint
CREATE INDEX "job_waiting" ON "job" USING btree ("state","run_after");--> statement-breakpoint
CREATE INDEX "log_record_notebook" ON "log_record" USING btree ("notebook_id");--> statement-breakpoint
CREATE INDEX "log_record_entry" ON "log_record" USING btree ("entry_id");--> statement-breakpoint
CREATE INDEX "mail_message_unsent" ON "mail_message" USING btree ("sent_at","next_attempt_at");--> statement-breakpoint
CREATE INDEX "cooldown_notebook" ON "cooldown" USING btree ("notebook_id");--> statement-breakpoint
CREATE INDEX "cooldown_device_device" ON "cooldown_device" USING btree ("device_id");--> statement-breakpoint
CREATE INDEX "cooldown_line_cooldown" ON "cooldown_line" USING btree ("cooldown_id");--> statement-breakpoint
CREATE INDEX "device_notebook" ON "device" USING btree ("notebook_id");--> statement-breakpoint
CREATE INDEX "gate_device" ON "gate" USING btree ("device_id");--> statement-breakpoint
CREATE INDEX "notebook_member_user" ON "notebook_member" USING btree ("user_id");--> statement-breakpoint
CREATE INDEX "account_user" ON "account" USING btree ("user_id");--> statement-breakpoint
CREATE UNIQUE INDEX "invitation_token" ON "invitation" USING btree ("token_hash");--> statement-breakpoint
CREATE INDEX "session_user" ON "session" USING btree ("user_id");--> statement-breakpoint
CREATE UNIQUE INDEX "token_hash" ON "token" USING btree ("token_hash");--> statement-breakpoint
CREATE INDEX "answer_question" ON "answer" USING btree ("question_id");--> statement-breakpoint
CREATE INDEX "question_entry" ON "question" USING btree ("entry_id");--> statement-breakpoint
CREATE INDEX "signature_entry" ON "signature" USING btree ("entry_id");--> statement-breakpoint
CREATE INDEX "witness_request_witness" ON "witness_request" USING btree ("witness_id");