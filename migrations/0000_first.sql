CREATE TABLE `analyses` (
	`id` char(24) character set ascii collate ascii_bin NOT NULL,
	`group_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`run_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`run_version` int NOT NULL,
	`detection_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`number` int NOT NULL,
	`label` varchar(120),
	`parameters` json NOT NULL,
	`provenance` json NOT NULL,
	`summary` json,
	`job_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`created_by` char(24) character set ascii collate ascii_bin NOT NULL,
	`created_at` datetime(3) NOT NULL,
	`finished_at` datetime(3),
	CONSTRAINT `analyses_id` PRIMARY KEY(`id`),
	CONSTRAINT `analyses_numbered` UNIQUE(`run_id`,`number`)
);
--> statement-breakpoint
CREATE TABLE `archives` (
	`id` char(24) character set ascii collate ascii_bin NOT NULL,
	`group_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`run_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`blob_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`filename` varchar(300) NOT NULL,
	`role` enum('shots','calibration-dark','calibration-bright') NOT NULL,
	`times_us` json,
	`state` enum('waiting','read','refused') NOT NULL,
	`format` varchar(40),
	`problem` json,
	`created_by` char(24) character set ascii collate ascii_bin NOT NULL,
	`created_at` datetime(3) NOT NULL,
	CONSTRAINT `archives_id` PRIMARY KEY(`id`),
	CONSTRAINT `archives_once_per_role` UNIQUE(`run_id`,`blob_id`,`role`)
);
--> statement-breakpoint
CREATE TABLE `archive_chunks` (
	`blob_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`seq` int NOT NULL,
	`data` mediumblob NOT NULL,
	CONSTRAINT `archive_chunks_blob_id_seq_pk` PRIMARY KEY(`blob_id`,`seq`)
);
--> statement-breakpoint
CREATE TABLE `archive_blobs` (
	`id` char(24) character set ascii collate ascii_bin NOT NULL,
	`group_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`sha256` char(64) character set ascii collate ascii_bin,
	`bytes` bigint NOT NULL,
	`complete` boolean NOT NULL,
	`created_at` datetime(3) NOT NULL,
	CONSTRAINT `archive_blobs_id` PRIMARY KEY(`id`),
	CONSTRAINT `archive_blobs_by_hash` UNIQUE(`group_id`,`sha256`)
);
--> statement-breakpoint
CREATE TABLE `detections` (
	`id` char(24) character set ascii collate ascii_bin NOT NULL,
	`group_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`run_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`run_version` int NOT NULL,
	`number` int NOT NULL,
	`method` enum('fixed','mixture','calibration') NOT NULL,
	`label` varchar(120),
	`sites` json NOT NULL,
	`created_by` char(24) character set ascii collate ascii_bin NOT NULL,
	`created_at` datetime(3) NOT NULL,
	CONSTRAINT `detections_id` PRIMARY KEY(`id`),
	CONSTRAINT `detections_numbered` UNIQUE(`run_id`,`number`)
);
--> statement-breakpoint
CREATE TABLE `member_groups` (
	`id` char(24) character set ascii collate ascii_bin NOT NULL,
	`name` varchar(120) NOT NULL,
	`created_at` datetime(3) NOT NULL,
	CONSTRAINT `member_groups_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `idempotency_keys` (
	`group_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`user_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`key` varchar(120) NOT NULL,
	`request_hash` char(64) character set ascii collate ascii_bin NOT NULL,
	`status` smallint,
	`answer` json,
	`created_at` datetime(3) NOT NULL,
	CONSTRAINT `idempotency_keys_group_id_user_id_key_pk` PRIMARY KEY(`group_id`,`user_id`,`key`)
);
--> statement-breakpoint
CREATE TABLE `jobs` (
	`id` char(24) character set ascii collate ascii_bin NOT NULL,
	`group_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`kind` enum('ingest','analysis') NOT NULL,
	`run_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`payload` json NOT NULL,
	`state` enum('queued','running','done','failed','cancelled') NOT NULL,
	`progress` double NOT NULL DEFAULT 0,
	`stage` varchar(120) NOT NULL DEFAULT 'waiting',
	`attempts` int NOT NULL DEFAULT 0,
	`locked_by` char(24) character set ascii collate ascii_bin,
	`heartbeat_at` datetime(3),
	`not_before` datetime(3) NOT NULL,
	`cancel_requested` boolean NOT NULL DEFAULT false,
	`error` json,
	`result` json,
	`created_by` char(24) character set ascii collate ascii_bin NOT NULL,
	`created_at` datetime(3) NOT NULL,
	`started_at` datetime(3),
	`finished_at` datetime(3),
	CONSTRAINT `jobs_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `memberships` (
	`group_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`user_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`role` enum('owner','analyst','contributor','reader') NOT NULL,
	`created_at` datetime(3) NOT NULL,
	CONSTRAINT `memberships_group_id_user_id_pk` PRIMARY KEY(`group_id`,`user_id`)
);
--> statement-breakpoint
CREATE TABLE `rate_limits` (
	`bucket` varchar(120) NOT NULL,
	`window_start` datetime(3) NOT NULL,
	`attempts` int NOT NULL,
	CONSTRAINT `rate_limits_bucket` PRIMARY KEY(`bucket`)
);
--> statement-breakpoint
CREATE TABLE `result_arrays` (
	`analysis_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`name` varchar(60) NOT NULL,
	`part` int NOT NULL,
	`dtype` enum('float64','float32','uint8','uint32','json') NOT NULL,
	`shape` json NOT NULL,
	`data` mediumblob NOT NULL,
	CONSTRAINT `result_arrays_analysis_id_name_part_pk` PRIMARY KEY(`analysis_id`,`name`,`part`)
);
--> statement-breakpoint
CREATE TABLE `run_versions` (
	`run_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`number` int NOT NULL,
	`group_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`archives` json NOT NULL,
	`sites` int NOT NULL,
	`site_names` json NOT NULL,
	`positions` json,
	`count_type` enum('uint16','float32') NOT NULL,
	`times_us` json NOT NULL,
	`time_slots` json NOT NULL,
	`shots_per_time` json NOT NULL,
	`shots_set_aside` json NOT NULL,
	`calibration_dark_shots` int NOT NULL,
	`calibration_bright_shots` int NOT NULL,
	`brightness` json NOT NULL,
	`warnings` json NOT NULL,
	`created_at` datetime(3) NOT NULL,
	CONSTRAINT `run_versions_run_id_number_pk` PRIMARY KEY(`run_id`,`number`)
);
--> statement-breakpoint
CREATE TABLE `runs` (
	`id` char(24) character set ascii collate ascii_bin NOT NULL,
	`group_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`title` varchar(200) NOT NULL,
	`notes` text NOT NULL,
	`bright_is` enum('up','down') NOT NULL,
	`model` enum('ising','xy','other') NOT NULL,
	`positions` json,
	`j_max_hz` double,
	`alpha` double,
	`campaign` varchar(120),
	`last_problem` json,
	`current_version` int NOT NULL DEFAULT 0,
	`created_by` char(24) character set ascii collate ascii_bin NOT NULL,
	`created_at` datetime(3) NOT NULL,
	`updated_at` datetime(3) NOT NULL,
	CONSTRAINT `runs_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `sessions` (
	`id` char(24) character set ascii collate ascii_bin NOT NULL,
	`user_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`group_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`created_at` datetime(3) NOT NULL,
	`expires_at` datetime(3) NOT NULL,
	CONSTRAINT `sessions_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `setup_keys` (
	`secret_hash` char(64) character set ascii collate ascii_bin NOT NULL,
	`created_at` datetime(3) NOT NULL,
	CONSTRAINT `setup_keys_secret_hash` PRIMARY KEY(`secret_hash`)
);
--> statement-breakpoint
CREATE TABLE `shot_blocks` (
	`run_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`version` int NOT NULL,
	`time_slot` int NOT NULL,
	`seq` int NOT NULL,
	`shots` int NOT NULL,
	`count_type` enum('uint16','float32') NOT NULL,
	`data` mediumblob NOT NULL,
	CONSTRAINT `shot_blocks_run_id_version_time_slot_seq_pk` PRIMARY KEY(`run_id`,`version`,`time_slot`,`seq`)
);
--> statement-breakpoint
CREATE TABLE `site_histograms` (
	`run_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`version` int NOT NULL,
	`role` enum('shots','calibration-dark','calibration-bright') NOT NULL,
	`site` int NOT NULL,
	`first_bin` double NOT NULL,
	`data` mediumblob NOT NULL,
	CONSTRAINT `site_histograms_run_id_version_role_site_pk` PRIMARY KEY(`run_id`,`version`,`role`,`site`)
);
--> statement-breakpoint
CREATE TABLE `tokens` (
	`id` char(24) character set ascii collate ascii_bin NOT NULL,
	`group_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`user_id` char(24) character set ascii collate ascii_bin NOT NULL,
	`name` varchar(120) NOT NULL,
	`scopes` json NOT NULL,
	`secret_hash` char(64) character set ascii collate ascii_bin NOT NULL,
	`hint` varchar(16) NOT NULL,
	`created_at` datetime(3) NOT NULL,
	`expires_at` datetime(3) NOT NULL,
	`last_used_at` datetime(3),
	CONSTRAINT `tokens_id` PRIMARY KEY(`id`),
	CONSTRAINT `tokens_secretHash_unique` UNIQUE(`secret_hash`)
);
--> statement-breakpoint
CREATE TABLE `users` (
	`id` char(24) character set ascii collate ascii_bin NOT NULL,
	`email` varchar(254) NOT NULL,
	`name` varchar(120) NOT NULL,
	`password_hash` varchar(100) NOT NULL,
	`created_at` datetime(3) NOT NULL,
	CONSTRAINT `users_id` PRIMARY KEY(`id`),
	CONSTRAINT `users_email_unique` UNIQUE(`email`)
);
--> statement-breakpoint
CREATE TABLE `workers` (
	`id` char(24) character set ascii collate ascii_bin NOT NULL,
	`threads` int NOT NULL,
	`started_at` datetime(3) NOT NULL,
	`heartbeat_at` datetime(3) NOT NULL,
	CONSTRAINT `workers_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
ALTER TABLE `analyses` ADD CONSTRAINT `analyses_group_id_member_groups_id_fk` FOREIGN KEY (`group_id`) REFERENCES `member_groups`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `analyses` ADD CONSTRAINT `analyses_run_id_runs_id_fk` FOREIGN KEY (`run_id`) REFERENCES `runs`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `analyses` ADD CONSTRAINT `analyses_detection_id_detections_id_fk` FOREIGN KEY (`detection_id`) REFERENCES `detections`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `analyses` ADD CONSTRAINT `analyses_created_by_users_id_fk` FOREIGN KEY (`created_by`) REFERENCES `users`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `archives` ADD CONSTRAINT `archives_group_id_member_groups_id_fk` FOREIGN KEY (`group_id`) REFERENCES `member_groups`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `archives` ADD CONSTRAINT `archives_run_id_runs_id_fk` FOREIGN KEY (`run_id`) REFERENCES `runs`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `archives` ADD CONSTRAINT `archives_blob_id_archive_blobs_id_fk` FOREIGN KEY (`blob_id`) REFERENCES `archive_blobs`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `archives` ADD CONSTRAINT `archives_created_by_users_id_fk` FOREIGN KEY (`created_by`) REFERENCES `users`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `archive_blobs` ADD CONSTRAINT `archive_blobs_group_id_member_groups_id_fk` FOREIGN KEY (`group_id`) REFERENCES `member_groups`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `detections` ADD CONSTRAINT `detections_group_id_member_groups_id_fk` FOREIGN KEY (`group_id`) REFERENCES `member_groups`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `detections` ADD CONSTRAINT `detections_run_id_runs_id_fk` FOREIGN KEY (`run_id`) REFERENCES `runs`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `detections` ADD CONSTRAINT `detections_created_by_users_id_fk` FOREIGN KEY (`created_by`) REFERENCES `users`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `jobs` ADD CONSTRAINT `jobs_group_id_member_groups_id_fk` FOREIGN KEY (`group_id`) REFERENCES `member_groups`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `jobs` ADD CONSTRAINT `jobs_created_by_users_id_fk` FOREIGN KEY (`created_by`) REFERENCES `users`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `memberships` ADD CONSTRAINT `memberships_group_id_member_groups_id_fk` FOREIGN KEY (`group_id`) REFERENCES `member_groups`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `memberships` ADD CONSTRAINT `memberships_user_id_users_id_fk` FOREIGN KEY (`user_id`) REFERENCES `users`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `run_versions` ADD CONSTRAINT `run_versions_run_id_runs_id_fk` FOREIGN KEY (`run_id`) REFERENCES `runs`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `runs` ADD CONSTRAINT `runs_group_id_member_groups_id_fk` FOREIGN KEY (`group_id`) REFERENCES `member_groups`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `runs` ADD CONSTRAINT `runs_created_by_users_id_fk` FOREIGN KEY (`created_by`) REFERENCES `users`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `sessions` ADD CONSTRAINT `sessions_user_id_users_id_fk` FOREIGN KEY (`user_id`) REFERENCES `users`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `sessions` ADD CONSTRAINT `sessions_group_id_member_groups_id_fk` FOREIGN KEY (`group_id`) REFERENCES `member_groups`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `tokens` ADD CONSTRAINT `tokens_group_id_member_groups_id_fk` FOREIGN KEY (`group_id`) REFERENCES `member_groups`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `tokens` ADD CONSTRAINT `tokens_user_id_users_id_fk` FOREIGN KEY (`user_id`) REFERENCES `users`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX `analyses_by_run` ON `analyses` (`group_id`,`run_id`);--> statement-breakpoint
CREATE INDEX `archives_by_run` ON `archives` (`run_id`,`created_at`);--> statement-breakpoint
CREATE INDEX `archive_blobs_incomplete` ON `archive_blobs` (`complete`,`created_at`);--> statement-breakpoint
CREATE INDEX `detections_by_run` ON `detections` (`group_id`,`run_id`);--> statement-breakpoint
CREATE INDEX `jobs_to_claim` ON `jobs` (`state`,`not_before`,`created_at`);--> statement-breakpoint
CREATE INDEX `jobs_by_run` ON `jobs` (`group_id`,`run_id`,`created_at`);--> statement-breakpoint
CREATE INDEX `memberships_by_user` ON `memberships` (`user_id`);--> statement-breakpoint
CREATE INDEX `runs_by_group` ON `runs` (`group_id`,`created_at`);--> statement-breakpoint
CREATE INDEX `sessions_by_user` ON `sessions` (`user_id`);--> statement-breakpoint
CREATE INDEX `tokens_by_member` ON `tokens` (`group_id`,`user_id`);