CREATE TABLE "brought_points" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"flag_id" uuid NOT NULL,
	"company_id" uuid NOT NULL,
	"file_name" text NOT NULL,
	"file_sha256" text NOT NULL,
	"brought_by" uuid NOT NULL,
	"brought_at" timestamp with time zone NOT NULL,
	"survey_id" uuid,
	"stored_by" uuid,
	CONSTRAINT "brought_points_once" UNIQUE("flag_id","file_sha256"),
	CONSTRAINT "brought_points_stored_says_who" CHECK ("brought_points"."survey_id" is null or "brought_points"."stored_by" is not null)
);
--> statement-breakpoint
CREATE TABLE "flag_acts" (
	"act_id" uuid NOT NULL,
	"site_id" uuid NOT NULL,
	"flag_id" uuid NOT NULL,
	"kind" text NOT NULL,
	"actor_id" uuid NOT NULL,
	"acted_at" timestamp with time zone NOT NULL,
	"version_after" integer NOT NULL,
	"before" jsonb NOT NULL,
	"taken_back_at" timestamp with time zone,
	CONSTRAINT "flag_acts_act_id_flag_id_pk" PRIMARY KEY("act_id","flag_id")
);
--> statement-breakpoint
ALTER TABLE "flags" ADD COLUMN "worst" jsonb;--> statement-breakpoint
ALTER TABLE "brought_points" ADD CONSTRAINT "brought_points_file_sha256_files_sha256_fk" FOREIGN KEY ("file_sha256") REFERENCES "public"."files"("sha256") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "brought_points" ADD CONSTRAINT "brought_points_brought_by_users_id_fk" FOREIGN KEY ("brought_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "brought_points" ADD CONSTRAINT "brought_points_stored_by_users_id_fk" FOREIGN KEY ("stored_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "brought_points" ADD CONSTRAINT "brought_points_site_id_flag_id_flags_site_id_id_fk" FOREIGN KEY ("site_id","flag_id") REFERENCES "public"."flags"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "brought_points" ADD CONSTRAINT "brought_points_site_id_company_id_companies_site_id_id_fk" FOREIGN KEY ("site_id","company_id") REFERENCES "public"."companies"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "brought_points" ADD CONSTRAINT "brought_points_site_id_survey_id_surveys_site_id_id_fk" FOREIGN KEY ("site_id","survey_id") REFERENCES "public"."surveys"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "flag_acts" ADD CONSTRAINT "flag_acts_actor_id_users_id_fk" FOREIGN KEY ("actor_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "flag_acts" ADD CONSTRAINT "flag_acts_site_id_flag_id_flags_site_id_id_fk" FOREIGN KEY ("site_id","flag_id") REFERENCES "public"."flags"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "flag_acts_flag" ON "flag_acts" USING btree ("flag_id","actor_id");