-- What the schema language cannot say.

-- Nobody is in two teams of one course at the same moment (btree_gist comes with the cluster set-up).
ALTER TABLE "team_members" ADD CONSTRAINT "team_members_no_overlap" EXCLUDE USING gist ("course_id" WITH =, "user_id" WITH =, "during" WITH &&);
--> statement-breakpoint
-- The snapshot that counts is one of the report's own. Circular, hence here.
ALTER TABLE "reports" ADD CONSTRAINT "reports_counted_snapshot" FOREIGN KEY ("id", "counted_snapshot_id") REFERENCES "snapshots" ("report_id", "id");
--> statement-breakpoint
-- An appeal is not decided by the person who first marked the report.
CREATE FUNCTION "appeals_other_decider"() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
	IF NEW.action IN ('uphold', 'change') AND EXISTS (
		SELECT 1 FROM markings m JOIN snapshots s ON s.id = m.snapshot_id
		WHERE s.report_id = NEW.report_id AND m.kind = 'first' AND m.grader_id = NEW.by_id
	) THEN
		RAISE EXCEPTION 'the first marker cannot decide this appeal' USING ERRCODE = 'check_violation', CONSTRAINT = 'appeals_other_decider';
	END IF;
	RETURN NEW;
END $$;
--> statement-breakpoint
CREATE TRIGGER "appeals_other_decider" BEFORE INSERT ON "appeals" FOR EACH ROW EXECUTE FUNCTION "appeals_other_decider"();
--> statement-breakpoint
-- Append-only means so for every role, the owner included; retention goes through a function of its own.
CREATE FUNCTION "refuse_change"() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
	RAISE EXCEPTION 'table % is append-only', TG_TABLE_NAME USING ERRCODE = 'insufficient_privilege';
END $$;
--> statement-breakpoint
DO $$
DECLARE t text;
BEGIN
	FOREACH t IN ARRAY ARRAY['experiment_versions', 'rubric_versions', 'criteria', 'levels', 'document_versions', 'seals', 'amendments',
		'snapshots', 'snapshot_sections', 'score_events', 'remark_revisions', 'anchors', 'final_marks', 'releases', 'appeals', 'audit', 'replies']
	LOOP
		EXECUTE format('CREATE TRIGGER %I BEFORE UPDATE OR DELETE ON %I FOR EACH ROW EXECUTE FUNCTION refuse_change()', t || '_append_only', t);
	END LOOP;
END $$;
