CREATE TYPE "public"."checkpoint_requirement" AS ENUM('required', 'by-sample', 'left-out');--> statement-breakpoint
CREATE TABLE "added_checkpoints" (
	"site_id" uuid NOT NULL,
	"model_id" uuid NOT NULL,
	"id" text NOT NULL,
	"global_id" text NOT NULL,
	"mark_end" text NOT NULL,
	"characteristic" characteristic NOT NULL,
	"label" text NOT NULL,
	"reason" text NOT NULL,
	"x_m" double precision NOT NULL,
	"y_m" double precision NOT NULL,
	"z_m" double precision NOT NULL,
	"normal" double precision[],
	"surface" double precision[],
	"is_soffit" boolean NOT NULL,
	"box_m" double precision[] NOT NULL,
	"added_by" uuid NOT NULL,
	"added_at" timestamp with time zone NOT NULL,
	CONSTRAINT "added_checkpoints_model_id_id_pk" PRIMARY KEY("model_id","id"),
	CONSTRAINT "added_checkpoints_face_has_normal" CHECK (("added_checkpoints"."characteristic" = 'face') = ("added_checkpoints"."normal" is not null)),
	CONSTRAINT "added_checkpoints_box_whole" CHECK (cardinality("added_checkpoints"."box_m") = 6)
);
--> statement-breakpoint
CREATE TABLE "checkpoint_choices" (
	"site_id" uuid NOT NULL,
	"model_id" uuid NOT NULL,
	"checkpoint_id" text NOT NULL,
	"requirement" "checkpoint_requirement" NOT NULL,
	"reason" text,
	"chosen_by" uuid NOT NULL,
	"chosen_at" timestamp with time zone NOT NULL,
	CONSTRAINT "checkpoint_choices_model_id_checkpoint_id_pk" PRIMARY KEY("model_id","checkpoint_id"),
	CONSTRAINT "checkpoint_choices_left_out_says_why" CHECK ("checkpoint_choices"."requirement" <> 'left-out' or "checkpoint_choices"."reason" is not null)
);
--> statement-breakpoint
CREATE TABLE "element_marks" (
	"site_id" uuid NOT NULL,
	"model_id" uuid NOT NULL,
	"global_id" text NOT NULL,
	"mark" text NOT NULL,
	"renamed_by" uuid NOT NULL,
	"renamed_at" timestamp with time zone NOT NULL,
	CONSTRAINT "element_marks_model_id_global_id_pk" PRIMARY KEY("model_id","global_id"),
	CONSTRAINT "element_marks_length" CHECK (char_length("element_marks"."mark") between 1 and 16)
);
--> statement-breakpoint
ALTER TABLE "checks" ADD COLUMN "left_out" jsonb;--> statement-breakpoint
ALTER TABLE "added_checkpoints" ADD CONSTRAINT "added_checkpoints_added_by_users_id_fk" FOREIGN KEY ("added_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "added_checkpoints" ADD CONSTRAINT "added_checkpoints_site_id_model_id_models_site_id_id_fk" FOREIGN KEY ("site_id","model_id") REFERENCES "public"."models"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "checkpoint_choices" ADD CONSTRAINT "checkpoint_choices_chosen_by_users_id_fk" FOREIGN KEY ("chosen_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "checkpoint_choices" ADD CONSTRAINT "checkpoint_choices_site_id_model_id_models_site_id_id_fk" FOREIGN KEY ("site_id","model_id") REFERENCES "public"."models"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "element_marks" ADD CONSTRAINT "element_marks_renamed_by_users_id_fk" FOREIGN KEY ("renamed_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "element_marks" ADD CONSTRAINT "element_marks_site_id_model_id_models_site_id_id_fk" FOREIGN KEY ("site_id","model_id") REFERENCES "public"."models"("site_id","id") ON DELETE no action ON UPDATE no action;