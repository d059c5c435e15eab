CREATE TABLE "account_tokens" (
	"token_sha256" "bytea" PRIMARY KEY NOT NULL,
	"kind" text NOT NULL,
	"email" text NOT NULL,
	"user_id" uuid,
	"grants" jsonb,
	"expires_at" timestamp with time zone NOT NULL,
	"used_at" timestamp with time zone,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "account_tokens_kind" CHECK ("account_tokens"."kind" in ('invitation', 'verification', 'reset')),
	CONSTRAINT "account_tokens_digest" CHECK (length("account_tokens"."token_sha256") = 32)
);
--> statement-breakpoint
CREATE TABLE "idempotency" (
	"user_id" uuid NOT NULL,
	"key" text NOT NULL,
	"request_sha256" "bytea" NOT NULL,
	"response" jsonb,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "idempotency_user_id_key_pk" PRIMARY KEY("user_id","key")
);
--> statement-breakpoint
CREATE TABLE "sessions" (
	"token_sha256" "bytea" PRIMARY KEY NOT NULL,
	"user_id" uuid NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"client" text DEFAULT '' NOT NULL,
	CONSTRAINT "sessions_digest" CHECK (length("sessions"."token_sha256") = 32)
);
--> statement-breakpoint
CREATE TABLE "sign_in_limits" (
	"key" text PRIMARY KEY NOT NULL,
	"points" integer DEFAULT 0 NOT NULL,
	"expire" timestamp with time zone
);
--> statement-breakpoint
CREATE TABLE "users" (
	"id" uuid PRIMARY KEY NOT NULL,
	"email" text NOT NULL,
	"name" text NOT NULL,
	"initials" text NOT NULL,
	"password_hash" text,
	"email_verified_at" timestamp with time zone,
	"site_administrator" boolean DEFAULT false NOT NULL,
	"theme" text DEFAULT 'system' NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "users_email_unique" UNIQUE("email"),
	CONSTRAINT "users_email_lower" CHECK ("users"."email" = lower("users"."email") and position('@' in "users"."email") > 1),
	CONSTRAINT "users_name_given" CHECK (length(trim("users"."name")) > 0),
	CONSTRAINT "users_theme" CHECK ("users"."theme" in ('system', 'light', 'dark'))
);
--> statement-breakpoint
CREATE TABLE "assignments" (
	"id" uuid PRIMARY KEY NOT NULL,
	"course_id" uuid NOT NULL,
	"experiment_version_id" uuid NOT NULL,
	"rubric_version_id" uuid NOT NULL,
	"title" text NOT NULL,
	"position" integer NOT NULL,
	"due_local" timestamp NOT NULL,
	"closes_local" timestamp NOT NULL,
	"hide_names" boolean DEFAULT true NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "assignments_position" UNIQUE("course_id","position"),
	CONSTRAINT "assignments_rubric" UNIQUE("id","rubric_version_id"),
	CONSTRAINT "assignments_closing" CHECK ("assignments"."closes_local" >= "assignments"."due_local")
);
--> statement-breakpoint
CREATE TABLE "bench_words" (
	"id" uuid PRIMARY KEY NOT NULL,
	"course_id" uuid NOT NULL,
	"lab_section_id" uuid NOT NULL,
	"words_sha256" "bytea" NOT NULL,
	"words" text NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"created_by" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "bench_words_words_sha256_unique" UNIQUE("words_sha256")
);
--> statement-breakpoint
CREATE TABLE "courses" (
	"id" uuid PRIMARY KEY NOT NULL,
	"slug" text NOT NULL,
	"code" text NOT NULL,
	"title" text NOT NULL,
	"institution" text NOT NULL,
	"zone" text NOT NULL,
	"starts_on" text NOT NULL,
	"late_rule" jsonb NOT NULL,
	"uncertainty_kind" text DEFAULT 'standard' NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "courses_slug_unique" UNIQUE("slug"),
	CONSTRAINT "courses_slug" CHECK ("courses"."slug" ~ '^[a-z0-9][a-z0-9-]{0,62}$'),
	CONSTRAINT "courses_uncertainty_kind" CHECK ("courses"."uncertainty_kind" in ('standard', 'expanded'))
);
--> statement-breakpoint
CREATE TABLE "extensions" (
	"id" uuid PRIMARY KEY NOT NULL,
	"assignment_id" uuid NOT NULL,
	"user_id" uuid,
	"team_id" uuid,
	"due_local" timestamp NOT NULL,
	"closes_local" timestamp NOT NULL,
	"reason" text NOT NULL,
	"granted_by" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "extensions_one" UNIQUE NULLS NOT DISTINCT("assignment_id","user_id","team_id"),
	CONSTRAINT "extensions_whose" CHECK (("extensions"."user_id" is null) <> ("extensions"."team_id" is null)),
	CONSTRAINT "extensions_closing" CHECK ("extensions"."closes_local" >= "extensions"."due_local")
);
--> statement-breakpoint
CREATE TABLE "grading_sections" (
	"lab_section_id" uuid NOT NULL,
	"user_id" uuid NOT NULL,
	CONSTRAINT "grading_sections_lab_section_id_user_id_pk" PRIMARY KEY("lab_section_id","user_id")
);
--> statement-breakpoint
CREATE TABLE "lab_sections" (
	"id" uuid PRIMARY KEY NOT NULL,
	"course_id" uuid NOT NULL,
	"name" text NOT NULL,
	"meets" text NOT NULL,
	CONSTRAINT "lab_sections_name" UNIQUE("course_id","name"),
	CONSTRAINT "lab_sections_course_id" UNIQUE("course_id","id")
);
--> statement-breakpoint
CREATE TABLE "members" (
	"course_id" uuid NOT NULL,
	"user_id" uuid NOT NULL,
	"role" text NOT NULL,
	"lab_section_id" uuid,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"left_at" timestamp with time zone,
	CONSTRAINT "members_course_id_user_id_role_pk" PRIMARY KEY("course_id","user_id","role"),
	CONSTRAINT "members_role" CHECK ("members"."role" in ('student', 'grader', 'instructor'))
);
--> statement-breakpoint
CREATE TABLE "team_members" (
	"id" uuid PRIMARY KEY NOT NULL,
	"team_id" uuid NOT NULL,
	"course_id" uuid NOT NULL,
	"user_id" uuid NOT NULL,
	"during" "tstzrange" NOT NULL
);
--> statement-breakpoint
CREATE TABLE "teams" (
	"id" uuid PRIMARY KEY NOT NULL,
	"course_id" uuid NOT NULL,
	"lab_section_id" uuid NOT NULL,
	"name" text NOT NULL,
	CONSTRAINT "teams_name" UNIQUE("course_id","name"),
	CONSTRAINT "teams_course_id" UNIQUE("course_id","id")
);
--> statement-breakpoint
CREATE TABLE "criteria" (
	"id" uuid PRIMARY KEY NOT NULL,
	"rubric_version_id" uuid NOT NULL,
	"key" text NOT NULL,
	"position" integer NOT NULL,
	"title" text NOT NULL,
	CONSTRAINT "criteria_key" UNIQUE("rubric_version_id","key"),
	CONSTRAINT "criteria_position" UNIQUE("rubric_version_id","position"),
	CONSTRAINT "criteria_in_rubric" UNIQUE("rubric_version_id","id")
);
--> statement-breakpoint
CREATE TABLE "experiment_versions" (
	"id" uuid PRIMARY KEY NOT NULL,
	"experiment_id" uuid NOT NULL,
	"n" integer NOT NULL,
	"part" "bytea" NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "experiment_versions_n" UNIQUE("experiment_id","n")
);
--> statement-breakpoint
CREATE TABLE "experiments" (
	"id" uuid PRIMARY KEY NOT NULL,
	"slug" text NOT NULL,
	"title" text NOT NULL,
	CONSTRAINT "experiments_slug_unique" UNIQUE("slug")
);
--> statement-breakpoint
CREATE TABLE "levels" (
	"criterion_id" uuid NOT NULL,
	"level" integer NOT NULL,
	"text" text NOT NULL,
	"points_hundredths" integer NOT NULL,
	CONSTRAINT "levels_criterion_id_level_pk" PRIMARY KEY("criterion_id","level"),
	CONSTRAINT "levels_points" CHECK ("levels"."points_hundredths" >= 0 and "levels"."level" >= 0)
);
--> statement-breakpoint
CREATE TABLE "parts" (
	"sha256" "bytea" PRIMARY KEY NOT NULL,
	"bytes" "bytea",
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "parts_digest" CHECK (length("parts"."sha256") = 32),
	CONSTRAINT "parts_content" CHECK ("parts"."bytes" is null or "parts"."sha256" = sha256("parts"."bytes"))
);
--> statement-breakpoint
CREATE TABLE "rubric_versions" (
	"id" uuid PRIMARY KEY NOT NULL,
	"rubric_id" uuid NOT NULL,
	"n" integer NOT NULL,
	"title" text NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "rubric_versions_n" UNIQUE("rubric_id","n")
);
--> statement-breakpoint
CREATE TABLE "rubrics" (
	"id" uuid PRIMARY KEY NOT NULL,
	"slug" text NOT NULL,
	"title" text NOT NULL,
	CONSTRAINT "rubrics_slug_unique" UNIQUE("slug")
);
--> statement-breakpoint
CREATE TABLE "audit" (
	"id" uuid PRIMARY KEY NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"actor_id" uuid,
	"course_id" uuid,
	"action" text NOT NULL,
	"subject_kind" text NOT NULL,
	"subject_id" text NOT NULL,
	"detail" jsonb DEFAULT '{}'::jsonb NOT NULL
);
--> statement-breakpoint
CREATE TABLE "blobs" (
	"sha256" "bytea" PRIMARY KEY NOT NULL,
	"size" bigint NOT NULL,
	"media_type" text NOT NULL,
	"unreferenced_since" timestamp with time zone,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "blobs_digest" CHECK (length("blobs"."sha256") = 32)
);
--> statement-breakpoint
CREATE TABLE "files" (
	"id" uuid PRIMARY KEY NOT NULL,
	"sha256" "bytea" NOT NULL,
	"subject_kind" text NOT NULL,
	"subject_id" uuid NOT NULL,
	"name" text NOT NULL,
	"by_id" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "outbox" (
	"id" uuid PRIMARY KEY NOT NULL,
	"kind" text NOT NULL,
	"subject" text NOT NULL,
	"recipient" text NOT NULL,
	"payload" jsonb NOT NULL,
	"attempts" integer DEFAULT 0 NOT NULL,
	"last_problem" text,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"sent_at" timestamp with time zone,
	CONSTRAINT "outbox_once" UNIQUE("kind","subject","recipient")
);
--> statement-breakpoint
CREATE TABLE "uploads" (
	"id" uuid PRIMARY KEY NOT NULL,
	"by_id" uuid NOT NULL,
	"subject_kind" text NOT NULL,
	"subject_id" uuid NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "anchors" (
	"remark_id" uuid NOT NULL,
	"snapshot_id" uuid NOT NULL,
	"section_position" integer NOT NULL,
	"selector" jsonb NOT NULL,
	"projection" integer NOT NULL,
	"attached" boolean NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "anchors_remark_id_snapshot_id_pk" PRIMARY KEY("remark_id","snapshot_id")
);
--> statement-breakpoint
CREATE TABLE "appeals" (
	"report_id" uuid NOT NULL,
	"criterion_id" uuid NOT NULL,
	"n" integer NOT NULL,
	"action" text NOT NULL,
	"body" text NOT NULL,
	"by_id" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "appeals_report_id_criterion_id_n_pk" PRIMARY KEY("report_id","criterion_id","n"),
	CONSTRAINT "appeals_action" CHECK ("appeals"."action" in ('ask', 'uphold', 'change', 'withdraw'))
);
--> statement-breakpoint
CREATE TABLE "final_marks" (
	"report_id" uuid NOT NULL,
	"n" integer NOT NULL,
	"source" text NOT NULL,
	"marking_id" uuid,
	"points_hundredths" integer NOT NULL,
	"deduction_hundredths" integer DEFAULT 0 NOT NULL,
	"reason" text NOT NULL,
	"by_id" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "final_marks_report_id_n_pk" PRIMARY KEY("report_id","n"),
	CONSTRAINT "final_marks_source" CHECK ("final_marks"."source" in ('marking', 'settled', 'adjusted', 'appeal'))
);
--> statement-breakpoint
CREATE TABLE "kept_remarks" (
	"id" uuid PRIMARY KEY NOT NULL,
	"course_id" uuid NOT NULL,
	"owner_id" uuid NOT NULL,
	"kind" text NOT NULL,
	"body" text NOT NULL,
	"uses" integer DEFAULT 0 NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "kept_remarks_once" UNIQUE("course_id","owner_id","body")
);
--> statement-breakpoint
CREATE TABLE "markings" (
	"id" uuid PRIMARY KEY NOT NULL,
	"snapshot_id" uuid NOT NULL,
	"rubric_version_id" uuid NOT NULL,
	"grader_id" uuid NOT NULL,
	"kind" text DEFAULT 'first' NOT NULL,
	"revision" integer DEFAULT 1 NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"finished_at" timestamp with time zone,
	CONSTRAINT "markings_grader" UNIQUE("snapshot_id","grader_id"),
	CONSTRAINT "markings_rubric" UNIQUE("id","rubric_version_id"),
	CONSTRAINT "markings_kind_known" CHECK ("markings"."kind" in ('first', 'second', 'third', 'common'))
);
--> statement-breakpoint
CREATE TABLE "releases" (
	"report_id" uuid NOT NULL,
	"n" integer NOT NULL,
	"action" text NOT NULL,
	"by_id" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "releases_report_id_n_pk" PRIMARY KEY("report_id","n"),
	CONSTRAINT "releases_action" CHECK ("releases"."action" in ('return', 'withdraw'))
);
--> statement-breakpoint
CREATE TABLE "remark_revisions" (
	"remark_id" uuid NOT NULL,
	"n" integer NOT NULL,
	"kind" text NOT NULL,
	"body" text NOT NULL,
	"deleted" boolean DEFAULT false NOT NULL,
	"by_id" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "remark_revisions_remark_id_n_pk" PRIMARY KEY("remark_id","n"),
	CONSTRAINT "remark_revisions_kind" CHECK ("remark_revisions"."kind" in ('to correct', 'question', 'note', 'well done'))
);
--> statement-breakpoint
CREATE TABLE "remarks" (
	"id" uuid PRIMARY KEY NOT NULL,
	"marking_id" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "replies" (
	"id" uuid PRIMARY KEY NOT NULL,
	"remark_id" uuid NOT NULL,
	"by_id" uuid NOT NULL,
	"body" text NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "score_events" (
	"marking_id" uuid NOT NULL,
	"rubric_version_id" uuid NOT NULL,
	"criterion_id" uuid NOT NULL,
	"n" integer NOT NULL,
	"level" integer,
	"points_hundredths" integer,
	"reason" text DEFAULT '' NOT NULL,
	"by_id" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "score_events_marking_id_criterion_id_n_pk" PRIMARY KEY("marking_id","criterion_id","n"),
	CONSTRAINT "score_events_points" CHECK (("score_events"."level" is null) = ("score_events"."points_hundredths" is null))
);
--> statement-breakpoint
CREATE TABLE "sitting_reports" (
	"sitting_id" uuid NOT NULL,
	"position" integer NOT NULL,
	"report_id" uuid NOT NULL,
	CONSTRAINT "sitting_reports_sitting_id_position_pk" PRIMARY KEY("sitting_id","position"),
	CONSTRAINT "sitting_reports_once" UNIQUE("sitting_id","report_id")
);
--> statement-breakpoint
CREATE TABLE "sittings" (
	"id" uuid PRIMARY KEY NOT NULL,
	"assignment_id" uuid NOT NULL,
	"grader_id" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "amendments" (
	"seal_id" uuid NOT NULL,
	"n" integer NOT NULL,
	"row" text NOT NULL,
	"column" text NOT NULL,
	"before" text NOT NULL,
	"after" text NOT NULL,
	"reason" text NOT NULL,
	"by_id" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "amendments_seal_id_n_pk" PRIMARY KEY("seal_id","n"),
	CONSTRAINT "amendments_reason" CHECK (length(trim("amendments"."reason")) > 0)
);
--> statement-breakpoint
CREATE TABLE "document_bases" (
	"document_id" uuid PRIMARY KEY NOT NULL,
	"upto_seq" bigint NOT NULL,
	"state" "bytea" NOT NULL
);
--> statement-breakpoint
CREATE TABLE "document_updates" (
	"document_id" uuid NOT NULL,
	"seq" bigint NOT NULL,
	"user_id" uuid,
	"bytes" "bytea" NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "document_updates_document_id_seq_pk" PRIMARY KEY("document_id","seq")
);
--> statement-breakpoint
CREATE TABLE "document_versions" (
	"document_id" uuid NOT NULL,
	"seq" bigint NOT NULL,
	"text" text NOT NULL,
	"by_id" uuid,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "document_versions_document_id_seq_pk" PRIMARY KEY("document_id","seq")
);
--> statement-breakpoint
CREATE TABLE "documents" (
	"id" uuid PRIMARY KEY NOT NULL,
	"work_id" uuid NOT NULL,
	"author_id" uuid,
	"kind" text NOT NULL,
	"key" text NOT NULL,
	"seq" bigint DEFAULT 0 NOT NULL,
	"epoch" integer DEFAULT 1 NOT NULL,
	"frozen_at" timestamp with time zone,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "documents_one" UNIQUE NULLS NOT DISTINCT("work_id","author_id","kind","key"),
	CONSTRAINT "documents_kind" CHECK ("documents"."kind" in ('readings', 'section', 'workings', 'plan', 'notebook')),
	CONSTRAINT "documents_team_kinds" CHECK ("documents"."kind" <> 'readings' or "documents"."author_id" is null)
);
--> statement-breakpoint
CREATE TABLE "reports" (
	"id" uuid PRIMARY KEY NOT NULL,
	"work_id" uuid NOT NULL,
	"author_id" uuid NOT NULL,
	"alias" text NOT NULL,
	"counted_snapshot_id" uuid,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "reports_alias_unique" UNIQUE("alias"),
	CONSTRAINT "reports_one" UNIQUE("work_id","author_id"),
	CONSTRAINT "reports_alias" CHECK ("reports"."alias" ~ '^[a-z]+-[0-9a-z]{6,}$')
);
--> statement-breakpoint
CREATE TABLE "seals" (
	"id" uuid PRIMARY KEY NOT NULL,
	"document_id" uuid NOT NULL,
	"seq" bigint NOT NULL,
	"part" "bytea" NOT NULL,
	"initialled_by_id" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "seals_document_id_unique" UNIQUE("document_id")
);
--> statement-breakpoint
CREATE TABLE "snapshot_sections" (
	"snapshot_id" uuid NOT NULL,
	"position" integer NOT NULL,
	"key" text NOT NULL,
	"title" text NOT NULL,
	"document_id" uuid NOT NULL,
	"seq" bigint NOT NULL,
	"part" "bytea" NOT NULL,
	CONSTRAINT "snapshot_sections_snapshot_id_position_pk" PRIMARY KEY("snapshot_id","position")
);
--> statement-breakpoint
CREATE TABLE "snapshots" (
	"id" uuid PRIMARY KEY NOT NULL,
	"report_id" uuid NOT NULL,
	"attempt" integer NOT NULL,
	"manifest" "bytea" NOT NULL,
	"engine" text NOT NULL,
	"received_at" timestamp with time zone NOT NULL,
	"due_at" timestamp with time zone NOT NULL,
	"by_id" uuid NOT NULL,
	CONSTRAINT "snapshots_attempt" UNIQUE("report_id","attempt"),
	CONSTRAINT "snapshots_of_report" UNIQUE("report_id","id"),
	CONSTRAINT "snapshots_attempt_positive" CHECK ("snapshots"."attempt" >= 1)
);
--> statement-breakpoint
CREATE TABLE "work" (
	"id" uuid PRIMARY KEY NOT NULL,
	"assignment_id" uuid NOT NULL,
	"team_id" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "work_one" UNIQUE("assignment_id","team_id")
);
--> statement-breakpoint
ALTER TABLE "account_tokens" ADD CONSTRAINT "account_tokens_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "idempotency" ADD CONSTRAINT "idempotency_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sessions" ADD CONSTRAINT "sessions_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "assignments" ADD CONSTRAINT "assignments_course_id_courses_id_fk" FOREIGN KEY ("course_id") REFERENCES "public"."courses"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "assignments" ADD CONSTRAINT "assignments_experiment_version_id_experiment_versions_id_fk" FOREIGN KEY ("experiment_version_id") REFERENCES "public"."experiment_versions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "assignments" ADD CONSTRAINT "assignments_rubric_version_id_rubric_versions_id_fk" FOREIGN KEY ("rubric_version_id") REFERENCES "public"."rubric_versions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "bench_words" ADD CONSTRAINT "bench_words_course_id_courses_id_fk" FOREIGN KEY ("course_id") REFERENCES "public"."courses"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "bench_words" ADD CONSTRAINT "bench_words_created_by_users_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "bench_words" ADD CONSTRAINT "bench_words_lab_section" FOREIGN KEY ("course_id","lab_section_id") REFERENCES "public"."lab_sections"("course_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "extensions" ADD CONSTRAINT "extensions_assignment_id_assignments_id_fk" FOREIGN KEY ("assignment_id") REFERENCES "public"."assignments"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "extensions" ADD CONSTRAINT "extensions_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "extensions" ADD CONSTRAINT "extensions_team_id_teams_id_fk" FOREIGN KEY ("team_id") REFERENCES "public"."teams"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "extensions" ADD CONSTRAINT "extensions_granted_by_users_id_fk" FOREIGN KEY ("granted_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "grading_sections" ADD CONSTRAINT "grading_sections_lab_section_id_lab_sections_id_fk" FOREIGN KEY ("lab_section_id") REFERENCES "public"."lab_sections"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "grading_sections" ADD CONSTRAINT "grading_sections_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "lab_sections" ADD CONSTRAINT "lab_sections_course_id_courses_id_fk" FOREIGN KEY ("course_id") REFERENCES "public"."courses"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "members" ADD CONSTRAINT "members_course_id_courses_id_fk" FOREIGN KEY ("course_id") REFERENCES "public"."courses"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "members" ADD CONSTRAINT "members_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "members" ADD CONSTRAINT "members_lab_section" FOREIGN KEY ("course_id","lab_section_id") REFERENCES "public"."lab_sections"("course_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "team_members" ADD CONSTRAINT "team_members_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "team_members" ADD CONSTRAINT "team_members_team" FOREIGN KEY ("course_id","team_id") REFERENCES "public"."teams"("course_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "teams" ADD CONSTRAINT "teams_lab_section" FOREIGN KEY ("course_id","lab_section_id") REFERENCES "public"."lab_sections"("course_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "criteria" ADD CONSTRAINT "criteria_rubric_version_id_rubric_versions_id_fk" FOREIGN KEY ("rubric_version_id") REFERENCES "public"."rubric_versions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "experiment_versions" ADD CONSTRAINT "experiment_versions_experiment_id_experiments_id_fk" FOREIGN KEY ("experiment_id") REFERENCES "public"."experiments"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "experiment_versions" ADD CONSTRAINT "experiment_versions_part_parts_sha256_fk" FOREIGN KEY ("part") REFERENCES "public"."parts"("sha256") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "levels" ADD CONSTRAINT "levels_criterion_id_criteria_id_fk" FOREIGN KEY ("criterion_id") REFERENCES "public"."criteria"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "rubric_versions" ADD CONSTRAINT "rubric_versions_rubric_id_rubrics_id_fk" FOREIGN KEY ("rubric_id") REFERENCES "public"."rubrics"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "audit" ADD CONSTRAINT "audit_actor_id_users_id_fk" FOREIGN KEY ("actor_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "audit" ADD CONSTRAINT "audit_course_id_courses_id_fk" FOREIGN KEY ("course_id") REFERENCES "public"."courses"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "files" ADD CONSTRAINT "files_sha256_blobs_sha256_fk" FOREIGN KEY ("sha256") REFERENCES "public"."blobs"("sha256") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "files" ADD CONSTRAINT "files_by_id_users_id_fk" FOREIGN KEY ("by_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "uploads" ADD CONSTRAINT "uploads_by_id_users_id_fk" FOREIGN KEY ("by_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "anchors" ADD CONSTRAINT "anchors_remark_id_remarks_id_fk" FOREIGN KEY ("remark_id") REFERENCES "public"."remarks"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "anchors" ADD CONSTRAINT "anchors_snapshot_id_snapshots_id_fk" FOREIGN KEY ("snapshot_id") REFERENCES "public"."snapshots"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "appeals" ADD CONSTRAINT "appeals_report_id_reports_id_fk" FOREIGN KEY ("report_id") REFERENCES "public"."reports"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "appeals" ADD CONSTRAINT "appeals_criterion_id_criteria_id_fk" FOREIGN KEY ("criterion_id") REFERENCES "public"."criteria"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "appeals" ADD CONSTRAINT "appeals_by_id_users_id_fk" FOREIGN KEY ("by_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "final_marks" ADD CONSTRAINT "final_marks_report_id_reports_id_fk" FOREIGN KEY ("report_id") REFERENCES "public"."reports"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "final_marks" ADD CONSTRAINT "final_marks_marking_id_markings_id_fk" FOREIGN KEY ("marking_id") REFERENCES "public"."markings"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "final_marks" ADD CONSTRAINT "final_marks_by_id_users_id_fk" FOREIGN KEY ("by_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "kept_remarks" ADD CONSTRAINT "kept_remarks_course_id_courses_id_fk" FOREIGN KEY ("course_id") REFERENCES "public"."courses"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "kept_remarks" ADD CONSTRAINT "kept_remarks_owner_id_users_id_fk" FOREIGN KEY ("owner_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "markings" ADD CONSTRAINT "markings_snapshot_id_snapshots_id_fk" FOREIGN KEY ("snapshot_id") REFERENCES "public"."snapshots"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "markings" ADD CONSTRAINT "markings_rubric_version_id_rubric_versions_id_fk" FOREIGN KEY ("rubric_version_id") REFERENCES "public"."rubric_versions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "markings" ADD CONSTRAINT "markings_grader_id_users_id_fk" FOREIGN KEY ("grader_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "releases" ADD CONSTRAINT "releases_report_id_reports_id_fk" FOREIGN KEY ("report_id") REFERENCES "public"."reports"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "releases" ADD CONSTRAINT "releases_by_id_users_id_fk" FOREIGN KEY ("by_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "remark_revisions" ADD CONSTRAINT "remark_revisions_remark_id_remarks_id_fk" FOREIGN KEY ("remark_id") REFERENCES "public"."remarks"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "remark_revisions" ADD CONSTRAINT "remark_revisions_by_id_users_id_fk" FOREIGN KEY ("by_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "remarks" ADD CONSTRAINT "remarks_marking_id_markings_id_fk" FOREIGN KEY ("marking_id") REFERENCES "public"."markings"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "replies" ADD CONSTRAINT "replies_remark_id_remarks_id_fk" FOREIGN KEY ("remark_id") REFERENCES "public"."remarks"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "replies" ADD CONSTRAINT "replies_by_id_users_id_fk" FOREIGN KEY ("by_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "score_events" ADD CONSTRAINT "score_events_by_id_users_id_fk" FOREIGN KEY ("by_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "score_events" ADD CONSTRAINT "score_events_marking" FOREIGN KEY ("marking_id","rubric_version_id") REFERENCES "public"."markings"("id","rubric_version_id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "score_events" ADD CONSTRAINT "score_events_criterion" FOREIGN KEY ("rubric_version_id","criterion_id") REFERENCES "public"."criteria"("rubric_version_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "score_events" ADD CONSTRAINT "score_events_level" FOREIGN KEY ("criterion_id","level") REFERENCES "public"."levels"("criterion_id","level") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sitting_reports" ADD CONSTRAINT "sitting_reports_sitting_id_sittings_id_fk" FOREIGN KEY ("sitting_id") REFERENCES "public"."sittings"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sitting_reports" ADD CONSTRAINT "sitting_reports_report_id_reports_id_fk" FOREIGN KEY ("report_id") REFERENCES "public"."reports"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sittings" ADD CONSTRAINT "sittings_assignment_id_assignments_id_fk" FOREIGN KEY ("assignment_id") REFERENCES "public"."assignments"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sittings" ADD CONSTRAINT "sittings_grader_id_users_id_fk" FOREIGN KEY ("grader_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "amendments" ADD CONSTRAINT "amendments_seal_id_seals_id_fk" FOREIGN KEY ("seal_id") REFERENCES "public"."seals"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "amendments" ADD CONSTRAINT "amendments_by_id_users_id_fk" FOREIGN KEY ("by_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "document_bases" ADD CONSTRAINT "document_bases_document_id_documents_id_fk" FOREIGN KEY ("document_id") REFERENCES "public"."documents"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "document_updates" ADD CONSTRAINT "document_updates_document_id_documents_id_fk" FOREIGN KEY ("document_id") REFERENCES "public"."documents"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "document_updates" ADD CONSTRAINT "document_updates_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "document_versions" ADD CONSTRAINT "document_versions_document_id_documents_id_fk" FOREIGN KEY ("document_id") REFERENCES "public"."documents"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "document_versions" ADD CONSTRAINT "document_versions_by_id_users_id_fk" FOREIGN KEY ("by_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "documents" ADD CONSTRAINT "documents_work_id_work_id_fk" FOREIGN KEY ("work_id") REFERENCES "public"."work"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "documents" ADD CONSTRAINT "documents_author_id_users_id_fk" FOREIGN KEY ("author_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "reports" ADD CONSTRAINT "reports_work_id_work_id_fk" FOREIGN KEY ("work_id") REFERENCES "public"."work"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "reports" ADD CONSTRAINT "reports_author_id_users_id_fk" FOREIGN KEY ("author_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "seals" ADD CONSTRAINT "seals_document_id_documents_id_fk" FOREIGN KEY ("document_id") REFERENCES "public"."documents"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "seals" ADD CONSTRAINT "seals_part_parts_sha256_fk" FOREIGN KEY ("part") REFERENCES "public"."parts"("sha256") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "seals" ADD CONSTRAINT "seals_initialled_by_id_users_id_fk" FOREIGN KEY ("initialled_by_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "snapshot_sections" ADD CONSTRAINT "snapshot_sections_snapshot_id_snapshots_id_fk" FOREIGN KEY ("snapshot_id") REFERENCES "public"."snapshots"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "snapshot_sections" ADD CONSTRAINT "snapshot_sections_document_id_documents_id_fk" FOREIGN KEY ("document_id") REFERENCES "public"."documents"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "snapshot_sections" ADD CONSTRAINT "snapshot_sections_part_parts_sha256_fk" FOREIGN KEY ("part") REFERENCES "public"."parts"("sha256") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "snapshots" ADD CONSTRAINT "snapshots_report_id_reports_id_fk" FOREIGN KEY ("report_id") REFERENCES "public"."reports"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "snapshots" ADD CONSTRAINT "snapshots_manifest_parts_sha256_fk" FOREIGN KEY ("manifest") REFERENCES "public"."parts"("sha256") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "snapshots" ADD CONSTRAINT "snapshots_by_id_users_id_fk" FOREIGN KEY ("by_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "work" ADD CONSTRAINT "work_assignment_id_assignments_id_fk" FOREIGN KEY ("assignment_id") REFERENCES "public"."assignments"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "work" ADD CONSTRAINT "work_team_id_teams_id_fk" FOREIGN KEY ("team_id") REFERENCES "public"."teams"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "account_tokens_email" ON "account_tokens" USING btree ("email");--> statement-breakpoint
CREATE INDEX "idempotency_age" ON "idempotency" USING btree ("created_at");--> statement-breakpoint
CREATE INDEX "sessions_user" ON "sessions" USING btree ("user_id");--> statement-breakpoint
CREATE INDEX "grading_sections_user" ON "grading_sections" USING btree ("user_id");--> statement-breakpoint
CREATE INDEX "members_user" ON "members" USING btree ("user_id");--> statement-breakpoint
CREATE INDEX "team_members_team_index" ON "team_members" USING btree ("team_id");--> statement-breakpoint
CREATE INDEX "team_members_user" ON "team_members" USING btree ("user_id");--> statement-breakpoint
CREATE INDEX "audit_course" ON "audit" USING btree ("course_id","id");--> statement-breakpoint
CREATE INDEX "audit_subject" ON "audit" USING btree ("subject_kind","subject_id");--> statement-breakpoint
CREATE INDEX "files_subject" ON "files" USING btree ("subject_kind","subject_id");--> statement-breakpoint
CREATE INDEX "outbox_unsent" ON "outbox" USING btree ("created_at") WHERE sent_at is null;--> statement-breakpoint
CREATE UNIQUE INDEX "markings_kind" ON "markings" USING btree ("snapshot_id","kind") WHERE kind <> 'common';--> statement-breakpoint
CREATE INDEX "remarks_marking" ON "remarks" USING btree ("marking_id");--> statement-breakpoint
CREATE INDEX "reports_author" ON "reports" USING btree ("author_id");--> statement-breakpoint
CREATE INDEX "work_team" ON "work" USING btree ("team_id");