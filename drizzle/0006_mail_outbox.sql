CREATE TYPE "public"."mail_state" AS ENUM('waiting', 'sending', 'sent', 'failed', 'uncertain', 'void');--> statement-breakpoint
CREATE TABLE "mails" (
	"id" uuid PRIMARY KEY NOT NULL,
	"to_address" text NOT NULL,
	"subject" text NOT NULL,
	"text" text,
	"html" text,
	"state" "mail_state" NOT NULL,
	"tries" integer NOT NULL,
	"due_at" timestamp with time zone NOT NULL,
	"last_fault" text,
	"created_at" timestamp with time zone NOT NULL,
	"ended_at" timestamp with time zone,
	CONSTRAINT "mails_said" CHECK ("mails"."state" not in ('waiting', 'sending') or ("mails"."text" is not null and "mails"."html" is not null))
);
--> statement-breakpoint
CREATE INDEX "mails_due" ON "mails" USING btree ("state","due_at");