CREATE TABLE `failed_attempts` (
	`subject` blob PRIMARY KEY NOT NULL,
	`failures` integer NOT NULL,
	`last_at` text NOT NULL,
	`blocked_until` text NOT NULL,
	CONSTRAINT "failed_attempts_subject" CHECK(length("failed_attempts"."subject") = 32),
	CONSTRAINT "failed_attempts_failures" CHECK("failed_attempts"."failures" >= 1),
	CONSTRAINT "failed_attempts_last_at_text" CHECK("failed_attempts"."last_at" GLOB '????-??-??T??:??:??.???Z'),
	CONSTRAINT "failed_attempts_blocked_until" CHECK("failed_attempts"."blocked_until" GLOB '????-??-??T??:??:??.???Z')
) STRICT;
--> statement-breakpoint
CREATE INDEX `failed_attempts_last_at` ON `failed_attempts` (`last_at`);--> statement-breakpoint
CREATE TABLE `mailed_tokens` (
	`id` integer PRIMARY KEY NOT NULL,
	`purpose` text NOT NULL,
	`person_id` integer NOT NULL,
	`hash` blob NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer,
	`expires_at` text NOT NULL,
	`used_at` text,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action,
	CONSTRAINT "mailed_tokens_purpose" CHECK("mailed_tokens"."purpose" IN ('invitation', 'reset')),
	CONSTRAINT "mailed_tokens_hash_length" CHECK(length("mailed_tokens"."hash") = 32),
	CONSTRAINT "mailed_tokens_created_at" CHECK("mailed_tokens"."created_at" GLOB '????-??-??T??:??:??.???Z'),
	CONSTRAINT "mailed_tokens_expires_at" CHECK("mailed_tokens"."expires_at" GLOB '????-??-??T??:??:??.???Z'),
	CONSTRAINT "mailed_tokens_used_at" CHECK("mailed_tokens"."used_at" IS NULL OR "mailed_tokens"."used_at" GLOB '????-??-??T??:??:??.???Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `mailed_tokens_hash` ON `mailed_tokens` (`hash`);--> statement-breakpoint
CREATE INDEX `mailed_tokens_person` ON `mailed_tokens` (`person_id`);--> statement-breakpoint
CREATE TABLE `people` (
	`id` integer PRIMARY KEY NOT NULL,
	`email` text NOT NULL,
	`name` text NOT NULL,
	`password_hash` text,
	`password_set_at` text,
	`created_at` text NOT NULL,
	`disabled_at` text,
	`version` integer DEFAULT 1 NOT NULL,
	CONSTRAINT "people_email_text" CHECK(length("people"."email") BETWEEN 3 AND 254 AND "people"."email" = lower("people"."email")),
	CONSTRAINT "people_name" CHECK(length("people"."name") BETWEEN 1 AND 200),
	CONSTRAINT "people_password" CHECK(("people"."password_hash" IS NULL) = ("people"."password_set_at" IS NULL)),
	CONSTRAINT "people_password_hash" CHECK("people"."password_hash" IS NULL OR "people"."password_hash" GLOB '$argon2id$*'),
	CONSTRAINT "people_created_at" CHECK("people"."created_at" GLOB '????-??-??T??:??:??.???Z'),
	CONSTRAINT "people_password_set_at" CHECK("people"."password_set_at" IS NULL OR "people"."password_set_at" GLOB '????-??-??T??:??:??.???Z'),
	CONSTRAINT "people_disabled_at" CHECK("people"."disabled_at" IS NULL OR "people"."disabled_at" GLOB '????-??-??T??:??:??.???Z'),
	CONSTRAINT "people_version" CHECK("people"."version" >= 1)
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `people_email` ON `people` (`email`);--> statement-breakpoint
CREATE TABLE `refresh_tokens` (
	`id` integer PRIMARY KEY NOT NULL,
	`session_id` integer NOT NULL,
	`hash` blob NOT NULL,
	`issued_at` text NOT NULL,
	`expires_at` text NOT NULL,
	`used_at` text,
	FOREIGN KEY (`session_id`) REFERENCES `sessions`(`id`) ON UPDATE no action ON DELETE cascade,
	CONSTRAINT "refresh_tokens_hash_length" CHECK(length("refresh_tokens"."hash") = 32),
	CONSTRAINT "refresh_tokens_issued_at" CHECK("refresh_tokens"."issued_at" GLOB '????-??-??T??:??:??.???Z'),
	CONSTRAINT "refresh_tokens_expires_at" CHECK("refresh_tokens"."expires_at" GLOB '????-??-??T??:??:??.???Z'),
	CONSTRAINT "refresh_tokens_used_at" CHECK("refresh_tokens"."used_at" IS NULL OR "refresh_tokens"."used_at" GLOB '????-??-??T??:??:??.???Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `refresh_tokens_hash` ON `refresh_tokens` (`hash`);--> statement-breakpoint
CREATE INDEX `refresh_tokens_session` ON `refresh_tokens` (`session_id`);--> statement-breakpoint
CREATE TABLE `roles` (
	`id` integer PRIMARY KEY NOT NULL,
	`person_id` integer NOT NULL,
	`role` text NOT NULL,
	`network_id` integer,
	`site_id` integer,
	`given_at` text NOT NULL,
	`given_by` integer,
	`expires_at` text,
	`taken_at` text,
	`taken_by` integer,
	`version` integer DEFAULT 1 NOT NULL,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`network_id`) REFERENCES `networks`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`site_id`) REFERENCES `sites`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`given_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`taken_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action,
	CONSTRAINT "roles_role" CHECK("roles"."role" IN ('coordinator', 'analyst', 'reviewer', 'operator')),
	CONSTRAINT "roles_network_given" CHECK("roles"."network_id" IS NOT NULL OR "roles"."role" = 'coordinator'),
	CONSTRAINT "roles_site_given" CHECK(("roles"."site_id" IS NOT NULL) = ("roles"."role" = 'operator')),
	CONSTRAINT "roles_given_at" CHECK("roles"."given_at" GLOB '????-??-??T??:??:??.???Z'),
	CONSTRAINT "roles_expires_at" CHECK("roles"."expires_at" IS NULL OR "roles"."expires_at" GLOB '????-??-??T??:??:??.???Z'),
	CONSTRAINT "roles_taken_at" CHECK("roles"."taken_at" IS NULL OR "roles"."taken_at" GLOB '????-??-??T??:??:??.???Z'),
	CONSTRAINT "roles_version" CHECK("roles"."version" >= 1)
) STRICT;
--> statement-breakpoint
CREATE INDEX `roles_person` ON `roles` (`person_id`);--> statement-breakpoint
CREATE UNIQUE INDEX `roles_held_once` ON `roles` (`person_id`,`role`,coalesce("network_id", 0),coalesce("site_id", 0)) WHERE "roles"."taken_at" IS NULL;--> statement-breakpoint
CREATE INDEX `roles_network` ON `roles` (`network_id`);--> statement-breakpoint
CREATE INDEX `roles_site` ON `roles` (`site_id`);--> statement-breakpoint
CREATE TABLE `sessions` (
	`id` integer PRIMARY KEY NOT NULL,
	`person_id` integer NOT NULL,
	`created_at` text NOT NULL,
	`last_used_at` text NOT NULL,
	`expires_at` text NOT NULL,
	`ended_at` text,
	`end_reason` text,
	`browser` text NOT NULL,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action,
	CONSTRAINT "sessions_created_at" CHECK("sessions"."created_at" GLOB '????-??-??T??:??:??.???Z'),
	CONSTRAINT "sessions_last_used_at" CHECK("sessions"."last_used_at" GLOB '????-??-??T??:??:??.???Z'),
	CONSTRAINT "sessions_expires_at" CHECK("sessions"."expires_at" GLOB '????-??-??T??:??:??.???Z'),
	CONSTRAINT "sessions_ended_at" CHECK("sessions"."ended_at" IS NULL OR "sessions"."ended_at" GLOB '????-??-??T??:??:??.???Z'),
	CONSTRAINT "sessions_end" CHECK(("sessions"."ended_at" IS NULL) = ("sessions"."end_reason" IS NULL)),
	CONSTRAINT "sessions_end_reason" CHECK("sessions"."end_reason" IN ('signed-out', 'ended-elsewhere', 'new-password', 'disabled', 'token-used-twice')),
	CONSTRAINT "sessions_browser" CHECK(length("sessions"."browser") <= 200)
) STRICT;
--> statement-breakpoint
CREATE INDEX `sessions_person` ON `sessions` (`person_id`);--> statement-breakpoint
CREATE INDEX `sessions_expiry` ON `sessions` (`expires_at`);--> statement-breakpoint
CREATE TABLE `site_keys` (
	`id` integer PRIMARY KEY NOT NULL,
	`site_id` integer NOT NULL,
	`label` text NOT NULL,
	`prefix` text NOT NULL,
	`hash` blob NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer,
	`last_used_at` text,
	`revoked_at` text,
	`revoked_by` integer,
	FOREIGN KEY (`site_id`) REFERENCES `sites`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`revoked_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action,
	CONSTRAINT "site_keys_label" CHECK(length("site_keys"."label") BETWEEN 1 AND 100),
	CONSTRAINT "site_keys_prefix" CHECK(length("site_keys"."prefix") = 12),
	CONSTRAINT "site_keys_hash_length" CHECK(length("site_keys"."hash") = 32),
	CONSTRAINT "site_keys_created_at" CHECK("site_keys"."created_at" GLOB '????-??-??T??:??:??.???Z'),
	CONSTRAINT "site_keys_last_used_at" CHECK("site_keys"."last_used_at" IS NULL OR "site_keys"."last_used_at" GLOB '????-??-??T??:??:??.???Z'),
	CONSTRAINT "site_keys_revoked_at" CHECK("site_keys"."revoked_at" IS NULL OR "site_keys"."revoked_at" GLOB '????-??-??T??:??:??.???Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `site_keys_hash` ON `site_keys` (`hash`);--> statement-breakpoint
CREATE INDEX `site_keys_site` ON `site_keys` (`site_id`);--> statement-breakpoint
CREATE TABLE `access_tokens` (
	`id` integer PRIMARY KEY NOT NULL,
	`person_id` integer NOT NULL,
	`label` text NOT NULL,
	`prefix` text NOT NULL,
	`hash` blob NOT NULL,
	`scope` text NOT NULL,
	`created_at` text NOT NULL,
	`expires_at` text NOT NULL,
	`last_used_at` text,
	`revoked_at` text,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "access_tokens_label" CHECK(octet_length("access_tokens"."label") BETWEEN 1 AND 400),
	CONSTRAINT "access_tokens_prefix" CHECK(octet_length("access_tokens"."prefix") BETWEEN 8 AND 16),
	CONSTRAINT "access_tokens_hash_length" CHECK(octet_length("access_tokens"."hash") = 32),
	CONSTRAINT "access_tokens_scope" CHECK(json_valid("access_tokens"."scope") AND octet_length("access_tokens"."scope") <= 4096),
	CONSTRAINT "access_tokens_created_at" CHECK(octet_length("access_tokens"."created_at") = 24 AND "access_tokens"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "access_tokens_expires_at" CHECK(octet_length("access_tokens"."expires_at") = 24 AND "access_tokens"."expires_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "access_tokens_last_used_at" CHECK(octet_length("access_tokens"."last_used_at") = 24 AND "access_tokens"."last_used_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "access_tokens_revoked_at" CHECK(octet_length("access_tokens"."revoked_at") = 24 AND "access_tokens"."revoked_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `access_tokens_hash` ON `access_tokens` (`hash`);--> statement-breakpoint
CREATE INDEX `access_tokens_of_person` ON `access_tokens` (`person_id`);--> statement-breakpoint
CREATE TABLE `recovery_codes` (
	`id` integer PRIMARY KEY NOT NULL,
	`person_id` integer NOT NULL,
	`hash` blob NOT NULL,
	`created_at` text NOT NULL,
	`used_at` text,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "recovery_codes_hash_length" CHECK(octet_length("recovery_codes"."hash") = 32),
	CONSTRAINT "recovery_codes_created_at" CHECK(octet_length("recovery_codes"."created_at") = 24 AND "recovery_codes"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "recovery_codes_used_at" CHECK(octet_length("recovery_codes"."used_at") = 24 AND "recovery_codes"."used_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `recovery_codes_hash` ON `recovery_codes` (`hash`);--> statement-breakpoint
CREATE INDEX `recovery_codes_of_person` ON `recovery_codes` (`person_id`);--> statement-breakpoint
CREATE TABLE `second_factors` (
	`id` integer PRIMARY KEY NOT NULL,
	`person_id` integer NOT NULL,
	`kind` text NOT NULL,
	`label` text NOT NULL,
	`sealed_secret` blob,
	`last_step` integer,
	`credential_id` blob,
	`public_key` blob,
	`counter` integer,
	`created_at` text NOT NULL,
	`confirmed_at` text,
	`last_used_at` text,
	`removed_at` text,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "second_factors_kind" CHECK("second_factors"."kind" IN ('totp', 'passkey')),
	CONSTRAINT "second_factors_label" CHECK(octet_length("second_factors"."label") BETWEEN 1 AND 400),
	CONSTRAINT "second_factors_of_kind" CHECK(("second_factors"."kind" = 'totp') = ("second_factors"."sealed_secret" IS NOT NULL) AND ("second_factors"."kind" = 'passkey') = ("second_factors"."credential_id" IS NOT NULL)
        AND ("second_factors"."kind" = 'passkey') = ("second_factors"."public_key" IS NOT NULL) AND ("second_factors"."kind" = 'passkey') = ("second_factors"."counter" IS NOT NULL)),
	CONSTRAINT "second_factors_last_step" CHECK("second_factors"."last_step" BETWEEN 0 AND 9007199254740991),
	CONSTRAINT "second_factors_counter" CHECK("second_factors"."counter" BETWEEN 0 AND 9007199254740991),
	CONSTRAINT "second_factors_created_at" CHECK(octet_length("second_factors"."created_at") = 24 AND "second_factors"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "second_factors_confirmed_at" CHECK(octet_length("second_factors"."confirmed_at") = 24 AND "second_factors"."confirmed_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "second_factors_last_used_at" CHECK(octet_length("second_factors"."last_used_at") = 24 AND "second_factors"."last_used_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "second_factors_removed_at" CHECK(octet_length("second_factors"."removed_at") = 24 AND "second_factors"."removed_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE INDEX `second_factors_of_person` ON `second_factors` (`person_id`);--> statement-breakpoint
CREATE UNIQUE INDEX `second_factors_credential` ON `second_factors` (`credential_id`) WHERE credential_id IS NOT NULL;--> statement-breakpoint
CREATE TABLE `ephemerides` (
	`id` integer PRIMARY KEY NOT NULL,
	`site_id` integer NOT NULL,
	`kind` text NOT NULL,
	`body` text NOT NULL,
	`sha256` text NOT NULL,
	`from_tai_s` integer NOT NULL,
	`from_ps` integer NOT NULL,
	`to_tai_s` integer NOT NULL,
	`to_ps` integer NOT NULL,
	`position_sigma_m` real NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer,
	FOREIGN KEY (`site_id`) REFERENCES `sites`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "ephemerides_kind" CHECK("ephemerides"."kind" IN ('oem', 'tle', 'legs')),
	CONSTRAINT "ephemerides_body" CHECK(octet_length("ephemerides"."body") BETWEEN 1 AND 67108864),
	CONSTRAINT "ephemerides_sha256" CHECK(octet_length("ephemerides"."sha256") = 64 AND length("ephemerides"."sha256") = 64 AND "ephemerides"."sha256" NOT GLOB '*[^0-9a-f]*'),
	CONSTRAINT "ephemerides_from" CHECK(("ephemerides"."from_tai_s" IS NULL) = ("ephemerides"."from_ps" IS NULL) AND "ephemerides"."from_tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "ephemerides"."from_ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "ephemerides_to" CHECK(("ephemerides"."to_tai_s" IS NULL) = ("ephemerides"."to_ps" IS NULL) AND "ephemerides"."to_tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "ephemerides"."to_ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "ephemerides_span" CHECK(("ephemerides"."from_tai_s", "ephemerides"."from_ps") <= ("ephemerides"."to_tai_s", "ephemerides"."to_ps")),
	CONSTRAINT "ephemerides_position_sigma_m" CHECK("ephemerides"."position_sigma_m" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "ephemerides_created_at" CHECK(octet_length("ephemerides"."created_at") = 24 AND "ephemerides"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE INDEX `ephemerides_of_site` ON `ephemerides` (`site_id`,`from_tai_s`,`from_ps`);--> statement-breakpoint
CREATE TABLE `networks` (
	`id` integer PRIMARY KEY NOT NULL,
	`code` text NOT NULL,
	`name` text NOT NULL,
	`origin_tai_s` integer NOT NULL,
	`origin_ps` integer NOT NULL,
	`needed_signatures` integer DEFAULT 2 NOT NULL,
	`needs_second_factor` integer DEFAULT false NOT NULL,
	`stale_above_sigmas` real DEFAULT 0.1 NOT NULL,
	`version` integer DEFAULT 1 NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer,
	`closed_at` text,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "networks_code" CHECK(octet_length("networks"."code") BETWEEN 1 AND 24 AND octet_length("networks"."code") = length("networks"."code") AND "networks"."code" NOT GLOB '*[^A-Za-z0-9_-]*'),
	CONSTRAINT "networks_name" CHECK(octet_length("networks"."name") BETWEEN 1 AND 200),
	CONSTRAINT "networks_origin" CHECK(("networks"."origin_tai_s" IS NULL) = ("networks"."origin_ps" IS NULL) AND "networks"."origin_tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "networks"."origin_ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "networks_needed_signatures" CHECK("networks"."needed_signatures" BETWEEN 1 AND 20),
	CONSTRAINT "networks_needs_second_factor" CHECK("networks"."needs_second_factor" IN (0, 1)),
	CONSTRAINT "networks_stale_above_sigmas" CHECK("networks"."stale_above_sigmas" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "networks_version" CHECK("networks"."version" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "networks_created_at" CHECK(octet_length("networks"."created_at") = 24 AND "networks"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "networks_closed_at" CHECK(octet_length("networks"."closed_at") = 24 AND "networks"."closed_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `networks_code` ON `networks` (`code`);--> statement-breakpoint
CREATE TABLE `runs` (
	`id` integer PRIMARY KEY NOT NULL,
	`network_id` integer NOT NULL,
	`code` text NOT NULL,
	`name` text NOT NULL,
	`from_tai_s` integer NOT NULL,
	`from_ps` integer NOT NULL,
	`to_tai_s` integer,
	`to_ps` integer,
	`version` integer DEFAULT 1 NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer,
	FOREIGN KEY (`network_id`) REFERENCES `networks`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "runs_code" CHECK(octet_length("runs"."code") BETWEEN 1 AND 24 AND octet_length("runs"."code") = length("runs"."code") AND "runs"."code" NOT GLOB '*[^A-Za-z0-9_-]*'),
	CONSTRAINT "runs_name" CHECK(octet_length("runs"."name") BETWEEN 0 AND 200),
	CONSTRAINT "runs_from" CHECK(("runs"."from_tai_s" IS NULL) = ("runs"."from_ps" IS NULL) AND "runs"."from_tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "runs"."from_ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "runs_to" CHECK(("runs"."to_tai_s" IS NULL) = ("runs"."to_ps" IS NULL) AND "runs"."to_tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "runs"."to_ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "runs_span" CHECK(("runs"."from_tai_s", "runs"."from_ps") <= ("runs"."to_tai_s", "runs"."to_ps")),
	CONSTRAINT "runs_version" CHECK("runs"."version" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "runs_created_at" CHECK(octet_length("runs"."created_at") = 24 AND "runs"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `runs_code` ON `runs` (`network_id`,`code`);--> statement-breakpoint
CREATE UNIQUE INDEX `runs_by_start` ON `runs` (`network_id`,`from_tai_s`,`from_ps`);--> statement-breakpoint
CREATE TABLE `site_versions` (
	`id` integer PRIMARY KEY NOT NULL,
	`site_id` integer NOT NULL,
	`number` integer NOT NULL,
	`from_tai_s` integer DEFAULT -9007199254740991 NOT NULL,
	`from_ps` integer DEFAULT 0 NOT NULL,
	`scale` text NOT NULL,
	`clock_id` integer,
	`exact_clock` integer NOT NULL,
	`position_kind` text NOT NULL,
	`latitude_deg` real,
	`longitude_deg` real,
	`height_m` real,
	`itrs_x_m` real,
	`itrs_y_m` real,
	`itrs_z_m` real,
	`ephemeris_id` integer,
	`position_sigma_m` real NOT NULL,
	`delay_ns` real NOT NULL,
	`delay_sigma_ns` real NOT NULL,
	`reading_sigma_ns` real,
	`origin` text NOT NULL,
	`note` text DEFAULT '' NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer,
	`superseded_at` text,
	`superseded_by` integer,
	FOREIGN KEY (`site_id`) REFERENCES `sites`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`clock_id`) REFERENCES `clocks`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`ephemeris_id`) REFERENCES `ephemerides`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`superseded_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "site_versions_number" CHECK("site_versions"."number" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "site_versions_from" CHECK(("site_versions"."from_tai_s" IS NULL) = ("site_versions"."from_ps" IS NULL) AND "site_versions"."from_tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "site_versions"."from_ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "site_versions_scale" CHECK("site_versions"."scale" IN ('UTC', 'TAI', 'GPS', 'TT', 'proper')),
	CONSTRAINT "site_versions_exact_clock" CHECK("site_versions"."exact_clock" IN (0, 1) AND ("site_versions"."clock_id" IS NULL) = "site_versions"."exact_clock"),
	CONSTRAINT "site_versions_position_kind" CHECK("site_versions"."position_kind" IN ('geodetic', 'itrs', 'platform')),
	CONSTRAINT "site_versions_latitude_deg" CHECK("site_versions"."latitude_deg" BETWEEN -90 AND 90),
	CONSTRAINT "site_versions_longitude_deg" CHECK("site_versions"."longitude_deg" BETWEEN -360 AND 360),
	CONSTRAINT "site_versions_height_m" CHECK("site_versions"."height_m" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "site_versions_itrs_m" CHECK("site_versions"."itrs_x_m" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308 AND "site_versions"."itrs_y_m" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308 AND "site_versions"."itrs_z_m" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "site_versions_position" CHECK(("site_versions"."position_kind" = 'platform') = ("site_versions"."ephemeris_id" IS NOT NULL)
        AND ("site_versions"."position_kind" <> 'platform') = ("site_versions"."itrs_x_m" IS NOT NULL AND "site_versions"."itrs_y_m" IS NOT NULL AND "site_versions"."itrs_z_m" IS NOT NULL)
        AND ("site_versions"."position_kind" = 'geodetic') = ("site_versions"."latitude_deg" IS NOT NULL AND "site_versions"."longitude_deg" IS NOT NULL AND "site_versions"."height_m" IS NOT NULL)),
	CONSTRAINT "site_versions_position_sigma_m" CHECK("site_versions"."position_sigma_m" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "site_versions_delay_ns" CHECK("site_versions"."delay_ns" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "site_versions_delay_sigma_ns" CHECK("site_versions"."delay_sigma_ns" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "site_versions_reading_sigma_ns" CHECK("site_versions"."reading_sigma_ns" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "site_versions_origin" CHECK("site_versions"."origin" IN ('survey', 'certificate', 'by-hand', 'fit', 'import')),
	CONSTRAINT "site_versions_note" CHECK(octet_length("site_versions"."note") BETWEEN 0 AND 2000),
	CONSTRAINT "site_versions_created_at" CHECK(octet_length("site_versions"."created_at") = 24 AND "site_versions"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "site_versions_superseded_at" CHECK(octet_length("site_versions"."superseded_at") = 24 AND "site_versions"."superseded_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `site_versions_number` ON `site_versions` (`site_id`,`number`);--> statement-breakpoint
CREATE UNIQUE INDEX `site_versions_in_force` ON `site_versions` (`site_id`,`from_tai_s`,`from_ps`) WHERE superseded_at IS NULL;--> statement-breakpoint
CREATE TABLE `sites` (
	`id` integer PRIMARY KEY NOT NULL,
	`network_id` integer NOT NULL,
	`code` text NOT NULL,
	`name` text NOT NULL,
	`silent_after_s` integer,
	`set_asides_per_hour` integer,
	`version` integer DEFAULT 1 NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer,
	`closed_at` text,
	FOREIGN KEY (`network_id`) REFERENCES `networks`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "sites_code" CHECK(octet_length("sites"."code") BETWEEN 1 AND 24 AND octet_length("sites"."code") = length("sites"."code") AND "sites"."code" NOT GLOB '*[^A-Za-z0-9_-]*'),
	CONSTRAINT "sites_name" CHECK(octet_length("sites"."name") BETWEEN 0 AND 200),
	CONSTRAINT "sites_silent_after_s" CHECK("sites"."silent_after_s" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "sites_set_asides_per_hour" CHECK("sites"."set_asides_per_hour" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "sites_version" CHECK("sites"."version" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "sites_created_at" CHECK(octet_length("sites"."created_at") = 24 AND "sites"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "sites_closed_at" CHECK(octet_length("sites"."closed_at") = 24 AND "sites"."closed_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `sites_code` ON `sites` (`network_id`,`code`);--> statement-breakpoint
CREATE UNIQUE INDEX `sites_of_network` ON `sites` (`id`,`network_id`);--> statement-breakpoint
CREATE TABLE `clock_fit_points` (
	`fit_id` integer NOT NULL,
	`trigger_id` integer NOT NULL,
	`emission` text NOT NULL,
	`expected_tai_s` integer NOT NULL,
	`expected_ps` integer NOT NULL,
	`reading_ns` real NOT NULL,
	`sigma_ns` real NOT NULL,
	`residual_ns` real NOT NULL,
	`is_outlier` integer NOT NULL,
	`is_overruled` integer NOT NULL,
	PRIMARY KEY(`fit_id`, `trigger_id`),
	FOREIGN KEY (`fit_id`) REFERENCES `clock_fits`(`id`) ON UPDATE no action ON DELETE cascade,
	FOREIGN KEY (`trigger_id`) REFERENCES `triggers`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "clock_fit_points_emission" CHECK(octet_length("clock_fit_points"."emission") BETWEEN 1 AND 4096 AND octet_length("clock_fit_points"."emission") = length("clock_fit_points"."emission") AND "clock_fit_points"."emission" NOT GLOB '*[^0-9]*' AND ("clock_fit_points"."emission" = '0' OR "clock_fit_points"."emission" NOT GLOB '0*')),
	CONSTRAINT "clock_fit_points_expected" CHECK(("clock_fit_points"."expected_tai_s" IS NULL) = ("clock_fit_points"."expected_ps" IS NULL) AND "clock_fit_points"."expected_tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "clock_fit_points"."expected_ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "clock_fit_points_reading_ns" CHECK("clock_fit_points"."reading_ns" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "clock_fit_points_sigma_ns" CHECK("clock_fit_points"."sigma_ns" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "clock_fit_points_residual_ns" CHECK("clock_fit_points"."residual_ns" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "clock_fit_points_is_outlier" CHECK("clock_fit_points"."is_outlier" IN (0, 1)),
	CONSTRAINT "clock_fit_points_is_overruled" CHECK("clock_fit_points"."is_overruled" IN (0, 1))
) STRICT, WITHOUT ROWID;
--> statement-breakpoint
CREATE TABLE `clock_fits` (
	`id` integer PRIMARY KEY NOT NULL,
	`clock_id` integer NOT NULL,
	`site_id` integer NOT NULL,
	`emitter_version_id` integer NOT NULL,
	`from_tai_s` integer NOT NULL,
	`from_ps` integer NOT NULL,
	`to_tai_s` integer NOT NULL,
	`to_ps` integer NOT NULL,
	`at_tai_s` integer NOT NULL,
	`at_ps` integer NOT NULL,
	`offset_ns` real NOT NULL,
	`offset_sigma_ns` real NOT NULL,
	`rate_ns_per_day` real NOT NULL,
	`rate_sigma_ns_per_day` real NOT NULL,
	`covariance_ns2_per_day` real NOT NULL,
	`chi_square` real NOT NULL,
	`points` integer NOT NULL,
	`outliers` integer NOT NULL,
	`findings` text NOT NULL,
	`job_id` integer,
	`created_at` text NOT NULL,
	`created_by` integer,
	FOREIGN KEY (`clock_id`) REFERENCES `clocks`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`site_id`) REFERENCES `sites`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`emitter_version_id`) REFERENCES `emitter_versions`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`job_id`) REFERENCES `jobs`(`id`) ON UPDATE no action ON DELETE set null,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "clock_fits_from" CHECK(("clock_fits"."from_tai_s" IS NULL) = ("clock_fits"."from_ps" IS NULL) AND "clock_fits"."from_tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "clock_fits"."from_ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "clock_fits_to" CHECK(("clock_fits"."to_tai_s" IS NULL) = ("clock_fits"."to_ps" IS NULL) AND "clock_fits"."to_tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "clock_fits"."to_ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "clock_fits_span" CHECK(("clock_fits"."from_tai_s", "clock_fits"."from_ps") <= ("clock_fits"."to_tai_s", "clock_fits"."to_ps")),
	CONSTRAINT "clock_fits_at" CHECK(("clock_fits"."at_tai_s" IS NULL) = ("clock_fits"."at_ps" IS NULL) AND "clock_fits"."at_tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "clock_fits"."at_ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "clock_fits_offset_ns" CHECK("clock_fits"."offset_ns" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "clock_fits_offset_sigma_ns" CHECK("clock_fits"."offset_sigma_ns" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "clock_fits_rate_ns_per_day" CHECK("clock_fits"."rate_ns_per_day" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "clock_fits_rate_sigma_ns_per_day" CHECK("clock_fits"."rate_sigma_ns_per_day" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "clock_fits_covariance_ns2_per_day" CHECK("clock_fits"."covariance_ns2_per_day" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "clock_fits_chi_square" CHECK("clock_fits"."chi_square" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "clock_fits_points" CHECK("clock_fits"."points" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "clock_fits_outliers" CHECK("clock_fits"."outliers" BETWEEN 0 AND "clock_fits"."points"),
	CONSTRAINT "clock_fits_findings" CHECK(json_valid("clock_fits"."findings") AND octet_length("clock_fits"."findings") <= 1048576),
	CONSTRAINT "clock_fits_created_at" CHECK(octet_length("clock_fits"."created_at") = 24 AND "clock_fits"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE INDEX `clock_fits_of_clock` ON `clock_fits` (`clock_id`,`id`);--> statement-breakpoint
CREATE TABLE `clock_segments` (
	`id` integer PRIMARY KEY NOT NULL,
	`clock_id` integer NOT NULL,
	`segment` integer NOT NULL,
	`number` integer NOT NULL,
	`from_tai_s` integer NOT NULL,
	`from_ps` integer NOT NULL,
	`at_tai_s` integer NOT NULL,
	`at_ps` integer NOT NULL,
	`offset_ns` real NOT NULL,
	`offset_sigma_ns` real NOT NULL,
	`rate_ns_per_day` real NOT NULL,
	`rate_sigma_ns_per_day` real NOT NULL,
	`covariance_ns2_per_day` real NOT NULL,
	`reference_id` integer,
	`origin` text NOT NULL,
	`fit_id` integer,
	`note` text DEFAULT '' NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer,
	`superseded_at` text,
	`superseded_by` integer,
	FOREIGN KEY (`clock_id`) REFERENCES `clocks`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`reference_id`) REFERENCES `time_references`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`fit_id`) REFERENCES `clock_fits`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`superseded_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "clock_segments_segment" CHECK("clock_segments"."segment" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "clock_segments_number" CHECK("clock_segments"."number" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "clock_segments_from" CHECK(("clock_segments"."from_tai_s" IS NULL) = ("clock_segments"."from_ps" IS NULL) AND "clock_segments"."from_tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "clock_segments"."from_ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "clock_segments_at" CHECK(("clock_segments"."at_tai_s" IS NULL) = ("clock_segments"."at_ps" IS NULL) AND "clock_segments"."at_tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "clock_segments"."at_ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "clock_segments_offset_ns" CHECK("clock_segments"."offset_ns" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "clock_segments_offset_sigma_ns" CHECK("clock_segments"."offset_sigma_ns" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "clock_segments_rate_ns_per_day" CHECK("clock_segments"."rate_ns_per_day" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "clock_segments_rate_sigma_ns_per_day" CHECK("clock_segments"."rate_sigma_ns_per_day" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "clock_segments_covariance_ns2_per_day" CHECK(abs("clock_segments"."covariance_ns2_per_day") <= "clock_segments"."offset_sigma_ns" * "clock_segments"."rate_sigma_ns_per_day" * 1.000000001),
	CONSTRAINT "clock_segments_origin" CHECK("clock_segments"."origin" IN ('certificate', 'by-hand', 'fit', 'import')),
	CONSTRAINT "clock_segments_fit" CHECK(("clock_segments"."origin" = 'fit') = ("clock_segments"."fit_id" IS NOT NULL)),
	CONSTRAINT "clock_segments_note" CHECK(octet_length("clock_segments"."note") BETWEEN 0 AND 2000),
	CONSTRAINT "clock_segments_created_at" CHECK(octet_length("clock_segments"."created_at") = 24 AND "clock_segments"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "clock_segments_superseded_at" CHECK(octet_length("clock_segments"."superseded_at") = 24 AND "clock_segments"."superseded_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `clock_segments_number` ON `clock_segments` (`clock_id`,`segment`,`number`);--> statement-breakpoint
CREATE UNIQUE INDEX `clock_segments_in_force` ON `clock_segments` (`clock_id`,`from_tai_s`,`from_ps`) WHERE superseded_at IS NULL;--> statement-breakpoint
CREATE TABLE `clocks` (
	`id` integer PRIMARY KEY NOT NULL,
	`network_id` integer NOT NULL,
	`code` text NOT NULL,
	`name` text NOT NULL,
	`version` integer DEFAULT 1 NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer,
	FOREIGN KEY (`network_id`) REFERENCES `networks`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "clocks_code" CHECK(octet_length("clocks"."code") BETWEEN 1 AND 24 AND octet_length("clocks"."code") = length("clocks"."code") AND "clocks"."code" NOT GLOB '*[^A-Za-z0-9_-]*' AND "clocks"."code" <> 'exact'),
	CONSTRAINT "clocks_name" CHECK(octet_length("clocks"."name") BETWEEN 0 AND 200),
	CONSTRAINT "clocks_version" CHECK("clocks"."version" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "clocks_created_at" CHECK(octet_length("clocks"."created_at") = 24 AND "clocks"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `clocks_code` ON `clocks` (`network_id`,`code`);--> statement-breakpoint
CREATE TABLE `emitter_versions` (
	`id` integer PRIMARY KEY NOT NULL,
	`emitter_id` integer NOT NULL,
	`number` integer NOT NULL,
	`itrs_x_m` real NOT NULL,
	`itrs_y_m` real NOT NULL,
	`itrs_z_m` real NOT NULL,
	`position_sigma_m` real NOT NULL,
	`scale` text NOT NULL,
	`schedule` text NOT NULL,
	`reference_id` integer NOT NULL,
	`tolerance_ns` real NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer,
	`superseded_at` text,
	`superseded_by` integer,
	FOREIGN KEY (`emitter_id`) REFERENCES `emitters`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`reference_id`) REFERENCES `time_references`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`superseded_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "emitter_versions_number" CHECK("emitter_versions"."number" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "emitter_versions_itrs_m" CHECK("emitter_versions"."itrs_x_m" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308 AND "emitter_versions"."itrs_y_m" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308 AND "emitter_versions"."itrs_z_m" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "emitter_versions_position_sigma_m" CHECK("emitter_versions"."position_sigma_m" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "emitter_versions_scale" CHECK("emitter_versions"."scale" IN ('UTC', 'TAI', 'GPS', 'TT', 'proper') AND "emitter_versions"."scale" <> 'proper'),
	CONSTRAINT "emitter_versions_schedule" CHECK(json_valid("emitter_versions"."schedule") AND octet_length("emitter_versions"."schedule") <= 4194304),
	CONSTRAINT "emitter_versions_tolerance_ns" CHECK("emitter_versions"."tolerance_ns" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "emitter_versions_created_at" CHECK(octet_length("emitter_versions"."created_at") = 24 AND "emitter_versions"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "emitter_versions_superseded_at" CHECK(octet_length("emitter_versions"."superseded_at") = 24 AND "emitter_versions"."superseded_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `emitter_versions_number` ON `emitter_versions` (`emitter_id`,`number`);--> statement-breakpoint
CREATE UNIQUE INDEX `emitter_versions_in_force` ON `emitter_versions` (`emitter_id`) WHERE superseded_at IS NULL;--> statement-breakpoint
CREATE TABLE `emitters` (
	`id` integer PRIMARY KEY NOT NULL,
	`network_id` integer NOT NULL,
	`code` text NOT NULL,
	`name` text NOT NULL,
	`version` integer DEFAULT 1 NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer,
	`closed_at` text,
	FOREIGN KEY (`network_id`) REFERENCES `networks`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "emitters_code" CHECK(octet_length("emitters"."code") BETWEEN 1 AND 24 AND octet_length("emitters"."code") = length("emitters"."code") AND "emitters"."code" NOT GLOB '*[^A-Za-z0-9_-]*'),
	CONSTRAINT "emitters_name" CHECK(octet_length("emitters"."name") BETWEEN 0 AND 200),
	CONSTRAINT "emitters_version" CHECK("emitters"."version" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "emitters_created_at" CHECK(octet_length("emitters"."created_at") = 24 AND "emitters"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "emitters_closed_at" CHECK(octet_length("emitters"."closed_at") = 24 AND "emitters"."closed_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `emitters_code` ON `emitters` (`network_id`,`code`);--> statement-breakpoint
CREATE TABLE `time_reference_versions` (
	`id` integer PRIMARY KEY NOT NULL,
	`reference_id` integer NOT NULL,
	`number` integer NOT NULL,
	`sigma_ns` real NOT NULL,
	`note` text DEFAULT '' NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer,
	`superseded_at` text,
	`superseded_by` integer,
	FOREIGN KEY (`reference_id`) REFERENCES `time_references`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`superseded_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "time_reference_versions_number" CHECK("time_reference_versions"."number" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "time_reference_versions_sigma_ns" CHECK("time_reference_versions"."sigma_ns" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "time_reference_versions_note" CHECK(octet_length("time_reference_versions"."note") BETWEEN 0 AND 2000),
	CONSTRAINT "time_reference_versions_created_at" CHECK(octet_length("time_reference_versions"."created_at") = 24 AND "time_reference_versions"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "time_reference_versions_superseded_at" CHECK(octet_length("time_reference_versions"."superseded_at") = 24 AND "time_reference_versions"."superseded_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `time_reference_versions_number` ON `time_reference_versions` (`reference_id`,`number`);--> statement-breakpoint
CREATE UNIQUE INDEX `time_reference_versions_in_force` ON `time_reference_versions` (`reference_id`) WHERE superseded_at IS NULL;--> statement-breakpoint
CREATE TABLE `time_references` (
	`id` integer PRIMARY KEY NOT NULL,
	`network_id` integer NOT NULL,
	`code` text NOT NULL,
	`name` text NOT NULL,
	`version` integer DEFAULT 1 NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer,
	FOREIGN KEY (`network_id`) REFERENCES `networks`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "time_references_code" CHECK(octet_length("time_references"."code") BETWEEN 1 AND 24 AND octet_length("time_references"."code") = length("time_references"."code") AND "time_references"."code" NOT GLOB '*[^A-Za-z0-9_-]*'),
	CONSTRAINT "time_references_name" CHECK(octet_length("time_references"."name") BETWEEN 0 AND 200),
	CONSTRAINT "time_references_version" CHECK("time_references"."version" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "time_references_created_at" CHECK(octet_length("time_references"."created_at") = 24 AND "time_references"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `time_references_code` ON `time_references` (`network_id`,`code`);--> statement-breakpoint
CREATE TABLE `leap_second_tables` (
	`id` integer PRIMARY KEY NOT NULL,
	`body` text NOT NULL,
	`sha1` text NOT NULL,
	`updated_tai_s` integer NOT NULL,
	`expires_tai_s` integer NOT NULL,
	`is_in_force` integer NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "leap_second_tables_body" CHECK(octet_length("leap_second_tables"."body") BETWEEN 1 AND 500000),
	CONSTRAINT "leap_second_tables_sha1" CHECK(octet_length("leap_second_tables"."sha1") = 40 AND length("leap_second_tables"."sha1") = 40 AND "leap_second_tables"."sha1" NOT GLOB '*[^0-9a-f]*'),
	CONSTRAINT "leap_second_tables_updated_tai_s" CHECK("leap_second_tables"."updated_tai_s" BETWEEN 0 AND 9007199254740991),
	CONSTRAINT "leap_second_tables_expires_tai_s" CHECK("leap_second_tables"."expires_tai_s" BETWEEN 0 AND 9007199254740991),
	CONSTRAINT "leap_second_tables_is_in_force" CHECK("leap_second_tables"."is_in_force" IN (0, 1)),
	CONSTRAINT "leap_second_tables_created_at" CHECK(octet_length("leap_second_tables"."created_at") = 24 AND "leap_second_tables"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `leap_second_tables_sha1` ON `leap_second_tables` (`sha1`);--> statement-breakpoint
CREATE UNIQUE INDEX `leap_second_tables_in_force` ON `leap_second_tables` (`is_in_force`) WHERE is_in_force = 1;--> statement-breakpoint
CREATE TABLE `orientation_tables` (
	`id` integer PRIMARY KEY NOT NULL,
	`body` text NOT NULL,
	`sha256` text NOT NULL,
	`first_mjd` integer NOT NULL,
	`last_mjd` integer NOT NULL,
	`predicted_from_mjd` integer,
	`is_in_force` integer NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "orientation_tables_body" CHECK(octet_length("orientation_tables"."body") BETWEEN 1 AND 16777216),
	CONSTRAINT "orientation_tables_sha256" CHECK(octet_length("orientation_tables"."sha256") = 64 AND length("orientation_tables"."sha256") = 64 AND "orientation_tables"."sha256" NOT GLOB '*[^0-9a-f]*'),
	CONSTRAINT "orientation_tables_first_mjd" CHECK("orientation_tables"."first_mjd" BETWEEN 0 AND 9007199254740991),
	CONSTRAINT "orientation_tables_last_mjd" CHECK("orientation_tables"."last_mjd" BETWEEN "orientation_tables"."first_mjd" AND 200000),
	CONSTRAINT "orientation_tables_predicted_from_mjd" CHECK("orientation_tables"."predicted_from_mjd" BETWEEN "orientation_tables"."first_mjd" AND "orientation_tables"."last_mjd"),
	CONSTRAINT "orientation_tables_is_in_force" CHECK("orientation_tables"."is_in_force" IN (0, 1)),
	CONSTRAINT "orientation_tables_created_at" CHECK(octet_length("orientation_tables"."created_at") = 24 AND "orientation_tables"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `orientation_tables_sha256` ON `orientation_tables` (`sha256`);--> statement-breakpoint
CREATE UNIQUE INDEX `orientation_tables_in_force` ON `orientation_tables` (`is_in_force`) WHERE is_in_force = 1;--> statement-breakpoint
CREATE TABLE `frame_versions` (
	`id` integer PRIMARY KEY NOT NULL,
	`frame_id` integer NOT NULL,
	`number` integer NOT NULL,
	`parent_id` integer,
	`kind` text NOT NULL,
	`at` text NOT NULL,
	`definition` text NOT NULL,
	`from_site_id` integer,
	`to_site_id` integer,
	`created_at` text NOT NULL,
	`created_by` integer,
	`superseded_at` text,
	`superseded_by` integer,
	FOREIGN KEY (`frame_id`) REFERENCES `frames`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`parent_id`) REFERENCES `frames`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`from_site_id`) REFERENCES `sites`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`to_site_id`) REFERENCES `sites`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`superseded_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "frame_versions_number" CHECK("frame_versions"."number" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "frame_versions_parent" CHECK("frame_versions"."parent_id" IS NULL OR ("frame_versions"."parent_id" <> "frame_versions"."frame_id" AND "frame_versions"."kind" NOT IN ('barycentric', 'toward-baseline'))),
	CONSTRAINT "frame_versions_kind" CHECK("frame_versions"."kind" IN ('barycentric', 'velocity', 'toward-baseline', 'toward-horizon', 'comoving', 'opposite')),
	CONSTRAINT "frame_versions_at" CHECK("frame_versions"."at" IN ('event', 'origin')),
	CONSTRAINT "frame_versions_definition" CHECK(json_valid("frame_versions"."definition") AND octet_length("frame_versions"."definition") <= 16384),
	CONSTRAINT "frame_versions_sites" CHECK(("frame_versions"."kind" IN ('toward-baseline', 'toward-horizon', 'comoving')) = ("frame_versions"."from_site_id" IS NOT NULL)
        AND ("frame_versions"."kind" = 'toward-baseline') = ("frame_versions"."to_site_id" IS NOT NULL)
        AND ("frame_versions"."from_site_id" IS NULL OR "frame_versions"."from_site_id" IS NOT "frame_versions"."to_site_id")),
	CONSTRAINT "frame_versions_created_at" CHECK(octet_length("frame_versions"."created_at") = 24 AND "frame_versions"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "frame_versions_superseded_at" CHECK(octet_length("frame_versions"."superseded_at") = 24 AND "frame_versions"."superseded_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `frame_versions_number` ON `frame_versions` (`frame_id`,`number`);--> statement-breakpoint
CREATE UNIQUE INDEX `frame_versions_in_force` ON `frame_versions` (`frame_id`) WHERE superseded_at IS NULL;--> statement-breakpoint
CREATE TABLE `frames` (
	`id` integer PRIMARY KEY NOT NULL,
	`network_id` integer NOT NULL,
	`code` text NOT NULL,
	`name` text NOT NULL,
	`pinned` integer,
	`version` integer DEFAULT 1 NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer,
	`closed_at` text,
	FOREIGN KEY (`network_id`) REFERENCES `networks`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "frames_code" CHECK(octet_length("frames"."code") BETWEEN 1 AND 24 AND octet_length("frames"."code") = length("frames"."code") AND "frames"."code" NOT GLOB '*[^A-Za-z0-9_-]*' AND "frames"."code" <> 'geocentric'),
	CONSTRAINT "frames_name" CHECK(octet_length("frames"."name") BETWEEN 0 AND 200),
	CONSTRAINT "frames_pinned" CHECK("frames"."pinned" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "frames_version" CHECK("frames"."version" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "frames_created_at" CHECK(octet_length("frames"."created_at") = 24 AND "frames"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "frames_closed_at" CHECK(octet_length("frames"."closed_at") = 24 AND "frames"."closed_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `frames_code` ON `frames` (`network_id`,`code`);--> statement-breakpoint
CREATE TABLE `stored_files` (
	`sha256` text PRIMARY KEY NOT NULL,
	`bytes` integer NOT NULL,
	`media_type` text NOT NULL,
	`created_at` text NOT NULL,
	CONSTRAINT "stored_files_sha256" CHECK(octet_length("stored_files"."sha256") = 64 AND length("stored_files"."sha256") = 64 AND "stored_files"."sha256" NOT GLOB '*[^0-9a-f]*'),
	CONSTRAINT "stored_files_bytes" CHECK("stored_files"."bytes" BETWEEN 0 AND 9007199254740991),
	CONSTRAINT "stored_files_media_type" CHECK(octet_length("stored_files"."media_type") BETWEEN 1 AND 100),
	CONSTRAINT "stored_files_created_at" CHECK(octet_length("stored_files"."created_at") = 24 AND "stored_files"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE TABLE `jobs` (
	`id` integer PRIMARY KEY NOT NULL,
	`network_id` integer,
	`kind` text NOT NULL,
	`body` text NOT NULL,
	`only_one` text,
	`state` text NOT NULL,
	`priority` integer DEFAULT 0 NOT NULL,
	`run_after_ms` integer NOT NULL,
	`attempts` integer DEFAULT 0 NOT NULL,
	`lease_holder` text,
	`lease_until_ms` integer,
	`progress_done` integer DEFAULT 0 NOT NULL,
	`progress_of` integer,
	`progress_text` text DEFAULT '' NOT NULL,
	`checkpoint` text,
	`cancel_requested` integer DEFAULT false NOT NULL,
	`result` text,
	`created_at_ms` integer NOT NULL,
	`created_by` integer,
	`started_at_ms` integer,
	`ended_at_ms` integer,
	FOREIGN KEY (`network_id`) REFERENCES `networks`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "jobs_kind" CHECK(octet_length("jobs"."kind") BETWEEN 1 AND 64),
	CONSTRAINT "jobs_body" CHECK(json_valid("jobs"."body") AND octet_length("jobs"."body") <= 1048576),
	CONSTRAINT "jobs_only_one" CHECK(octet_length("jobs"."only_one") BETWEEN 1 AND 200),
	CONSTRAINT "jobs_state" CHECK("jobs"."state" IN ('waiting', 'running', 'done', 'failed', 'cancelled')),
	CONSTRAINT "jobs_priority" CHECK("jobs"."priority" BETWEEN -1000 AND 1000),
	CONSTRAINT "jobs_run_after_ms" CHECK("jobs"."run_after_ms" BETWEEN 0 AND 253402300799999),
	CONSTRAINT "jobs_attempts" CHECK("jobs"."attempts" BETWEEN 0 AND 9007199254740991),
	CONSTRAINT "jobs_lease" CHECK(("jobs"."lease_holder" IS NULL) = ("jobs"."lease_until_ms" IS NULL) AND ("jobs"."state" = 'running') = ("jobs"."lease_holder" IS NOT NULL)),
	CONSTRAINT "jobs_lease_holder" CHECK(octet_length("jobs"."lease_holder") BETWEEN 1 AND 200),
	CONSTRAINT "jobs_lease_until_ms" CHECK("jobs"."lease_until_ms" BETWEEN 0 AND 253402300799999),
	CONSTRAINT "jobs_progress_done" CHECK("jobs"."progress_done" BETWEEN 0 AND 9007199254740991),
	CONSTRAINT "jobs_progress_of" CHECK("jobs"."progress_of" BETWEEN 0 AND 9007199254740991),
	CONSTRAINT "jobs_progress_text" CHECK(octet_length("jobs"."progress_text") BETWEEN 0 AND 500),
	CONSTRAINT "jobs_checkpoint" CHECK(json_valid("jobs"."checkpoint") AND octet_length("jobs"."checkpoint") <= 16777216),
	CONSTRAINT "jobs_cancel_requested" CHECK("jobs"."cancel_requested" IN (0, 1)),
	CONSTRAINT "jobs_result" CHECK(json_valid("jobs"."result") AND octet_length("jobs"."result") <= 16777216),
	CONSTRAINT "jobs_created_at_ms" CHECK("jobs"."created_at_ms" BETWEEN 0 AND 253402300799999),
	CONSTRAINT "jobs_started_at_ms" CHECK("jobs"."started_at_ms" BETWEEN 0 AND 253402300799999),
	CONSTRAINT "jobs_ended_at_ms" CHECK("jobs"."ended_at_ms" BETWEEN 0 AND 253402300799999),
	CONSTRAINT "jobs_ended" CHECK(("jobs"."state" IN ('done', 'failed', 'cancelled')) = ("jobs"."ended_at_ms" IS NOT NULL))
) STRICT;
--> statement-breakpoint
CREATE INDEX `jobs_waiting` ON `jobs` (`priority`,`id`) WHERE state = 'waiting';--> statement-breakpoint
CREATE INDEX `jobs_leases` ON `jobs` (`lease_until_ms`) WHERE state = 'running';--> statement-breakpoint
CREATE INDEX `jobs_of_network` ON `jobs` (`network_id`,`id`);--> statement-breakpoint
CREATE UNIQUE INDEX `jobs_only_one` ON `jobs` (`only_one`) WHERE state IN ('waiting', 'running');--> statement-breakpoint
CREATE TABLE `column_mappings` (
	`id` integer PRIMARY KEY NOT NULL,
	`network_id` integer NOT NULL,
	`name` text NOT NULL,
	`body` text NOT NULL,
	`version` integer DEFAULT 1 NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer,
	FOREIGN KEY (`network_id`) REFERENCES `networks`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "column_mappings_name" CHECK(octet_length("column_mappings"."name") BETWEEN 1 AND 200),
	CONSTRAINT "column_mappings_body" CHECK(json_valid("column_mappings"."body") AND octet_length("column_mappings"."body") <= 65536),
	CONSTRAINT "column_mappings_version" CHECK("column_mappings"."version" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "column_mappings_created_at" CHECK(octet_length("column_mappings"."created_at") = 24 AND "column_mappings"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `column_mappings_name` ON `column_mappings` (`network_id`,`name`);--> statement-breakpoint
CREATE TABLE `held_ranges` (
	`site_id` integer NOT NULL,
	`series` text NOT NULL,
	`first_digits` integer NOT NULL,
	`first` text NOT NULL,
	`last` text NOT NULL,
	`since_ms` integer NOT NULL,
	PRIMARY KEY(`site_id`, `series`, `first_digits`, `first`),
	FOREIGN KEY (`site_id`,`series`) REFERENCES `series`(`site_id`,`series`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "held_ranges_first" CHECK(octet_length("held_ranges"."first") BETWEEN 1 AND 4096 AND octet_length("held_ranges"."first") = length("held_ranges"."first") AND "held_ranges"."first" NOT GLOB '*[^0-9]*' AND ("held_ranges"."first" = '0' OR "held_ranges"."first" NOT GLOB '0*')),
	CONSTRAINT "held_ranges_last" CHECK(octet_length("held_ranges"."last") BETWEEN 1 AND 4096 AND octet_length("held_ranges"."last") = length("held_ranges"."last") AND "held_ranges"."last" NOT GLOB '*[^0-9]*' AND ("held_ranges"."last" = '0' OR "held_ranges"."last" NOT GLOB '0*')),
	CONSTRAINT "held_ranges_first_digits" CHECK("held_ranges"."first_digits" = length("held_ranges"."first")),
	CONSTRAINT "held_ranges_order" CHECK((length("held_ranges"."first"), "held_ranges"."first") <= (length("held_ranges"."last"), "held_ranges"."last")),
	CONSTRAINT "held_ranges_since_ms" CHECK("held_ranges"."since_ms" BETWEEN 0 AND 253402300799999)
) STRICT, WITHOUT ROWID;
--> statement-breakpoint
CREATE TABLE `intakes` (
	`id` integer PRIMARY KEY NOT NULL,
	`network_id` integer NOT NULL,
	`site_id` integer,
	`file_sha256` text NOT NULL,
	`file_name` text NOT NULL,
	`holds` text NOT NULL,
	`state` text NOT NULL,
	`mapping` text,
	`findings` text,
	`result` text,
	`job_id` integer,
	`version` integer DEFAULT 1 NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer,
	`imported_at` text,
	`withdrawn_at` text,
	`withdrawn_by` integer,
	FOREIGN KEY (`network_id`) REFERENCES `networks`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`file_sha256`) REFERENCES `stored_files`(`sha256`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`job_id`) REFERENCES `jobs`(`id`) ON UPDATE no action ON DELETE set null,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`withdrawn_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`site_id`,`network_id`) REFERENCES `sites`(`id`,`network_id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "intakes_file_name" CHECK(octet_length("intakes"."file_name") BETWEEN 1 AND 255),
	CONSTRAINT "intakes_holds" CHECK("intakes"."holds" IN ('triggers', 'live-spans')),
	CONSTRAINT "intakes_state" CHECK("intakes"."state" IN ('uploaded', 'mapped', 'checked', 'importing', 'imported', 'cancelled', 'failed', 'withdrawn')),
	CONSTRAINT "intakes_mapping" CHECK(json_valid("intakes"."mapping") AND octet_length("intakes"."mapping") <= 65536),
	CONSTRAINT "intakes_findings" CHECK(json_valid("intakes"."findings") AND octet_length("intakes"."findings") <= 4194304),
	CONSTRAINT "intakes_result" CHECK(json_valid("intakes"."result") AND octet_length("intakes"."result") <= 4194304),
	CONSTRAINT "intakes_version" CHECK("intakes"."version" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "intakes_created_at" CHECK(octet_length("intakes"."created_at") = 24 AND "intakes"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "intakes_imported_at" CHECK(octet_length("intakes"."imported_at") = 24 AND "intakes"."imported_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "intakes_withdrawn_at" CHECK(octet_length("intakes"."withdrawn_at") = 24 AND "intakes"."withdrawn_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "intakes_withdrawn" CHECK(("intakes"."state" = 'withdrawn') = ("intakes"."withdrawn_at" IS NOT NULL))
) STRICT;
--> statement-breakpoint
CREATE INDEX `intakes_of_network` ON `intakes` (`network_id`,`id`);--> statement-breakpoint
CREATE INDEX `intakes_of_site` ON `intakes` (`site_id`,`id`);--> statement-breakpoint
CREATE INDEX `intakes_of_file` ON `intakes` (`file_sha256`);--> statement-breakpoint
CREATE TABLE `live_spans` (
	`id` integer PRIMARY KEY NOT NULL,
	`site_id` integer NOT NULL,
	`from_tai_s` integer NOT NULL,
	`from_ps` integer NOT NULL,
	`to_tai_s` integer,
	`to_ps` integer,
	`intake_id` integer,
	`received_at_ms` integer NOT NULL,
	`withdrawn_at` text,
	FOREIGN KEY (`site_id`) REFERENCES `sites`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`intake_id`) REFERENCES `intakes`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "live_spans_from" CHECK(("live_spans"."from_tai_s" IS NULL) = ("live_spans"."from_ps" IS NULL) AND "live_spans"."from_tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "live_spans"."from_ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "live_spans_to" CHECK(("live_spans"."to_tai_s" IS NULL) = ("live_spans"."to_ps" IS NULL) AND "live_spans"."to_tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "live_spans"."to_ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "live_spans_span" CHECK(("live_spans"."from_tai_s", "live_spans"."from_ps") <= ("live_spans"."to_tai_s", "live_spans"."to_ps")),
	CONSTRAINT "live_spans_received_at_ms" CHECK("live_spans"."received_at_ms" BETWEEN 0 AND 253402300799999),
	CONSTRAINT "live_spans_withdrawn_at" CHECK(octet_length("live_spans"."withdrawn_at") = 24 AND "live_spans"."withdrawn_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `live_spans_of_site` ON `live_spans` (`site_id`,`from_tai_s`,`from_ps`) WHERE withdrawn_at IS NULL;--> statement-breakpoint
CREATE INDEX `live_spans_of_intake` ON `live_spans` (`intake_id`) WHERE intake_id IS NOT NULL;--> statement-breakpoint
CREATE TABLE `series` (
	`site_id` integer NOT NULL,
	`series` text NOT NULL,
	`received` integer DEFAULT 0 NOT NULL,
	`stored` integer DEFAULT 0 NOT NULL,
	`known` integer DEFAULT 0 NOT NULL,
	`set_aside` integer DEFAULT 0 NOT NULL,
	`withdrawn` integer DEFAULT 0 NOT NULL,
	`first` text,
	`contiguous` text,
	`first_received_at_ms` integer,
	`last_received_at_ms` integer,
	PRIMARY KEY(`site_id`, `series`),
	FOREIGN KEY (`site_id`) REFERENCES `sites`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "series_series" CHECK("series"."series" IN ('', '*') OR (octet_length("series"."series") BETWEEN 1 AND 24 AND octet_length("series"."series") = length("series"."series") AND "series"."series" NOT GLOB '*[^A-Za-z0-9_-]*')),
	CONSTRAINT "series_received" CHECK("series"."received" BETWEEN 0 AND 9007199254740991),
	CONSTRAINT "series_stored" CHECK("series"."stored" BETWEEN 0 AND 9007199254740991),
	CONSTRAINT "series_known" CHECK("series"."known" BETWEEN 0 AND 9007199254740991),
	CONSTRAINT "series_set_aside" CHECK("series"."set_aside" BETWEEN 0 AND 9007199254740991),
	CONSTRAINT "series_withdrawn" CHECK("series"."withdrawn" BETWEEN 0 AND 9007199254740991),
	CONSTRAINT "series_conserved" CHECK("series"."received" = "series"."stored" + "series"."known" + "series"."set_aside" + "series"."withdrawn"),
	CONSTRAINT "series_first" CHECK(octet_length("series"."first") BETWEEN 1 AND 4096 AND octet_length("series"."first") = length("series"."first") AND "series"."first" NOT GLOB '*[^0-9]*' AND ("series"."first" = '0' OR "series"."first" NOT GLOB '0*')),
	CONSTRAINT "series_contiguous" CHECK(octet_length("series"."contiguous") BETWEEN 1 AND 4096 AND octet_length("series"."contiguous") = length("series"."contiguous") AND "series"."contiguous" NOT GLOB '*[^0-9]*' AND ("series"."contiguous" = '0' OR "series"."contiguous" NOT GLOB '0*')),
	CONSTRAINT "series_numbers" CHECK(("series"."first" IS NULL) = ("series"."contiguous" IS NULL)),
	CONSTRAINT "series_first_received_at_ms" CHECK("series"."first_received_at_ms" BETWEEN 0 AND 253402300799999),
	CONSTRAINT "series_last_received_at_ms" CHECK("series"."last_received_at_ms" BETWEEN 0 AND 253402300799999)
) STRICT, WITHOUT ROWID;
--> statement-breakpoint
CREATE TABLE `set_asides` (
	`id` integer PRIMARY KEY NOT NULL,
	`network_id` integer NOT NULL,
	`site_id` integer,
	`series` text NOT NULL,
	`sequence` text,
	`trigger_id` integer,
	`reason` text NOT NULL,
	`detail` text NOT NULL,
	`verbatim` text NOT NULL,
	`content_hash` blob NOT NULL,
	`received_at_ms` integer NOT NULL,
	`intake_id` integer,
	`line` integer,
	`state` text NOT NULL,
	`retry_at_ms` integer,
	`decided_at` text,
	`decided_by` integer,
	`decision` text DEFAULT '' NOT NULL,
	`version` integer DEFAULT 1 NOT NULL,
	FOREIGN KEY (`network_id`) REFERENCES `networks`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`trigger_id`) REFERENCES `triggers`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`intake_id`) REFERENCES `intakes`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`decided_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`site_id`,`network_id`) REFERENCES `sites`(`id`,`network_id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "set_asides_series" CHECK("set_asides"."series" IN ('', '*') OR (octet_length("set_asides"."series") BETWEEN 1 AND 24 AND octet_length("set_asides"."series") = length("set_asides"."series") AND "set_asides"."series" NOT GLOB '*[^A-Za-z0-9_-]*')),
	CONSTRAINT "set_asides_sequence" CHECK(octet_length("set_asides"."sequence") BETWEEN 1 AND 4096 AND octet_length("set_asides"."sequence") = length("set_asides"."sequence") AND "set_asides"."sequence" NOT GLOB '*[^0-9]*' AND ("set_asides"."sequence" = '0' OR "set_asides"."sequence" NOT GLOB '0*')),
	CONSTRAINT "set_asides_reason" CHECK("set_asides"."reason" IN ('columns', 'site', 'sequence', 'series', 'kind', 'reading-empty', 'reading-form', 'date', 'time-of-day', 'no-leap-second', 'before-1972', 'sigma', 'amplitude', 'before-clock-record', 'outside-run', 'conflict', 'future', 'outside-ephemeris', 'ambiguous', 'unreadable', 'too-long')),
	CONSTRAINT "set_asides_detail" CHECK(octet_length("set_asides"."detail") BETWEEN 0 AND 1000),
	CONSTRAINT "set_asides_verbatim" CHECK(octet_length("set_asides"."verbatim") BETWEEN 0 AND 65536),
	CONSTRAINT "set_asides_content_hash" CHECK(octet_length("set_asides"."content_hash") = 32),
	CONSTRAINT "set_asides_received_at_ms" CHECK("set_asides"."received_at_ms" BETWEEN 0 AND 253402300799999),
	CONSTRAINT "set_asides_line" CHECK("set_asides"."line" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "set_asides_of_intake" CHECK(("set_asides"."line" IS NULL) = ("set_asides"."intake_id" IS NULL)),
	CONSTRAINT "set_asides_state" CHECK("set_asides"."state" IN ('open', 'accepted', 'dismissed')),
	CONSTRAINT "set_asides_retry_at_ms" CHECK("set_asides"."retry_at_ms" BETWEEN 0 AND 253402300799999),
	CONSTRAINT "set_asides_decided_at" CHECK(octet_length("set_asides"."decided_at") = 24 AND "set_asides"."decided_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "set_asides_decided" CHECK(("set_asides"."state" = 'open') = ("set_asides"."decided_at" IS NULL)),
	CONSTRAINT "set_asides_dismissed" CHECK("set_asides"."state" <> 'dismissed' OR ("set_asides"."decided_by" IS NOT NULL AND "set_asides"."decision" <> '')),
	CONSTRAINT "set_asides_decision" CHECK(octet_length("set_asides"."decision") BETWEEN 0 AND 2000),
	CONSTRAINT "set_asides_version" CHECK("set_asides"."version" BETWEEN 1 AND 9007199254740991)
) STRICT;
--> statement-breakpoint
CREATE INDEX `set_asides_open` ON `set_asides` (`network_id`,`id`) WHERE state = 'open';--> statement-breakpoint
CREATE INDEX `set_asides_open_by_reason` ON `set_asides` (`network_id`,`reason`,`id`) WHERE state = 'open';--> statement-breakpoint
CREATE INDEX `set_asides_of_site` ON `set_asides` (`site_id`,`received_at_ms`,`id`);--> statement-breakpoint
CREATE INDEX `set_asides_of_intake` ON `set_asides` (`intake_id`,`line`) WHERE intake_id IS NOT NULL;--> statement-breakpoint
CREATE UNIQUE INDEX `set_asides_streamed_once` ON `set_asides` (`site_id`,`content_hash`,`reason`) WHERE intake_id IS NULL;--> statement-breakpoint
CREATE INDEX `set_asides_of_trigger` ON `set_asides` (`trigger_id`) WHERE trigger_id IS NOT NULL;--> statement-breakpoint
CREATE INDEX `set_asides_to_retry` ON `set_asides` (`retry_at_ms`) WHERE state = 'open' AND retry_at_ms IS NOT NULL;--> statement-breakpoint
CREATE TABLE `site_connections` (
	`id` integer PRIMARY KEY NOT NULL,
	`site_id` integer NOT NULL,
	`key_id` integer,
	`from_ms` integer NOT NULL,
	`to_ms` integer,
	`ended` text DEFAULT '' NOT NULL,
	FOREIGN KEY (`site_id`) REFERENCES `sites`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`key_id`) REFERENCES `site_keys`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "site_connections_from_ms" CHECK("site_connections"."from_ms" BETWEEN 0 AND 253402300799999),
	CONSTRAINT "site_connections_to_ms" CHECK("site_connections"."to_ms" BETWEEN "site_connections"."from_ms" AND 253402300799999),
	CONSTRAINT "site_connections_ended" CHECK(octet_length("site_connections"."ended") BETWEEN 0 AND 200)
) STRICT;
--> statement-breakpoint
CREATE INDEX `site_connections_of_site` ON `site_connections` (`site_id`,`id`);--> statement-breakpoint
CREATE TABLE `site_streams` (
	`site_id` integer PRIMARY KEY NOT NULL,
	`complete_tai_s` integer,
	`complete_ps` integer,
	`complete_said_at_ms` integer,
	`last_received_at_ms` integer,
	`last_tai_s` integer,
	`last_ps` integer,
	`connected_at_ms` integer,
	`silence_told_at_ms` integer,
	`set_asides_told_at_ms` integer,
	FOREIGN KEY (`site_id`) REFERENCES `sites`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "site_streams_complete" CHECK(("site_streams"."complete_tai_s" IS NULL) = ("site_streams"."complete_ps" IS NULL) AND "site_streams"."complete_tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "site_streams"."complete_ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "site_streams_complete_said_at_ms" CHECK("site_streams"."complete_said_at_ms" BETWEEN 0 AND 253402300799999),
	CONSTRAINT "site_streams_last_received_at_ms" CHECK("site_streams"."last_received_at_ms" BETWEEN 0 AND 253402300799999),
	CONSTRAINT "site_streams_last" CHECK(("site_streams"."last_tai_s" IS NULL) = ("site_streams"."last_ps" IS NULL) AND "site_streams"."last_tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "site_streams"."last_ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "site_streams_connected_at_ms" CHECK("site_streams"."connected_at_ms" BETWEEN 0 AND 253402300799999),
	CONSTRAINT "site_streams_silence_told_at_ms" CHECK("site_streams"."silence_told_at_ms" BETWEEN 0 AND 253402300799999),
	CONSTRAINT "site_streams_set_asides_told_at_ms" CHECK("site_streams"."set_asides_told_at_ms" BETWEEN 0 AND 253402300799999)
) STRICT;
--> statement-breakpoint
CREATE TABLE `triggers` (
	`id` integer PRIMARY KEY NOT NULL,
	`site_id` integer NOT NULL,
	`series` text NOT NULL,
	`sequence` text NOT NULL,
	`variant` integer NOT NULL,
	`kind` text NOT NULL,
	`reading` text NOT NULL,
	`reading_form` text NOT NULL,
	`sigma` text NOT NULL,
	`amplitude` text NOT NULL,
	`extra` text,
	`content_hash` blob NOT NULL,
	`received_at_ms` integer NOT NULL,
	`intake_id` integer,
	`mended_from_id` integer,
	FOREIGN KEY (`site_id`) REFERENCES `sites`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`intake_id`) REFERENCES `intakes`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`mended_from_id`) REFERENCES `set_asides`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "triggers_series" CHECK("triggers"."series" = '' OR (octet_length("triggers"."series") BETWEEN 1 AND 24 AND octet_length("triggers"."series") = length("triggers"."series") AND "triggers"."series" NOT GLOB '*[^A-Za-z0-9_-]*')),
	CONSTRAINT "triggers_sequence" CHECK(octet_length("triggers"."sequence") BETWEEN 1 AND 4096 AND octet_length("triggers"."sequence") = length("triggers"."sequence") AND "triggers"."sequence" NOT GLOB '*[^0-9]*' AND ("triggers"."sequence" = '0' OR "triggers"."sequence" NOT GLOB '0*')),
	CONSTRAINT "triggers_variant" CHECK("triggers"."variant" BETWEEN 0 AND 9007199254740991),
	CONSTRAINT "triggers_kind" CHECK("triggers"."kind" IN ('trigger', 'reference', 'test')),
	CONSTRAINT "triggers_reading" CHECK(octet_length("triggers"."reading") BETWEEN 1 AND 200),
	CONSTRAINT "triggers_reading_form" CHECK("triggers"."reading_form" IN ('iso', 'tai-pair', 'gps-week', 'mjd', 'unix')),
	CONSTRAINT "triggers_sigma" CHECK(octet_length("triggers"."sigma") BETWEEN 0 AND 400),
	CONSTRAINT "triggers_amplitude" CHECK(octet_length("triggers"."amplitude") BETWEEN 0 AND 400),
	CONSTRAINT "triggers_extra" CHECK(octet_length("triggers"."extra") BETWEEN 2 AND 65536 AND json_type("triggers"."extra") = 'object'),
	CONSTRAINT "triggers_content_hash" CHECK(octet_length("triggers"."content_hash") = 32),
	CONSTRAINT "triggers_received_at_ms" CHECK("triggers"."received_at_ms" BETWEEN 0 AND 253402300799999)
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `triggers_identity` ON `triggers` (`site_id`,`series`,`sequence`,`variant`);--> statement-breakpoint
CREATE INDEX `triggers_of_intake` ON `triggers` (`intake_id`) WHERE intake_id IS NOT NULL;--> statement-breakpoint
CREATE TABLE `event_histograms` (
	`site_id` integer NOT NULL,
	`quantity` text NOT NULL,
	`sign` integer NOT NULL,
	`bin` integer NOT NULL,
	`events` integer NOT NULL,
	PRIMARY KEY(`site_id`, `quantity`, `sign`, `bin`),
	FOREIGN KEY (`site_id`) REFERENCES `sites`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "event_histograms_quantity" CHECK("event_histograms"."quantity" IN ('sigma_ns', 'amplitude')),
	CONSTRAINT "event_histograms_sign" CHECK("event_histograms"."sign" IN (-1, 0, 1) AND ("event_histograms"."sign" <> 0 OR "event_histograms"."bin" = 0)),
	CONSTRAINT "event_histograms_bin" CHECK("event_histograms"."bin" BETWEEN -4000 AND 4000),
	CONSTRAINT "event_histograms_events" CHECK("event_histograms"."events" BETWEEN 0 AND 9007199254740991)
) STRICT, WITHOUT ROWID;
--> statement-breakpoint
CREATE TABLE `event_rates` (
	`site_id` integer NOT NULL,
	`kind` text NOT NULL,
	`width_s` integer NOT NULL,
	`from_tai_s` integer NOT NULL,
	`events` integer NOT NULL,
	PRIMARY KEY(`site_id`, `kind`, `width_s`, `from_tai_s`),
	FOREIGN KEY (`site_id`) REFERENCES `sites`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "event_rates_kind" CHECK("event_rates"."kind" IN ('trigger', 'reference', 'test')),
	CONSTRAINT "event_rates_width_s" CHECK("event_rates"."width_s" IN (60, 3600, 86400)),
	CONSTRAINT "event_rates_from_tai_s" CHECK("event_rates"."from_tai_s" % "event_rates"."width_s" = 0),
	CONSTRAINT "event_rates_events" CHECK("event_rates"."events" BETWEEN 0 AND 9007199254740991)
) STRICT, WITHOUT ROWID;
--> statement-breakpoint
CREATE TABLE `event_versions` (
	`trigger_id` integer NOT NULL,
	`grounding_id` integer NOT NULL,
	`tai_s` integer NOT NULL,
	`ps` integer NOT NULL,
	`x_m` real NOT NULL,
	`y_m` real NOT NULL,
	`z_m` real NOT NULL,
	`reading_sigma_ns` real NOT NULL,
	`sigma_origin` text NOT NULL,
	`sigma_ns` real NOT NULL,
	`since_epoch_days` real NOT NULL,
	`amplitude` real,
	`version` integer NOT NULL,
	`change_number` integer NOT NULL,
	`row_hash` blob NOT NULL,
	`ended_change` integer NOT NULL,
	PRIMARY KEY(`trigger_id`, `version`),
	FOREIGN KEY (`trigger_id`) REFERENCES `triggers`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`grounding_id`) REFERENCES `groundings`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "event_versions_time" CHECK(("event_versions"."tai_s" IS NULL) = ("event_versions"."ps" IS NULL) AND "event_versions"."tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "event_versions"."ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "event_versions_place" CHECK("event_versions"."x_m" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308 AND "event_versions"."y_m" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308 AND "event_versions"."z_m" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "event_versions_reading_sigma_ns" CHECK("event_versions"."reading_sigma_ns" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "event_versions_sigma_origin" CHECK("event_versions"."sigma_origin" IN ('record', 'site', 'resolution')),
	CONSTRAINT "event_versions_sigma_ns" CHECK("event_versions"."sigma_ns" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "event_versions_since_epoch_days" CHECK("event_versions"."since_epoch_days" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "event_versions_amplitude" CHECK("event_versions"."amplitude" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "event_versions_version" CHECK("event_versions"."version" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "event_versions_change_number" CHECK("event_versions"."change_number" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "event_versions_row_hash" CHECK(octet_length("event_versions"."row_hash") = 32),
	CONSTRAINT "event_versions_ended_change" CHECK("event_versions"."ended_change" BETWEEN 1 AND 9007199254740991)
) STRICT, WITHOUT ROWID;
--> statement-breakpoint
CREATE TABLE `events` (
	`trigger_id` integer PRIMARY KEY NOT NULL,
	`network_id` integer NOT NULL,
	`site_id` integer NOT NULL,
	`kind` text NOT NULL,
	`grounding_id` integer NOT NULL,
	`tai_s` integer NOT NULL,
	`ps` integer NOT NULL,
	`x_m` real NOT NULL,
	`y_m` real NOT NULL,
	`z_m` real NOT NULL,
	`reading_sigma_ns` real NOT NULL,
	`sigma_origin` text NOT NULL,
	`sigma_ns` real NOT NULL,
	`since_epoch_days` real NOT NULL,
	`amplitude` real,
	`version` integer NOT NULL,
	`change_number` integer NOT NULL,
	`row_hash` blob NOT NULL,
	FOREIGN KEY (`trigger_id`) REFERENCES `triggers`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`network_id`) REFERENCES `networks`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`grounding_id`) REFERENCES `groundings`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`site_id`,`network_id`) REFERENCES `sites`(`id`,`network_id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "events_kind" CHECK("events"."kind" IN ('trigger', 'reference', 'test')),
	CONSTRAINT "events_time" CHECK(("events"."tai_s" IS NULL) = ("events"."ps" IS NULL) AND "events"."tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "events"."ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "events_place" CHECK("events"."x_m" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308 AND "events"."y_m" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308 AND "events"."z_m" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "events_reading_sigma_ns" CHECK("events"."reading_sigma_ns" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "events_sigma_origin" CHECK("events"."sigma_origin" IN ('record', 'site', 'resolution')),
	CONSTRAINT "events_sigma_ns" CHECK("events"."sigma_ns" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "events_since_epoch_days" CHECK("events"."since_epoch_days" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "events_amplitude" CHECK("events"."amplitude" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "events_version" CHECK("events"."version" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "events_change_number" CHECK("events"."change_number" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "events_row_hash" CHECK(octet_length("events"."row_hash") = 32)
) STRICT;
--> statement-breakpoint
CREATE INDEX `events_by_time` ON `events` (`network_id`,`tai_s`,`ps`,`trigger_id`);--> statement-breakpoint
CREATE INDEX `events_of_site` ON `events` (`site_id`,`tai_s`,`ps`,`trigger_id`);--> statement-breakpoint
CREATE TABLE `groundings` (
	`id` integer PRIMARY KEY NOT NULL,
	`site_version_id` integer NOT NULL,
	`segment_id` integer,
	`reference_version_id` integer,
	`run_id` integer NOT NULL,
	`leap_second_table_id` integer NOT NULL,
	`orientation_table_id` integer,
	FOREIGN KEY (`site_version_id`) REFERENCES `site_versions`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`segment_id`) REFERENCES `clock_segments`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`reference_version_id`) REFERENCES `time_reference_versions`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`run_id`) REFERENCES `runs`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`leap_second_table_id`) REFERENCES `leap_second_tables`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`orientation_table_id`) REFERENCES `orientation_tables`(`id`) ON UPDATE no action ON DELETE restrict
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `groundings_once` ON `groundings` (`site_version_id`,coalesce(segment_id, 0),coalesce(reference_version_id, 0),`run_id`,`leap_second_table_id`,coalesce(orientation_table_id, 0));--> statement-breakpoint
CREATE TABLE `staged_events` (
	`job_id` integer NOT NULL,
	`trigger_id` integer NOT NULL,
	`grounding_id` integer NOT NULL,
	`tai_s` integer NOT NULL,
	`ps` integer NOT NULL,
	`x_m` real NOT NULL,
	`y_m` real NOT NULL,
	`z_m` real NOT NULL,
	`reading_sigma_ns` real NOT NULL,
	`sigma_origin` text NOT NULL,
	`sigma_ns` real NOT NULL,
	`since_epoch_days` real NOT NULL,
	`amplitude` real,
	`version` integer NOT NULL,
	`change_number` integer NOT NULL,
	`row_hash` blob NOT NULL,
	PRIMARY KEY(`job_id`, `trigger_id`),
	FOREIGN KEY (`job_id`) REFERENCES `jobs`(`id`) ON UPDATE no action ON DELETE cascade,
	FOREIGN KEY (`trigger_id`) REFERENCES `triggers`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`grounding_id`) REFERENCES `groundings`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "staged_events_time" CHECK(("staged_events"."tai_s" IS NULL) = ("staged_events"."ps" IS NULL) AND "staged_events"."tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "staged_events"."ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "staged_events_place" CHECK("staged_events"."x_m" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308 AND "staged_events"."y_m" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308 AND "staged_events"."z_m" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "staged_events_reading_sigma_ns" CHECK("staged_events"."reading_sigma_ns" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "staged_events_sigma_origin" CHECK("staged_events"."sigma_origin" IN ('record', 'site', 'resolution')),
	CONSTRAINT "staged_events_sigma_ns" CHECK("staged_events"."sigma_ns" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "staged_events_since_epoch_days" CHECK("staged_events"."since_epoch_days" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "staged_events_amplitude" CHECK("staged_events"."amplitude" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "staged_events_version" CHECK("staged_events"."version" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "staged_events_change_number" CHECK("staged_events"."change_number" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "staged_events_row_hash" CHECK(octet_length("staged_events"."row_hash") = 32)
) STRICT, WITHOUT ROWID;
--> statement-breakpoint
CREATE TABLE `chance_estimates` (
	`id` integer PRIMARY KEY NOT NULL,
	`rule_version_id` integer NOT NULL,
	`run_id` integer NOT NULL,
	`kind` text NOT NULL,
	`inputs` text NOT NULL,
	`results` text NOT NULL,
	`job_id` integer,
	`created_at` text NOT NULL,
	`created_by` integer,
	FOREIGN KEY (`rule_version_id`) REFERENCES `rule_versions`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`run_id`) REFERENCES `runs`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`job_id`) REFERENCES `jobs`(`id`) ON UPDATE no action ON DELETE set null,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "chance_estimates_kind" CHECK("chance_estimates"."kind" IN ('formula', 'slides')),
	CONSTRAINT "chance_estimates_inputs" CHECK(json_valid("chance_estimates"."inputs") AND octet_length("chance_estimates"."inputs") <= 1048576),
	CONSTRAINT "chance_estimates_results" CHECK(json_valid("chance_estimates"."results") AND octet_length("chance_estimates"."results") <= 4194304),
	CONSTRAINT "chance_estimates_created_at" CHECK(octet_length("chance_estimates"."created_at") = 24 AND "chance_estimates"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE INDEX `chance_estimates_of_rule` ON `chance_estimates` (`rule_version_id`,`run_id`,`id`);--> statement-breakpoint
CREATE TABLE `coincidences` (
	`id` integer PRIMARY KEY NOT NULL,
	`network_id` integer NOT NULL,
	`rule_version_id` integer NOT NULL,
	`set_hash` text NOT NULL,
	`state` text NOT NULL,
	`is_current` integer NOT NULL,
	`fold` integer NOT NULL,
	`first_tai_s` integer NOT NULL,
	`first_ps` integer NOT NULL,
	`span_ns` real NOT NULL,
	`class` text NOT NULL,
	`timelike_pairs` integer NOT NULL,
	`spacelike_pairs` integer NOT NULL,
	`undecided_pairs` integer NOT NULL,
	`nearest_margin_sigma` real NOT NULL,
	`least_turning_speed_c` real,
	`amplitude` real,
	`expected_by_chance` real,
	`touches_gap` integer NOT NULL,
	`since_change` integer,
	`ended_change` integer,
	`job_id` integer,
	`row_hash` blob NOT NULL,
	FOREIGN KEY (`network_id`) REFERENCES `networks`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`rule_version_id`) REFERENCES `rule_versions`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`job_id`) REFERENCES `jobs`(`id`) ON UPDATE no action ON DELETE set null,
	CONSTRAINT "coincidences_set_hash" CHECK(octet_length("coincidences"."set_hash") = 64 AND length("coincidences"."set_hash") = 64 AND "coincidences"."set_hash" NOT GLOB '*[^0-9a-f]*'),
	CONSTRAINT "coincidences_state" CHECK("coincidences"."state" IN ('staged', 'open', 'final', 'former')),
	CONSTRAINT "coincidences_is_current" CHECK("coincidences"."is_current" IN (0, 1) AND "coincidences"."is_current" = ("coincidences"."state" IN ('open', 'final'))),
	CONSTRAINT "coincidences_fold" CHECK("coincidences"."fold" BETWEEN 2 AND 9007199254740991),
	CONSTRAINT "coincidences_first" CHECK(("coincidences"."first_tai_s" IS NULL) = ("coincidences"."first_ps" IS NULL) AND "coincidences"."first_tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "coincidences"."first_ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "coincidences_span_ns" CHECK("coincidences"."span_ns" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "coincidences_class" CHECK("coincidences"."class" IN ('timelike', 'spacelike', 'undecided', 'mixed')),
	CONSTRAINT "coincidences_pairs" CHECK("coincidences"."timelike_pairs" BETWEEN 0 AND 9007199254740991 AND "coincidences"."spacelike_pairs" BETWEEN 0 AND 9007199254740991 AND "coincidences"."undecided_pairs" BETWEEN 0 AND 9007199254740991
        AND 2 * ("coincidences"."timelike_pairs" + "coincidences"."spacelike_pairs" + "coincidences"."undecided_pairs") = "coincidences"."fold" * ("coincidences"."fold" - 1)),
	CONSTRAINT "coincidences_class_of_pairs" CHECK("coincidences"."class" = CASE 0 WHEN "coincidences"."spacelike_pairs" + "coincidences"."undecided_pairs" THEN 'timelike'
        WHEN "coincidences"."timelike_pairs" + "coincidences"."undecided_pairs" THEN 'spacelike' WHEN "coincidences"."timelike_pairs" + "coincidences"."spacelike_pairs" THEN 'undecided' ELSE 'mixed' END),
	CONSTRAINT "coincidences_least_turning_speed_c" CHECK("coincidences"."least_turning_speed_c" BETWEEN 0 AND 1),
	CONSTRAINT "coincidences_turns" CHECK(("coincidences"."least_turning_speed_c" IS NOT NULL) = ("coincidences"."spacelike_pairs" > 0)),
	CONSTRAINT "coincidences_amplitude" CHECK("coincidences"."amplitude" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "coincidences_expected_by_chance" CHECK("coincidences"."expected_by_chance" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "coincidences_touches_gap" CHECK("coincidences"."touches_gap" IN (0, 1)),
	CONSTRAINT "coincidences_since_change" CHECK("coincidences"."since_change" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "coincidences_ended_change" CHECK("coincidences"."ended_change" > "coincidences"."since_change"),
	CONSTRAINT "coincidences_life" CHECK(("coincidences"."state" = 'staged') = ("coincidences"."since_change" IS NULL) AND ("coincidences"."state" = 'former') = ("coincidences"."ended_change" IS NOT NULL)),
	CONSTRAINT "coincidences_row_hash" CHECK(octet_length("coincidences"."row_hash") = 32)
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `coincidences_by_name` ON `coincidences` (`network_id`,`set_hash`,`rule_version_id`) WHERE is_current = 1;--> statement-breakpoint
CREATE INDEX `coincidences_former` ON `coincidences` (`network_id`,`set_hash`,`id`) WHERE state = 'former';--> statement-breakpoint
CREATE INDEX `coincidences_of_job` ON `coincidences` (`job_id`) WHERE state = 'staged';--> statement-breakpoint
CREATE INDEX `coincidences_open` ON `coincidences` (`network_id`,`first_tai_s`,`first_ps`) WHERE state = 'open';--> statement-breakpoint
CREATE INDEX `coincidences_since` ON `coincidences` (`network_id`,`since_change`) WHERE is_current = 1;--> statement-breakpoint
CREATE INDEX `coincidences_by_time` ON `coincidences` (`network_id`,`first_tai_s`,`first_ps`,`id`) WHERE is_current = 1;--> statement-breakpoint
CREATE INDEX `coincidences_by_fold` ON `coincidences` (`network_id`,`fold`,`first_tai_s`,`first_ps`,`id`) WHERE is_current = 1;--> statement-breakpoint
CREATE INDEX `coincidences_by_class` ON `coincidences` (`network_id`,`class`,`first_tai_s`,`first_ps`,`id`) WHERE is_current = 1;--> statement-breakpoint
CREATE INDEX `coincidences_by_rule` ON `coincidences` (`rule_version_id`,`first_tai_s`,`first_ps`,`id`) WHERE is_current = 1;--> statement-breakpoint
CREATE INDEX `coincidences_by_margin` ON `coincidences` (`network_id`,`nearest_margin_sigma`,`id`) WHERE is_current = 1;--> statement-breakpoint
CREATE INDEX `coincidences_by_span` ON `coincidences` (`network_id`,`span_ns`,`id`) WHERE is_current = 1;--> statement-breakpoint
CREATE INDEX `coincidences_by_turning` ON `coincidences` (`network_id`,`least_turning_speed_c`,`id`) WHERE is_current = 1 AND least_turning_speed_c IS NOT NULL;--> statement-breakpoint
CREATE INDEX `coincidences_by_amplitude` ON `coincidences` (`network_id`,`amplitude`,`id`) WHERE is_current = 1 AND amplitude IS NOT NULL;--> statement-breakpoint
CREATE INDEX `coincidences_by_chance` ON `coincidences` (`network_id`,`expected_by_chance`,`id`) WHERE is_current = 1 AND expected_by_chance IS NOT NULL;--> statement-breakpoint
CREATE TABLE `crowded_events` (
	`rule_version_id` integer NOT NULL,
	`trigger_id` integer NOT NULL,
	`sites` integer NOT NULL,
	`events` integer NOT NULL,
	`sets_at_least` integer NOT NULL,
	`since_change` integer NOT NULL,
	PRIMARY KEY(`rule_version_id`, `trigger_id`),
	FOREIGN KEY (`rule_version_id`) REFERENCES `rule_versions`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`trigger_id`) REFERENCES `triggers`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "crowded_events_sites" CHECK("crowded_events"."sites" BETWEEN 2 AND 9007199254740991),
	CONSTRAINT "crowded_events_events" CHECK("crowded_events"."events" >= "crowded_events"."sites"),
	CONSTRAINT "crowded_events_sets_at_least" CHECK("crowded_events"."sets_at_least" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "crowded_events_since_change" CHECK("crowded_events"."since_change" BETWEEN 1 AND 9007199254740991)
) STRICT, WITHOUT ROWID;
--> statement-breakpoint
CREATE TABLE `growths` (
	`coincidence_id` integer NOT NULL,
	`grew_from_id` integer NOT NULL,
	PRIMARY KEY(`coincidence_id`, `grew_from_id`),
	FOREIGN KEY (`coincidence_id`) REFERENCES `coincidences`(`id`) ON UPDATE no action ON DELETE cascade,
	FOREIGN KEY (`grew_from_id`) REFERENCES `coincidences`(`id`) ON UPDATE no action ON DELETE cascade,
	CONSTRAINT "growths_other" CHECK("growths"."coincidence_id" <> "growths"."grew_from_id")
) STRICT, WITHOUT ROWID;
--> statement-breakpoint
CREATE INDEX `growths_into` ON `growths` (`grew_from_id`);--> statement-breakpoint
CREATE TABLE `members` (
	`coincidence_id` integer NOT NULL,
	`place` integer NOT NULL,
	`trigger_id` integer NOT NULL,
	`site_id` integer NOT NULL,
	`event_version` integer NOT NULL,
	`is_current` integer NOT NULL,
	`first_tai_s` integer NOT NULL,
	`first_ps` integer NOT NULL,
	PRIMARY KEY(`coincidence_id`, `place`),
	FOREIGN KEY (`coincidence_id`) REFERENCES `coincidences`(`id`) ON UPDATE no action ON DELETE cascade,
	FOREIGN KEY (`trigger_id`) REFERENCES `triggers`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`site_id`) REFERENCES `sites`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "members_place" CHECK("members"."place" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "members_event_version" CHECK("members"."event_version" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "members_is_current" CHECK("members"."is_current" IN (0, 1)),
	CONSTRAINT "members_first" CHECK(("members"."first_tai_s" IS NULL) = ("members"."first_ps" IS NULL) AND "members"."first_tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "members"."first_ps" BETWEEN 0 AND 999999999999)
) STRICT, WITHOUT ROWID;
--> statement-breakpoint
CREATE INDEX `members_of_trigger` ON `members` (`trigger_id`,`coincidence_id`);--> statement-breakpoint
CREATE INDEX `members_of_site` ON `members` (`site_id`,`first_tai_s`,`first_ps`,`coincidence_id`) WHERE is_current = 1;--> statement-breakpoint
CREATE TABLE `pairs` (
	`coincidence_id` integer NOT NULL,
	`a` integer NOT NULL,
	`b` integer NOT NULL,
	`class` text NOT NULL,
	`dt_ns` real NOT NULL,
	`distance_m` real NOT NULL,
	`sigma_dt_ns` real NOT NULL,
	`sigma_gap_ns` real NOT NULL,
	`margin_sigma` real NOT NULL,
	`reverse_margin_sigma` real NOT NULL,
	`interval_m2` real NOT NULL,
	`proper_time_s` real,
	`proper_distance_m` real,
	`turning_speed_c` real,
	`turning_sigma_c` real,
	`toward_x` real,
	`toward_y` real,
	`toward_z` real,
	PRIMARY KEY(`coincidence_id`, `a`, `b`),
	FOREIGN KEY (`coincidence_id`,`a`) REFERENCES `members`(`coincidence_id`,`place`) ON UPDATE no action ON DELETE cascade,
	FOREIGN KEY (`coincidence_id`,`b`) REFERENCES `members`(`coincidence_id`,`place`) ON UPDATE no action ON DELETE cascade,
	CONSTRAINT "pairs_order" CHECK("pairs"."a" >= 1 AND "pairs"."a" < "pairs"."b"),
	CONSTRAINT "pairs_class" CHECK("pairs"."class" IN ('timelike', 'spacelike', 'undecided')),
	CONSTRAINT "pairs_dt_ns" CHECK("pairs"."dt_ns" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "pairs_distance_m" CHECK("pairs"."distance_m" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "pairs_sigma_dt_ns" CHECK("pairs"."sigma_dt_ns" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "pairs_sigma_gap_ns" CHECK("pairs"."sigma_gap_ns" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "pairs_margins" CHECK("pairs"."margin_sigma" <= "pairs"."reverse_margin_sigma"),
	CONSTRAINT "pairs_interval_m2" CHECK("pairs"."interval_m2" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "pairs_proper_time_s" CHECK("pairs"."proper_time_s" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "pairs_proper_distance_m" CHECK("pairs"."proper_distance_m" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "pairs_turning_speed_c" CHECK("pairs"."turning_speed_c" BETWEEN 0 AND 1),
	CONSTRAINT "pairs_turning_sigma_c" CHECK("pairs"."turning_sigma_c" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "pairs_toward" CHECK(abs("pairs"."toward_x" * "pairs"."toward_x" + "pairs"."toward_y" * "pairs"."toward_y" + "pairs"."toward_z" * "pairs"."toward_z" - 1) < 1e-9),
	CONSTRAINT "pairs_of_class" CHECK(("pairs"."class" = 'timelike') = ("pairs"."proper_time_s" IS NOT NULL) AND ("pairs"."class" = 'spacelike') = ("pairs"."proper_distance_m" IS NOT NULL)
        AND ("pairs"."class" = 'spacelike') = ("pairs"."turning_speed_c" IS NOT NULL) AND ("pairs"."class" = 'spacelike') = ("pairs"."turning_sigma_c" IS NOT NULL)
        AND ("pairs"."class" = 'spacelike') = ("pairs"."toward_x" IS NOT NULL AND "pairs"."toward_y" IS NOT NULL AND "pairs"."toward_z" IS NOT NULL))
) STRICT, WITHOUT ROWID;
--> statement-breakpoint
CREATE TABLE `rule_exclusions` (
	`id` integer PRIMARY KEY NOT NULL,
	`rule_version_id` integer NOT NULL,
	`site_id` integer,
	`from_tai_s` integer NOT NULL,
	`from_ps` integer NOT NULL,
	`to_tai_s` integer NOT NULL,
	`to_ps` integer NOT NULL,
	`reason` text NOT NULL,
	FOREIGN KEY (`rule_version_id`) REFERENCES `rule_versions`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`site_id`) REFERENCES `sites`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "rule_exclusions_from" CHECK(("rule_exclusions"."from_tai_s" IS NULL) = ("rule_exclusions"."from_ps" IS NULL) AND "rule_exclusions"."from_tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "rule_exclusions"."from_ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "rule_exclusions_to" CHECK(("rule_exclusions"."to_tai_s" IS NULL) = ("rule_exclusions"."to_ps" IS NULL) AND "rule_exclusions"."to_tai_s" BETWEEN -9007199254740991 AND 9007199254740991 AND "rule_exclusions"."to_ps" BETWEEN 0 AND 999999999999),
	CONSTRAINT "rule_exclusions_span" CHECK(("rule_exclusions"."from_tai_s", "rule_exclusions"."from_ps") <= ("rule_exclusions"."to_tai_s", "rule_exclusions"."to_ps")),
	CONSTRAINT "rule_exclusions_reason" CHECK(octet_length("rule_exclusions"."reason") BETWEEN 0 AND 2000)
) STRICT;
--> statement-breakpoint
CREATE INDEX `rule_exclusions_of_rule` ON `rule_exclusions` (`rule_version_id`,`from_tai_s`,`from_ps`);--> statement-breakpoint
CREATE TABLE `rule_sites` (
	`rule_version_id` integer NOT NULL,
	`site_id` integer NOT NULL,
	PRIMARY KEY(`rule_version_id`, `site_id`),
	FOREIGN KEY (`rule_version_id`) REFERENCES `rule_versions`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`site_id`) REFERENCES `sites`(`id`) ON UPDATE no action ON DELETE restrict
) STRICT, WITHOUT ROWID;
--> statement-breakpoint
CREATE TABLE `rule_versions` (
	`id` integer PRIMARY KEY NOT NULL,
	`rule_id` integer NOT NULL,
	`number` integer NOT NULL,
	`minimum_fold` integer NOT NULL,
	`sigmas` real NOT NULL,
	`window_kind` text NOT NULL,
	`speed_c` real,
	`margin_ns` real,
	`width_ns` real,
	`frame_id` integer,
	`least_amplitude` real,
	`dead_time_ns` real DEFAULT 0 NOT NULL,
	`crowd_limit` integer DEFAULT 10000 NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer,
	`superseded_at` text,
	`superseded_by` integer,
	FOREIGN KEY (`rule_id`) REFERENCES `rules`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`frame_id`) REFERENCES `frames`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`superseded_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "rule_versions_number" CHECK("rule_versions"."number" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "rule_versions_minimum_fold" CHECK("rule_versions"."minimum_fold" BETWEEN 2 AND 9007199254740991),
	CONSTRAINT "rule_versions_sigmas" CHECK("rule_versions"."sigmas" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "rule_versions_window_kind" CHECK("rule_versions"."window_kind" IN ('light-time', 'fixed')),
	CONSTRAINT "rule_versions_speed_c" CHECK("rule_versions"."speed_c" > 0 AND "rule_versions"."speed_c" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "rule_versions_margin_ns" CHECK("rule_versions"."margin_ns" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "rule_versions_width_ns" CHECK("rule_versions"."width_ns" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "rule_versions_window" CHECK(("rule_versions"."window_kind" = 'light-time') = ("rule_versions"."speed_c" IS NOT NULL) AND ("rule_versions"."window_kind" = 'light-time') = ("rule_versions"."margin_ns" IS NOT NULL)
        AND ("rule_versions"."window_kind" = 'fixed') = ("rule_versions"."width_ns" IS NOT NULL) AND ("rule_versions"."window_kind" = 'fixed' OR "rule_versions"."frame_id" IS NULL)),
	CONSTRAINT "rule_versions_least_amplitude" CHECK("rule_versions"."least_amplitude" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "rule_versions_dead_time_ns" CHECK("rule_versions"."dead_time_ns" BETWEEN 0 AND 1.7976931348623157e308),
	CONSTRAINT "rule_versions_crowd_limit" CHECK("rule_versions"."crowd_limit" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "rule_versions_created_at" CHECK(octet_length("rule_versions"."created_at") = 24 AND "rule_versions"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "rule_versions_superseded_at" CHECK(octet_length("rule_versions"."superseded_at") = 24 AND "rule_versions"."superseded_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `rule_versions_number` ON `rule_versions` (`rule_id`,`number`);--> statement-breakpoint
CREATE UNIQUE INDEX `rule_versions_in_force` ON `rule_versions` (`rule_id`) WHERE superseded_at IS NULL;--> statement-breakpoint
CREATE TABLE `rules` (
	`id` integer PRIMARY KEY NOT NULL,
	`network_id` integer NOT NULL,
	`code` text NOT NULL,
	`name` text NOT NULL,
	`is_active` integer NOT NULL,
	`version` integer DEFAULT 1 NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer,
	FOREIGN KEY (`network_id`) REFERENCES `networks`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "rules_code" CHECK(octet_length("rules"."code") BETWEEN 1 AND 24 AND octet_length("rules"."code") = length("rules"."code") AND "rules"."code" NOT GLOB '*[^A-Za-z0-9_-]*'),
	CONSTRAINT "rules_name" CHECK(octet_length("rules"."name") BETWEEN 0 AND 200),
	CONSTRAINT "rules_is_active" CHECK("rules"."is_active" IN (0, 1)),
	CONSTRAINT "rules_version" CHECK("rules"."version" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "rules_created_at" CHECK(octet_length("rules"."created_at") = 24 AND "rules"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `rules_code` ON `rules` (`network_id`,`code`);--> statement-breakpoint
CREATE TABLE `attachments` (
	`id` integer PRIMARY KEY NOT NULL,
	`candidate_id` integer NOT NULL,
	`comment_id` integer,
	`file_sha256` text NOT NULL,
	`file_name` text NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer NOT NULL,
	`removed_at` text,
	FOREIGN KEY (`candidate_id`) REFERENCES `candidates`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`comment_id`) REFERENCES `comments`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`file_sha256`) REFERENCES `stored_files`(`sha256`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "attachments_file_name" CHECK(octet_length("attachments"."file_name") BETWEEN 1 AND 255),
	CONSTRAINT "attachments_created_at" CHECK(octet_length("attachments"."created_at") = 24 AND "attachments"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "attachments_removed_at" CHECK(octet_length("attachments"."removed_at") = 24 AND "attachments"."removed_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE INDEX `attachments_of_candidate` ON `attachments` (`candidate_id`,`id`);--> statement-breakpoint
CREATE INDEX `attachments_of_file` ON `attachments` (`file_sha256`);--> statement-breakpoint
CREATE TABLE `candidate_editors` (
	`candidate_id` integer NOT NULL,
	`person_id` integer NOT NULL,
	`since` text NOT NULL,
	PRIMARY KEY(`candidate_id`, `person_id`),
	FOREIGN KEY (`candidate_id`) REFERENCES `candidates`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "candidate_editors_since" CHECK(octet_length("candidate_editors"."since") = 24 AND "candidate_editors"."since" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT, WITHOUT ROWID;
--> statement-breakpoint
CREATE TABLE `candidate_events` (
	`candidate_id` integer NOT NULL,
	`trigger_id` integer NOT NULL,
	`is_in` integer NOT NULL,
	`reason` text NOT NULL,
	PRIMARY KEY(`candidate_id`, `trigger_id`),
	FOREIGN KEY (`candidate_id`) REFERENCES `candidates`(`id`) ON UPDATE no action ON DELETE cascade,
	FOREIGN KEY (`trigger_id`) REFERENCES `triggers`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "candidate_events_is_in" CHECK("candidate_events"."is_in" IN (0, 1)),
	CONSTRAINT "candidate_events_reason" CHECK(octet_length("candidate_events"."reason") BETWEEN 0 AND 2000 AND ("candidate_events"."is_in" = 1 OR "candidate_events"."reason" <> ''))
) STRICT, WITHOUT ROWID;
--> statement-breakpoint
CREATE INDEX `candidate_events_of_trigger` ON `candidate_events` (`trigger_id`);--> statement-breakpoint
CREATE TABLE `candidate_frames` (
	`candidate_id` integer NOT NULL,
	`frame_id` integer NOT NULL,
	`place` integer NOT NULL,
	PRIMARY KEY(`candidate_id`, `frame_id`),
	FOREIGN KEY (`candidate_id`) REFERENCES `candidates`(`id`) ON UPDATE no action ON DELETE cascade,
	FOREIGN KEY (`frame_id`) REFERENCES `frames`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "candidate_frames_place" CHECK("candidate_frames"."place" BETWEEN 1 AND 9007199254740991)
) STRICT, WITHOUT ROWID;
--> statement-breakpoint
CREATE TABLE `candidate_sets` (
	`candidate_id` integer NOT NULL,
	`set_hash` text NOT NULL,
	PRIMARY KEY(`candidate_id`, `set_hash`),
	FOREIGN KEY (`candidate_id`) REFERENCES `candidates`(`id`) ON UPDATE no action ON DELETE cascade,
	CONSTRAINT "candidate_sets_set_hash" CHECK(octet_length("candidate_sets"."set_hash") = 64 AND length("candidate_sets"."set_hash") = 64 AND "candidate_sets"."set_hash" NOT GLOB '*[^0-9a-f]*')
) STRICT, WITHOUT ROWID;
--> statement-breakpoint
CREATE INDEX `candidate_sets_by_hash` ON `candidate_sets` (`set_hash`);--> statement-breakpoint
CREATE TABLE `candidate_versions` (
	`id` integer PRIMARY KEY NOT NULL,
	`candidate_id` integer NOT NULL,
	`version` integer NOT NULL,
	`at` text NOT NULL,
	`by_id` integer,
	`action` text NOT NULL,
	`body` text NOT NULL,
	FOREIGN KEY (`candidate_id`) REFERENCES `candidates`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`by_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "candidate_versions_version" CHECK("candidate_versions"."version" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "candidate_versions_at" CHECK(octet_length("candidate_versions"."at") = 24 AND "candidate_versions"."at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "candidate_versions_action" CHECK(octet_length("candidate_versions"."action") BETWEEN 1 AND 64),
	CONSTRAINT "candidate_versions_body" CHECK(json_valid("candidate_versions"."body") AND octet_length("candidate_versions"."body") <= 16777216)
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `candidate_versions_number` ON `candidate_versions` (`candidate_id`,`version`);--> statement-breakpoint
CREATE TABLE `candidates` (
	`id` integer PRIMARY KEY NOT NULL,
	`network_id` integer NOT NULL,
	`number` integer NOT NULL,
	`title` text NOT NULL,
	`about` text NOT NULL,
	`state` text NOT NULL,
	`author_id` integer NOT NULL,
	`snapshot_id` integer,
	`out_of_date_at` text,
	`version` integer DEFAULT 1 NOT NULL,
	`created_at` text NOT NULL,
	`updated_at` text NOT NULL,
	`submitted_at` text,
	FOREIGN KEY (`network_id`) REFERENCES `networks`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`author_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`snapshot_id`) REFERENCES `snapshots`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "candidates_number" CHECK("candidates"."number" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "candidates_title" CHECK(octet_length("candidates"."title") BETWEEN 1 AND 400),
	CONSTRAINT "candidates_about" CHECK(octet_length("candidates"."about") BETWEEN 0 AND 65536),
	CONSTRAINT "candidates_state" CHECK("candidates"."state" IN ('draft', 'in-review', 'confirmed', 'disputed', 'withdrawn')),
	CONSTRAINT "candidates_snapshot" CHECK("candidates"."state" IN ('draft', 'withdrawn') OR "candidates"."snapshot_id" IS NOT NULL),
	CONSTRAINT "candidates_out_of_date_at" CHECK(octet_length("candidates"."out_of_date_at") = 24 AND "candidates"."out_of_date_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "candidates_version" CHECK("candidates"."version" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "candidates_created_at" CHECK(octet_length("candidates"."created_at") = 24 AND "candidates"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "candidates_updated_at" CHECK(octet_length("candidates"."updated_at") = 24 AND "candidates"."updated_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "candidates_submitted_at" CHECK(octet_length("candidates"."submitted_at") = 24 AND "candidates"."submitted_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `candidates_number` ON `candidates` (`network_id`,`number`);--> statement-breakpoint
CREATE UNIQUE INDEX `candidates_of_network` ON `candidates` (`id`,`network_id`);--> statement-breakpoint
CREATE INDEX `candidates_by_state` ON `candidates` (`network_id`,`state`,`updated_at`,`id`);--> statement-breakpoint
CREATE INDEX `candidates_by_update` ON `candidates` (`network_id`,`updated_at`,`id`);--> statement-breakpoint
CREATE INDEX `candidates_of_author` ON `candidates` (`author_id`,`updated_at`,`id`);--> statement-breakpoint
CREATE TABLE `claim_decisions` (
	`signature_id` integer NOT NULL,
	`claim_id` integer NOT NULL,
	`decision` text NOT NULL,
	`reason` text NOT NULL,
	PRIMARY KEY(`signature_id`, `claim_id`),
	FOREIGN KEY (`signature_id`) REFERENCES `signatures`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`claim_id`) REFERENCES `claims`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "claim_decisions_decision" CHECK("claim_decisions"."decision" IN ('confirm', 'dispute')),
	CONSTRAINT "claim_decisions_reason" CHECK(octet_length("claim_decisions"."reason") BETWEEN 0 AND 16384 AND ("claim_decisions"."decision" = 'confirm' OR "claim_decisions"."reason" <> ''))
) STRICT, WITHOUT ROWID;
--> statement-breakpoint
CREATE TABLE `claims` (
	`id` integer PRIMARY KEY NOT NULL,
	`candidate_id` integer NOT NULL,
	`kind` text NOT NULL,
	`a_trigger_id` integer,
	`b_trigger_id` integer,
	`frame_id` integer,
	`state` text NOT NULL,
	`numbers` text NOT NULL,
	`note` text DEFAULT '' NOT NULL,
	`edited_by` integer,
	`edited_at` text,
	FOREIGN KEY (`candidate_id`) REFERENCES `candidates`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`frame_id`) REFERENCES `frames`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`edited_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`candidate_id`,`a_trigger_id`) REFERENCES `candidate_events`(`candidate_id`,`trigger_id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`candidate_id`,`b_trigger_id`) REFERENCES `candidate_events`(`candidate_id`,`trigger_id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "claims_kind" CHECK("claims"."kind" IN ('before-in-every-frame', 'before-in-frame', 'did-not-cause', 'no-common-order', 'undecided')),
	CONSTRAINT "claims_pair" CHECK(("claims"."a_trigger_id" IS NULL) = ("claims"."b_trigger_id" IS NULL) AND ("claims"."a_trigger_id" IS NULL OR "claims"."a_trigger_id" <> "claims"."b_trigger_id")
        AND ("claims"."a_trigger_id" IS NOT NULL OR "claims"."kind" = 'no-common-order')),
	CONSTRAINT "claims_frame" CHECK("claims"."frame_id" IS NULL OR "claims"."kind" = 'before-in-frame'),
	CONSTRAINT "claims_state" CHECK("claims"."state" IN ('proposed', 'accepted', 'weakened', 'dropped')),
	CONSTRAINT "claims_numbers" CHECK(json_valid("claims"."numbers") AND octet_length("claims"."numbers") <= 65536),
	CONSTRAINT "claims_note" CHECK(octet_length("claims"."note") BETWEEN 0 AND 2000),
	CONSTRAINT "claims_edited" CHECK(("claims"."edited_by" IS NULL) = ("claims"."edited_at" IS NULL)),
	CONSTRAINT "claims_edited_at" CHECK(octet_length("claims"."edited_at") = 24 AND "claims"."edited_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE INDEX `claims_of_candidate` ON `claims` (`candidate_id`,`id`);--> statement-breakpoint
CREATE UNIQUE INDEX `claims_with_candidate` ON `claims` (`id`,`candidate_id`);--> statement-breakpoint
CREATE TABLE `comments` (
	`id` integer PRIMARY KEY NOT NULL,
	`candidate_id` integer NOT NULL,
	`claim_id` integer,
	`a_trigger_id` integer,
	`b_trigger_id` integer,
	`answers_id` integer,
	`is_question` integer NOT NULL,
	`author_id` integer NOT NULL,
	`body` text NOT NULL,
	`created_at` text NOT NULL,
	`edited_at` text,
	`taken_back_at` text,
	`version` integer DEFAULT 1 NOT NULL,
	FOREIGN KEY (`candidate_id`) REFERENCES `candidates`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`a_trigger_id`) REFERENCES `triggers`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`b_trigger_id`) REFERENCES `triggers`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`answers_id`) REFERENCES `comments`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`author_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`claim_id`,`candidate_id`) REFERENCES `claims`(`id`,`candidate_id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "comments_pair" CHECK(("comments"."a_trigger_id" IS NULL) = ("comments"."b_trigger_id" IS NULL) AND ("comments"."claim_id" IS NULL OR "comments"."a_trigger_id" IS NULL)),
	CONSTRAINT "comments_is_question" CHECK("comments"."is_question" IN (0, 1)),
	CONSTRAINT "comments_body" CHECK(octet_length("comments"."body") BETWEEN 0 AND 16384 AND ("comments"."body" = '') = ("comments"."taken_back_at" IS NOT NULL)),
	CONSTRAINT "comments_created_at" CHECK(octet_length("comments"."created_at") = 24 AND "comments"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "comments_edited_at" CHECK(octet_length("comments"."edited_at") = 24 AND "comments"."edited_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "comments_taken_back_at" CHECK(octet_length("comments"."taken_back_at") = 24 AND "comments"."taken_back_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "comments_version" CHECK("comments"."version" BETWEEN 1 AND 9007199254740991)
) STRICT;
--> statement-breakpoint
CREATE INDEX `comments_of_candidate` ON `comments` (`candidate_id`,`id`);--> statement-breakpoint
CREATE TABLE `mentions` (
	`comment_id` integer NOT NULL,
	`person_id` integer NOT NULL,
	PRIMARY KEY(`comment_id`, `person_id`),
	FOREIGN KEY (`comment_id`) REFERENCES `comments`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict
) STRICT, WITHOUT ROWID;
--> statement-breakpoint
CREATE TABLE `out_of_dates` (
	`id` integer PRIMARY KEY NOT NULL,
	`snapshot_id` integer NOT NULL,
	`at` text NOT NULL,
	`cause` text NOT NULL,
	`differences` text NOT NULL,
	FOREIGN KEY (`snapshot_id`) REFERENCES `snapshots`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "out_of_dates_at" CHECK(octet_length("out_of_dates"."at") = 24 AND "out_of_dates"."at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "out_of_dates_cause" CHECK("out_of_dates"."cause" IN ('clock-record', 'site', 'rule', 'frame', 'time-table', 'earth-table', 'late-record', 'conflict')),
	CONSTRAINT "out_of_dates_differences" CHECK(json_valid("out_of_dates"."differences") AND octet_length("out_of_dates"."differences") <= 16777216)
) STRICT;
--> statement-breakpoint
CREATE INDEX `out_of_dates_of_snapshot` ON `out_of_dates` (`snapshot_id`,`id`);--> statement-breakpoint
CREATE TABLE `reviewers` (
	`candidate_id` integer NOT NULL,
	`person_id` integer NOT NULL,
	`named_at` text NOT NULL,
	`named_by` integer NOT NULL,
	`released_at` text,
	PRIMARY KEY(`candidate_id`, `person_id`),
	FOREIGN KEY (`candidate_id`) REFERENCES `candidates`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`named_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "reviewers_named_at" CHECK(octet_length("reviewers"."named_at") = 24 AND "reviewers"."named_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "reviewers_released_at" CHECK(octet_length("reviewers"."released_at") = 24 AND "reviewers"."released_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT, WITHOUT ROWID;
--> statement-breakpoint
CREATE INDEX `reviewers_queue` ON `reviewers` (`person_id`,`named_at`) WHERE released_at IS NULL;--> statement-breakpoint
CREATE TABLE `signatures` (
	`id` integer PRIMARY KEY NOT NULL,
	`candidate_id` integer NOT NULL,
	`snapshot_id` integer NOT NULL,
	`person_id` integer NOT NULL,
	`name` text NOT NULL,
	`decision` text NOT NULL,
	`reason` text NOT NULL,
	`snapshot_sha256` text NOT NULL,
	`signed_at` text NOT NULL,
	`sha256` text NOT NULL,
	`previous_sha256` text,
	`withdrawn_at` text,
	`superseded_by_id` integer,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`superseded_by_id`) REFERENCES `signatures`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`snapshot_id`,`candidate_id`) REFERENCES `snapshots`(`id`,`candidate_id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "signatures_name" CHECK(octet_length("signatures"."name") BETWEEN 1 AND 800),
	CONSTRAINT "signatures_decision" CHECK("signatures"."decision" IN ('confirm', 'dispute')),
	CONSTRAINT "signatures_reason" CHECK(octet_length("signatures"."reason") BETWEEN 0 AND 16384 AND ("signatures"."decision" = 'confirm' OR "signatures"."reason" <> '')),
	CONSTRAINT "signatures_snapshot_sha256" CHECK(octet_length("signatures"."snapshot_sha256") = 64 AND length("signatures"."snapshot_sha256") = 64 AND "signatures"."snapshot_sha256" NOT GLOB '*[^0-9a-f]*'),
	CONSTRAINT "signatures_signed_at" CHECK(octet_length("signatures"."signed_at") = 24 AND "signatures"."signed_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "signatures_sha256" CHECK(octet_length("signatures"."sha256") = 64 AND length("signatures"."sha256") = 64 AND "signatures"."sha256" NOT GLOB '*[^0-9a-f]*'),
	CONSTRAINT "signatures_previous_sha256" CHECK(octet_length("signatures"."previous_sha256") = 64 AND length("signatures"."previous_sha256") = 64 AND "signatures"."previous_sha256" NOT GLOB '*[^0-9a-f]*'),
	CONSTRAINT "signatures_withdrawn_at" CHECK(octet_length("signatures"."withdrawn_at") = 24 AND "signatures"."withdrawn_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `signatures_standing` ON `signatures` (`snapshot_id`,`person_id`) WHERE withdrawn_at IS NULL AND superseded_by_id IS NULL;--> statement-breakpoint
CREATE INDEX `signatures_of_candidate` ON `signatures` (`candidate_id`,`id`);--> statement-breakpoint
CREATE INDEX `signatures_of_person` ON `signatures` (`person_id`,`id`);--> statement-breakpoint
CREATE UNIQUE INDEX `signatures_sha256` ON `signatures` (`sha256`);--> statement-breakpoint
CREATE TABLE `snapshot_events` (
	`snapshot_id` integer NOT NULL,
	`trigger_id` integer NOT NULL,
	`event_version` integer NOT NULL,
	PRIMARY KEY(`snapshot_id`, `trigger_id`),
	FOREIGN KEY (`snapshot_id`) REFERENCES `snapshots`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`trigger_id`) REFERENCES `triggers`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "snapshot_events_event_version" CHECK("snapshot_events"."event_version" BETWEEN 1 AND 9007199254740991)
) STRICT, WITHOUT ROWID;
--> statement-breakpoint
CREATE INDEX `snapshot_events_of_trigger` ON `snapshot_events` (`trigger_id`);--> statement-breakpoint
CREATE TABLE `snapshots` (
	`id` integer PRIMARY KEY NOT NULL,
	`candidate_id` integer NOT NULL,
	`number` integer NOT NULL,
	`sha256` text NOT NULL,
	`body` text NOT NULL,
	`program` text NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer NOT NULL,
	`report_code` text NOT NULL,
	FOREIGN KEY (`candidate_id`) REFERENCES `candidates`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "snapshots_number" CHECK("snapshots"."number" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "snapshots_sha256" CHECK(octet_length("snapshots"."sha256") = 64 AND length("snapshots"."sha256") = 64 AND "snapshots"."sha256" NOT GLOB '*[^0-9a-f]*'),
	CONSTRAINT "snapshots_body" CHECK(json_valid("snapshots"."body") AND octet_length("snapshots"."body") <= 268435456),
	CONSTRAINT "snapshots_program" CHECK(octet_length("snapshots"."program") BETWEEN 1 AND 64),
	CONSTRAINT "snapshots_created_at" CHECK(octet_length("snapshots"."created_at") = 24 AND "snapshots"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "snapshots_report_code" CHECK(octet_length("snapshots"."report_code") BETWEEN 8 AND 40)
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `snapshots_number` ON `snapshots` (`candidate_id`,`number`);--> statement-breakpoint
CREATE UNIQUE INDEX `snapshots_sha256` ON `snapshots` (`sha256`);--> statement-breakpoint
CREATE UNIQUE INDEX `snapshots_report_code` ON `snapshots` (`report_code`);--> statement-breakpoint
CREATE UNIQUE INDEX `snapshots_with_candidate` ON `snapshots` (`id`,`candidate_id`);--> statement-breakpoint
CREATE TABLE `change_heads` (
	`network_id` integer PRIMARY KEY NOT NULL,
	`last` integer DEFAULT 0 NOT NULL,
	`oldest` integer DEFAULT 1 NOT NULL,
	FOREIGN KEY (`network_id`) REFERENCES `networks`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "change_heads_last" CHECK("change_heads"."last" BETWEEN 0 AND 9007199254740991),
	CONSTRAINT "change_heads_oldest" CHECK("change_heads"."oldest" BETWEEN 1 AND "change_heads"."last" + 1)
) STRICT;
--> statement-breakpoint
CREATE TABLE `changes` (
	`network_id` integer NOT NULL,
	`number` integer NOT NULL,
	`at_ms` integer NOT NULL,
	`kind` text NOT NULL,
	`body` text NOT NULL,
	PRIMARY KEY(`network_id`, `number`),
	FOREIGN KEY (`network_id`) REFERENCES `networks`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "changes_number" CHECK("changes"."number" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "changes_at_ms" CHECK("changes"."at_ms" BETWEEN 0 AND 253402300799999),
	CONSTRAINT "changes_kind" CHECK("changes"."kind" IN ('records', 'completeness', 'reprocessed', 'setup', 'rule', 'set-aside', 'intake', 'candidate', 'job')),
	CONSTRAINT "changes_body" CHECK(json_valid("changes"."body") AND octet_length("changes"."body") <= 262144)
) STRICT, WITHOUT ROWID;
--> statement-breakpoint
CREATE TABLE `coincidence_alerts` (
	`id` integer PRIMARY KEY NOT NULL,
	`person_id` integer NOT NULL,
	`network_id` integer NOT NULL,
	`rule_id` integer,
	`least_fold` integer NOT NULL,
	`least_amplitude` real,
	`is_active` integer NOT NULL,
	`told_to_change` integer NOT NULL,
	`version` integer DEFAULT 1 NOT NULL,
	`created_at` text NOT NULL,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`network_id`) REFERENCES `networks`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`rule_id`) REFERENCES `rules`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "coincidence_alerts_least_fold" CHECK("coincidence_alerts"."least_fold" BETWEEN 2 AND 9007199254740991),
	CONSTRAINT "coincidence_alerts_least_amplitude" CHECK("coincidence_alerts"."least_amplitude" BETWEEN -1.7976931348623157e308 AND 1.7976931348623157e308),
	CONSTRAINT "coincidence_alerts_is_active" CHECK("coincidence_alerts"."is_active" IN (0, 1)),
	CONSTRAINT "coincidence_alerts_told_to_change" CHECK("coincidence_alerts"."told_to_change" BETWEEN 0 AND 9007199254740991),
	CONSTRAINT "coincidence_alerts_version" CHECK("coincidence_alerts"."version" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "coincidence_alerts_created_at" CHECK(octet_length("coincidence_alerts"."created_at") = 24 AND "coincidence_alerts"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE INDEX `coincidence_alerts_of_network` ON `coincidence_alerts` (`network_id`);--> statement-breakpoint
CREATE INDEX `coincidence_alerts_of_person` ON `coincidence_alerts` (`person_id`);--> statement-breakpoint
CREATE TABLE `preferences` (
	`person_id` integer PRIMARY KEY NOT NULL,
	`body` text NOT NULL,
	`version` integer DEFAULT 1 NOT NULL,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "preferences_body" CHECK(json_valid("preferences"."body") AND octet_length("preferences"."body") <= 65536),
	CONSTRAINT "preferences_version" CHECK("preferences"."version" BETWEEN 1 AND 9007199254740991)
) STRICT;
--> statement-breakpoint
CREATE TABLE `saved_views` (
	`id` integer PRIMARY KEY NOT NULL,
	`person_id` integer NOT NULL,
	`network_id` integer NOT NULL,
	`page` text NOT NULL,
	`name` text NOT NULL,
	`body` text NOT NULL,
	`version` integer DEFAULT 1 NOT NULL,
	`created_at` text NOT NULL,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`network_id`) REFERENCES `networks`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "saved_views_page" CHECK(octet_length("saved_views"."page") BETWEEN 1 AND 64),
	CONSTRAINT "saved_views_name" CHECK(octet_length("saved_views"."name") BETWEEN 1 AND 200),
	CONSTRAINT "saved_views_body" CHECK(json_valid("saved_views"."body") AND octet_length("saved_views"."body") <= 65536),
	CONSTRAINT "saved_views_version" CHECK("saved_views"."version" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "saved_views_created_at" CHECK(octet_length("saved_views"."created_at") = 24 AND "saved_views"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE UNIQUE INDEX `saved_views_name` ON `saved_views` (`person_id`,`network_id`,`page`,`name`);--> statement-breakpoint
CREATE TABLE `backups` (
	`id` integer PRIMARY KEY NOT NULL,
	`file_name` text NOT NULL,
	`bytes` integer NOT NULL,
	`sha256` text NOT NULL,
	`contents` text NOT NULL,
	`why` text NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer,
	`copied_at` text,
	`removed_at` text,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "backups_file_name" CHECK(octet_length("backups"."file_name") BETWEEN 1 AND 255 AND "backups"."file_name" NOT GLOB '*/*'),
	CONSTRAINT "backups_bytes" CHECK("backups"."bytes" BETWEEN 0 AND 9007199254740991),
	CONSTRAINT "backups_sha256" CHECK(octet_length("backups"."sha256") = 64 AND length("backups"."sha256") = 64 AND "backups"."sha256" NOT GLOB '*[^0-9a-f]*'),
	CONSTRAINT "backups_contents" CHECK(json_valid("backups"."contents") AND octet_length("backups"."contents") <= 1048576),
	CONSTRAINT "backups_why" CHECK("backups"."why" IN ('by-hand', 'schedule', 'before-upgrade')),
	CONSTRAINT "backups_created_at" CHECK(octet_length("backups"."created_at") = 24 AND "backups"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "backups_copied_at" CHECK(octet_length("backups"."copied_at") = 24 AND "backups"."copied_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z'),
	CONSTRAINT "backups_removed_at" CHECK(octet_length("backups"."removed_at") = 24 AND "backups"."removed_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE TABLE `webhook_deliveries` (
	`id` integer PRIMARY KEY NOT NULL,
	`webhook_id` integer NOT NULL,
	`change_number` integer NOT NULL,
	`body` text NOT NULL,
	`state` text NOT NULL,
	`attempts` integer DEFAULT 0 NOT NULL,
	`next_at_ms` integer NOT NULL,
	`status` integer,
	`answer` text DEFAULT '' NOT NULL,
	`created_at_ms` integer NOT NULL,
	FOREIGN KEY (`webhook_id`) REFERENCES `webhooks`(`id`) ON UPDATE no action ON DELETE cascade,
	CONSTRAINT "webhook_deliveries_change_number" CHECK("webhook_deliveries"."change_number" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "webhook_deliveries_body" CHECK(json_valid("webhook_deliveries"."body") AND octet_length("webhook_deliveries"."body") <= 262144),
	CONSTRAINT "webhook_deliveries_state" CHECK("webhook_deliveries"."state" IN ('waiting', 'delivered', 'failed')),
	CONSTRAINT "webhook_deliveries_attempts" CHECK("webhook_deliveries"."attempts" BETWEEN 0 AND 9007199254740991),
	CONSTRAINT "webhook_deliveries_next_at_ms" CHECK("webhook_deliveries"."next_at_ms" BETWEEN 0 AND 253402300799999),
	CONSTRAINT "webhook_deliveries_status" CHECK("webhook_deliveries"."status" BETWEEN 100 AND 599),
	CONSTRAINT "webhook_deliveries_answer" CHECK(octet_length("webhook_deliveries"."answer") BETWEEN 0 AND 4096),
	CONSTRAINT "webhook_deliveries_created_at_ms" CHECK("webhook_deliveries"."created_at_ms" BETWEEN 0 AND 253402300799999)
) STRICT;
--> statement-breakpoint
CREATE INDEX `webhook_deliveries_waiting` ON `webhook_deliveries` (`next_at_ms`) WHERE state = 'waiting';--> statement-breakpoint
CREATE INDEX `webhook_deliveries_of_webhook` ON `webhook_deliveries` (`webhook_id`,`id`);--> statement-breakpoint
CREATE TABLE `webhooks` (
	`id` integer PRIMARY KEY NOT NULL,
	`network_id` integer NOT NULL,
	`url` text NOT NULL,
	`filter` text NOT NULL,
	`sealed_secret` blob NOT NULL,
	`is_active` integer NOT NULL,
	`told_to_change` integer NOT NULL,
	`version` integer DEFAULT 1 NOT NULL,
	`created_at` text NOT NULL,
	`created_by` integer NOT NULL,
	FOREIGN KEY (`network_id`) REFERENCES `networks`(`id`) ON UPDATE no action ON DELETE restrict,
	FOREIGN KEY (`created_by`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE restrict,
	CONSTRAINT "webhooks_url" CHECK(octet_length("webhooks"."url") BETWEEN 1 AND 2000 AND ("webhooks"."url" GLOB 'https://?*' OR "webhooks"."url" GLOB 'http://?*')),
	CONSTRAINT "webhooks_filter" CHECK(json_valid("webhooks"."filter") AND octet_length("webhooks"."filter") <= 16384),
	CONSTRAINT "webhooks_sealed_secret" CHECK(octet_length("webhooks"."sealed_secret") BETWEEN 32 AND 512),
	CONSTRAINT "webhooks_is_active" CHECK("webhooks"."is_active" IN (0, 1)),
	CONSTRAINT "webhooks_told_to_change" CHECK("webhooks"."told_to_change" BETWEEN 0 AND 9007199254740991),
	CONSTRAINT "webhooks_version" CHECK("webhooks"."version" BETWEEN 1 AND 9007199254740991),
	CONSTRAINT "webhooks_created_at" CHECK(octet_length("webhooks"."created_at") = 24 AND "webhooks"."created_at" GLOB '[0-9][0-9][0-9][0-9]-[01][0-9]-[0-3][0-9]T[0-2][0-9]:[0-5][0-9]:[0-6][0-9].[0-9][0-9][0-9]Z')
) STRICT;
--> statement-breakpoint
CREATE INDEX `webhooks_of_network` ON `webhooks` (`network_id`);--> statement-breakpoint
CREATE TABLE `audit` (
	`seq` integer PRIMARY KEY NOT NULL,
	`at` text NOT NULL,
	`actor_kind` text NOT NULL,
	`actor_id` integer,
	`action` text NOT NULL,
	`network_id` integer,
	`subject_kind` text NOT NULL,
	`subject_id` text NOT NULL,
	`details` text NOT NULL,
	`request_id` text,
	`previous_hash` blob NOT NULL,
	`hash` blob NOT NULL,
	CONSTRAINT "audit_seq" CHECK("audit"."seq" >= 1),
	CONSTRAINT "audit_at" CHECK("audit"."at" GLOB '????-??-??T??:??:??.???Z'),
	CONSTRAINT "audit_actor_kind" CHECK("audit"."actor_kind" IN ('person', 'site-key', 'server', 'command')),
	CONSTRAINT "audit_actor_id" CHECK(("audit"."actor_id" IS NOT NULL) = ("audit"."actor_kind" IN ('person', 'site-key'))),
	CONSTRAINT "audit_action_text" CHECK("audit"."action" GLOB '[a-z]*:[a-z]*' AND length("audit"."action") <= 64),
	CONSTRAINT "audit_subject_kind" CHECK(length("audit"."subject_kind") BETWEEN 1 AND 64),
	CONSTRAINT "audit_subject_id" CHECK(length("audit"."subject_id") BETWEEN 1 AND 200),
	CONSTRAINT "audit_details" CHECK(json_type("audit"."details") = 'object' AND length("audit"."details") <= 16384),
	CONSTRAINT "audit_previous_hash" CHECK(length("audit"."previous_hash") = 32),
	CONSTRAINT "audit_hash" CHECK(length("audit"."hash") = 32)
) STRICT;
--> statement-breakpoint
CREATE INDEX `audit_action` ON `audit` (`action`);--> statement-breakpoint
CREATE INDEX `audit_actor` ON `audit` (`actor_kind`,`actor_id`);--> statement-breakpoint
CREATE INDEX `audit_network` ON `audit` (`network_id`);--> statement-breakpoint
CREATE INDEX `audit_subject` ON `audit` (`subject_kind`,`subject_id`);--> statement-breakpoint
CREATE TABLE `kept_mails` (
	`id` integer PRIMARY KEY NOT NULL,
	`received_at` text NOT NULL,
	`sender` text NOT NULL,
	`recipient` text NOT NULL,
	`subject` text NOT NULL,
	`text` text NOT NULL,
	CONSTRAINT "kept_mails_received_at" CHECK("kept_mails"."received_at" GLOB '????-??-??T??:??:??.???Z'),
	CONSTRAINT "kept_mails_sender" CHECK(length("kept_mails"."sender") BETWEEN 1 AND 320),
	CONSTRAINT "kept_mails_recipient" CHECK(length("kept_mails"."recipient") BETWEEN 1 AND 320),
	CONSTRAINT "kept_mails_subject" CHECK(length("kept_mails"."subject") <= 998),
	CONSTRAINT "kept_mails_text" CHECK(length("kept_mails"."text") <= 65536)
) STRICT;
--> statement-breakpoint
CREATE TRIGGER `audit_no_update` BEFORE UPDATE ON `audit`
BEGIN
	SELECT RAISE(ABORT, 'audit: rows are only added, never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `audit_no_delete` BEFORE DELETE ON `audit`
BEGIN
	SELECT RAISE(ABORT, 'audit: rows are only added, never deleted');
END;
--> statement-breakpoint
CREATE TRIGGER `triggers_no_update` BEFORE UPDATE ON `triggers`
BEGIN
	SELECT RAISE(ABORT, 'triggers: rows are only added, never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `triggers_no_delete` BEFORE DELETE ON `triggers`
BEGIN
	SELECT RAISE(ABORT, 'triggers: rows are only added, never deleted');
END;
--> statement-breakpoint
CREATE TRIGGER `event_versions_no_update` BEFORE UPDATE ON `event_versions`
BEGIN
	SELECT RAISE(ABORT, 'event_versions: rows are only added, never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `event_versions_no_delete` BEFORE DELETE ON `event_versions`
BEGIN
	SELECT RAISE(ABORT, 'event_versions: rows are only added, never deleted');
END;
--> statement-breakpoint
CREATE TRIGGER `candidate_versions_no_update` BEFORE UPDATE ON `candidate_versions`
BEGIN
	SELECT RAISE(ABORT, 'candidate_versions: rows are only added, never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `candidate_versions_no_delete` BEFORE DELETE ON `candidate_versions`
BEGIN
	SELECT RAISE(ABORT, 'candidate_versions: rows are only added, never deleted');
END;
--> statement-breakpoint
CREATE TRIGGER `candidate_editors_no_update` BEFORE UPDATE ON `candidate_editors`
BEGIN
	SELECT RAISE(ABORT, 'candidate_editors: rows are only added, never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `candidate_editors_no_delete` BEFORE DELETE ON `candidate_editors`
BEGIN
	SELECT RAISE(ABORT, 'candidate_editors: rows are only added, never deleted');
END;
--> statement-breakpoint
CREATE TRIGGER `snapshots_no_update` BEFORE UPDATE ON `snapshots`
BEGIN
	SELECT RAISE(ABORT, 'snapshots: rows are only added, never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `snapshots_no_delete` BEFORE DELETE ON `snapshots`
BEGIN
	SELECT RAISE(ABORT, 'snapshots: rows are only added, never deleted');
END;
--> statement-breakpoint
CREATE TRIGGER `snapshot_events_no_update` BEFORE UPDATE ON `snapshot_events`
BEGIN
	SELECT RAISE(ABORT, 'snapshot_events: rows are only added, never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `snapshot_events_no_delete` BEFORE DELETE ON `snapshot_events`
BEGIN
	SELECT RAISE(ABORT, 'snapshot_events: rows are only added, never deleted');
END;
--> statement-breakpoint
CREATE TRIGGER `out_of_dates_no_update` BEFORE UPDATE ON `out_of_dates`
BEGIN
	SELECT RAISE(ABORT, 'out_of_dates: rows are only added, never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `out_of_dates_no_delete` BEFORE DELETE ON `out_of_dates`
BEGIN
	SELECT RAISE(ABORT, 'out_of_dates: rows are only added, never deleted');
END;
--> statement-breakpoint
CREATE TRIGGER `claim_decisions_no_update` BEFORE UPDATE ON `claim_decisions`
BEGIN
	SELECT RAISE(ABORT, 'claim_decisions: rows are only added, never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `claim_decisions_no_delete` BEFORE DELETE ON `claim_decisions`
BEGIN
	SELECT RAISE(ABORT, 'claim_decisions: rows are only added, never deleted');
END;
--> statement-breakpoint
CREATE TRIGGER `groundings_no_update` BEFORE UPDATE ON `groundings`
BEGIN
	SELECT RAISE(ABORT, 'groundings: rows are only added, never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `groundings_no_delete` BEFORE DELETE ON `groundings`
BEGIN
	SELECT RAISE(ABORT, 'groundings: rows are only added, never deleted');
END;
--> statement-breakpoint
CREATE TRIGGER `rule_sites_no_update` BEFORE UPDATE ON `rule_sites`
BEGIN
	SELECT RAISE(ABORT, 'rule_sites: rows are only added, never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `rule_sites_no_delete` BEFORE DELETE ON `rule_sites`
BEGIN
	SELECT RAISE(ABORT, 'rule_sites: rows are only added, never deleted');
END;
--> statement-breakpoint
CREATE TRIGGER `rule_exclusions_no_update` BEFORE UPDATE ON `rule_exclusions`
BEGIN
	SELECT RAISE(ABORT, 'rule_exclusions: rows are only added, never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `rule_exclusions_no_delete` BEFORE DELETE ON `rule_exclusions`
BEGIN
	SELECT RAISE(ABORT, 'rule_exclusions: rows are only added, never deleted');
END;
--> statement-breakpoint
CREATE TRIGGER `ephemerides_no_update` BEFORE UPDATE ON `ephemerides`
BEGIN
	SELECT RAISE(ABORT, 'ephemerides: rows are only added, never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `ephemerides_no_delete` BEFORE DELETE ON `ephemerides`
BEGIN
	SELECT RAISE(ABORT, 'ephemerides: rows are only added, never deleted');
END;
--> statement-breakpoint
CREATE TRIGGER `audit_follows` BEFORE INSERT ON `audit`
WHEN NEW.seq <> (SELECT coalesce(max(seq), 0) + 1 FROM audit)
BEGIN
	SELECT RAISE(ABORT, 'audit: seq goes on from the last row by 1');
END;
--> statement-breakpoint
CREATE TRIGGER `site_versions_no_update` BEFORE UPDATE OF `id`, `site_id`, `number`, `from_tai_s`, `from_ps`, `scale`, `clock_id`, `exact_clock`, `position_kind`, `latitude_deg`, `longitude_deg`, `height_m`, `itrs_x_m`, `itrs_y_m`, `itrs_z_m`, `ephemeris_id`, `position_sigma_m`, `delay_ns`, `delay_sigma_ns`, `reading_sigma_ns`, `origin`, `note`, `created_at`, `created_by` ON `site_versions`
BEGIN
	SELECT RAISE(ABORT, 'site_versions: a version is never changed, another takes its place');
END;
--> statement-breakpoint
CREATE TRIGGER `site_versions_superseded_once` BEFORE UPDATE OF `superseded_at`, `superseded_by` ON `site_versions`
WHEN OLD.superseded_at IS NOT NULL
BEGIN
	SELECT RAISE(ABORT, 'site_versions: what is superseded stays so');
END;
--> statement-breakpoint
CREATE TRIGGER `site_versions_no_delete` BEFORE DELETE ON `site_versions`
BEGIN
	SELECT RAISE(ABORT, 'site_versions: versions are kept');
END;
--> statement-breakpoint
CREATE TRIGGER `time_reference_versions_no_update` BEFORE UPDATE OF `id`, `reference_id`, `number`, `sigma_ns`, `note`, `created_at`, `created_by` ON `time_reference_versions`
BEGIN
	SELECT RAISE(ABORT, 'time_reference_versions: a version is never changed, another takes its place');
END;
--> statement-breakpoint
CREATE TRIGGER `time_reference_versions_superseded_once` BEFORE UPDATE OF `superseded_at`, `superseded_by` ON `time_reference_versions`
WHEN OLD.superseded_at IS NOT NULL
BEGIN
	SELECT RAISE(ABORT, 'time_reference_versions: what is superseded stays so');
END;
--> statement-breakpoint
CREATE TRIGGER `time_reference_versions_no_delete` BEFORE DELETE ON `time_reference_versions`
BEGIN
	SELECT RAISE(ABORT, 'time_reference_versions: versions are kept');
END;
--> statement-breakpoint
CREATE TRIGGER `clock_segments_no_update` BEFORE UPDATE OF `id`, `clock_id`, `segment`, `number`, `from_tai_s`, `from_ps`, `at_tai_s`, `at_ps`, `offset_ns`, `offset_sigma_ns`, `rate_ns_per_day`, `rate_sigma_ns_per_day`, `covariance_ns2_per_day`, `reference_id`, `origin`, `fit_id`, `note`, `created_at`, `created_by` ON `clock_segments`
BEGIN
	SELECT RAISE(ABORT, 'clock_segments: a version is never changed, another takes its place');
END;
--> statement-breakpoint
CREATE TRIGGER `clock_segments_superseded_once` BEFORE UPDATE OF `superseded_at`, `superseded_by` ON `clock_segments`
WHEN OLD.superseded_at IS NOT NULL
BEGIN
	SELECT RAISE(ABORT, 'clock_segments: what is superseded stays so');
END;
--> statement-breakpoint
CREATE TRIGGER `clock_segments_no_delete` BEFORE DELETE ON `clock_segments`
BEGIN
	SELECT RAISE(ABORT, 'clock_segments: versions are kept');
END;
--> statement-breakpoint
CREATE TRIGGER `emitter_versions_no_update` BEFORE UPDATE OF `id`, `emitter_id`, `number`, `itrs_x_m`, `itrs_y_m`, `itrs_z_m`, `position_sigma_m`, `scale`, `schedule`, `reference_id`, `tolerance_ns`, `created_at`, `created_by` ON `emitter_versions`
BEGIN
	SELECT RAISE(ABORT, 'emitter_versions: a version is never changed, another takes its place');
END;
--> statement-breakpoint
CREATE TRIGGER `emitter_versions_superseded_once` BEFORE UPDATE OF `superseded_at`, `superseded_by` ON `emitter_versions`
WHEN OLD.superseded_at IS NOT NULL
BEGIN
	SELECT RAISE(ABORT, 'emitter_versions: what is superseded stays so');
END;
--> statement-breakpoint
CREATE TRIGGER `emitter_versions_no_delete` BEFORE DELETE ON `emitter_versions`
BEGIN
	SELECT RAISE(ABORT, 'emitter_versions: versions are kept');
END;
--> statement-breakpoint
CREATE TRIGGER `frame_versions_no_update` BEFORE UPDATE OF `id`, `frame_id`, `number`, `parent_id`, `kind`, `at`, `definition`, `from_site_id`, `to_site_id`, `created_at`, `created_by` ON `frame_versions`
BEGIN
	SELECT RAISE(ABORT, 'frame_versions: a version is never changed, another takes its place');
END;
--> statement-breakpoint
CREATE TRIGGER `frame_versions_superseded_once` BEFORE UPDATE OF `superseded_at`, `superseded_by` ON `frame_versions`
WHEN OLD.superseded_at IS NOT NULL
BEGIN
	SELECT RAISE(ABORT, 'frame_versions: what is superseded stays so');
END;
--> statement-breakpoint
CREATE TRIGGER `frame_versions_no_delete` BEFORE DELETE ON `frame_versions`
BEGIN
	SELECT RAISE(ABORT, 'frame_versions: versions are kept');
END;
--> statement-breakpoint
CREATE TRIGGER `rule_versions_no_update` BEFORE UPDATE OF `id`, `rule_id`, `number`, `minimum_fold`, `sigmas`, `window_kind`, `speed_c`, `margin_ns`, `width_ns`, `frame_id`, `least_amplitude`, `dead_time_ns`, `crowd_limit`, `created_at`, `created_by` ON `rule_versions`
BEGIN
	SELECT RAISE(ABORT, 'rule_versions: a version is never changed, another takes its place');
END;
--> statement-breakpoint
CREATE TRIGGER `rule_versions_superseded_once` BEFORE UPDATE OF `superseded_at`, `superseded_by` ON `rule_versions`
WHEN OLD.superseded_at IS NOT NULL
BEGIN
	SELECT RAISE(ABORT, 'rule_versions: what is superseded stays so');
END;
--> statement-breakpoint
CREATE TRIGGER `rule_versions_no_delete` BEFORE DELETE ON `rule_versions`
BEGIN
	SELECT RAISE(ABORT, 'rule_versions: versions are kept');
END;
--> statement-breakpoint
CREATE TRIGGER `set_asides_no_update` BEFORE UPDATE OF `id`, `network_id`, `site_id`, `series`, `sequence`, `trigger_id`, `reason`, `detail`, `verbatim`, `content_hash`, `received_at_ms`, `intake_id`, `line` ON `set_asides`
BEGIN
	SELECT RAISE(ABORT, 'set_asides: what came is never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `set_asides_no_delete` BEFORE DELETE ON `set_asides`
BEGIN
	SELECT RAISE(ABORT, 'set_asides: rows are only decided, never deleted');
END;
--> statement-breakpoint
CREATE TRIGGER `leap_second_tables_no_update` BEFORE UPDATE OF `id`, `body`, `sha1`, `updated_tai_s`, `expires_tai_s`, `created_at`, `created_by` ON `leap_second_tables`
BEGIN
	SELECT RAISE(ABORT, 'leap_second_tables: a table is never changed, another takes its place');
END;
--> statement-breakpoint
CREATE TRIGGER `leap_second_tables_no_delete` BEFORE DELETE ON `leap_second_tables`
BEGIN
	SELECT RAISE(ABORT, 'leap_second_tables: tables are kept');
END;
--> statement-breakpoint
CREATE TRIGGER `orientation_tables_no_update` BEFORE UPDATE OF `id`, `body`, `sha256`, `first_mjd`, `last_mjd`, `predicted_from_mjd`, `created_at`, `created_by` ON `orientation_tables`
BEGIN
	SELECT RAISE(ABORT, 'orientation_tables: a table is never changed, another takes its place');
END;
--> statement-breakpoint
CREATE TRIGGER `orientation_tables_no_delete` BEFORE DELETE ON `orientation_tables`
BEGIN
	SELECT RAISE(ABORT, 'orientation_tables: tables are kept');
END;
--> statement-breakpoint
CREATE TRIGGER `clock_fits_no_update` BEFORE UPDATE OF `id`, `clock_id`, `site_id`, `emitter_version_id`, `from_tai_s`, `from_ps`, `to_tai_s`, `to_ps`, `at_tai_s`, `at_ps`, `offset_ns`, `offset_sigma_ns`, `rate_ns_per_day`, `rate_sigma_ns_per_day`, `covariance_ns2_per_day`, `chi_square`, `points`, `outliers`, `findings`, `created_at`, `created_by` ON `clock_fits`
BEGIN
	SELECT RAISE(ABORT, 'clock_fits: a fit is never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `clock_fits_no_delete` BEFORE DELETE ON `clock_fits`
WHEN EXISTS (SELECT 1 FROM clock_segments WHERE fit_id = OLD.id)
BEGIN
	SELECT RAISE(ABORT, 'clock_fits: a fit that a segment came from is kept');
END;
--> statement-breakpoint
CREATE TRIGGER `stored_files_no_update` BEFORE UPDATE ON `stored_files`
BEGIN
	SELECT RAISE(ABORT, 'stored_files: a file is named by its content and never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `networks_code_stays` BEFORE UPDATE OF `code` ON `networks`
WHEN NEW.code <> OLD.code
BEGIN
	SELECT RAISE(ABORT, 'networks: a code that results may name is never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `sites_code_stays` BEFORE UPDATE OF `code` ON `sites`
WHEN NEW.code <> OLD.code
BEGIN
	SELECT RAISE(ABORT, 'sites: a code that results may name is never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `rules_code_stays` BEFORE UPDATE OF `code` ON `rules`
WHEN NEW.code <> OLD.code
BEGIN
	SELECT RAISE(ABORT, 'rules: a code that results may name is never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `frames_code_stays` BEFORE UPDATE OF `code` ON `frames`
WHEN NEW.code <> OLD.code
BEGIN
	SELECT RAISE(ABORT, 'frames: a code that results may name is never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `clocks_code_stays` BEFORE UPDATE OF `code` ON `clocks`
WHEN NEW.code <> OLD.code
BEGIN
	SELECT RAISE(ABORT, 'clocks: a code that results may name is never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `networks_change_head` AFTER INSERT ON `networks`
BEGIN
	INSERT INTO change_heads (network_id) VALUES (NEW.id);
END;
--> statement-breakpoint
CREATE TRIGGER `sites_stream` AFTER INSERT ON `sites`
BEGIN
	INSERT INTO site_streams (site_id) VALUES (NEW.id);
END;
--> statement-breakpoint
CREATE TRIGGER `changes_follow` BEFORE INSERT ON `changes`
WHEN NEW.number IS NOT (SELECT last + 1 FROM change_heads WHERE network_id = NEW.network_id)
BEGIN
	SELECT RAISE(ABORT, 'changes: the number goes on from the last by 1');
END;
--> statement-breakpoint
CREATE TRIGGER `changes_head` AFTER INSERT ON `changes`
BEGIN
	UPDATE change_heads SET last = NEW.number WHERE network_id = NEW.network_id;
END;
--> statement-breakpoint
CREATE TRIGGER `changes_no_update` BEFORE UPDATE ON `changes`
BEGIN
	SELECT RAISE(ABORT, 'changes: a change is never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `changes_no_delete` BEFORE DELETE ON `changes`
WHEN OLD.number >= (SELECT oldest FROM change_heads WHERE network_id = OLD.network_id)
BEGIN
	SELECT RAISE(ABORT, 'changes: only those before the oldest that is kept are deleted');
END;
--> statement-breakpoint
CREATE TRIGGER `change_heads_go_on` BEFORE UPDATE ON `change_heads`
WHEN NEW.last < OLD.last OR NEW.oldest < OLD.oldest
BEGIN
	SELECT RAISE(ABORT, 'change_heads: numbers never go back');
END;
--> statement-breakpoint
CREATE TRIGGER `change_heads_no_delete` BEFORE DELETE ON `change_heads`
BEGIN
	SELECT RAISE(ABORT, 'change_heads: numbers never go back');
END;
--> statement-breakpoint
CREATE TRIGGER `site_streams_go_on` BEFORE UPDATE OF `complete_tai_s`, `complete_ps` ON `site_streams`
WHEN OLD.complete_tai_s IS NOT NULL AND (NEW.complete_tai_s IS NULL OR (NEW.complete_tai_s, NEW.complete_ps) < (OLD.complete_tai_s, OLD.complete_ps))
BEGIN
	SELECT RAISE(ABORT, 'site_streams: complete up to never goes back');
END;
--> statement-breakpoint
CREATE TRIGGER `series_go_on` BEFORE UPDATE OF `received` ON `series`
WHEN NEW.received < OLD.received
BEGIN
	SELECT RAISE(ABORT, 'series: what was received stays counted');
END;
--> statement-breakpoint
CREATE TRIGGER `series_no_delete` BEFORE DELETE ON `series`
BEGIN
	SELECT RAISE(ABORT, 'series: what was received stays counted');
END;
--> statement-breakpoint
CREATE TRIGGER `events_of_their_trigger` BEFORE INSERT ON `events`
WHEN NOT EXISTS (SELECT 1 FROM triggers WHERE id = NEW.trigger_id AND site_id = NEW.site_id AND kind = NEW.kind)
BEGIN
	SELECT RAISE(ABORT, 'events: an event has the site and kind of its trigger');
END;
--> statement-breakpoint
CREATE TRIGGER `events_once` BEFORE INSERT ON `events`
WHEN EXISTS (
	SELECT 1 FROM triggers AS own
	JOIN triggers AS other ON other.site_id = own.site_id AND other.series = own.series AND other.sequence = own.sequence AND other.id <> own.id
	JOIN events AS standing ON standing.trigger_id = other.id
	WHERE own.id = NEW.trigger_id
)
BEGIN
	SELECT RAISE(ABORT, 'events: another content of the same identity stands already');
END;
--> statement-breakpoint
CREATE TRIGGER `events_keep_trigger` BEFORE UPDATE OF `trigger_id`, `network_id`, `site_id`, `kind` ON `events`
BEGIN
	SELECT RAISE(ABORT, 'events: an event keeps its trigger, site and kind');
END;
--> statement-breakpoint
CREATE TRIGGER `events_kept_on_update` BEFORE UPDATE ON `events`
WHEN NOT EXISTS (SELECT 1 FROM event_versions WHERE trigger_id = OLD.trigger_id AND version = OLD.version) OR NEW.version <= OLD.version
BEGIN
	SELECT RAISE(ABORT, 'events: keep the version in event_versions before it is computed anew');
END;
--> statement-breakpoint
CREATE TRIGGER `events_kept_on_delete` BEFORE DELETE ON `events`
WHEN NOT EXISTS (SELECT 1 FROM event_versions WHERE trigger_id = OLD.trigger_id AND version = OLD.version)
BEGIN
	SELECT RAISE(ABORT, 'events: keep the version in event_versions before it is withdrawn');
END;
--> statement-breakpoint
CREATE TRIGGER `coincidences_no_update` BEFORE UPDATE OF `id`, `network_id`, `rule_version_id`, `set_hash`, `fold`, `first_tai_s`, `first_ps`, `span_ns`, `class`, `timelike_pairs`, `spacelike_pairs`, `undecided_pairs`, `nearest_margin_sigma`, `least_turning_speed_c`, `amplitude` ON `coincidences`
BEGIN
	SELECT RAISE(ABORT, 'coincidences: what was computed is never changed, another takes its place');
END;
--> statement-breakpoint
CREATE TRIGGER `coincidences_moves` BEFORE UPDATE OF `state` ON `coincidences`
WHEN NEW.state <> OLD.state AND (OLD.state, NEW.state) NOT IN (VALUES ('staged', 'open'), ('staged', 'final'), ('open', 'final'), ('open', 'former'), ('final', 'former'))
BEGIN
	SELECT RAISE(ABORT, 'coincidences: staged becomes open or final, open becomes final, either becomes former');
END;
--> statement-breakpoint
CREATE TRIGGER `coincidences_no_delete` BEFORE DELETE ON `coincidences`
WHEN OLD.state <> 'staged'
BEGIN
	SELECT RAISE(ABORT, 'coincidences: only what is staged is deleted');
END;
--> statement-breakpoint
CREATE TRIGGER `coincidences_members` AFTER UPDATE OF `is_current` ON `coincidences`
BEGIN
	UPDATE members SET is_current = NEW.is_current WHERE coincidence_id = NEW.id;
END;
--> statement-breakpoint
CREATE TRIGGER `signatures_no_delete` BEFORE DELETE ON `signatures`
BEGIN
	SELECT RAISE(ABORT, 'signatures: a signature is withdrawn or superseded, never deleted');
END;
--> statement-breakpoint
CREATE TRIGGER `signatures_no_update` BEFORE UPDATE OF `id`, `candidate_id`, `snapshot_id`, `person_id`, `name`, `decision`, `reason`, `snapshot_sha256`, `signed_at`, `sha256`, `previous_sha256` ON `signatures`
BEGIN
	SELECT RAISE(ABORT, 'signatures: a signature is never changed');
END;
--> statement-breakpoint
CREATE TRIGGER `signatures_end_once` BEFORE UPDATE OF `withdrawn_at`, `superseded_by_id` ON `signatures`
WHEN OLD.withdrawn_at IS NOT NULL OR OLD.superseded_by_id IS NOT NULL
BEGIN
	SELECT RAISE(ABORT, 'signatures: what was withdrawn or superseded stays so');
END;
--> statement-breakpoint
CREATE TRIGGER `signatures_of_others` BEFORE INSERT ON `signatures`
WHEN EXISTS (SELECT 1 FROM candidates WHERE id = NEW.candidate_id AND author_id = NEW.person_id) OR EXISTS (SELECT 1 FROM candidate_editors WHERE candidate_id = NEW.candidate_id AND person_id = NEW.person_id)
BEGIN
	SELECT RAISE(ABORT, 'signatures: nobody signs what they wrote or edited');
END;
--> statement-breakpoint
CREATE TRIGGER `signatures_of_snapshot` BEFORE INSERT ON `signatures`
WHEN NEW.snapshot_sha256 IS NOT (SELECT sha256 FROM snapshots WHERE id = NEW.snapshot_id)
BEGIN
	SELECT RAISE(ABORT, 'signatures: a signature has the hash of its snapshot');
END;
--> statement-breakpoint
CREATE TRIGGER `claim_decisions_of_candidate` BEFORE INSERT ON `claim_decisions`
WHEN (SELECT candidate_id FROM claims WHERE id = NEW.claim_id) IS NOT (SELECT candidate_id FROM signatures WHERE id = NEW.signature_id)
BEGIN
	SELECT RAISE(ABORT, 'claim_decisions: the claim is of another candidate than the signature');
END;
