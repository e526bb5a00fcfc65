CREATE TABLE `spool_marks` (
	`bridge_id` text PRIMARY KEY NOT NULL,
	`confirmed_event` integer NOT NULL,
	`confirmed_summary` integer NOT NULL
);
