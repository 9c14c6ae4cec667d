CREATE TABLE "pour_holds" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"pour_id" uuid NOT NULL,
	"reasons" jsonb NOT NULL,
	"raised_at" timestamp with time zone NOT NULL,
	"raised_by" uuid,
	"ended_at" timestamp with time zone
);
--> statement-breakpoint
CREATE TABLE "pour_holds_seen" (
	"hold_id" uuid NOT NULL,
	"user_id" uuid NOT NULL,
	"seen_at" timestamp with time zone NOT NULL,
	CONSTRAINT "pour_holds_seen_hold_id_user_id_pk" PRIMARY KEY("hold_id","user_id")
);
--> statement-breakpoint
CREATE TABLE "witness_points" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"pour_id" uuid NOT NULL,
	"what" text NOT NULL,
	"at" timestamp with time zone NOT NULL,
	"notice_by" uuid NOT NULL,
	"notice_at" timestamp with time zone NOT NULL,
	"has_come" boolean,
	"note" text,
	"said_by" uuid,
	"said_at" timestamp with time zone
);
--> statement-breakpoint
ALTER TABLE "hold_point_conditions" ADD COLUMN "owner" text DEFAULT '' NOT NULL;--> statement-breakpoint
ALTER TABLE "hold_point_conditions" ADD COLUMN "proof" text DEFAULT '' NOT NULL;--> statement-breakpoint
ALTER TABLE "hold_point_conditions" ADD COLUMN "met_by" uuid;--> statement-breakpoint
ALTER TABLE "hold_point_conditions" ADD COLUMN "met_at" timestamp with time zone;--> statement-breakpoint
ALTER TABLE "hold_point_conditions" ADD COLUMN "met_words" text;--> statement-breakpoint
ALTER TABLE "hold_points" ADD COLUMN "record_id" uuid;--> statement-breakpoint
ALTER TABLE "pours" ADD COLUMN "part_of" uuid;--> statement-breakpoint
ALTER TABLE "sealed_records" ADD COLUMN "ends_sha256" text;--> statement-breakpoint
ALTER TABLE "pour_holds" ADD CONSTRAINT "pour_holds_raised_by_users_id_fk" FOREIGN KEY ("raised_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "pour_holds" ADD CONSTRAINT "pour_holds_site_id_pour_id_pours_site_id_id_fk" FOREIGN KEY ("site_id","pour_id") REFERENCES "public"."pours"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "pour_holds_seen" ADD CONSTRAINT "pour_holds_seen_hold_id_pour_holds_id_fk" FOREIGN KEY ("hold_id") REFERENCES "public"."pour_holds"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "pour_holds_seen" ADD CONSTRAINT "pour_holds_seen_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "witness_points" ADD CONSTRAINT "witness_points_notice_by_users_id_fk" FOREIGN KEY ("notice_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "witness_points" ADD CONSTRAINT "witness_points_said_by_users_id_fk" FOREIGN KEY ("said_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "witness_points" ADD CONSTRAINT "witness_points_site_id_pour_id_pours_site_id_id_fk" FOREIGN KEY ("site_id","pour_id") REFERENCES "public"."pours"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE UNIQUE INDEX "pour_holds_one_stands" ON "pour_holds" USING btree ("pour_id") WHERE ended_at is null;--> statement-breakpoint
CREATE INDEX "witness_points_pour" ON "witness_points" USING btree ("pour_id");--> statement-breakpoint
ALTER TABLE "hold_point_conditions" ADD CONSTRAINT "hold_point_conditions_met_by_users_id_fk" FOREIGN KEY ("met_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "hold_points" ADD CONSTRAINT "hold_points_record_id_sealed_records_id_fk" FOREIGN KEY ("record_id") REFERENCES "public"."sealed_records"("id") ON DELETE no action ON UPDATE no action;