CREATE TYPE "public"."role" AS ENUM('owner', 'analyst', 'reviewer', 'contributor', 'reader');--> statement-breakpoint
CREATE TYPE "public"."device_role" AS ENUM('reference', 'wearable');--> statement-breakpoint
CREATE TYPE "public"."placement" AS ENUM('chest', 'wrist', 'forearm', 'upper arm', 'finger', 'ear', 'other');--> statement-breakpoint
CREATE TYPE "public"."session_state" AS ENUM('imported', 'aligned', 'annotating', 'in review', 'returned', 'reviewed');--> statement-breakpoint
CREATE TYPE "public"."upload_state" AS ENUM('waiting', 'reading', 'asking', 'ready', 'filed', 'refused');--> statement-breakpoint
CREATE TYPE "public"."alignment_method" AS ENUM('proposed', 'peak', 'candidate', 'hand');--> statement-breakpoint
CREATE TYPE "public"."tag_blame" AS ENUM('reference', 'wearable', 'neither');--> statement-breakpoint
CREATE TYPE "public"."tag_status" AS ENUM('proposed', 'accepted', 'crossed out', 'removed');--> statement-breakpoint
CREATE TYPE "public"."tag_treatment" AS ENUM('in', 'out');--> statement-breakpoint
CREATE TYPE "public"."review_decision" AS ENUM('approved', 'returned');--> statement-breakpoint
CREATE TABLE "account" (
	"user_id" text NOT NULL,
	"type" text NOT NULL,
	"provider" text NOT NULL,
	"provider_account_id" text NOT NULL,
	"refresh_token" text,
	"access_token" text,
	"expires_at" integer,
	"token_type" text,
	"scope" text,
	"id_token" text,
	"session_state" text,
	CONSTRAINT "account_provider_provider_account_id_pk" PRIMARY KEY("provider","provider_account_id")
);
--> statement-breakpoint
CREATE TABLE "auth_session" (
	"session_token" text PRIMARY KEY NOT NULL,
	"user_id" text NOT NULL,
	"expires" timestamp with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "user" (
	"id" text PRIMARY KEY DEFAULT gen_random_uuid()::text NOT NULL,
	"name" text,
	"email" text NOT NULL,
	"email_verified" timestamp with time zone,
	"image" text,
	"theme" text DEFAULT 'system' NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "user_theme" CHECK ("user"."theme" in ('system', 'light', 'dark'))
);
--> statement-breakpoint
CREATE TABLE "verification_token" (
	"identifier" text NOT NULL,
	"token" text NOT NULL,
	"expires" timestamp with time zone NOT NULL,
	CONSTRAINT "verification_token_identifier_token_pk" PRIMARY KEY("identifier","token")
);
--> statement-breakpoint
CREATE TABLE "invitation" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"team_id" uuid NOT NULL,
	"email" text NOT NULL,
	"role" "role" NOT NULL,
	"initials" text NOT NULL,
	"invited_by" text NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"accepted_at" timestamp with time zone,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "member" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"team_id" uuid NOT NULL,
	"user_id" text NOT NULL,
	"role" "role" NOT NULL,
	"initials" text NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "member_once_per_team" UNIQUE("team_id","user_id"),
	CONSTRAINT "member_initials" UNIQUE("team_id","initials"),
	CONSTRAINT "member_team" UNIQUE("team_id","id"),
	CONSTRAINT "member_initials_form" CHECK ("member"."initials" ~ '^[[:upper:][:digit:]]{1,4}$')
);
--> statement-breakpoint
CREATE TABLE "team" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"name" text NOT NULL,
	"slug" text NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "team_slug_unique" UNIQUE("slug"),
	CONSTRAINT "team_slug" CHECK ("team"."slug" ~ '^[a-z0-9]+(-[a-z0-9]+)*$'),
	CONSTRAINT "team_name" CHECK (length(btrim("team"."name")) between 1 and 120)
);
--> statement-breakpoint
CREATE TABLE "participant" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"team_id" uuid NOT NULL,
	"code" text NOT NULL,
	"member_id" uuid,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "participant_code" UNIQUE("team_id","code"),
	CONSTRAINT "participant_team" UNIQUE("team_id","id"),
	CONSTRAINT "participant_code_form" CHECK ("participant"."code" ~ '^[A-Z0-9][A-Z0-9-]{0,15}$')
);
--> statement-breakpoint
CREATE TABLE "device_model" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"team_id" uuid NOT NULL,
	"name" text NOT NULL,
	"short_name" text NOT NULL,
	"role" "device_role" NOT NULL,
	"placement" "placement" NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "device_model_name" UNIQUE("team_id","name"),
	CONSTRAINT "device_model_team" UNIQUE("team_id","id")
);
--> statement-breakpoint
CREATE TABLE "device_rule" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"team_id" uuid NOT NULL,
	"key" text NOT NULL,
	"device_model_id" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "device_rule_key" UNIQUE("team_id","key"),
	CONSTRAINT "device_rule_key_form" CHECK ("device_rule"."key" ~ '^(serial|origin):.')
);
--> statement-breakpoint
CREATE TABLE "device_unit" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"team_id" uuid NOT NULL,
	"device_model_id" uuid NOT NULL,
	"serial" text,
	"firmware" text DEFAULT 'unknown' NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "device_unit_firmware" UNIQUE NULLS NOT DISTINCT("team_id","device_model_id","serial","firmware"),
	CONSTRAINT "device_unit_team" UNIQUE("team_id","id")
);
--> statement-breakpoint
CREATE TABLE "analysis_plan" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"team_id" uuid NOT NULL,
	"study_id" uuid NOT NULL,
	"version" integer NOT NULL,
	"body" jsonb NOT NULL,
	"reason" text DEFAULT '' NOT NULL,
	"created_by" text,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "analysis_plan_version" UNIQUE("study_id","version"),
	CONSTRAINT "analysis_plan_version_positive" CHECK ("analysis_plan"."version" >= 1)
);
--> statement-breakpoint
CREATE TABLE "study" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"team_id" uuid NOT NULL,
	"slug" text NOT NULL,
	"title" text NOT NULL,
	"question" text DEFAULT '' NOT NULL,
	"activities" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"created_by" text,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "study_slug" UNIQUE("team_id","slug"),
	CONSTRAINT "study_team" UNIQUE("team_id","id"),
	CONSTRAINT "study_slug_form" CHECK ("study"."slug" ~ '^[a-z0-9]+(-[a-z0-9]+)*$')
);
--> statement-breakpoint
CREATE TABLE "study_device" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"team_id" uuid NOT NULL,
	"study_id" uuid NOT NULL,
	"device_model_id" uuid NOT NULL,
	"number" integer NOT NULL,
	CONSTRAINT "study_device_number" UNIQUE("study_id","number"),
	CONSTRAINT "study_device_once" UNIQUE("study_id","device_model_id"),
	CONSTRAINT "study_device_number_range" CHECK ("study_device"."number" between 0 and 6)
);
--> statement-breakpoint
CREATE TABLE "session" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"team_id" uuid NOT NULL,
	"study_id" uuid NOT NULL,
	"code" text NOT NULL,
	"title" text DEFAULT '' NOT NULL,
	"activity" text,
	"participant_id" uuid,
	"state" "session_state" DEFAULT 'imported' NOT NULL,
	"annotator_id" uuid,
	"starts_at" timestamp with time zone NOT NULL,
	"ends_at" timestamp with time zone NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "session_code" UNIQUE("study_id","code"),
	CONSTRAINT "session_team" UNIQUE("team_id","id"),
	CONSTRAINT "session_span" CHECK ("session"."ends_at" >= "session"."starts_at"),
	CONSTRAINT "session_code_form" CHECK ("session"."code" ~ '^S[0-9]{2,5}$')
);
--> statement-breakpoint
CREATE TABLE "raw_file" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"team_id" uuid NOT NULL,
	"sha256" text NOT NULL,
	"size_bytes" bigint NOT NULL,
	"bytes" "bytea" NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "raw_file_once" UNIQUE("team_id","sha256"),
	CONSTRAINT "raw_file_team" UNIQUE("team_id","id"),
	CONSTRAINT "raw_file_hash" CHECK ("raw_file"."sha256" ~ '^[0-9a-f]{64}$'),
	CONSTRAINT "raw_file_size" CHECK ("raw_file"."size_bytes" = octet_length("raw_file"."bytes"))
);
--> statement-breakpoint
CREATE TABLE "recording" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"team_id" uuid NOT NULL,
	"study_id" uuid NOT NULL,
	"session_id" uuid,
	"raw_file_id" uuid NOT NULL,
	"file_name" text NOT NULL,
	"device_model_id" uuid,
	"device_unit_id" uuid,
	"format" text NOT NULL,
	"reader_version" text NOT NULL,
	"device" jsonb NOT NULL,
	"activity" text,
	"warnings" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"start_s" double precision NOT NULL,
	"end_s" double precision NOT NULL,
	"uploaded_by" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "recording_raw_once" UNIQUE("study_id","raw_file_id"),
	CONSTRAINT "recording_team" UNIQUE("team_id","id"),
	CONSTRAINT "recording_device_once" UNIQUE("session_id","device_model_id"),
	CONSTRAINT "recording_span" CHECK ("recording"."end_s" >= "recording"."start_s")
);
--> statement-breakpoint
CREATE TABLE "trace" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"recording_id" uuid NOT NULL,
	"kind" text NOT NULL,
	"n" integer NOT NULL,
	"t_s" "bytea" NOT NULL,
	"value" "bytea" NOT NULL,
	CONSTRAINT "trace_kind" UNIQUE("recording_id","kind"),
	CONSTRAINT "trace_kind_known" CHECK ("trace"."kind" in ('heartRate', 'rrInterval', 'cadence', 'speed', 'power', 'altitude', 'distance', 'temperature')),
	CONSTRAINT "trace_lengths" CHECK (octet_length("trace"."t_s") = 8 * "trace"."n" and octet_length("trace"."value") = 8 * "trace"."n" and "trace"."n" > 0)
);
--> statement-breakpoint
CREATE TABLE "upload" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"team_id" uuid NOT NULL,
	"study_id" uuid NOT NULL,
	"uploaded_by" uuid NOT NULL,
	"file_name" text NOT NULL,
	"raw_file_id" uuid,
	"state" "upload_state" DEFAULT 'waiting' NOT NULL,
	"progress" double precision DEFAULT 0 NOT NULL,
	"message_code" text,
	"message" text,
	"recording_id" uuid,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"finished_at" timestamp with time zone,
	CONSTRAINT "upload_progress" CHECK ("upload"."progress" between 0 and 1),
	CONSTRAINT "upload_refused_says_why" CHECK ("upload"."state" <> 'refused' or "upload"."message" is not null)
);
--> statement-breakpoint
CREATE TABLE "alignment" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"team_id" uuid NOT NULL,
	"recording_id" uuid NOT NULL,
	"version" integer NOT NULL,
	"offset_s" double precision NOT NULL,
	"drift_ppm" double precision DEFAULT 0 NOT NULL,
	"method" "alignment_method" NOT NULL,
	"locked" boolean DEFAULT false NOT NULL,
	"estimate" jsonb,
	"note" text DEFAULT '' NOT NULL,
	"author_id" uuid,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "alignment_version" UNIQUE("recording_id","version"),
	CONSTRAINT "alignment_version_positive" CHECK ("alignment"."version" >= 1),
	CONSTRAINT "alignment_hand_has_author" CHECK ("alignment"."method" = 'proposed' or "alignment"."author_id" is not null),
	CONSTRAINT "alignment_finite" CHECK ("alignment"."offset_s" between -1e10 and 1e10 and "alignment"."drift_ppm" between -100000 and 100000)
);
--> statement-breakpoint
CREATE TABLE "annotation_version" (
	"team_id" uuid NOT NULL,
	"annotation_id" uuid NOT NULL,
	"version" integer NOT NULL,
	"kind" text NOT NULL,
	"start_s" double precision NOT NULL,
	"end_s" double precision NOT NULL,
	"status" "tag_status" NOT NULL,
	"cleaned_override" "tag_treatment",
	"evidence" text DEFAULT '' NOT NULL,
	"note" text DEFAULT '' NOT NULL,
	"author_id" uuid,
	"by_program" boolean DEFAULT false NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "annotation_version_annotation_id_version_pk" PRIMARY KEY("annotation_id","version"),
	CONSTRAINT "annotation_version_span" CHECK ("annotation_version"."end_s" > "annotation_version"."start_s"),
	CONSTRAINT "annotation_version_positive" CHECK ("annotation_version"."version" >= 1),
	CONSTRAINT "annotation_version_has_author" CHECK ("annotation_version"."by_program" or "annotation_version"."author_id" is not null)
);
--> statement-breakpoint
CREATE TABLE "annotation" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"team_id" uuid NOT NULL,
	"session_id" uuid NOT NULL,
	"recording_id" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "annotation_team" UNIQUE("team_id","id")
);
--> statement-breakpoint
CREATE TABLE "tag_kind" (
	"team_id" uuid NOT NULL,
	"key" text NOT NULL,
	"name" text NOT NULL,
	"hotkey" text,
	"texture" text NOT NULL,
	"blames" "tag_blame" NOT NULL,
	"primary_treatment" "tag_treatment" NOT NULL,
	"cleaned_treatment" "tag_treatment" NOT NULL,
	"meaning" text NOT NULL,
	"position" integer NOT NULL,
	CONSTRAINT "tag_kind_team_id_key_pk" PRIMARY KEY("team_id","key"),
	CONSTRAINT "tag_kind_hotkey" UNIQUE("team_id","hotkey"),
	CONSTRAINT "tag_kind_key_form" CHECK ("tag_kind"."key" ~ '^[a-z0-9]+(-[a-z0-9]+)*$'),
	CONSTRAINT "tag_kind_primary_only_reference" CHECK ("tag_kind"."primary_treatment" = 'in' or "tag_kind"."blames" = 'reference')
);
--> statement-breakpoint
CREATE TABLE "review" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"team_id" uuid NOT NULL,
	"session_id" uuid NOT NULL,
	"round" integer NOT NULL,
	"submitted_by" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"submit_note" text DEFAULT '' NOT NULL,
	"reviewer_id" uuid,
	"decision" "review_decision",
	"comment" text DEFAULT '' NOT NULL,
	"decided_at" timestamp with time zone,
	CONSTRAINT "review_round" UNIQUE("session_id","round"),
	CONSTRAINT "review_not_own_work" CHECK ("review"."reviewer_id" is null or "review"."reviewer_id" <> "review"."submitted_by"),
	CONSTRAINT "review_decided_whole" CHECK (("review"."decision" is null) = ("review"."decided_at" is null) and ("review"."decision" is null or "review"."reviewer_id" is not null)),
	CONSTRAINT "review_return_says_why" CHECK ("review"."decision" is distinct from 'returned' or length(btrim("review"."comment")) > 0)
);
--> statement-breakpoint
CREATE TABLE "audit_entry" (
	"id" bigserial PRIMARY KEY NOT NULL,
	"team_id" uuid NOT NULL,
	"actor_id" text,
	"actor_initials" text DEFAULT '' NOT NULL,
	"action" text NOT NULL,
	"subject_type" text NOT NULL,
	"subject_id" text NOT NULL,
	"detail" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
ALTER TABLE "account" ADD CONSTRAINT "account_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."user"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "auth_session" ADD CONSTRAINT "auth_session_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."user"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "invitation" ADD CONSTRAINT "invitation_team_id_team_id_fk" FOREIGN KEY ("team_id") REFERENCES "public"."team"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "invitation" ADD CONSTRAINT "invitation_invited_by_user_id_fk" FOREIGN KEY ("invited_by") REFERENCES "public"."user"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "member" ADD CONSTRAINT "member_team_id_team_id_fk" FOREIGN KEY ("team_id") REFERENCES "public"."team"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "member" ADD CONSTRAINT "member_user_id_user_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."user"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "participant" ADD CONSTRAINT "participant_team_id_team_id_fk" FOREIGN KEY ("team_id") REFERENCES "public"."team"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "participant" ADD CONSTRAINT "participant_member_same_team" FOREIGN KEY ("team_id","member_id") REFERENCES "public"."member"("team_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "device_model" ADD CONSTRAINT "device_model_team_id_team_id_fk" FOREIGN KEY ("team_id") REFERENCES "public"."team"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "device_rule" ADD CONSTRAINT "device_rule_model_same_team" FOREIGN KEY ("team_id","device_model_id") REFERENCES "public"."device_model"("team_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "device_unit" ADD CONSTRAINT "device_unit_model_same_team" FOREIGN KEY ("team_id","device_model_id") REFERENCES "public"."device_model"("team_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "analysis_plan" ADD CONSTRAINT "analysis_plan_created_by_user_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."user"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "analysis_plan" ADD CONSTRAINT "analysis_plan_study_same_team" FOREIGN KEY ("team_id","study_id") REFERENCES "public"."study"("team_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "study" ADD CONSTRAINT "study_team_id_team_id_fk" FOREIGN KEY ("team_id") REFERENCES "public"."team"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "study" ADD CONSTRAINT "study_created_by_user_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."user"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "study_device" ADD CONSTRAINT "study_device_study_same_team" FOREIGN KEY ("team_id","study_id") REFERENCES "public"."study"("team_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "study_device" ADD CONSTRAINT "study_device_model_same_team" FOREIGN KEY ("team_id","device_model_id") REFERENCES "public"."device_model"("team_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "session" ADD CONSTRAINT "session_study_same_team" FOREIGN KEY ("team_id","study_id") REFERENCES "public"."study"("team_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "session" ADD CONSTRAINT "session_participant_same_team" FOREIGN KEY ("team_id","participant_id") REFERENCES "public"."participant"("team_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "session" ADD CONSTRAINT "session_annotator_same_team" FOREIGN KEY ("team_id","annotator_id") REFERENCES "public"."member"("team_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "recording" ADD CONSTRAINT "recording_study_same_team" FOREIGN KEY ("team_id","study_id") REFERENCES "public"."study"("team_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "recording" ADD CONSTRAINT "recording_session_same_team" FOREIGN KEY ("team_id","session_id") REFERENCES "public"."session"("team_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "recording" ADD CONSTRAINT "recording_raw_same_team" FOREIGN KEY ("team_id","raw_file_id") REFERENCES "public"."raw_file"("team_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "recording" ADD CONSTRAINT "recording_model_same_team" FOREIGN KEY ("team_id","device_model_id") REFERENCES "public"."device_model"("team_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "recording" ADD CONSTRAINT "recording_unit_same_team" FOREIGN KEY ("team_id","device_unit_id") REFERENCES "public"."device_unit"("team_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "recording" ADD CONSTRAINT "recording_member_same_team" FOREIGN KEY ("team_id","uploaded_by") REFERENCES "public"."member"("team_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "trace" ADD CONSTRAINT "trace_recording_id_recording_id_fk" FOREIGN KEY ("recording_id") REFERENCES "public"."recording"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "upload" ADD CONSTRAINT "upload_study_same_team" FOREIGN KEY ("team_id","study_id") REFERENCES "public"."study"("team_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "upload" ADD CONSTRAINT "upload_member_same_team" FOREIGN KEY ("team_id","uploaded_by") REFERENCES "public"."member"("team_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "upload" ADD CONSTRAINT "upload_raw_same_team" FOREIGN KEY ("team_id","raw_file_id") REFERENCES "public"."raw_file"("team_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "upload" ADD CONSTRAINT "upload_recording" FOREIGN KEY ("recording_id") REFERENCES "public"."recording"("id") ON DELETE set null ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "alignment" ADD CONSTRAINT "alignment_recording_same_team" FOREIGN KEY ("team_id","recording_id") REFERENCES "public"."recording"("team_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "alignment" ADD CONSTRAINT "alignment_author_same_team" FOREIGN KEY ("team_id","author_id") REFERENCES "public"."member"("team_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "annotation_version" ADD CONSTRAINT "annotation_version_same_team" FOREIGN KEY ("team_id","annotation_id") REFERENCES "public"."annotation"("team_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "annotation_version" ADD CONSTRAINT "annotation_version_kind" FOREIGN KEY ("team_id","kind") REFERENCES "public"."tag_kind"("team_id","key") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "annotation_version" ADD CONSTRAINT "annotation_version_author_same_team" FOREIGN KEY ("team_id","author_id") REFERENCES "public"."member"("team_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "annotation" ADD CONSTRAINT "annotation_session_same_team" FOREIGN KEY ("team_id","session_id") REFERENCES "public"."session"("team_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "annotation" ADD CONSTRAINT "annotation_recording_same_team" FOREIGN KEY ("team_id","recording_id") REFERENCES "public"."recording"("team_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "tag_kind" ADD CONSTRAINT "tag_kind_team_id_team_id_fk" FOREIGN KEY ("team_id") REFERENCES "public"."team"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "review" ADD CONSTRAINT "review_session_same_team" FOREIGN KEY ("team_id","session_id") REFERENCES "public"."session"("team_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "review" ADD CONSTRAINT "review_submitter_same_team" FOREIGN KEY ("team_id","submitted_by") REFERENCES "public"."member"("team_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "review" ADD CONSTRAINT "review_reviewer_same_team" FOREIGN KEY ("team_id","reviewer_id") REFERENCES "public"."member"("team_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "audit_entry" ADD CONSTRAINT "audit_entry_team_id_team_id_fk" FOREIGN KEY ("team_id") REFERENCES "public"."team"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "account_user" ON "account" USING btree ("user_id");--> statement-breakpoint
CREATE INDEX "auth_session_user" ON "auth_session" USING btree ("user_id");--> statement-breakpoint
CREATE UNIQUE INDEX "user_email_lower" ON "user" USING btree (lower("email"));--> statement-breakpoint
CREATE UNIQUE INDEX "invitation_open" ON "invitation" USING btree ("team_id",lower("email")) WHERE "invitation"."accepted_at" is null;--> statement-breakpoint
CREATE INDEX "member_user" ON "member" USING btree ("user_id");--> statement-breakpoint
CREATE INDEX "device_rule_model" ON "device_rule" USING btree ("device_model_id");--> statement-breakpoint
CREATE INDEX "session_time" ON "session" USING btree ("study_id","starts_at");--> statement-breakpoint
CREATE INDEX "session_participant" ON "session" USING btree ("participant_id");--> statement-breakpoint
CREATE INDEX "recording_session" ON "recording" USING btree ("session_id");--> statement-breakpoint
CREATE INDEX "upload_study" ON "upload" USING btree ("study_id","state");--> statement-breakpoint
CREATE INDEX "annotation_session" ON "annotation" USING btree ("session_id");--> statement-breakpoint
CREATE INDEX "annotation_recording" ON "annotation" USING btree ("recording_id");--> statement-breakpoint
CREATE INDEX "audit_team_time" ON "audit_entry" USING btree ("team_id","at");--> statement-breakpoint
CREATE INDEX "audit_subject" ON "audit_entry" USING btree ("subject_type","subject_id");