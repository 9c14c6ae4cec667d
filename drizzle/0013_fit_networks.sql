CREATE TABLE "fit_networks" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"survey_id" uuid NOT NULL,
	"network" jsonb NOT NULL,
	"inputs_sha256" text NOT NULL,
	"made_by" uuid NOT NULL,
	"made_at" timestamp with time zone NOT NULL,
	CONSTRAINT "fit_networks_site_id" UNIQUE("site_id","id")
);
--> statement-breakpoint
ALTER TABLE "fits" ADD COLUMN "network_id" uuid;--> statement-breakpoint
ALTER TABLE "fit_networks" ADD CONSTRAINT "fit_networks_made_by_users_id_fk" FOREIGN KEY ("made_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "fit_networks" ADD CONSTRAINT "fit_networks_site_id_survey_id_surveys_site_id_id_fk" FOREIGN KEY ("site_id","survey_id") REFERENCES "public"."surveys"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "fits" ADD CONSTRAINT "fits_site_id_network_id_fit_networks_site_id_id_fk" FOREIGN KEY ("site_id","network_id") REFERENCES "public"."fit_networks"("site_id","id") ON DELETE no action ON UPDATE no action;