ALTER TABLE "fits" ADD COLUMN "relabellings" jsonb DEFAULT '[]'::jsonb NOT NULL;--> statement-breakpoint
ALTER TABLE "fits" ADD COLUMN "checked_note" text;--> statement-breakpoint
ALTER TABLE "fits" ADD COLUMN "surveyor_in_charge" jsonb;--> statement-breakpoint
ALTER TABLE "setups" ADD COLUMN "observation" jsonb;--> statement-breakpoint
ALTER TABLE "surveys" ADD COLUMN "observation" jsonb;