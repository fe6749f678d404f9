-- The first schema as it was released, with its row. Never changed: every later program must bring such a database up to date.
CREATE TABLE `deployment` (
	`row` integer PRIMARY KEY NOT NULL,
	`id` text NOT NULL,
	`created_at` text NOT NULL,
	`created_with` text NOT NULL,
	CONSTRAINT "deployment_one_row" CHECK("deployment"."row" = 1),
	CONSTRAINT "deployment_id" CHECK(length("deployment"."id") = 36),
	CONSTRAINT "deployment_created_at" CHECK("deployment"."created_at" GLOB '????-??-??T??:??:??.???Z'),
	CONSTRAINT "deployment_created_with" CHECK(length("deployment"."created_with") BETWEEN 1 AND 64)
) STRICT;

CREATE TABLE __drizzle_migrations (id SERIAL PRIMARY KEY, hash text NOT NULL, created_at numeric);
INSERT INTO __drizzle_migrations (hash, created_at) VALUES ('f', 1796123958914);
INSERT INTO deployment VALUES (1, '0b6f3c0e-5a44-4c39-9d53-2f3f7a1d9c11', '2026-11-02T08:00:00.000Z', '0.1.0');
