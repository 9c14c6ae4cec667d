CREATE TYPE "public"."decision_rule" AS ENUM('simple', 'guarded');--> statement-breakpoint
ALTER TABLE "sites" ADD COLUMN "calendar" jsonb DEFAULT '{"workingDays":[1,2,3,4,5],"startsAt":"07:00","endsAt":"17:00","holidays":[]}'::jsonb NOT NULL;--> statement-breakpoint
ALTER TABLE "sites" ADD COLUMN "default_decision" "decision_rule" DEFAULT 'guarded' NOT NULL;--> statement-breakpoint
ALTER TABLE "sites" ADD COLUMN "checkpoint_density" jsonb DEFAULT '{"faceSpacingM":3,"levelSpacingM":3,"kinds":{"plan":true,"face":true,"level":true}}'::jsonb NOT NULL;--> statement-breakpoint
ALTER TABLE "sites" ADD COLUMN "needs_owners_consent" boolean DEFAULT false NOT NULL;--> statement-breakpoint
ALTER TABLE "sites" ADD COLUMN "needs_second_factor" boolean DEFAULT false NOT NULL;--> statement-breakpoint
ALTER TABLE "sites" ADD COLUMN "settings_version" integer DEFAULT 1 NOT NULL;