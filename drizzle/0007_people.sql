CREATE TABLE "invitations" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"email" text NOT NULL,
	"roles" "role"[] NOT NULL,
	"company_id" uuid,
	"is_lead" boolean NOT NULL,
	"deputy_for" uuid,
	"from_at" timestamp with time zone,
	"until_at" timestamp with time zone,
	"token_hash" text NOT NULL,
	"invited_by" uuid NOT NULL,
	"created_at" timestamp with time zone NOT NULL,
	"sent_at" timestamp with time zone NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"accepted_at" timestamp with time zone,
	"accepted_by" uuid,
	"ended_at" timestamp with time zone,
	"is_declined" boolean NOT NULL,
	CONSTRAINT "invitations_token_hashed" CHECK ("invitations"."token_hash" ~ '^[0-9a-f]{64}$'),
	CONSTRAINT "invitations_contractor_has_company" CHECK (not ('contractor' = any("invitations"."roles")) or "invitations"."company_id" is not null),
	CONSTRAINT "invitations_deputy_ends" CHECK ("invitations"."deputy_for" is null or ("invitations"."from_at" is not null and "invitations"."until_at" is not null)),
	CONSTRAINT "invitations_accepted_by" CHECK (("invitations"."accepted_at" is null) = ("invitations"."accepted_by" is null))
);
--> statement-breakpoint
ALTER TABLE "memberships" DROP CONSTRAINT "memberships_once";--> statement-breakpoint
ALTER TABLE "audit_entries" ADD COLUMN "address" text;--> statement-breakpoint
ALTER TABLE "memberships" ADD COLUMN "is_lead" boolean DEFAULT false NOT NULL;--> statement-breakpoint
ALTER TABLE "memberships" ADD COLUMN "deputy_for" uuid;--> statement-breakpoint
ALTER TABLE "invitations" ADD CONSTRAINT "invitations_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "invitations" ADD CONSTRAINT "invitations_deputy_for_users_id_fk" FOREIGN KEY ("deputy_for") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "invitations" ADD CONSTRAINT "invitations_invited_by_users_id_fk" FOREIGN KEY ("invited_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "invitations" ADD CONSTRAINT "invitations_accepted_by_users_id_fk" FOREIGN KEY ("accepted_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "invitations" ADD CONSTRAINT "invitations_site_id_company_id_companies_site_id_id_fk" FOREIGN KEY ("site_id","company_id") REFERENCES "public"."companies"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE UNIQUE INDEX "invitations_token" ON "invitations" USING btree ("token_hash");--> statement-breakpoint
CREATE INDEX "invitations_site" ON "invitations" USING btree ("site_id");--> statement-breakpoint
ALTER TABLE "memberships" ADD CONSTRAINT "memberships_deputy_for_users_id_fk" FOREIGN KEY ("deputy_for") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "audit_entries_subject" ON "audit_entries" USING btree ("site_id","subject_id");--> statement-breakpoint
CREATE UNIQUE INDEX "memberships_once" ON "memberships" USING btree ("site_id","user_id","role") WHERE "memberships"."left_at" is null;--> statement-breakpoint
CREATE INDEX "memberships_site" ON "memberships" USING btree ("site_id","user_id");--> statement-breakpoint
ALTER TABLE "memberships" ADD CONSTRAINT "memberships_lead_of_contractor" CHECK (not "memberships"."is_lead" or "memberships"."role" = 'contractor');--> statement-breakpoint
ALTER TABLE "memberships" ADD CONSTRAINT "memberships_deputy_ends" CHECK ("memberships"."deputy_for" is null or "memberships"."left_at" is not null);--> statement-breakpoint
UPDATE "memberships" SET "is_lead" = true WHERE "id" IN (SELECT DISTINCT ON ("site_id", "company_id") "id" FROM "memberships" WHERE "role" = 'contractor' AND "left_at" IS NULL ORDER BY "site_id", "company_id", "from_at");--> statement-breakpoint
CREATE FUNCTION refuse_both_sides() RETURNS trigger LANGUAGE plpgsql AS $$ BEGIN PERFORM pg_advisory_xact_lock(hashtextextended(NEW.site_id::text || NEW.user_id::text, 0)); IF EXISTS (SELECT 1 FROM memberships AS other WHERE other.site_id = NEW.site_id AND other.user_id = NEW.user_id AND other.id <> NEW.id AND (other.role = 'owners-representative') <> (NEW.role = 'owners-representative') AND tstzrange(other.from_at, other.left_at) && tstzrange(NEW.from_at, NEW.left_at)) THEN RAISE EXCEPTION 'nobody is owner''s representative and something else on the same site' USING ERRCODE = 'restrict_violation', CONSTRAINT = 'memberships_separate'; END IF; RETURN NEW; END $$;--> statement-breakpoint
CREATE TRIGGER memberships_separate BEFORE INSERT OR UPDATE ON "memberships" FOR EACH ROW EXECUTE FUNCTION refuse_both_sides();
