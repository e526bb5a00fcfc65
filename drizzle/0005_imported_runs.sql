CREATE TABLE `imports` (
	`run_id` text PRIMARY KEY NOT NULL,
	`person_id` text NOT NULL,
	`imported_at` integer DEFAULT (unixepoch('subsec') * 1000) NOT NULL,
	`file_name` text NOT NULL,
	`digest` text NOT NULL,
	`bytes` integer NOT NULL,
	`rows_left_out` integer NOT NULL,
	`mapping` text NOT NULL,
	`field` text,
	FOREIGN KEY (`run_id`) REFERENCES `runs`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action
);
--> statement-breakpoint
CREATE TABLE `stated_diameters` (
	`reading_id` text PRIMARY KEY NOT NULL,
	`diameter_metres` real NOT NULL,
	`u_diameter_metres` real NOT NULL,
	`left_metres` real,
	`right_metres` real,
	FOREIGN KEY (`reading_id`) REFERENCES `readings`(`id`) ON UPDATE no action ON DELETE no action
);
--> statement-breakpoint
PRAGMA foreign_keys=OFF;--> statement-breakpoint
CREATE TABLE `__new_readings` (
	`id` text PRIMARY KEY NOT NULL,
	`run_id` text NOT NULL,
	`number` integer NOT NULL,
	`bench_id` text,
	`revision` integer,
	`person_id` text NOT NULL,
	`captured_at` integer NOT NULL,
	`source` text DEFAULT 'measured' NOT NULL,
	`window_seconds` real NOT NULL,
	`polarity` integer NOT NULL,
	`anode_volts` real NOT NULL,
	`u_anode_volts` real NOT NULL,
	`anode_effective_count` real NOT NULL,
	`coil_amps` real NOT NULL,
	`u_coil_amps` real NOT NULL,
	`coil_effective_count` real NOT NULL,
	`anode_digit_volts` real,
	`coil_digit_amps` real,
	`states` text NOT NULL,
	FOREIGN KEY (`run_id`) REFERENCES `runs`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action
);
--> statement-breakpoint
INSERT INTO `__new_readings`("id", "run_id", "number", "bench_id", "revision", "person_id", "captured_at", "source", "window_seconds", "polarity", "anode_volts", "u_anode_volts", "anode_effective_count", "coil_amps", "u_coil_amps", "coil_effective_count", "anode_digit_volts", "coil_digit_amps", "states") SELECT "id", "run_id", "number", "bench_id", "revision", "person_id", "captured_at", "source", "window_seconds", "polarity", "anode_volts", "u_anode_volts", "anode_effective_count", "coil_amps", "u_coil_amps", "coil_effective_count", "anode_digit_volts", "coil_digit_amps", "states" FROM `readings`;--> statement-breakpoint
DROP TABLE `readings`;--> statement-breakpoint
ALTER TABLE `__new_readings` RENAME TO `readings`;--> statement-breakpoint
PRAGMA foreign_keys=ON;--> statement-breakpoint
CREATE UNIQUE INDEX `readings_runId_number_unique` ON `readings` (`run_id`,`number`);--> statement-breakpoint
CREATE TABLE `__new_runs` (
	`id` text PRIMARY KEY NOT NULL,
	`bench_id` text,
	`person_id` text NOT NULL,
	`started_at` integer DEFAULT (unixepoch('subsec') * 1000) NOT NULL,
	`ended_at` integer,
	FOREIGN KEY (`bench_id`) REFERENCES `benches`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action
);
--> statement-breakpoint
INSERT INTO `__new_runs`("id", "bench_id", "person_id", "started_at", "ended_at") SELECT "id", "bench_id", "person_id", "started_at", "ended_at" FROM `runs`;--> statement-breakpoint
DROP TABLE `runs`;--> statement-breakpoint
ALTER TABLE `__new_runs` RENAME TO `runs`;--> statement-breakpoint
CREATE INDEX `runs_bench` ON `runs` (`bench_id`,`started_at`);