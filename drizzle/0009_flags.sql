CREATE TYPE "public"."closing_cause" AS ENUM('check-within', 'concession', 'taken-as-measured');--> statement-breakpoint
CREATE TYPE "public"."flag_kind" AS ENUM('plan', 'level', 'face');--> statement-breakpoint
CREATE TYPE "public"."flag_state" AS ENUM('open', 'answered', 'decided', 'put-right', 'closed', 'lapsed');--> statement-breakpoint
CREATE TYPE "public"."flag_verdict" AS ENUM('outside', 'too-close-to-call', 'undecided');--> statement-breakpoint
CREATE TYPE "public"."flag_with" AS ENUM('contractor', 'engineers');--> statement-breakpoint
CREATE TYPE "public"."lapse_cause" AS ENUM('check-withdrawn', 'element-gone', 'limits-changed');--> statement-breakpoint
CREATE TYPE "public"."photo_format" AS ENUM('jpeg', 'png', 'heic');--> statement-breakpoint
CREATE TABLE "flag_answers" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"flag_id" uuid NOT NULL,
	"round" integer NOT NULL,
	"answer" jsonb NOT NULL,
	"answered_by" uuid NOT NULL,
	"answered_at" timestamp with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "flag_comments" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"flag_id" uuid NOT NULL,
	"text" text NOT NULL,
	"said_by" uuid NOT NULL,
	"said_at" timestamp with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "flag_decisions" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"flag_id" uuid NOT NULL,
	"round" integer NOT NULL,
	"decision" jsonb NOT NULL,
	"is_without_answer" boolean NOT NULL,
	"check_id" uuid NOT NULL,
	"worst_mm" double precision NOT NULL,
	"decided_by" uuid NOT NULL,
	"decided_at" timestamp with time zone NOT NULL,
	"is_consent_given" boolean,
	"consent_reason" text,
	"consent_by" uuid,
	"consent_at" timestamp with time zone,
	CONSTRAINT "flag_decisions_consent_says_who" CHECK ("flag_decisions"."is_consent_given" is null or ("flag_decisions"."consent_by" is not null and "flag_decisions"."consent_at" is not null))
);
--> statement-breakpoint
CREATE TABLE "flag_photos" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"flag_id" uuid NOT NULL,
	"original_sha256" text NOT NULL,
	"shown_sha256" text,
	"format" "photo_format" NOT NULL,
	"width_px" integer NOT NULL,
	"height_px" integer NOT NULL,
	"added_by" uuid NOT NULL,
	"added_at" timestamp with time zone NOT NULL,
	CONSTRAINT "flag_photos_once" UNIQUE("flag_id","original_sha256")
);
--> statement-breakpoint
CREATE TABLE "flags" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"number" integer NOT NULL,
	"model_id" uuid NOT NULL,
	"global_id" text NOT NULL,
	"kind" "flag_kind" NOT NULL,
	"mark" text NOT NULL,
	"title" text NOT NULL,
	"company_id" uuid,
	"state" "flag_state" NOT NULL,
	"is_with" "flag_with" NOT NULL,
	"verdict" "flag_verdict" NOT NULL,
	"worst_mm" double precision NOT NULL,
	"is_inside_alone" boolean NOT NULL,
	"check_id" uuid NOT NULL,
	"raised_check_id" uuid NOT NULL,
	"raised_at" timestamp with time zone NOT NULL,
	"round" integer NOT NULL,
	"answer_by" timestamp with time zone,
	"time_asked" timestamp with time zone,
	"answer" jsonb,
	"decision" jsonb,
	"is_decided_without_answer" boolean NOT NULL,
	"is_consent_awaited" boolean NOT NULL,
	"closed_on" "closing_cause",
	"lapsed_because" "lapse_cause",
	"lapsed_words" text,
	"put_right_at" timestamp with time zone,
	"version" integer NOT NULL,
	"changed_at" timestamp with time zone NOT NULL,
	CONSTRAINT "flags_site_id" UNIQUE("site_id","id"),
	CONSTRAINT "flags_number" UNIQUE("site_id","number"),
	CONSTRAINT "flags_closed_says_on_what" CHECK ("flags"."state" <> 'closed' or "flags"."closed_on" is not null),
	CONSTRAINT "flags_lapsed_says_why" CHECK ("flags"."state" <> 'lapsed' or ("flags"."lapsed_because" is not null and "flags"."lapsed_words" is not null)),
	CONSTRAINT "flags_answered_has_answer" CHECK ("flags"."state" <> 'answered' or "flags"."answer" is not null),
	CONSTRAINT "flags_decided_has_decision" CHECK ("flags"."state" not in ('decided', 'put-right') or "flags"."decision" is not null),
	CONSTRAINT "flags_clock_is_contractors" CHECK ("flags"."is_with" = 'contractor' or "flags"."answer_by" is null)
);
--> statement-breakpoint
ALTER TABLE "checks" ADD COLUMN "answer_by" timestamp with time zone;--> statement-breakpoint
ALTER TABLE "checks" ADD COLUMN "withdrawn_by" uuid;--> statement-breakpoint
ALTER TABLE "checks" ADD COLUMN "withdrawn_at" timestamp with time zone;--> statement-breakpoint
ALTER TABLE "flag_answers" ADD CONSTRAINT "flag_answers_answered_by_users_id_fk" FOREIGN KEY ("answered_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "flag_answers" ADD CONSTRAINT "flag_answers_site_id_flag_id_flags_site_id_id_fk" FOREIGN KEY ("site_id","flag_id") REFERENCES "public"."flags"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "flag_comments" ADD CONSTRAINT "flag_comments_said_by_users_id_fk" FOREIGN KEY ("said_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "flag_comments" ADD CONSTRAINT "flag_comments_site_id_flag_id_flags_site_id_id_fk" FOREIGN KEY ("site_id","flag_id") REFERENCES "public"."flags"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "flag_decisions" ADD CONSTRAINT "flag_decisions_decided_by_users_id_fk" FOREIGN KEY ("decided_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "flag_decisions" ADD CONSTRAINT "flag_decisions_consent_by_users_id_fk" FOREIGN KEY ("consent_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "flag_decisions" ADD CONSTRAINT "flag_decisions_site_id_flag_id_flags_site_id_id_fk" FOREIGN KEY ("site_id","flag_id") REFERENCES "public"."flags"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "flag_photos" ADD CONSTRAINT "flag_photos_original_sha256_files_sha256_fk" FOREIGN KEY ("original_sha256") REFERENCES "public"."files"("sha256") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "flag_photos" ADD CONSTRAINT "flag_photos_shown_sha256_files_sha256_fk" FOREIGN KEY ("shown_sha256") REFERENCES "public"."files"("sha256") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "flag_photos" ADD CONSTRAINT "flag_photos_added_by_users_id_fk" FOREIGN KEY ("added_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "flag_photos" ADD CONSTRAINT "flag_photos_site_id_flag_id_flags_site_id_id_fk" FOREIGN KEY ("site_id","flag_id") REFERENCES "public"."flags"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "flags" ADD CONSTRAINT "flags_site_id_model_id_models_site_id_id_fk" FOREIGN KEY ("site_id","model_id") REFERENCES "public"."models"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "flags" ADD CONSTRAINT "flags_site_id_company_id_companies_site_id_id_fk" FOREIGN KEY ("site_id","company_id") REFERENCES "public"."companies"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "flags" ADD CONSTRAINT "flags_site_id_check_id_checks_site_id_id_fk" FOREIGN KEY ("site_id","check_id") REFERENCES "public"."checks"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "flags" ADD CONSTRAINT "flags_site_id_raised_check_id_checks_site_id_id_fk" FOREIGN KEY ("site_id","raised_check_id") REFERENCES "public"."checks"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "flag_answers_flag" ON "flag_answers" USING btree ("flag_id");--> statement-breakpoint
CREATE INDEX "flag_comments_flag" ON "flag_comments" USING btree ("flag_id");--> statement-breakpoint
CREATE INDEX "flag_decisions_flag" ON "flag_decisions" USING btree ("flag_id");--> statement-breakpoint
CREATE UNIQUE INDEX "flags_one_alive" ON "flags" USING btree ("site_id","model_id","global_id","kind") WHERE state <> 'lapsed';--> statement-breakpoint
CREATE INDEX "flags_check" ON "flags" USING btree ("check_id");--> statement-breakpoint
ALTER TABLE "checks" ADD CONSTRAINT "checks_withdrawn_by_users_id_fk" FOREIGN KEY ("withdrawn_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "checks" ADD CONSTRAINT "checks_published_says_who" CHECK ("checks"."state" <> 'published' or ("checks"."published_by" is not null and "checks"."published_at" is not null));