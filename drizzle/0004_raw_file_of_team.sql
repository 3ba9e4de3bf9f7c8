-- Bytes whose team is gone belong to nobody.
DELETE FROM "raw_file" WHERE "team_id" NOT IN (SELECT "id" FROM "team");--> statement-breakpoint
ALTER TABLE "raw_file" ADD CONSTRAINT "raw_file_team_id_team_id_fk" FOREIGN KEY ("team_id") REFERENCES "public"."team"("id") ON DELETE cascade ON UPDATE no action;