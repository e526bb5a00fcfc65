CREATE TABLE `checklists` (
	`id` text PRIMARY KEY NOT NULL,
	`run_id` text NOT NULL,
	`person_id` text NOT NULL,
	`revision` integer NOT NULL,
	`contacts` text NOT NULL,
	`ticked_at` integer DEFAULT (unixepoch('subsec') * 1000) NOT NULL,
	FOREIGN KEY (`run_id`) REFERENCES `runs`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action
);
--> statement-breakpoint
CREATE INDEX `checklists_run` ON `checklists` (`run_id`);--> statement-breakpoint
CREATE TABLE `rungs` (
	`id` text PRIMARY KEY NOT NULL,
	`reading_id` text NOT NULL,
	`person_id` text NOT NULL,
	`rung` text NOT NULL,
	`setting_half_width_amps` real,
	`entered_at` integer DEFAULT (unixepoch('subsec') * 1000) NOT NULL,
	FOREIGN KEY (`reading_id`) REFERENCES `readings`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action
);
--> statement-breakpoint
CREATE INDEX `rungs_reading` ON `rungs` (`reading_id`);--> statement-breakpoint
ALTER TABLE `readings` ADD `source` text DEFAULT 'measured' NOT NULL;--> statement-breakpoint
ALTER TABLE `readings` ADD `anode_digit_volts` real;--> statement-breakpoint
ALTER TABLE `readings` ADD `coil_digit_amps` real;