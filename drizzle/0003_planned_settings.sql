CREATE TABLE `planned_settings` (
	`id` text PRIMARY KEY NOT NULL,
	`run_id` text NOT NULL,
	`person_id` text NOT NULL,
	`anode_volts` real NOT NULL,
	`coil_amps` real NOT NULL,
	`polarity` integer NOT NULL,
	`added_at` integer DEFAULT (unixepoch('subsec') * 1000) NOT NULL,
	FOREIGN KEY (`run_id`) REFERENCES `runs`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action
);
--> statement-breakpoint
CREATE UNIQUE INDEX `planned_settings_runId_anodeVolts_coilAmps_polarity_unique` ON `planned_settings` (`run_id`,`anode_volts`,`coil_amps`,`polarity`);--> statement-breakpoint
CREATE TABLE `statements` (
	`id` text PRIMARY KEY NOT NULL,
	`run_id` text NOT NULL,
	`person_id` text NOT NULL,
	`fit` text NOT NULL,
	`stated_at` integer DEFAULT (unixepoch('subsec') * 1000) NOT NULL,
	FOREIGN KEY (`run_id`) REFERENCES `runs`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action
);
--> statement-breakpoint
CREATE INDEX `statements_run` ON `statements` (`run_id`);