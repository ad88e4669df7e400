CREATE TABLE "labs" (
	"id" uuid PRIMARY KEY NOT NULL,
	"name" text NOT NULL,
	"zone" text NOT NULL,
	"altitude_m" double precision,
	"is_demo" boolean DEFAULT false NOT NULL,
	"self_approval" boolean DEFAULT false NOT NULL,
	"warning_share" double precision DEFAULT 0.75 NOT NULL,
	"decision_rule" jsonb DEFAULT '{"kind":"guarded","r":1}'::jsonb NOT NULL,
	"head_mail" text,
	"version" integer DEFAULT 0 NOT NULL,
	"created_at" timestamp (3) with time zone NOT NULL,
	CONSTRAINT "labs_warning_share" CHECK ("labs"."warning_share" between 0.3 and 1)
);
--> statement-breakpoint
ALTER TABLE "labs" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "bench_devices" (
	"id" uuid NOT NULL,
	"lab_id" uuid NOT NULL,
	"name" text NOT NULL,
	"token_hash" text NOT NULL,
	"enrolled_at" timestamp (3) with time zone NOT NULL,
	"enrolled_by" uuid NOT NULL,
	"last_used_at" timestamp (3) with time zone,
	"removed_at" timestamp (3) with time zone,
	CONSTRAINT "bench_devices_lab_id_id_pk" PRIMARY KEY("lab_id","id")
);
--> statement-breakpoint
ALTER TABLE "bench_devices" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "credentials" (
	"person_id" uuid PRIMARY KEY NOT NULL,
	"password_hash" text NOT NULL,
	"password_changed_at" timestamp (3) with time zone NOT NULL,
	"pin_hash" text
);
--> statement-breakpoint
ALTER TABLE "credentials" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "deputies" (
	"id" uuid NOT NULL,
	"lab_id" uuid NOT NULL,
	"person_id" uuid NOT NULL,
	"for_person_id" uuid NOT NULL,
	"from_on" date NOT NULL,
	"to_on" date NOT NULL,
	"appointed_by" uuid NOT NULL,
	"appointed_at" timestamp (3) with time zone NOT NULL,
	CONSTRAINT "deputies_lab_id_id_pk" PRIMARY KEY("lab_id","id"),
	CONSTRAINT "deputies_dates" CHECK ("deputies"."from_on" <= "deputies"."to_on"),
	CONSTRAINT "deputies_other" CHECK ("deputies"."person_id" <> "deputies"."for_person_id")
);
--> statement-breakpoint
ALTER TABLE "deputies" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "invitations" (
	"id" uuid NOT NULL,
	"lab_id" uuid NOT NULL,
	"email" text NOT NULL,
	"roles" text[] NOT NULL,
	"token_hash" text NOT NULL,
	"invited_by" uuid,
	"invited_at" timestamp (3) with time zone NOT NULL,
	"expires_at" timestamp (3) with time zone NOT NULL,
	"accepted_at" timestamp (3) with time zone,
	"accepted_by" uuid,
	"withdrawn_at" timestamp (3) with time zone,
	CONSTRAINT "invitations_lab_id_id_pk" PRIMARY KEY("lab_id","id"),
	CONSTRAINT "invitations_roles" CHECK ("invitations"."roles" <@ array['manager', 'technician', 'auditor']::text[])
);
--> statement-breakpoint
ALTER TABLE "invitations" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "memberships" (
	"lab_id" uuid NOT NULL,
	"person_id" uuid NOT NULL,
	"roles" text[] NOT NULL,
	"is_approver" boolean DEFAULT false NOT NULL,
	"joined_at" timestamp (3) with time zone NOT NULL,
	"ended_at" timestamp (3) with time zone,
	"last_seen_at" timestamp (3) with time zone,
	"version" integer DEFAULT 0 NOT NULL,
	CONSTRAINT "memberships_lab_id_person_id_pk" PRIMARY KEY("lab_id","person_id"),
	CONSTRAINT "memberships_roles" CHECK ("memberships"."roles" <@ array['manager', 'technician', 'auditor']::text[])
);
--> statement-breakpoint
ALTER TABLE "memberships" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "people" (
	"id" uuid PRIMARY KEY NOT NULL,
	"email" text NOT NULL,
	"name" text NOT NULL,
	"created_at" timestamp (3) with time zone NOT NULL,
	CONSTRAINT "people_email_lower" CHECK ("people"."email" = lower("people"."email"))
);
--> statement-breakpoint
ALTER TABLE "people" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "password_resets" (
	"id" uuid PRIMARY KEY NOT NULL,
	"person_id" uuid NOT NULL,
	"token_hash" text NOT NULL,
	"created_at" timestamp (3) with time zone NOT NULL,
	"expires_at" timestamp (3) with time zone NOT NULL,
	"used_at" timestamp (3) with time zone
);
--> statement-breakpoint
ALTER TABLE "password_resets" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "rate_counters" (
	"key" text PRIMARY KEY NOT NULL,
	"points" integer NOT NULL,
	"expires_at" timestamp (3) with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "sessions" (
	"sid" varchar PRIMARY KEY NOT NULL,
	"sess" json NOT NULL,
	"expire" timestamp (6) with time zone NOT NULL,
	"person_id" uuid GENERATED ALWAYS AS (((sess ->> 'personId')::uuid)) STORED
);
--> statement-breakpoint
CREATE TABLE "signed_heads" (
	"id" uuid NOT NULL,
	"lab_id" uuid NOT NULL,
	"number" bigint NOT NULL,
	"hash" text NOT NULL,
	"signed_at" timestamp (3) with time zone NOT NULL,
	"cause" text NOT NULL,
	"key_fingerprint" text NOT NULL,
	"public_key" text NOT NULL,
	"signature" text NOT NULL,
	CONSTRAINT "signed_heads_lab_id_id_pk" PRIMARY KEY("lab_id","id"),
	CONSTRAINT "signed_heads_cause" CHECK ("signed_heads"."cause" in ('signature', 'daily'))
);
--> statement-breakpoint
ALTER TABLE "signed_heads" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "trail_entries" (
	"lab_id" uuid NOT NULL,
	"number" bigint NOT NULL,
	"at" timestamp (3) with time zone NOT NULL,
	"action" text NOT NULL,
	"shape" text NOT NULL,
	"person_id" uuid,
	"about_kind" text,
	"about_id" text,
	"instrument_id" uuid,
	"check_id" uuid,
	"demo" boolean NOT NULL,
	"canonical" text NOT NULL,
	"previous_hash" text NOT NULL,
	"hash" text NOT NULL,
	CONSTRAINT "trail_entries_lab_id_number_pk" PRIMARY KEY("lab_id","number"),
	CONSTRAINT "trail_entries_number" CHECK ("trail_entries"."number" >= 1),
	CONSTRAINT "trail_entries_shape" CHECK ("trail_entries"."shape" in ('person', 'wavekeep', 'signature', 'amendment', 'out-of-tolerance'))
);
--> statement-breakpoint
ALTER TABLE "trail_entries" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "trail_personal" (
	"lab_id" uuid NOT NULL,
	"number" bigint NOT NULL,
	"salt" text NOT NULL,
	"data" jsonb NOT NULL,
	CONSTRAINT "trail_personal_lab_id_number_pk" PRIMARY KEY("lab_id","number")
);
--> statement-breakpoint
ALTER TABLE "trail_personal" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "mail_outbox" (
	"id" uuid NOT NULL,
	"lab_id" uuid NOT NULL,
	"to_person_id" uuid,
	"to_address" text NOT NULL,
	"subject" text NOT NULL,
	"text" text NOT NULL,
	"cause_key" text NOT NULL,
	"message_id" text NOT NULL,
	"queued_at" timestamp (3) with time zone NOT NULL,
	"claimed_at" timestamp (3) with time zone,
	"sent_at" timestamp (3) with time zone,
	"attempts" integer DEFAULT 0 NOT NULL,
	"last_error" text,
	CONSTRAINT "mail_outbox_lab_id_id_pk" PRIMARY KEY("lab_id","id")
);
--> statement-breakpoint
ALTER TABLE "mail_outbox" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "idempotency_keys" (
	"lab_id" uuid NOT NULL,
	"person_id" uuid NOT NULL,
	"route" text NOT NULL,
	"key" text NOT NULL,
	"request_hash" text NOT NULL,
	"status" integer,
	"reply" jsonb,
	"created_at" timestamp (3) with time zone NOT NULL,
	CONSTRAINT "idempotency_keys_lab_id_person_id_route_key_pk" PRIMARY KEY("lab_id","person_id","route","key")
);
--> statement-breakpoint
ALTER TABLE "idempotency_keys" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "procedures" (
	"lab_id" uuid NOT NULL,
	"id" uuid NOT NULL,
	"code" text NOT NULL,
	"version" integer NOT NULL,
	"title" text NOT NULL,
	"instrument_kind" text NOT NULL,
	"approved_at" timestamp (3) with time zone NOT NULL,
	"approved_by" uuid,
	"warm_up_minutes" integer NOT NULL,
	"repeats" integer NOT NULL,
	"elements" jsonb NOT NULL,
	"required_lines_nm" jsonb NOT NULL,
	"least_lines_per_segment" integer NOT NULL,
	"steps" jsonb NOT NULL,
	"acceptance" text NOT NULL,
	CONSTRAINT "procedures_lab_id_id_pk" PRIMARY KEY("lab_id","id"),
	CONSTRAINT "procedures_code_version" UNIQUE("lab_id","code","version"),
	CONSTRAINT "procedures_kind" CHECK ("procedures"."instrument_kind" in ('array', 'scanning', 'spectrophotometer', 'raman'))
);
--> statement-breakpoint
ALTER TABLE "procedures" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "axes" (
	"lab_id" uuid NOT NULL,
	"id" uuid NOT NULL,
	"configuration_id" uuid NOT NULL,
	"number" integer NOT NULL,
	"coefficients" jsonb NOT NULL,
	"first_px" double precision NOT NULL,
	"last_px" double precision NOT NULL,
	"chebyshev_covariance" jsonb,
	"degrees_of_freedom" double precision,
	"meaning" text NOT NULL,
	"in_force_from" timestamp (3) with time zone NOT NULL,
	"reason" text NOT NULL,
	"from_check_id" uuid,
	"set_by" uuid,
	CONSTRAINT "axes_lab_id_id_pk" PRIMARY KEY("lab_id","id"),
	CONSTRAINT "axes_number" UNIQUE("lab_id","configuration_id","number"),
	CONSTRAINT "axes_meaning" CHECK ("axes"."meaning" in ('vacuum', 'standard-air', 'room-air'))
);
--> statement-breakpoint
ALTER TABLE "axes" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "configurations" (
	"lab_id" uuid NOT NULL,
	"id" uuid NOT NULL,
	"instrument_id" uuid NOT NULL,
	"ordinal" integer NOT NULL,
	"name" text,
	"replaces_id" uuid,
	"from_on" date NOT NULL,
	"to_on" date,
	"ended_reason" text,
	"axis_kind" text NOT NULL,
	"axis_meaning" text NOT NULL,
	"range_first_nm" double precision NOT NULL,
	"range_last_nm" double precision NOT NULL,
	"nominal_fwhm_nm" double precision,
	"optics" jsonb NOT NULL,
	"interval_days" integer NOT NULL,
	"grace_days" integer NOT NULL,
	"due_on" date,
	"assigned_to_id" uuid,
	"setup_reproducibility_nm" double precision,
	"decision_rule" jsonb NOT NULL,
	"warning_share" double precision NOT NULL,
	"procedure_id" uuid NOT NULL,
	"as_left_asked_by_check_id" uuid,
	"version" integer DEFAULT 0 NOT NULL,
	CONSTRAINT "configurations_lab_id_id_pk" PRIMARY KEY("lab_id","id"),
	CONSTRAINT "configurations_ordinal" UNIQUE("lab_id","instrument_id","ordinal"),
	CONSTRAINT "configurations_replaced_once" UNIQUE("lab_id","replaces_id"),
	CONSTRAINT "configurations_name" CHECK ("configurations"."name" <> ''),
	CONSTRAINT "configurations_axis_kind" CHECK ("configurations"."axis_kind" in ('pixel', 'wavelength', 'step')),
	CONSTRAINT "configurations_axis_meaning" CHECK ("configurations"."axis_meaning" in ('vacuum', 'standard-air', 'room-air')),
	CONSTRAINT "configurations_range" CHECK ("configurations"."range_first_nm" < "configurations"."range_last_nm"),
	CONSTRAINT "configurations_interval" CHECK ("configurations"."interval_days" > 0 and "configurations"."grace_days" >= 0)
);
--> statement-breakpoint
ALTER TABLE "configurations" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "instrument_events" (
	"lab_id" uuid NOT NULL,
	"id" uuid NOT NULL,
	"configuration_id" uuid NOT NULL,
	"kind" text NOT NULL,
	"title" text NOT NULL,
	"happened_on" date NOT NULL,
	"note" text NOT NULL,
	"breaks_drift" boolean NOT NULL,
	"recorded_at" timestamp (3) with time zone NOT NULL,
	"recorded_by" uuid,
	CONSTRAINT "instrument_events_lab_id_id_pk" PRIMARY KEY("lab_id","id"),
	CONSTRAINT "instrument_events_kind" CHECK ("instrument_events"."kind" in ('moved', 'serviced', 'lamp-changed', 'slit-changed', 'adjusted', 'firmware', 'environment', 'other'))
);
--> statement-breakpoint
ALTER TABLE "instrument_events" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "instruments" (
	"lab_id" uuid NOT NULL,
	"id" uuid NOT NULL,
	"name" text NOT NULL,
	"kind" text NOT NULL,
	"maker" text NOT NULL,
	"model" text NOT NULL,
	"serial" text NOT NULL,
	"owner_id" uuid NOT NULL,
	"place" text NOT NULL,
	"altitude_m" double precision,
	"purchased_on" date,
	"registered_at" timestamp (3) with time zone NOT NULL,
	"registered_by" uuid,
	"retired_at" timestamp (3) with time zone,
	"retired_reason" text,
	"version" integer DEFAULT 0 NOT NULL,
	CONSTRAINT "instruments_lab_id_id_pk" PRIMARY KEY("lab_id","id"),
	CONSTRAINT "instruments_kind" CHECK ("instruments"."kind" in ('array', 'scanning', 'spectrophotometer', 'raman'))
);
--> statement-breakpoint
ALTER TABLE "instruments" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "standing_entries" (
	"lab_id" uuid NOT NULL,
	"id" uuid NOT NULL,
	"configuration_id" uuid NOT NULL,
	"sequence" integer NOT NULL,
	"standing" text NOT NULL,
	"restriction" text,
	"since" timestamp (3) with time zone NOT NULL,
	"reason" text NOT NULL,
	"set_by" uuid,
	"check_id" uuid,
	CONSTRAINT "standing_entries_lab_id_id_pk" PRIMARY KEY("lab_id","id"),
	CONSTRAINT "standing_entries_sequence" UNIQUE("lab_id","configuration_id","sequence"),
	CONSTRAINT "standing_entries_standing" CHECK ("standing_entries"."standing" in ('in-service', 'on-hold', 'restricted', 'out-of-service', 'quarantined', 'retired')),
	CONSTRAINT "standing_entries_restriction" CHECK (("standing_entries"."standing" = 'restricted') = ("standing_entries"."restriction" is not null))
);
--> statement-breakpoint
ALTER TABLE "standing_entries" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "tolerance_versions" (
	"lab_id" uuid NOT NULL,
	"id" uuid NOT NULL,
	"configuration_id" uuid NOT NULL,
	"version" integer NOT NULL,
	"segments" jsonb NOT NULL,
	"in_force_from" timestamp (3) with time zone NOT NULL,
	"reason" text NOT NULL,
	"set_by" uuid,
	CONSTRAINT "tolerance_versions_lab_id_id_pk" PRIMARY KEY("lab_id","id"),
	CONSTRAINT "tolerance_versions_number" UNIQUE("lab_id","configuration_id","version")
);
--> statement-breakpoint
ALTER TABLE "tolerance_versions" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "source_certificates" (
	"lab_id" uuid NOT NULL,
	"id" uuid NOT NULL,
	"source_id" uuid NOT NULL,
	"file_name" text NOT NULL,
	"size_bytes" integer NOT NULL,
	"sha256" text NOT NULL,
	"bytes" "bytea" NOT NULL,
	"stored_at" timestamp (3) with time zone NOT NULL,
	"stored_by" uuid,
	CONSTRAINT "source_certificates_lab_id_id_pk" PRIMARY KEY("lab_id","id")
);
--> statement-breakpoint
ALTER TABLE "source_certificates" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "sources" (
	"lab_id" uuid NOT NULL,
	"id" uuid NOT NULL,
	"label" text NOT NULL,
	"name" text NOT NULL,
	"kind" text NOT NULL,
	"elements" jsonb NOT NULL,
	"laser_line_nm" double precision,
	"maker" text NOT NULL,
	"serial" text NOT NULL,
	"built_into_instrument_id" uuid,
	"warm_up_minutes" integer NOT NULL,
	"review_due_on" date,
	"note" text NOT NULL,
	"registered_at" timestamp (3) with time zone NOT NULL,
	"retired_at" timestamp (3) with time zone,
	"retired_reason" text,
	"version" integer DEFAULT 0 NOT NULL,
	CONSTRAINT "sources_lab_id_id_pk" PRIMARY KEY("lab_id","id"),
	CONSTRAINT "sources_kind" CHECK ("sources"."kind" in ('low-pressure-lamp', 'high-pressure-lamp', 'laser', 'absorption-standard', 'built-in'))
);
--> statement-breakpoint
ALTER TABLE "sources" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "check_attempts" (
	"lab_id" uuid NOT NULL,
	"check_id" uuid NOT NULL,
	"number" integer NOT NULL,
	"started_at" timestamp (3) with time zone NOT NULL,
	"started_by" uuid NOT NULL,
	"reason" text NOT NULL,
	CONSTRAINT "check_attempts_lab_id_check_id_number_pk" PRIMARY KEY("lab_id","check_id","number")
);
--> statement-breakpoint
ALTER TABLE "check_attempts" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "check_contributors" (
	"lab_id" uuid NOT NULL,
	"check_id" uuid NOT NULL,
	"person_id" uuid NOT NULL,
	"part" text NOT NULL,
	"since" timestamp (3) with time zone NOT NULL,
	CONSTRAINT "check_contributors_lab_id_check_id_person_id_part_pk" PRIMARY KEY("lab_id","check_id","person_id","part"),
	CONSTRAINT "check_contributors_part" CHECK ("check_contributors"."part" in ('began', 'uploaded', 'edited', 'analysed', 'left-out', 'submitted'))
);
--> statement-breakpoint
ALTER TABLE "check_contributors" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "check_drafts" (
	"lab_id" uuid NOT NULL,
	"check_id" uuid NOT NULL,
	"revision" integer DEFAULT 1 NOT NULL,
	"current_attempt" integer DEFAULT 1 NOT NULL,
	"inputs" jsonb NOT NULL,
	"version" integer DEFAULT 0 NOT NULL,
	"saved_at" timestamp (3) with time zone NOT NULL,
	"saved_by" uuid NOT NULL,
	"open" boolean DEFAULT true NOT NULL,
	CONSTRAINT "check_drafts_lab_id_check_id_pk" PRIMARY KEY("lab_id","check_id")
);
--> statement-breakpoint
ALTER TABLE "check_drafts" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "check_events" (
	"lab_id" uuid NOT NULL,
	"id" uuid NOT NULL,
	"check_id" uuid NOT NULL,
	"sequence" integer NOT NULL,
	"kind" text NOT NULL,
	"revision" integer NOT NULL,
	"at" timestamp (3) with time zone NOT NULL,
	"by_id" uuid,
	"comment" text,
	CONSTRAINT "check_events_lab_id_id_pk" PRIMARY KEY("lab_id","id"),
	CONSTRAINT "check_events_sequence" UNIQUE("lab_id","check_id","sequence"),
	CONSTRAINT "check_events_kind" CHECK ("check_events"."kind" in ('begun', 'set-aside', 'resumed', 'submitted', 'returned', 'approved', 'acknowledged', 'void'))
);
--> statement-breakpoint
ALTER TABLE "check_events" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "checks" (
	"lab_id" uuid NOT NULL,
	"id" uuid NOT NULL,
	"number" text NOT NULL,
	"instrument_id" uuid NOT NULL,
	"configuration_id" uuid NOT NULL,
	"condition" text NOT NULL,
	"follows_check_id" uuid,
	"procedure_id" uuid NOT NULL,
	"begun_at" timestamp (3) with time zone NOT NULL,
	"begun_by" uuid NOT NULL,
	CONSTRAINT "checks_lab_id_id_pk" PRIMARY KEY("lab_id","id"),
	CONSTRAINT "checks_number" UNIQUE("lab_id","number"),
	CONSTRAINT "checks_condition" CHECK ("checks"."condition" in ('as-found', 'as-left'))
);
--> statement-breakpoint
ALTER TABLE "checks" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "number_counters" (
	"lab_id" uuid NOT NULL,
	"kind" text NOT NULL,
	"year" integer NOT NULL,
	"last" integer NOT NULL,
	CONSTRAINT "number_counters_lab_id_kind_year_pk" PRIMARY KEY("lab_id","kind","year"),
	CONSTRAINT "number_counters_kind" CHECK ("number_counters"."kind" in ('check', 'impact-review', 'report'))
);
--> statement-breakpoint
ALTER TABLE "number_counters" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "capture_bytes" (
	"lab_id" uuid NOT NULL,
	"sha256" text NOT NULL,
	"size_bytes" integer NOT NULL,
	"bytes" "bytea" NOT NULL,
	"stored_at" timestamp (3) with time zone NOT NULL,
	CONSTRAINT "capture_bytes_lab_id_sha256_pk" PRIMARY KEY("lab_id","sha256"),
	CONSTRAINT "capture_bytes_sha256" CHECK ("capture_bytes"."sha256" ~ '^[0-9a-f]{64}$')
);
--> statement-breakpoint
ALTER TABLE "capture_bytes" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "capture_readings" (
	"lab_id" uuid NOT NULL,
	"capture_id" uuid NOT NULL,
	"core_version" text NOT NULL,
	"reading" jsonb,
	"refusal" text,
	"read_at" timestamp (3) with time zone NOT NULL,
	CONSTRAINT "capture_readings_lab_id_capture_id_core_version_pk" PRIMARY KEY("lab_id","capture_id","core_version"),
	CONSTRAINT "capture_readings_either" CHECK (("capture_readings"."reading" is null) <> ("capture_readings"."refusal" is null))
);
--> statement-breakpoint
ALTER TABLE "capture_readings" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "captures" (
	"lab_id" uuid NOT NULL,
	"id" uuid NOT NULL,
	"check_id" uuid NOT NULL,
	"attempt" integer NOT NULL,
	"position" integer NOT NULL,
	"file_name" text NOT NULL,
	"size_bytes" integer NOT NULL,
	"sha256" text NOT NULL,
	"part" text NOT NULL,
	"received_at" timestamp (3) with time zone NOT NULL,
	"received_by" uuid NOT NULL,
	"seen_before_capture_id" uuid,
	CONSTRAINT "captures_lab_id_id_pk" PRIMARY KEY("lab_id","id"),
	CONSTRAINT "captures_part" CHECK ("captures"."part" in ('lamp', 'dark'))
);
--> statement-breakpoint
ALTER TABLE "captures" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "analyses" (
	"lab_id" uuid NOT NULL,
	"id" uuid NOT NULL,
	"check_id" uuid NOT NULL,
	"version" integer NOT NULL,
	"attempt" integer NOT NULL,
	"revision" integer NOT NULL,
	"made_at" timestamp (3) with time zone NOT NULL,
	"made_by" uuid NOT NULL,
	"core_version" text NOT NULL,
	"line_list_version" text NOT NULL,
	"inputs" jsonb NOT NULL,
	"inputs_sha256" text NOT NULL,
	"capture_ids" jsonb NOT NULL,
	"tolerance_version" integer NOT NULL,
	"axis_number" integer,
	"analysis" jsonb NOT NULL,
	"sha256" text NOT NULL,
	"outcome" text NOT NULL,
	"verdict" text,
	"near_limit" boolean NOT NULL,
	"result" jsonb NOT NULL,
	"strip" jsonb NOT NULL,
	"changed" text NOT NULL,
	CONSTRAINT "analyses_lab_id_id_pk" PRIMARY KEY("lab_id","id"),
	CONSTRAINT "analyses_version" UNIQUE("lab_id","check_id","version"),
	CONSTRAINT "analyses_outcome" CHECK ("analyses"."outcome" in ('identified', 'ambiguous', 'unidentified', 'refused')),
	CONSTRAINT "analyses_verdict" CHECK ("analyses"."verdict" in ('pass', 'inconclusive', 'fail'))
);
--> statement-breakpoint
ALTER TABLE "analyses" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "analysis_drawings" (
	"lab_id" uuid NOT NULL,
	"analysis_id" uuid NOT NULL,
	"drawing" jsonb NOT NULL,
	CONSTRAINT "analysis_drawings_lab_id_analysis_id_pk" PRIMARY KEY("lab_id","analysis_id")
);
--> statement-breakpoint
ALTER TABLE "analysis_drawings" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "drift_points" (
	"lab_id" uuid NOT NULL,
	"check_id" uuid NOT NULL,
	"revision" integer NOT NULL,
	"configuration_id" uuid NOT NULL,
	"measured_at" timestamp (3) with time zone NOT NULL,
	"core_version" text NOT NULL,
	"mid_nm" double precision NOT NULL,
	"range_nm" double precision NOT NULL,
	"mid_error_nm" double precision NOT NULL,
	"mid_error_unc_nm" double precision NOT NULL,
	"scale_error_nm" double precision NOT NULL,
	"scale_error_unc_nm" double precision NOT NULL,
	"covariance_nm2" double precision NOT NULL,
	"largest_error_nm" double precision NOT NULL,
	"largest_error_unc_nm" double precision NOT NULL,
	"largest_at_nm" double precision NOT NULL,
	CONSTRAINT "drift_points_lab_id_check_id_revision_pk" PRIMARY KEY("lab_id","check_id","revision")
);
--> statement-breakpoint
ALTER TABLE "drift_points" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "reports" (
	"lab_id" uuid NOT NULL,
	"check_id" uuid NOT NULL,
	"number" text NOT NULL,
	"sha256" text NOT NULL,
	"bytes" "bytea" NOT NULL,
	"made_at" timestamp (3) with time zone NOT NULL,
	CONSTRAINT "reports_lab_id_check_id_pk" PRIMARY KEY("lab_id","check_id"),
	CONSTRAINT "reports_number" UNIQUE("lab_id","number")
);
--> statement-breakpoint
ALTER TABLE "reports" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "signatures" (
	"lab_id" uuid NOT NULL,
	"id" uuid NOT NULL,
	"check_id" uuid NOT NULL,
	"revision" integer NOT NULL,
	"meaning" text NOT NULL,
	"person_id" uuid NOT NULL,
	"printed_name" text NOT NULL,
	"role" text NOT NULL,
	"signed_at" timestamp (3) with time zone NOT NULL,
	"zone" text NOT NULL,
	"content_sha256" text NOT NULL,
	"proof" text NOT NULL,
	"self_approval" boolean NOT NULL,
	CONSTRAINT "signatures_lab_id_id_pk" PRIMARY KEY("lab_id","id"),
	CONSTRAINT "signatures_meaning" UNIQUE("lab_id","check_id","revision","meaning"),
	CONSTRAINT "signatures_meaning_words" CHECK ("signatures"."meaning" in ('made by', 'reviewed and approved'))
);
--> statement-breakpoint
ALTER TABLE "signatures" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "submissions" (
	"lab_id" uuid NOT NULL,
	"id" uuid NOT NULL,
	"check_id" uuid NOT NULL,
	"revision" integer NOT NULL,
	"analysis_id" uuid NOT NULL,
	"submitted_at" timestamp (3) with time zone NOT NULL,
	"submitted_by" uuid NOT NULL,
	"measured_at" timestamp (3) with time zone NOT NULL,
	"inputs" jsonb NOT NULL,
	"tolerance_version" integer NOT NULL,
	"tolerance_segments" jsonb NOT NULL,
	"procedure_version" integer NOT NULL,
	"attempt_count" integer NOT NULL,
	"verdict" text,
	"near_limit" boolean NOT NULL,
	"content_sha256" text NOT NULL,
	CONSTRAINT "submissions_lab_id_id_pk" PRIMARY KEY("lab_id","id"),
	CONSTRAINT "submissions_revision" UNIQUE("lab_id","check_id","revision")
);
--> statement-breakpoint
ALTER TABLE "submissions" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "alerts" (
	"lab_id" uuid NOT NULL,
	"id" uuid NOT NULL,
	"kind" text NOT NULL,
	"instrument_id" uuid,
	"configuration_id" uuid,
	"source_id" uuid,
	"check_id" uuid,
	"title" text NOT NULL,
	"detail" text NOT NULL,
	"opened_at" timestamp (3) with time zone NOT NULL,
	"closed_at" timestamp (3) with time zone,
	"closed_because" text,
	"reopened_count" integer DEFAULT 0 NOT NULL,
	"acknowledged_at" timestamp (3) with time zone,
	"acknowledged_by" uuid,
	"acknowledged_note" text,
	"acknowledged_for_owner" boolean DEFAULT false NOT NULL,
	"version" integer DEFAULT 0 NOT NULL,
	CONSTRAINT "alerts_lab_id_id_pk" PRIMARY KEY("lab_id","id"),
	CONSTRAINT "alerts_kind" CHECK ("alerts"."kind" in ('out-of-tolerance', 'near-limit', 'inconclusive', 'overdue', 'source-review')),
	CONSTRAINT "alerts_about" CHECK (("alerts"."configuration_id" is null) <> ("alerts"."source_id" is null)),
	CONSTRAINT "alerts_closed" CHECK (("alerts"."closed_at" is null) = ("alerts"."closed_because" is null))
);
--> statement-breakpoint
ALTER TABLE "alerts" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "impact_decisions" (
	"lab_id" uuid NOT NULL,
	"id" uuid NOT NULL,
	"review_id" uuid NOT NULL,
	"affected" text NOT NULL,
	"affected_work" text NOT NULL,
	"decision" text NOT NULL,
	"decided_at" timestamp (3) with time zone NOT NULL,
	"decided_by" uuid NOT NULL,
	"for_owner" boolean NOT NULL,
	CONSTRAINT "impact_decisions_lab_id_id_pk" PRIMARY KEY("lab_id","id"),
	CONSTRAINT "impact_decisions_once" UNIQUE("lab_id","review_id"),
	CONSTRAINT "impact_decisions_affected" CHECK ("impact_decisions"."affected" in ('none', 'some', 'unknown'))
);
--> statement-breakpoint
ALTER TABLE "impact_decisions" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "impact_reviews" (
	"lab_id" uuid NOT NULL,
	"id" uuid NOT NULL,
	"number" text NOT NULL,
	"instrument_id" uuid NOT NULL,
	"configuration_id" uuid NOT NULL,
	"check_id" uuid NOT NULL,
	"window_from" timestamp (3) with time zone,
	"window_from_check_id" uuid,
	"window_to" timestamp (3) with time zone NOT NULL,
	"largest_error_nm" double precision,
	"largest_at_nm" double precision,
	"opened_at" timestamp (3) with time zone NOT NULL,
	CONSTRAINT "impact_reviews_lab_id_id_pk" PRIMARY KEY("lab_id","id"),
	CONSTRAINT "impact_reviews_number" UNIQUE("lab_id","number"),
	CONSTRAINT "impact_reviews_check" UNIQUE("lab_id","check_id")
);
--> statement-breakpoint
ALTER TABLE "impact_reviews" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
ALTER TABLE "bench_devices" ADD CONSTRAINT "bench_devices_lab_id_enrolled_by_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","enrolled_by") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "credentials" ADD CONSTRAINT "credentials_person_id_people_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."people"("id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "deputies" ADD CONSTRAINT "deputies_lab_id_person_id_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","person_id") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "deputies" ADD CONSTRAINT "deputies_lab_id_for_person_id_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","for_person_id") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "deputies" ADD CONSTRAINT "deputies_lab_id_appointed_by_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","appointed_by") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "invitations" ADD CONSTRAINT "invitations_lab_id_labs_id_fk" FOREIGN KEY ("lab_id") REFERENCES "public"."labs"("id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "invitations" ADD CONSTRAINT "invitations_lab_id_invited_by_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","invited_by") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "invitations" ADD CONSTRAINT "invitations_lab_id_accepted_by_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","accepted_by") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "memberships" ADD CONSTRAINT "memberships_lab_id_labs_id_fk" FOREIGN KEY ("lab_id") REFERENCES "public"."labs"("id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "memberships" ADD CONSTRAINT "memberships_person_id_people_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."people"("id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "password_resets" ADD CONSTRAINT "password_resets_person_id_people_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."people"("id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "signed_heads" ADD CONSTRAINT "signed_heads_lab_id_number_trail_entries_lab_id_number_fk" FOREIGN KEY ("lab_id","number") REFERENCES "public"."trail_entries"("lab_id","number") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "trail_entries" ADD CONSTRAINT "trail_entries_lab_id_labs_id_fk" FOREIGN KEY ("lab_id") REFERENCES "public"."labs"("id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "trail_personal" ADD CONSTRAINT "trail_personal_lab_id_number_trail_entries_lab_id_number_fk" FOREIGN KEY ("lab_id","number") REFERENCES "public"."trail_entries"("lab_id","number") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "mail_outbox" ADD CONSTRAINT "mail_outbox_lab_id_labs_id_fk" FOREIGN KEY ("lab_id") REFERENCES "public"."labs"("id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "mail_outbox" ADD CONSTRAINT "mail_outbox_lab_id_to_person_id_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","to_person_id") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "idempotency_keys" ADD CONSTRAINT "idempotency_keys_lab_id_person_id_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","person_id") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "procedures" ADD CONSTRAINT "procedures_lab_id_approved_by_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","approved_by") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "axes" ADD CONSTRAINT "axes_lab_id_configuration_id_configurations_lab_id_id_fk" FOREIGN KEY ("lab_id","configuration_id") REFERENCES "public"."configurations"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "axes" ADD CONSTRAINT "axes_lab_id_from_check_id_checks_lab_id_id_fk" FOREIGN KEY ("lab_id","from_check_id") REFERENCES "public"."checks"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "axes" ADD CONSTRAINT "axes_lab_id_set_by_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","set_by") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "configurations" ADD CONSTRAINT "configurations_lab_id_instrument_id_instruments_lab_id_id_fk" FOREIGN KEY ("lab_id","instrument_id") REFERENCES "public"."instruments"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "configurations" ADD CONSTRAINT "configurations_lab_id_replaces_id_configurations_lab_id_id_fk" FOREIGN KEY ("lab_id","replaces_id") REFERENCES "public"."configurations"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "configurations" ADD CONSTRAINT "configurations_lab_id_assigned_to_id_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","assigned_to_id") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "configurations" ADD CONSTRAINT "configurations_lab_id_procedure_id_procedures_lab_id_id_fk" FOREIGN KEY ("lab_id","procedure_id") REFERENCES "public"."procedures"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "configurations" ADD CONSTRAINT "configurations_lab_id_as_left_asked_by_check_id_checks_lab_id_id_fk" FOREIGN KEY ("lab_id","as_left_asked_by_check_id") REFERENCES "public"."checks"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "instrument_events" ADD CONSTRAINT "instrument_events_lab_id_configuration_id_configurations_lab_id_id_fk" FOREIGN KEY ("lab_id","configuration_id") REFERENCES "public"."configurations"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "instrument_events" ADD CONSTRAINT "instrument_events_lab_id_recorded_by_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","recorded_by") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "instruments" ADD CONSTRAINT "instruments_lab_id_owner_id_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","owner_id") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "instruments" ADD CONSTRAINT "instruments_lab_id_registered_by_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","registered_by") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "standing_entries" ADD CONSTRAINT "standing_entries_lab_id_configuration_id_configurations_lab_id_id_fk" FOREIGN KEY ("lab_id","configuration_id") REFERENCES "public"."configurations"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "standing_entries" ADD CONSTRAINT "standing_entries_lab_id_set_by_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","set_by") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "standing_entries" ADD CONSTRAINT "standing_entries_lab_id_check_id_checks_lab_id_id_fk" FOREIGN KEY ("lab_id","check_id") REFERENCES "public"."checks"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "tolerance_versions" ADD CONSTRAINT "tolerance_versions_lab_id_configuration_id_configurations_lab_id_id_fk" FOREIGN KEY ("lab_id","configuration_id") REFERENCES "public"."configurations"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "tolerance_versions" ADD CONSTRAINT "tolerance_versions_lab_id_set_by_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","set_by") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "source_certificates" ADD CONSTRAINT "source_certificates_lab_id_source_id_sources_lab_id_id_fk" FOREIGN KEY ("lab_id","source_id") REFERENCES "public"."sources"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "source_certificates" ADD CONSTRAINT "source_certificates_lab_id_stored_by_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","stored_by") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "sources" ADD CONSTRAINT "sources_lab_id_built_into_instrument_id_instruments_lab_id_id_fk" FOREIGN KEY ("lab_id","built_into_instrument_id") REFERENCES "public"."instruments"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "check_attempts" ADD CONSTRAINT "check_attempts_lab_id_check_id_checks_lab_id_id_fk" FOREIGN KEY ("lab_id","check_id") REFERENCES "public"."checks"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "check_attempts" ADD CONSTRAINT "check_attempts_lab_id_started_by_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","started_by") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "check_contributors" ADD CONSTRAINT "check_contributors_lab_id_check_id_checks_lab_id_id_fk" FOREIGN KEY ("lab_id","check_id") REFERENCES "public"."checks"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "check_contributors" ADD CONSTRAINT "check_contributors_lab_id_person_id_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","person_id") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "check_drafts" ADD CONSTRAINT "check_drafts_lab_id_check_id_checks_lab_id_id_fk" FOREIGN KEY ("lab_id","check_id") REFERENCES "public"."checks"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "check_drafts" ADD CONSTRAINT "check_drafts_lab_id_saved_by_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","saved_by") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "check_events" ADD CONSTRAINT "check_events_lab_id_check_id_checks_lab_id_id_fk" FOREIGN KEY ("lab_id","check_id") REFERENCES "public"."checks"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "check_events" ADD CONSTRAINT "check_events_lab_id_by_id_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","by_id") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "checks" ADD CONSTRAINT "checks_lab_id_configuration_id_configurations_lab_id_id_fk" FOREIGN KEY ("lab_id","configuration_id") REFERENCES "public"."configurations"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "checks" ADD CONSTRAINT "checks_lab_id_instrument_id_instruments_lab_id_id_fk" FOREIGN KEY ("lab_id","instrument_id") REFERENCES "public"."instruments"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "checks" ADD CONSTRAINT "checks_lab_id_follows_check_id_checks_lab_id_id_fk" FOREIGN KEY ("lab_id","follows_check_id") REFERENCES "public"."checks"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "checks" ADD CONSTRAINT "checks_lab_id_procedure_id_procedures_lab_id_id_fk" FOREIGN KEY ("lab_id","procedure_id") REFERENCES "public"."procedures"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "checks" ADD CONSTRAINT "checks_lab_id_begun_by_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","begun_by") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "capture_readings" ADD CONSTRAINT "capture_readings_lab_id_capture_id_captures_lab_id_id_fk" FOREIGN KEY ("lab_id","capture_id") REFERENCES "public"."captures"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "captures" ADD CONSTRAINT "captures_lab_id_sha256_capture_bytes_lab_id_sha256_fk" FOREIGN KEY ("lab_id","sha256") REFERENCES "public"."capture_bytes"("lab_id","sha256") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "captures" ADD CONSTRAINT "captures_lab_id_check_id_checks_lab_id_id_fk" FOREIGN KEY ("lab_id","check_id") REFERENCES "public"."checks"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "captures" ADD CONSTRAINT "captures_lab_id_check_id_attempt_check_attempts_lab_id_check_id_number_fk" FOREIGN KEY ("lab_id","check_id","attempt") REFERENCES "public"."check_attempts"("lab_id","check_id","number") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "captures" ADD CONSTRAINT "captures_lab_id_received_by_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","received_by") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "captures" ADD CONSTRAINT "captures_lab_id_seen_before_capture_id_captures_lab_id_id_fk" FOREIGN KEY ("lab_id","seen_before_capture_id") REFERENCES "public"."captures"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "analyses" ADD CONSTRAINT "analyses_lab_id_check_id_checks_lab_id_id_fk" FOREIGN KEY ("lab_id","check_id") REFERENCES "public"."checks"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "analyses" ADD CONSTRAINT "analyses_lab_id_made_by_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","made_by") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "analysis_drawings" ADD CONSTRAINT "analysis_drawings_lab_id_analysis_id_analyses_lab_id_id_fk" FOREIGN KEY ("lab_id","analysis_id") REFERENCES "public"."analyses"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "drift_points" ADD CONSTRAINT "drift_points_lab_id_check_id_checks_lab_id_id_fk" FOREIGN KEY ("lab_id","check_id") REFERENCES "public"."checks"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "drift_points" ADD CONSTRAINT "drift_points_lab_id_configuration_id_configurations_lab_id_id_fk" FOREIGN KEY ("lab_id","configuration_id") REFERENCES "public"."configurations"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "reports" ADD CONSTRAINT "reports_lab_id_check_id_checks_lab_id_id_fk" FOREIGN KEY ("lab_id","check_id") REFERENCES "public"."checks"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "signatures" ADD CONSTRAINT "signatures_lab_id_check_id_checks_lab_id_id_fk" FOREIGN KEY ("lab_id","check_id") REFERENCES "public"."checks"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "signatures" ADD CONSTRAINT "signatures_lab_id_person_id_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","person_id") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "submissions" ADD CONSTRAINT "submissions_lab_id_check_id_checks_lab_id_id_fk" FOREIGN KEY ("lab_id","check_id") REFERENCES "public"."checks"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "submissions" ADD CONSTRAINT "submissions_lab_id_analysis_id_analyses_lab_id_id_fk" FOREIGN KEY ("lab_id","analysis_id") REFERENCES "public"."analyses"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "submissions" ADD CONSTRAINT "submissions_lab_id_submitted_by_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","submitted_by") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "alerts" ADD CONSTRAINT "alerts_lab_id_instrument_id_instruments_lab_id_id_fk" FOREIGN KEY ("lab_id","instrument_id") REFERENCES "public"."instruments"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "alerts" ADD CONSTRAINT "alerts_lab_id_configuration_id_configurations_lab_id_id_fk" FOREIGN KEY ("lab_id","configuration_id") REFERENCES "public"."configurations"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "alerts" ADD CONSTRAINT "alerts_lab_id_source_id_sources_lab_id_id_fk" FOREIGN KEY ("lab_id","source_id") REFERENCES "public"."sources"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "alerts" ADD CONSTRAINT "alerts_lab_id_check_id_checks_lab_id_id_fk" FOREIGN KEY ("lab_id","check_id") REFERENCES "public"."checks"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "alerts" ADD CONSTRAINT "alerts_lab_id_acknowledged_by_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","acknowledged_by") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "impact_decisions" ADD CONSTRAINT "impact_decisions_lab_id_review_id_impact_reviews_lab_id_id_fk" FOREIGN KEY ("lab_id","review_id") REFERENCES "public"."impact_reviews"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "impact_decisions" ADD CONSTRAINT "impact_decisions_lab_id_decided_by_memberships_lab_id_person_id_fk" FOREIGN KEY ("lab_id","decided_by") REFERENCES "public"."memberships"("lab_id","person_id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "impact_reviews" ADD CONSTRAINT "impact_reviews_lab_id_instrument_id_instruments_lab_id_id_fk" FOREIGN KEY ("lab_id","instrument_id") REFERENCES "public"."instruments"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "impact_reviews" ADD CONSTRAINT "impact_reviews_lab_id_configuration_id_configurations_lab_id_id_fk" FOREIGN KEY ("lab_id","configuration_id") REFERENCES "public"."configurations"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "impact_reviews" ADD CONSTRAINT "impact_reviews_lab_id_check_id_checks_lab_id_id_fk" FOREIGN KEY ("lab_id","check_id") REFERENCES "public"."checks"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
ALTER TABLE "impact_reviews" ADD CONSTRAINT "impact_reviews_lab_id_window_from_check_id_checks_lab_id_id_fk" FOREIGN KEY ("lab_id","window_from_check_id") REFERENCES "public"."checks"("lab_id","id") ON DELETE restrict ON UPDATE restrict;--> statement-breakpoint
CREATE UNIQUE INDEX "bench_devices_token" ON "bench_devices" USING btree ("token_hash");--> statement-breakpoint
CREATE UNIQUE INDEX "invitations_token" ON "invitations" USING btree ("token_hash");--> statement-breakpoint
CREATE INDEX "memberships_by_person" ON "memberships" USING btree ("person_id");--> statement-breakpoint
CREATE UNIQUE INDEX "people_email" ON "people" USING btree ("email");--> statement-breakpoint
CREATE UNIQUE INDEX "password_resets_token" ON "password_resets" USING btree ("token_hash");--> statement-breakpoint
CREATE INDEX "sessions_expire" ON "sessions" USING btree ("expire");--> statement-breakpoint
CREATE INDEX "sessions_person" ON "sessions" USING btree ("person_id");--> statement-breakpoint
CREATE INDEX "signed_heads_by_number" ON "signed_heads" USING btree ("lab_id","number");--> statement-breakpoint
CREATE UNIQUE INDEX "trail_entries_hash" ON "trail_entries" USING btree ("lab_id","hash");--> statement-breakpoint
CREATE INDEX "trail_entries_by_instrument" ON "trail_entries" USING btree ("lab_id","instrument_id","number");--> statement-breakpoint
CREATE INDEX "trail_entries_by_check" ON "trail_entries" USING btree ("lab_id","check_id","number");--> statement-breakpoint
CREATE INDEX "trail_entries_by_person" ON "trail_entries" USING btree ("lab_id","person_id","number");--> statement-breakpoint
CREATE INDEX "trail_entries_by_action" ON "trail_entries" USING btree ("lab_id","action","number");--> statement-breakpoint
CREATE INDEX "trail_entries_by_time" ON "trail_entries" USING btree ("lab_id","at");--> statement-breakpoint
CREATE UNIQUE INDEX "mail_outbox_cause" ON "mail_outbox" USING btree ("lab_id","cause_key");--> statement-breakpoint
CREATE INDEX "mail_outbox_by_time" ON "mail_outbox" USING btree ("lab_id","queued_at");--> statement-breakpoint
CREATE INDEX "idempotency_keys_by_time" ON "idempotency_keys" USING btree ("created_at");--> statement-breakpoint
CREATE UNIQUE INDEX "configurations_name_in_use" ON "configurations" USING btree ("lab_id","instrument_id",lower(coalesce("name", ''))) WHERE "configurations"."to_on" is null;--> statement-breakpoint
CREATE INDEX "configurations_by_due" ON "configurations" USING btree ("lab_id","due_on");--> statement-breakpoint
CREATE INDEX "instrument_events_by_configuration" ON "instrument_events" USING btree ("lab_id","configuration_id","happened_on");--> statement-breakpoint
CREATE UNIQUE INDEX "instruments_name_in_use" ON "instruments" USING btree ("lab_id",lower("name")) WHERE "instruments"."retired_at" is null;--> statement-breakpoint
CREATE INDEX "instruments_by_owner" ON "instruments" USING btree ("lab_id","owner_id");--> statement-breakpoint
CREATE INDEX "source_certificates_by_source" ON "source_certificates" USING btree ("lab_id","source_id","stored_at");--> statement-breakpoint
CREATE UNIQUE INDEX "sources_label_in_use" ON "sources" USING btree ("lab_id",lower("label")) WHERE "sources"."retired_at" is null;--> statement-breakpoint
CREATE INDEX "check_drafts_open" ON "check_drafts" USING btree ("lab_id","saved_at") WHERE "check_drafts"."open";--> statement-breakpoint
CREATE UNIQUE INDEX "check_events_one_decision" ON "check_events" USING btree ("lab_id","check_id","revision") WHERE "check_events"."kind" in ('returned', 'approved');--> statement-breakpoint
CREATE UNIQUE INDEX "check_events_one_approval" ON "check_events" USING btree ("lab_id","check_id") WHERE "check_events"."kind" = 'approved';--> statement-breakpoint
CREATE UNIQUE INDEX "check_events_one_submission" ON "check_events" USING btree ("lab_id","check_id","revision") WHERE "check_events"."kind" = 'submitted';--> statement-breakpoint
CREATE INDEX "checks_by_configuration" ON "checks" USING btree ("lab_id","configuration_id","begun_at");--> statement-breakpoint
CREATE INDEX "checks_by_begun" ON "checks" USING btree ("lab_id","begun_at","id");--> statement-breakpoint
CREATE INDEX "captures_by_check" ON "captures" USING btree ("lab_id","check_id","position");--> statement-breakpoint
CREATE INDEX "captures_by_sha256" ON "captures" USING btree ("lab_id","sha256");--> statement-breakpoint
CREATE INDEX "drift_points_by_configuration" ON "drift_points" USING btree ("lab_id","configuration_id","measured_at");--> statement-breakpoint
CREATE UNIQUE INDEX "signatures_one_approval" ON "signatures" USING btree ("lab_id","check_id") WHERE "signatures"."meaning" = 'reviewed and approved';--> statement-breakpoint
CREATE UNIQUE INDEX "alerts_one_open_by_configuration" ON "alerts" USING btree ("lab_id","kind","configuration_id") WHERE "alerts"."closed_at" is null and "alerts"."configuration_id" is not null;--> statement-breakpoint
CREATE UNIQUE INDEX "alerts_one_open_by_source" ON "alerts" USING btree ("lab_id","kind","source_id") WHERE "alerts"."closed_at" is null and "alerts"."source_id" is not null;--> statement-breakpoint
CREATE INDEX "alerts_by_opened" ON "alerts" USING btree ("lab_id","opened_at","id");--> statement-breakpoint
CREATE INDEX "impact_reviews_by_configuration" ON "impact_reviews" USING btree ("lab_id","configuration_id","opened_at");--> statement-breakpoint
CREATE POLICY "lab_apart" ON "labs" AS PERMISSIVE FOR ALL TO public USING (id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "bench_devices" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "definer_only" ON "credentials" AS PERMISSIVE FOR ALL TO public USING (false) WITH CHECK (false);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "deputies" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "invitations" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "memberships" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "people_of_lab" ON "people" AS PERMISSIVE FOR SELECT TO public USING (id = nullif(current_setting('app.person', true), '')::uuid or exists (select 1 from memberships m where m.person_id = people.id and m.lab_id = nullif(current_setting('app.lab', true), '')::uuid));--> statement-breakpoint
CREATE POLICY "own_row" ON "people" AS PERMISSIVE FOR UPDATE TO public USING (id = nullif(current_setting('app.person', true), '')::uuid) WITH CHECK (id = nullif(current_setting('app.person', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "definer_only" ON "password_resets" AS PERMISSIVE FOR ALL TO public USING (false) WITH CHECK (false);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "signed_heads" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "trail_entries" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "trail_personal" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "mail_outbox" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "idempotency_keys" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "procedures" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "axes" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "configurations" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "instrument_events" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "instruments" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "standing_entries" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "tolerance_versions" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "source_certificates" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "sources" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "check_attempts" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "check_contributors" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "check_drafts" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "check_events" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "checks" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "number_counters" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "capture_bytes" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "capture_readings" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "captures" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "analyses" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "analysis_drawings" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "drift_points" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "reports" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "signatures" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "submissions" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "alerts" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "impact_decisions" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "lab_apart" ON "impact_reviews" AS PERMISSIVE FOR ALL TO public USING (lab_id = nullif(current_setting('app.lab', true), '')::uuid) WITH CHECK (lab_id = nullif(current_setting('app.lab', true), '')::uuid);