CREATE TABLE `relations` (
	`id` text PRIMARY KEY NOT NULL,
	`person_id` text NOT NULL,
	`bench_id` text NOT NULL,
	`text` text NOT NULL,
	`symbols` text NOT NULL,
	`seed` integer NOT NULL,
	`checked_at` integer DEFAULT (unixepoch('subsec') * 1000) NOT NULL,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`bench_id`) REFERENCES `benches`(`id`) ON UPDATE no action ON DELETE no action
);
--> statement-breakpoint
CREATE INDEX `relations_person` ON `relations` (`person_id`,`checked_at`);