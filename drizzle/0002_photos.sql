CREATE TABLE `photo_measurements` (
	`id` text PRIMARY KEY NOT NULL,
	`photo_id` text NOT NULL,
	`person_id` text NOT NULL,
	`scale_marks` text NOT NULL,
	`points` text NOT NULL,
	`diameter_metres` real NOT NULL,
	`u_circle_metres` real NOT NULL,
	`circle_degrees_of_freedom` real,
	`u_scale_metres` real NOT NULL,
	`scale_degrees_of_freedom` real,
	`measured_at` integer DEFAULT (unixepoch('subsec') * 1000) NOT NULL,
	FOREIGN KEY (`photo_id`) REFERENCES `photos`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action
);
--> statement-breakpoint
CREATE INDEX `photo_measurements_photo` ON `photo_measurements` (`photo_id`);--> statement-breakpoint
CREATE TABLE `photos` (
	`id` text PRIMARY KEY NOT NULL,
	`reading_id` text NOT NULL,
	`person_id` text NOT NULL,
	`uploaded_at` integer DEFAULT (unixepoch('subsec') * 1000) NOT NULL,
	`digest` text NOT NULL,
	`width` integer NOT NULL,
	`height` integer NOT NULL,
	`bytes` integer NOT NULL,
	FOREIGN KEY (`reading_id`) REFERENCES `readings`(`id`) ON UPDATE no action ON DELETE no action,
	FOREIGN KEY (`person_id`) REFERENCES `people`(`id`) ON UPDATE no action ON DELETE no action
);
--> statement-breakpoint
CREATE INDEX `photos_reading` ON `photos` (`reading_id`);