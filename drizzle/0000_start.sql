CREATE TABLE `acknowledgements` (
	`person_id` text NOT NULL,
	`term` text NOT NULL,
	`cautions_version` integer NOT NULL,
	`acknowledged_at` integer DEFAULT (unixepoch('subsec') * 1000) NOT NULL,
	PRIMARY KEY(`person_id`, `term`, `cautions_version`),
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action
);
--> statement-breakpoint
CREATE TABLE `bench_commands` (
	`id` text PRIMARY KEY NOT NULL,
	`bench_id` text,
	`person_id` text NOT NULL,
	`asked_at` integer DEFAULT (unixepoch('subsec') * 1000) NOT NULL,
	`kind` text NOT NULL,
	`asked` text NOT NULL,
	`outcome` text,
	`answer` text,
	`answered_at` integer,
	FOREIGN KEY (`bench_id`) REFERENCES `benches`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action
);
--> statement-breakpoint
CREATE INDEX `bench_commands_bench` ON `bench_commands` (`bench_id`,`asked_at`);--> statement-breakpoint
CREATE TABLE `bench_events` (
	`bridge_id` text NOT NULL,
	`sequence` integer NOT NULL,
	`bench_id` text,
	`kind` text NOT NULL,
	`happened_at` integer NOT NULL,
	`person_id` text,
	`person_name` text,
	`sentence` text NOT NULL,
	`data` text NOT NULL,
	PRIMARY KEY(`bridge_id`, `sequence`)
);
--> statement-breakpoint
CREATE INDEX `bench_events_bench` ON `bench_events` (`bench_id`,`happened_at`);--> statement-breakpoint
CREATE TABLE `bench_revisions` (
	`bench_id` text NOT NULL,
	`revision` integer NOT NULL,
	`config` text NOT NULL,
	`person_id` text,
	`note` text DEFAULT '' NOT NULL,
	`created_at` integer DEFAULT (unixepoch('subsec') * 1000) NOT NULL,
	PRIMARY KEY(`bench_id`, `revision`),
	FOREIGN KEY (`bench_id`) REFERENCES `benches`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action
);
--> statement-breakpoint
CREATE TABLE `benches` (
	`id` text PRIMARY KEY NOT NULL,
	`name` text NOT NULL,
	`place` text NOT NULL,
	`created_at` integer DEFAULT (unixepoch('subsec') * 1000) NOT NULL
);
--> statement-breakpoint
CREATE TABLE `channel_summaries` (
	`bridge_id` text NOT NULL,
	`sequence` integer NOT NULL,
	`bench_id` text NOT NULL,
	`second` integer NOT NULL,
	`channel` text NOT NULL,
	`min` real NOT NULL,
	`mean` real NOT NULL,
	`max` real NOT NULL,
	`count` integer NOT NULL,
	PRIMARY KEY(`bridge_id`, `sequence`)
);
--> statement-breakpoint
CREATE INDEX `channel_summaries_bench` ON `channel_summaries` (`bench_id`,`second`);--> statement-breakpoint
CREATE TABLE `class_benches` (
	`class_id` text NOT NULL,
	`bench_id` text NOT NULL,
	PRIMARY KEY(`class_id`, `bench_id`),
	FOREIGN KEY (`class_id`) REFERENCES `classes`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`bench_id`) REFERENCES `benches`(`id`) ON UPDATE no action ON DELETE no action
);
--> statement-breakpoint
CREATE TABLE `class_members` (
	`class_id` text NOT NULL,
	`person_id` text NOT NULL,
	PRIMARY KEY(`class_id`, `person_id`),
	FOREIGN KEY (`class_id`) REFERENCES `classes`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action
);
--> statement-breakpoint
CREATE INDEX `class_members_person` ON `class_members` (`person_id`);--> statement-breakpoint
CREATE TABLE `classes` (
	`id` text PRIMARY KEY NOT NULL,
	`name` text NOT NULL,
	`created_at` integer DEFAULT (unixepoch('subsec') * 1000) NOT NULL
);
--> statement-breakpoint
CREATE TABLE `edges` (
	`id` text PRIMARY KEY NOT NULL,
	`reading_id` text NOT NULL,
	`person_id` text NOT NULL,
	`left_metres` real NOT NULL,
	`right_metres` real NOT NULL,
	`entered_at` integer DEFAULT (unixepoch('subsec') * 1000) NOT NULL,
	FOREIGN KEY (`reading_id`) REFERENCES `readings`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action
);
--> statement-breakpoint
CREATE INDEX `edges_reading` ON `edges` (`reading_id`);--> statement-breakpoint
CREATE TABLE `people` (
	`id` text PRIMARY KEY NOT NULL,
	`email` text NOT NULL,
	`name` text NOT NULL,
	`role` text NOT NULL,
	`password_hash` text NOT NULL,
	`room_light` text DEFAULT 'lit' NOT NULL,
	`created_at` integer DEFAULT (unixepoch('subsec') * 1000) NOT NULL,
	`disabled_at` integer
);
--> statement-breakpoint
CREATE UNIQUE INDEX `people_email_unique` ON `people` (`email`);--> statement-breakpoint
CREATE TABLE `reading_samples` (
	`reading_id` text NOT NULL,
	`channel` text NOT NULL,
	`times_seconds` blob NOT NULL,
	`values` blob NOT NULL,
	`mean` real,
	`standard_deviation` real,
	`standard_error` real,
	`effective_count` real,
	`count` integer NOT NULL,
	PRIMARY KEY(`reading_id`, `channel`),
	FOREIGN KEY (`reading_id`) REFERENCES `readings`(`id`) ON UPDATE no action ON DELETE no action
);
--> statement-breakpoint
CREATE TABLE `readings` (
	`id` text PRIMARY KEY NOT NULL,
	`run_id` text NOT NULL,
	`number` integer NOT NULL,
	`bench_id` text NOT NULL,
	`revision` integer NOT NULL,
	`person_id` text NOT NULL,
	`captured_at` integer NOT NULL,
	`window_seconds` real NOT NULL,
	`polarity` integer NOT NULL,
	`anode_volts` real NOT NULL,
	`u_anode_volts` real NOT NULL,
	`anode_effective_count` real NOT NULL,
	`coil_amps` real NOT NULL,
	`u_coil_amps` real NOT NULL,
	`coil_effective_count` real NOT NULL,
	`states` text NOT NULL,
	FOREIGN KEY (`run_id`) REFERENCES `runs`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action
);
--> statement-breakpoint
CREATE UNIQUE INDEX `readings_runId_number_unique` ON `readings` (`run_id`,`number`);--> statement-breakpoint
CREATE TABLE `runs` (
	`id` text PRIMARY KEY NOT NULL,
	`bench_id` text NOT NULL,
	`person_id` text NOT NULL,
	`started_at` integer DEFAULT (unixepoch('subsec') * 1000) NOT NULL,
	`ended_at` integer,
	FOREIGN KEY (`bench_id`) REFERENCES `benches`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action
);
--> statement-breakpoint
CREATE INDEX `runs_bench` ON `runs` (`bench_id`,`started_at`);--> statement-breakpoint
CREATE TABLE `sessions` (
	`id` text PRIMARY KEY NOT NULL,
	`person_id` text NOT NULL,
	`created_at` integer DEFAULT (unixepoch('subsec') * 1000) NOT NULL,
	`last_seen_at` integer DEFAULT (unixepoch('subsec') * 1000) NOT NULL,
	`expires_at` integer NOT NULL,
	`revoked_at` integer,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action
);
--> statement-breakpoint
CREATE INDEX `sessions_person` ON `sessions` (`person_id`);--> statement-breakpoint
CREATE TABLE `strikes` (
	`reading_id` text PRIMARY KEY NOT NULL,
	`person_id` text NOT NULL,
	`reason` text NOT NULL,
	`struck_at` integer DEFAULT (unixepoch('subsec') * 1000) NOT NULL,
	FOREIGN KEY (`reading_id`) REFERENCES `readings`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action
);
