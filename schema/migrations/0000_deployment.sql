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
