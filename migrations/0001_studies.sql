CREATE TABLE `front_studies` (
	`id` char(24) character set ascii collate ascii_bin NOT NULL,
	`group_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`analysis_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`kind` enum('sweep','null-front','self-test') NOT NULL,
	`parameters` json NOT NULL,
	`result` json,
	`job_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`created_by` char(24) character set ascii collate ascii_bin NOT NULL,
	`created_at` datetime(3) NOT NULL,
	`finished_at` datetime(3),
	CONSTRAINT `front_studies_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
ALTER TABLE `jobs` MODIFY COLUMN `kind` enum('ingest','analysis','study') NOT NULL;--> statement-breakpoint
ALTER TABLE `detections` ADD `model` json;--> statement-breakpoint
ALTER TABLE `run_versions` ADD `drift` json;--> statement-breakpoint
ALTER TABLE `front_studies` ADD CONSTRAINT `front_studies_group_id_member_groups_id_fk` FOREIGN KEY (`group_id`) REFERENCES `member_groups`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `front_studies` ADD CONSTRAINT `front_studies_analysis_id_analyses_id_fk` FOREIGN KEY (`analysis_id`) REFERENCES `analyses`(`id`) ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `front_studies` ADD CONSTRAINT `front_studies_created_by_users_id_fk` FOREIGN KEY (`created_by`) REFERENCES `users`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX `front_studies_by_analysis` ON `front_studies` (`group_id`,`analysis_id`,`created_at`);--> statement-breakpoint
UPDATE `analyses` SET `parameters` = JSON_MERGE_PATCH('{"reading":"threshold","bootstrap":{"blockLength":1},"front":{"powerLawIn":"log-time","covariance":"diagonal"}}', `parameters`);
