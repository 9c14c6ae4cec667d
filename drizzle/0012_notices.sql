CREATE TYPE "public"."notice_end" AS ENUM('mailed', 'taken-back', 'not-wished', 'left-the-site');--> statement-breakpoint
CREATE TABLE "notices" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"user_id" uuid NOT NULL,
	"kind" text NOT NULL,
	"act_id" uuid NOT NULL,
	"actor_id" uuid,
	"subject_id" text NOT NULL,
	"sentence" text NOT NULL,
	"path" text NOT NULL,
	"rod" jsonb,
	"created_at" timestamp with time zone NOT NULL,
	"leaves_at" timestamp with time zone NOT NULL,
	"ended_at" timestamp with time zone,
	"end" "notice_end",
	CONSTRAINT "notices_once" UNIQUE("user_id","act_id","subject_id"),
	CONSTRAINT "notices_path_ours" CHECK ("notices"."path" ~ '^/[a-z]'),
	CONSTRAINT "notices_ended" CHECK (("notices"."ended_at" is null) = ("notices"."end" is null))
);
--> statement-breakpoint
ALTER TABLE "notices" ADD CONSTRAINT "notices_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notices" ADD CONSTRAINT "notices_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notices" ADD CONSTRAINT "notices_actor_id_users_id_fk" FOREIGN KEY ("actor_id") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "notices_due" ON "notices" USING btree ("leaves_at") WHERE ended_at is null;