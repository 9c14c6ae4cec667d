ALTER TABLE "deviations" ADD COLUMN "box_yaw_rad" double precision;--> statement-breakpoint
ALTER TABLE "deviations" ADD COLUMN "spread_mm" double precision;