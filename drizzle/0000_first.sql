CREATE TYPE "public"."check_state" AS ENUM('computing', 'trial', 'published', 'withdrawn', 'failed');--> statement-breakpoint
CREATE TYPE "public"."verdict" AS ENUM('within', 'outside', 'too-close-to-call', 'undecided', 'not-measured', 'no-tolerance');--> statement-breakpoint
CREATE TYPE "public"."control_frame" AS ENUM('design', 'map');--> statement-breakpoint
CREATE TYPE "public"."control_point_state" AS ENUM('in-use', 'disturbed', 'lost');--> statement-breakpoint
CREATE TYPE "public"."fit_kind" AS ENUM('height', 'levelled', 'levelled-scaled', 'free', 'free-scaled');--> statement-breakpoint
CREATE TYPE "public"."fit_state" AS ENUM('made', 'adopted', 'superseded');--> statement-breakpoint
CREATE TYPE "public"."job_state" AS ENUM('waiting', 'running', 'done', 'failed', 'cancelled');--> statement-breakpoint
CREATE TYPE "public"."characteristic" AS ENUM('plan', 'level', 'face');--> statement-breakpoint
CREATE TYPE "public"."revision_state" AS ENUM('reading', 'ready', 'failed', 'cancelled');--> statement-breakpoint
CREATE TYPE "public"."hold_point_kind" AS ENUM('before-pour', 'after-pour');--> statement-breakpoint
CREATE TYPE "public"."hold_point_state" AS ENUM('open', 'called', 'submitted', 'more-asked', 'released', 'released-with-conditions', 'refused');--> statement-breakpoint
CREATE TYPE "public"."pour_state" AS ENUM('planned', 'concreting', 'cast', 'cast-in-part');--> statement-breakpoint
CREATE TYPE "public"."column_order" AS ENUM('PENZD', 'PNEZD');--> statement-breakpoint
CREATE TYPE "public"."role" AS ENUM('site-engineer', 'project-engineer', 'contractor', 'owners-representative', 'observer');--> statement-breakpoint
CREATE TYPE "public"."levelling" AS ENUM('levelled', 'free');--> statement-breakpoint
CREATE TYPE "public"."stage" AS ENUM('before-pour', 'as-cast-shored', 'as-cast', 'later');--> statement-breakpoint
CREATE TYPE "public"."survey_state" AS ENUM('storing', 'ready', 'failed');--> statement-breakpoint
CREATE TYPE "public"."sheet_state" AS ENUM('draft', 'issued', 'superseded');--> statement-breakpoint
CREATE TABLE "sessions" (
	"id" text PRIMARY KEY NOT NULL,
	"user_id" uuid NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	CONSTRAINT "sessions_id_hashed" CHECK ("sessions"."id" ~ '^[0-9a-f]{64}$')
);
--> statement-breakpoint
CREATE TABLE "users" (
	"id" uuid PRIMARY KEY NOT NULL,
	"email" text NOT NULL,
	"name" text NOT NULL,
	"password_hash" text NOT NULL,
	"created_at" timestamp with time zone NOT NULL,
	CONSTRAINT "users_name_said" CHECK (length("users"."name") between 1 and 200)
);
--> statement-breakpoint
CREATE TABLE "check_fits" (
	"check_id" uuid NOT NULL,
	"site_id" uuid NOT NULL,
	"setup_id" uuid NOT NULL,
	"fit_id" uuid NOT NULL,
	CONSTRAINT "check_fits_check_id_setup_id_pk" PRIMARY KEY("check_id","setup_id")
);
--> statement-breakpoint
CREATE TABLE "checks" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"number" integer NOT NULL,
	"revision_id" uuid NOT NULL,
	"survey_id" uuid NOT NULL,
	"sheet_id" uuid NOT NULL,
	"stage" "stage" NOT NULL,
	"state" "check_state" NOT NULL,
	"reason" text,
	"job_id" uuid,
	"summary" jsonb,
	"findings" jsonb,
	"unmatched_points" jsonb,
	"inputs_sha256" text NOT NULL,
	"engine_version" text NOT NULL,
	"made_by" uuid NOT NULL,
	"made_at" timestamp with time zone NOT NULL,
	"published_by" uuid,
	"published_at" timestamp with time zone,
	"withdrawn_reason" text,
	CONSTRAINT "checks_site_id" UNIQUE("site_id","id"),
	CONSTRAINT "checks_number" UNIQUE("site_id","number"),
	CONSTRAINT "checks_result_whole" CHECK ("checks"."state" not in ('trial', 'published', 'withdrawn') or ("checks"."summary" is not null and "checks"."findings" is not null)),
	CONSTRAINT "checks_withdrawn_says_why" CHECK ("checks"."state" <> 'withdrawn' or "checks"."withdrawn_reason" is not null)
);
--> statement-breakpoint
CREATE TABLE "deviations" (
	"check_id" uuid NOT NULL,
	"position" integer NOT NULL,
	"revision_id" uuid NOT NULL,
	"checkpoint_id" text NOT NULL,
	"setup_id" uuid,
	"point_name" text,
	"point_count" integer NOT NULL,
	"measured_m" double precision[],
	"not_measured_reason" text,
	"deviation_mm" double precision,
	"offset_mm" double precision[],
	"covariance_mm2" double precision[],
	"uncertainty_parts" jsonb,
	"expanded_uncertainty_mm" double precision,
	"has_limits" boolean NOT NULL,
	"lower_mm" double precision,
	"upper_mm" double precision,
	"rule_id" text,
	"verdict" "verdict" NOT NULL,
	"beyond_mm" double precision,
	"conformity" double precision,
	CONSTRAINT "deviations_check_id_position_pk" PRIMARY KEY("check_id","position"),
	CONSTRAINT "deviations_checkpoint" UNIQUE("check_id","checkpoint_id"),
	CONSTRAINT "deviations_not_measured_is_null" CHECK (("deviations"."deviation_mm" is null) = ("deviations"."measured_m" is null)),
	CONSTRAINT "deviations_number" CHECK ("deviations"."deviation_mm" is null or ("deviations"."deviation_mm" > '-Infinity' and "deviations"."deviation_mm" < 'Infinity')),
	CONSTRAINT "deviations_conformity" CHECK ("deviations"."conformity" is null or ("deviations"."conformity" >= 0 and "deviations"."conformity" <= 1))
);
--> statement-breakpoint
CREATE TABLE "control_points" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"control_set_id" uuid NOT NULL,
	"name" text NOT NULL,
	"code" text NOT NULL,
	"given_x_m" double precision,
	"given_y_m" double precision,
	"given_z_m" double precision,
	"design_x_m" double precision,
	"design_y_m" double precision,
	"design_z_m" double precision,
	"sigma_plan_m" double precision,
	"sigma_height_m" double precision,
	"state" "control_point_state" NOT NULL,
	"how_set" text,
	"parent_mark" text,
	"set_by" text,
	"verified_at" timestamp with time zone,
	CONSTRAINT "control_points_name" UNIQUE("control_set_id","name"),
	CONSTRAINT "control_points_plan_whole" CHECK (("control_points"."design_x_m" is null) = ("control_points"."design_y_m" is null)),
	CONSTRAINT "control_points_known" CHECK ("control_points"."design_x_m" is not null or "control_points"."design_z_m" is not null),
	CONSTRAINT "control_points_sigma" CHECK (("control_points"."sigma_plan_m" is null or "control_points"."sigma_plan_m" >= 0) and ("control_points"."sigma_height_m" is null or "control_points"."sigma_height_m" >= 0))
);
--> statement-breakpoint
CREATE TABLE "control_sets" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"number" integer NOT NULL,
	"name" text NOT NULL,
	"frame" "control_frame" NOT NULL,
	"file_name" text NOT NULL,
	"file_sha256" text NOT NULL,
	"reading" jsonb NOT NULL,
	"stored_by" uuid NOT NULL,
	"stored_at" timestamp with time zone NOT NULL,
	CONSTRAINT "control_sets_site_id" UNIQUE("site_id","id"),
	CONSTRAINT "control_sets_number" UNIQUE("site_id","number")
);
--> statement-breakpoint
CREATE TABLE "files" (
	"sha256" text PRIMARY KEY NOT NULL,
	"bytes" bigint NOT NULL,
	"kept_at" timestamp with time zone NOT NULL,
	CONSTRAINT "files_hash" CHECK ("files"."sha256" ~ '^[0-9a-f]{64}$')
);
--> statement-breakpoint
CREATE TABLE "uploads" (
	"id" text PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"user_id" uuid NOT NULL,
	"file_name" text NOT NULL,
	"bytes" bigint NOT NULL,
	"begun_at" timestamp with time zone NOT NULL,
	"finished_at" timestamp with time zone,
	"sha256" text,
	"used_at" timestamp with time zone
);
--> statement-breakpoint
CREATE TABLE "fits" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"number" integer NOT NULL,
	"setup_id" uuid NOT NULL,
	"control_set_id" uuid NOT NULL,
	"kind" "fit_kind" NOT NULL,
	"known_scale" double precision,
	"shelves" jsonb NOT NULL,
	"pairs" jsonb NOT NULL,
	"result" jsonb NOT NULL,
	"inputs_sha256" text NOT NULL,
	"state" "fit_state" NOT NULL,
	"made_by" uuid NOT NULL,
	"made_at" timestamp with time zone NOT NULL,
	"adopted_by" uuid,
	"adopted_at" timestamp with time zone,
	"adopted_reason" text,
	"checked_by" uuid,
	"checked_at" timestamp with time zone,
	CONSTRAINT "fits_site_id" UNIQUE("site_id","id"),
	CONSTRAINT "fits_number" UNIQUE("site_id","number"),
	CONSTRAINT "fits_adopted_says_who" CHECK ("fits"."state" = 'made' or ("fits"."adopted_by" is not null and "fits"."adopted_at" is not null and length("fits"."adopted_reason") > 0)),
	CONSTRAINT "fits_checked_by_another" CHECK ("fits"."checked_by" is null or "fits"."checked_by" <> "fits"."adopted_by")
);
--> statement-breakpoint
CREATE TABLE "jobs" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"kind" text NOT NULL,
	"state" "job_state" NOT NULL,
	"doing" text NOT NULL,
	"done" integer NOT NULL,
	"of" integer NOT NULL,
	"reason" text,
	"subject_id" uuid,
	"is_cancel_wished" boolean NOT NULL,
	"started_by" uuid NOT NULL,
	"created_at" timestamp with time zone NOT NULL,
	"ended_at" timestamp with time zone,
	CONSTRAINT "jobs_done_of" CHECK ("jobs"."done" >= 0 and "jobs"."of" >= 0)
);
--> statement-breakpoint
CREATE TABLE "checkpoints" (
	"revision_id" uuid NOT NULL,
	"id" text NOT NULL,
	"element_id" uuid NOT NULL,
	"position" integer NOT NULL,
	"characteristic" characteristic NOT NULL,
	"label" text NOT NULL,
	"x_m" double precision NOT NULL,
	"y_m" double precision NOT NULL,
	"z_m" double precision NOT NULL,
	"normal" double precision[],
	"surface" double precision[],
	"is_soffit" boolean NOT NULL,
	CONSTRAINT "checkpoints_revision_id_id_pk" PRIMARY KEY("revision_id","id"),
	CONSTRAINT "checkpoints_x_finite" CHECK ("x_m" > '-Infinity' and "x_m" < 'Infinity'),
	CONSTRAINT "checkpoints_y_finite" CHECK ("y_m" > '-Infinity' and "y_m" < 'Infinity'),
	CONSTRAINT "checkpoints_z_finite" CHECK ("z_m" > '-Infinity' and "z_m" < 'Infinity'),
	CONSTRAINT "checkpoints_face_has_normal" CHECK (("checkpoints"."characteristic" = 'face') = ("checkpoints"."normal" is not null))
);
--> statement-breakpoint
CREATE TABLE "elements" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"revision_id" uuid NOT NULL,
	"entity_number" integer NOT NULL,
	"global_id" text NOT NULL,
	"class" text NOT NULL,
	"name" text NOT NULL,
	"tag" text NOT NULL,
	"storey" text NOT NULL,
	"mark" text NOT NULL,
	"title" text NOT NULL,
	"length_m" double precision,
	"height_m" double precision,
	"thickness_m" double precision,
	"box_m" double precision[],
	CONSTRAINT "elements_entity" UNIQUE("revision_id","entity_number"),
	CONSTRAINT "elements_revision_id" UNIQUE("revision_id","id"),
	CONSTRAINT "elements_box_whole" CHECK ("elements"."box_m" is null or cardinality("elements"."box_m") = 6)
);
--> statement-breakpoint
CREATE TABLE "models" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"building_id" uuid,
	"name" text NOT NULL,
	CONSTRAINT "models_site_id" UNIQUE("site_id","id"),
	CONSTRAINT "models_name" UNIQUE("site_id","name")
);
--> statement-breakpoint
CREATE TABLE "revisions" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"model_id" uuid NOT NULL,
	"number" integer NOT NULL,
	"file_name" text NOT NULL,
	"file_sha256" text NOT NULL,
	"file_bytes" bigint NOT NULL,
	"state" "revision_state" NOT NULL,
	"reason" text,
	"reading" jsonb,
	"picture_sha256" text,
	"job_id" uuid,
	"uploaded_by" uuid NOT NULL,
	"uploaded_at" timestamp with time zone NOT NULL,
	CONSTRAINT "revisions_site_id" UNIQUE("site_id","id"),
	CONSTRAINT "revisions_number" UNIQUE("model_id","number"),
	CONSTRAINT "revisions_ready_is_read" CHECK ("revisions"."state" <> 'ready' or "revisions"."reading" is not null),
	CONSTRAINT "revisions_failed_says_why" CHECK ("revisions"."state" <> 'failed' or "revisions"."reason" is not null)
);
--> statement-breakpoint
CREATE TABLE "hold_point_conditions" (
	"id" uuid PRIMARY KEY NOT NULL,
	"hold_point_id" uuid NOT NULL,
	"text" text NOT NULL,
	"owner_id" uuid,
	"due_at" timestamp with time zone,
	"is_met" boolean NOT NULL
);
--> statement-breakpoint
CREATE TABLE "hold_points" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"pour_id" uuid NOT NULL,
	"kind" "hold_point_kind" NOT NULL,
	"state" "hold_point_state" NOT NULL,
	"list" jsonb NOT NULL,
	"ready_from" timestamp with time zone,
	"called_by" uuid,
	"called_at" timestamp with time zone,
	"submitted_by" uuid,
	"submitted_at" timestamp with time zone,
	"statement" text,
	"signed_by" uuid,
	"signed_at" timestamp with time zone,
	CONSTRAINT "hold_points_kind" UNIQUE("pour_id","kind"),
	CONSTRAINT "hold_points_signed_says_who" CHECK ("hold_points"."state" not in ('released', 'released-with-conditions', 'refused') or ("hold_points"."signed_by" is not null and "hold_points"."signed_at" is not null and "hold_points"."statement" is not null))
);
--> statement-breakpoint
CREATE TABLE "pour_elements" (
	"site_id" uuid NOT NULL,
	"pour_id" uuid NOT NULL,
	"model_id" uuid NOT NULL,
	"global_id" text NOT NULL,
	"company_id" uuid,
	CONSTRAINT "pour_elements_pour_id_model_id_global_id_pk" PRIMARY KEY("pour_id","model_id","global_id")
);
--> statement-breakpoint
CREATE TABLE "pours" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"number" text NOT NULL,
	"name" text NOT NULL,
	"company_id" uuid NOT NULL,
	"planned_at" timestamp with time zone,
	"state" "pour_state" NOT NULL,
	"concreting_from" timestamp with time zone,
	"concreting_to" timestamp with time zone,
	CONSTRAINT "pours_site_id" UNIQUE("site_id","id"),
	CONSTRAINT "pours_number" UNIQUE("site_id","number")
);
--> statement-breakpoint
CREATE TABLE "audit_entries" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid,
	"user_id" uuid,
	"roles" text[] NOT NULL,
	"kind" text NOT NULL,
	"subject_id" text,
	"data" jsonb NOT NULL,
	"at" timestamp with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "buildings" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"name" text NOT NULL,
	CONSTRAINT "buildings_site_id" UNIQUE("site_id","id"),
	CONSTRAINT "buildings_name" UNIQUE("site_id","name")
);
--> statement-breakpoint
CREATE TABLE "companies" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"name" text NOT NULL,
	CONSTRAINT "companies_site_id" UNIQUE("site_id","id"),
	CONSTRAINT "companies_name" UNIQUE("site_id","name")
);
--> statement-breakpoint
CREATE TABLE "memberships" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"user_id" uuid NOT NULL,
	"role" "role" NOT NULL,
	"company_id" uuid,
	"from_at" timestamp with time zone NOT NULL,
	"left_at" timestamp with time zone,
	CONSTRAINT "memberships_once" UNIQUE("site_id","user_id","role"),
	CONSTRAINT "memberships_contractor_has_company" CHECK ("memberships"."role" <> 'contractor' or "memberships"."company_id" is not null)
);
--> statement-breakpoint
CREATE TABLE "sites" (
	"id" uuid PRIMARY KEY NOT NULL,
	"name" text NOT NULL,
	"time_zone" text NOT NULL,
	"is_invented" boolean NOT NULL,
	"is_fit_checked_by_second" boolean NOT NULL,
	"column_order" "column_order",
	"created_at" timestamp with time zone NOT NULL,
	CONSTRAINT "sites_name_said" CHECK (length("sites"."name") between 1 and 200)
);
--> statement-breakpoint
CREATE TABLE "setups" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"survey_id" uuid NOT NULL,
	"name" text NOT NULL,
	"levelling" "levelling" NOT NULL,
	"brings_scale" boolean NOT NULL,
	"point_sigma_plan_m" double precision,
	"point_sigma_height_m" double precision,
	"common_mm" double precision NOT NULL,
	"instrument_height_m" double precision,
	CONSTRAINT "setups_site_id" UNIQUE("site_id","id"),
	CONSTRAINT "setups_name" UNIQUE("survey_id","name"),
	CONSTRAINT "setups_common" CHECK ("setups"."common_mm" >= 0 and "setups"."common_mm" <= 1000)
);
--> statement-breakpoint
CREATE TABLE "survey_points" (
	"survey_id" uuid NOT NULL,
	"row" integer NOT NULL,
	"setup_id" uuid NOT NULL,
	"name" text NOT NULL,
	"code" text NOT NULL,
	"x_m" double precision NOT NULL,
	"y_m" double precision NOT NULL,
	"z_m" double precision NOT NULL,
	"sigma_m" double precision[],
	"offset_mm" double precision NOT NULL,
	"voided_reason" text,
	CONSTRAINT "survey_points_survey_id_row_pk" PRIMARY KEY("survey_id","row"),
	CONSTRAINT "survey_points_finite" CHECK ("survey_points"."x_m" > '-Infinity' and "survey_points"."x_m" < 'Infinity' and "survey_points"."y_m" > '-Infinity' and "survey_points"."y_m" < 'Infinity' and "survey_points"."z_m" > '-Infinity' and "survey_points"."z_m" < 'Infinity'),
	CONSTRAINT "survey_points_sigma_whole" CHECK ("survey_points"."sigma_m" is null or cardinality("survey_points"."sigma_m") = 3)
);
--> statement-breakpoint
CREATE TABLE "surveys" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"number" integer NOT NULL,
	"name" text NOT NULL,
	"stage" "stage" NOT NULL,
	"surveyed_on" date NOT NULL,
	"observer" text NOT NULL,
	"instrument" text NOT NULL,
	"serial" text NOT NULL,
	"file_name" text NOT NULL,
	"file_sha256" text NOT NULL,
	"reading" jsonb NOT NULL,
	"state" "survey_state" NOT NULL,
	"reason" text,
	"job_id" uuid,
	"stored_by" uuid NOT NULL,
	"stored_at" timestamp with time zone NOT NULL,
	CONSTRAINT "surveys_site_id" UNIQUE("site_id","id"),
	CONSTRAINT "surveys_number" UNIQUE("site_id","number")
);
--> statement-breakpoint
CREATE TABLE "sheets" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"name" text NOT NULL,
	"revision" integer NOT NULL,
	"state" "sheet_state" NOT NULL,
	"sheet" jsonb NOT NULL,
	"content_sha256" text NOT NULL,
	"issue_reason" text,
	"issued_by" uuid,
	"issued_at" timestamp with time zone,
	CONSTRAINT "sheets_site_id" UNIQUE("site_id","id"),
	CONSTRAINT "sheets_revision" UNIQUE("site_id","revision"),
	CONSTRAINT "sheets_issued_says_who" CHECK ("sheets"."state" = 'draft' or ("sheets"."issued_by" is not null and "sheets"."issued_at" is not null))
);
--> statement-breakpoint
ALTER TABLE "sessions" ADD CONSTRAINT "sessions_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "check_fits" ADD CONSTRAINT "check_fits_site_id_check_id_checks_site_id_id_fk" FOREIGN KEY ("site_id","check_id") REFERENCES "public"."checks"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "check_fits" ADD CONSTRAINT "check_fits_site_id_setup_id_setups_site_id_id_fk" FOREIGN KEY ("site_id","setup_id") REFERENCES "public"."setups"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "check_fits" ADD CONSTRAINT "check_fits_site_id_fit_id_fits_site_id_id_fk" FOREIGN KEY ("site_id","fit_id") REFERENCES "public"."fits"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "checks" ADD CONSTRAINT "checks_job_id_jobs_id_fk" FOREIGN KEY ("job_id") REFERENCES "public"."jobs"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "checks" ADD CONSTRAINT "checks_made_by_users_id_fk" FOREIGN KEY ("made_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "checks" ADD CONSTRAINT "checks_published_by_users_id_fk" FOREIGN KEY ("published_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "checks" ADD CONSTRAINT "checks_site_id_revision_id_revisions_site_id_id_fk" FOREIGN KEY ("site_id","revision_id") REFERENCES "public"."revisions"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "checks" ADD CONSTRAINT "checks_site_id_survey_id_surveys_site_id_id_fk" FOREIGN KEY ("site_id","survey_id") REFERENCES "public"."surveys"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "checks" ADD CONSTRAINT "checks_site_id_sheet_id_sheets_site_id_id_fk" FOREIGN KEY ("site_id","sheet_id") REFERENCES "public"."sheets"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "deviations" ADD CONSTRAINT "deviations_check_id_checks_id_fk" FOREIGN KEY ("check_id") REFERENCES "public"."checks"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "deviations" ADD CONSTRAINT "deviations_setup_id_setups_id_fk" FOREIGN KEY ("setup_id") REFERENCES "public"."setups"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "deviations" ADD CONSTRAINT "deviations_revision_id_checkpoint_id_checkpoints_revision_id_id_fk" FOREIGN KEY ("revision_id","checkpoint_id") REFERENCES "public"."checkpoints"("revision_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "control_points" ADD CONSTRAINT "control_points_site_id_control_set_id_control_sets_site_id_id_fk" FOREIGN KEY ("site_id","control_set_id") REFERENCES "public"."control_sets"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "control_sets" ADD CONSTRAINT "control_sets_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "control_sets" ADD CONSTRAINT "control_sets_file_sha256_files_sha256_fk" FOREIGN KEY ("file_sha256") REFERENCES "public"."files"("sha256") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "control_sets" ADD CONSTRAINT "control_sets_stored_by_users_id_fk" FOREIGN KEY ("stored_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "uploads" ADD CONSTRAINT "uploads_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "uploads" ADD CONSTRAINT "uploads_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "uploads" ADD CONSTRAINT "uploads_sha256_files_sha256_fk" FOREIGN KEY ("sha256") REFERENCES "public"."files"("sha256") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "fits" ADD CONSTRAINT "fits_made_by_users_id_fk" FOREIGN KEY ("made_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "fits" ADD CONSTRAINT "fits_adopted_by_users_id_fk" FOREIGN KEY ("adopted_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "fits" ADD CONSTRAINT "fits_checked_by_users_id_fk" FOREIGN KEY ("checked_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "fits" ADD CONSTRAINT "fits_site_id_setup_id_setups_site_id_id_fk" FOREIGN KEY ("site_id","setup_id") REFERENCES "public"."setups"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "fits" ADD CONSTRAINT "fits_site_id_control_set_id_control_sets_site_id_id_fk" FOREIGN KEY ("site_id","control_set_id") REFERENCES "public"."control_sets"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "jobs" ADD CONSTRAINT "jobs_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "jobs" ADD CONSTRAINT "jobs_started_by_users_id_fk" FOREIGN KEY ("started_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "checkpoints" ADD CONSTRAINT "checkpoints_revision_id_element_id_elements_revision_id_id_fk" FOREIGN KEY ("revision_id","element_id") REFERENCES "public"."elements"("revision_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "elements" ADD CONSTRAINT "elements_site_id_revision_id_revisions_site_id_id_fk" FOREIGN KEY ("site_id","revision_id") REFERENCES "public"."revisions"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "models" ADD CONSTRAINT "models_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "models" ADD CONSTRAINT "models_site_id_building_id_buildings_site_id_id_fk" FOREIGN KEY ("site_id","building_id") REFERENCES "public"."buildings"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "revisions" ADD CONSTRAINT "revisions_file_sha256_files_sha256_fk" FOREIGN KEY ("file_sha256") REFERENCES "public"."files"("sha256") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "revisions" ADD CONSTRAINT "revisions_picture_sha256_files_sha256_fk" FOREIGN KEY ("picture_sha256") REFERENCES "public"."files"("sha256") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "revisions" ADD CONSTRAINT "revisions_job_id_jobs_id_fk" FOREIGN KEY ("job_id") REFERENCES "public"."jobs"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "revisions" ADD CONSTRAINT "revisions_uploaded_by_users_id_fk" FOREIGN KEY ("uploaded_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "revisions" ADD CONSTRAINT "revisions_site_id_model_id_models_site_id_id_fk" FOREIGN KEY ("site_id","model_id") REFERENCES "public"."models"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "hold_point_conditions" ADD CONSTRAINT "hold_point_conditions_hold_point_id_hold_points_id_fk" FOREIGN KEY ("hold_point_id") REFERENCES "public"."hold_points"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "hold_point_conditions" ADD CONSTRAINT "hold_point_conditions_owner_id_users_id_fk" FOREIGN KEY ("owner_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "hold_points" ADD CONSTRAINT "hold_points_called_by_users_id_fk" FOREIGN KEY ("called_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "hold_points" ADD CONSTRAINT "hold_points_submitted_by_users_id_fk" FOREIGN KEY ("submitted_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "hold_points" ADD CONSTRAINT "hold_points_signed_by_users_id_fk" FOREIGN KEY ("signed_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "hold_points" ADD CONSTRAINT "hold_points_site_id_pour_id_pours_site_id_id_fk" FOREIGN KEY ("site_id","pour_id") REFERENCES "public"."pours"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "pour_elements" ADD CONSTRAINT "pour_elements_site_id_pour_id_pours_site_id_id_fk" FOREIGN KEY ("site_id","pour_id") REFERENCES "public"."pours"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "pour_elements" ADD CONSTRAINT "pour_elements_site_id_model_id_models_site_id_id_fk" FOREIGN KEY ("site_id","model_id") REFERENCES "public"."models"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "pour_elements" ADD CONSTRAINT "pour_elements_site_id_company_id_companies_site_id_id_fk" FOREIGN KEY ("site_id","company_id") REFERENCES "public"."companies"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "pours" ADD CONSTRAINT "pours_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "pours" ADD CONSTRAINT "pours_site_id_company_id_companies_site_id_id_fk" FOREIGN KEY ("site_id","company_id") REFERENCES "public"."companies"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "audit_entries" ADD CONSTRAINT "audit_entries_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "audit_entries" ADD CONSTRAINT "audit_entries_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "buildings" ADD CONSTRAINT "buildings_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "companies" ADD CONSTRAINT "companies_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "memberships" ADD CONSTRAINT "memberships_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "memberships" ADD CONSTRAINT "memberships_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "memberships" ADD CONSTRAINT "memberships_site_id_company_id_companies_site_id_id_fk" FOREIGN KEY ("site_id","company_id") REFERENCES "public"."companies"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "setups" ADD CONSTRAINT "setups_site_id_survey_id_surveys_site_id_id_fk" FOREIGN KEY ("site_id","survey_id") REFERENCES "public"."surveys"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "survey_points" ADD CONSTRAINT "survey_points_survey_id_surveys_id_fk" FOREIGN KEY ("survey_id") REFERENCES "public"."surveys"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "survey_points" ADD CONSTRAINT "survey_points_setup_id_setups_id_fk" FOREIGN KEY ("setup_id") REFERENCES "public"."setups"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "surveys" ADD CONSTRAINT "surveys_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "surveys" ADD CONSTRAINT "surveys_file_sha256_files_sha256_fk" FOREIGN KEY ("file_sha256") REFERENCES "public"."files"("sha256") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "surveys" ADD CONSTRAINT "surveys_job_id_jobs_id_fk" FOREIGN KEY ("job_id") REFERENCES "public"."jobs"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "surveys" ADD CONSTRAINT "surveys_stored_by_users_id_fk" FOREIGN KEY ("stored_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sheets" ADD CONSTRAINT "sheets_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sheets" ADD CONSTRAINT "sheets_issued_by_users_id_fk" FOREIGN KEY ("issued_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "sessions_user" ON "sessions" USING btree ("user_id");--> statement-breakpoint
CREATE UNIQUE INDEX "users_email" ON "users" USING btree (lower("email"));--> statement-breakpoint
CREATE UNIQUE INDEX "fits_one_adopted" ON "fits" USING btree ("setup_id") WHERE state = 'adopted';--> statement-breakpoint
CREATE INDEX "jobs_site" ON "jobs" USING btree ("site_id");--> statement-breakpoint
CREATE INDEX "elements_global_id" ON "elements" USING btree ("global_id");--> statement-breakpoint
CREATE INDEX "audit_entries_site" ON "audit_entries" USING btree ("site_id","at");--> statement-breakpoint
CREATE INDEX "memberships_user" ON "memberships" USING btree ("user_id");--> statement-breakpoint
CREATE INDEX "survey_points_setup" ON "survey_points" USING btree ("setup_id");--> statement-breakpoint
CREATE UNIQUE INDEX "sheets_one_issued" ON "sheets" USING btree ("site_id") WHERE state = 'issued';