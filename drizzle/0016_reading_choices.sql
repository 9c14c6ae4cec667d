CREATE TYPE "public"."reading_subject" AS ENUM('unit', 'map-scale');--> statement-breakpoint
CREATE TABLE "known_elements" (
	"site_id" uuid NOT NULL,
	"model_id" uuid NOT NULL,
	"global_id" text NOT NULL,
	"known_as" text NOT NULL,
	"accepted_by" uuid NOT NULL,
	"accepted_at" timestamp with time zone NOT NULL,
	CONSTRAINT "known_elements_model_id_global_id_pk" PRIMARY KEY("model_id","global_id")
);
--> statement-breakpoint
CREATE TABLE "picked_axes" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"model_id" uuid NOT NULL,
	"building_id" uuid,
	"tag" text NOT NULL,
	"from_x_m" double precision NOT NULL,
	"from_y_m" double precision NOT NULL,
	"to_x_m" double precision NOT NULL,
	"to_y_m" double precision NOT NULL,
	"picked_by" uuid NOT NULL,
	"picked_at" timestamp with time zone NOT NULL,
	CONSTRAINT "picked_axes_tag" CHECK (char_length("picked_axes"."tag") between 1 and 4)
);
--> statement-breakpoint
CREATE TABLE "placing_previews" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"asked_by" uuid NOT NULL,
	"asked_at" timestamp with time zone NOT NULL,
	"placing" jsonb NOT NULL,
	"counted" jsonb
);
--> statement-breakpoint
CREATE TABLE "reading_chosen" (
	"site_id" uuid NOT NULL,
	"model_id" uuid NOT NULL,
	"subject" "reading_subject" NOT NULL,
	"choice" text NOT NULL,
	"reason" text NOT NULL,
	"chosen_by" uuid NOT NULL,
	"chosen_at" timestamp with time zone NOT NULL,
	CONSTRAINT "reading_chosen_model_id_subject_pk" PRIMARY KEY("model_id","subject")
);
--> statement-breakpoint
ALTER TABLE "sites" ALTER COLUMN "checkpoint_density" SET DEFAULT '{"faceSpacingM":2,"levelSpacingM":3,"kinds":{"plan":true,"face":true,"level":true}}'::jsonb;--> statement-breakpoint
ALTER TABLE "elements" ADD COLUMN "file_global_id" text;--> statement-breakpoint
ALTER TABLE "known_elements" ADD CONSTRAINT "known_elements_accepted_by_users_id_fk" FOREIGN KEY ("accepted_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "known_elements" ADD CONSTRAINT "known_elements_site_id_model_id_models_site_id_id_fk" FOREIGN KEY ("site_id","model_id") REFERENCES "public"."models"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "picked_axes" ADD CONSTRAINT "picked_axes_picked_by_users_id_fk" FOREIGN KEY ("picked_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "picked_axes" ADD CONSTRAINT "picked_axes_site_id_model_id_models_site_id_id_fk" FOREIGN KEY ("site_id","model_id") REFERENCES "public"."models"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "picked_axes" ADD CONSTRAINT "picked_axes_site_id_building_id_buildings_site_id_id_fk" FOREIGN KEY ("site_id","building_id") REFERENCES "public"."buildings"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "placing_previews" ADD CONSTRAINT "placing_previews_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "placing_previews" ADD CONSTRAINT "placing_previews_asked_by_users_id_fk" FOREIGN KEY ("asked_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "reading_chosen" ADD CONSTRAINT "reading_chosen_chosen_by_users_id_fk" FOREIGN KEY ("chosen_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "reading_chosen" ADD CONSTRAINT "reading_chosen_site_id_model_id_models_site_id_id_fk" FOREIGN KEY ("site_id","model_id") REFERENCES "public"."models"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "picked_axes_site" ON "picked_axes" USING btree ("site_id");--> statement-breakpoint
-- No reading went by this setting before: what nobody changed is what readings placed.
UPDATE "sites" SET "checkpoint_density" = '{"faceSpacingM":2,"levelSpacingM":3,"kinds":{"plan":true,"face":true,"level":true}}'::jsonb WHERE "checkpoint_density" = '{"faceSpacingM":3,"levelSpacingM":3,"kinds":{"plan":true,"face":true,"level":true}}'::jsonb;
