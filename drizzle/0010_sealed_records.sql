CREATE TABLE "sealed_records" (
	"id" uuid PRIMARY KEY NOT NULL,
	"site_id" uuid NOT NULL,
	"sequence" integer NOT NULL,
	"sha256" text NOT NULL,
	"previous" text,
	"act" text NOT NULL,
	"pour_id" uuid NOT NULL,
	"hold_point" text NOT NULL,
	"key_sha256" text NOT NULL,
	"signed_by" uuid NOT NULL,
	"signed_at" timestamp with time zone NOT NULL,
	"text" text NOT NULL,
	CONSTRAINT "sealed_records_sequence" UNIQUE("site_id","sequence"),
	CONSTRAINT "sealed_records_sha256" UNIQUE("sha256"),
	CONSTRAINT "sealed_records_hash" CHECK ("sealed_records"."sha256" ~ '^[0-9a-f]{64}$'),
	CONSTRAINT "sealed_records_first_alone" CHECK (("sealed_records"."sequence" = 1) = ("sealed_records"."previous" is null) and "sealed_records"."sequence" >= 1)
);
--> statement-breakpoint
CREATE TABLE "signing_keys" (
	"sha256" text PRIMARY KEY NOT NULL,
	"public_key_pem" text NOT NULL,
	"published_at" timestamp with time zone NOT NULL,
	"retired_at" timestamp with time zone,
	CONSTRAINT "signing_keys_hash" CHECK ("signing_keys"."sha256" ~ '^[0-9a-f]{64}$')
);
--> statement-breakpoint
ALTER TABLE "sealed_records" ADD CONSTRAINT "sealed_records_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sealed_records" ADD CONSTRAINT "sealed_records_signed_by_users_id_fk" FOREIGN KEY ("signed_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "sealed_records_pour" ON "sealed_records" USING btree ("site_id","pour_id");
--> statement-breakpoint
CREATE FUNCTION refuse_record_change() RETURNS trigger LANGUAGE plpgsql AS $$ BEGIN RAISE EXCEPTION 'sealed records are never changed' USING ERRCODE = 'restrict_violation'; END $$;--> statement-breakpoint
CREATE TRIGGER sealed_records_append_only BEFORE UPDATE OR DELETE ON "sealed_records" FOR EACH ROW EXECUTE FUNCTION refuse_record_change();--> statement-breakpoint
CREATE TRIGGER sealed_records_not_emptied BEFORE TRUNCATE ON "sealed_records" FOR EACH STATEMENT EXECUTE FUNCTION refuse_record_change();--> statement-breakpoint
CREATE FUNCTION follow_last_record() RETURNS trigger LANGUAGE plpgsql AS $$ BEGIN IF NEW.sequence > 1 AND NOT EXISTS (SELECT 1 FROM sealed_records AS last WHERE last.site_id = NEW.site_id AND last.sequence = NEW.sequence - 1 AND last.sha256 = NEW.previous) THEN RAISE EXCEPTION 'a sealed record names the one before it' USING ERRCODE = 'restrict_violation'; END IF; RETURN NEW; END $$;--> statement-breakpoint
CREATE TRIGGER sealed_records_follow BEFORE INSERT ON "sealed_records" FOR EACH ROW EXECUTE FUNCTION follow_last_record();
