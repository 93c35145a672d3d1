CREATE TABLE `onset_estimate` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`study_id` char(36) NOT NULL,
	`prediction_id` char(36),
	`requests` json NOT NULL,
	`answers` json NOT NULL,
	`runs_judged` int NOT NULL,
	`engine_version` varchar(20) NOT NULL,
	`created_at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	CONSTRAINT `onset_estimate_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `reading` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`run_id` char(36) NOT NULL,
	`readout` varchar(64) NOT NULL,
	`minutes` double NOT NULL,
	`value` double,
	`state` varchar(20) NOT NULL,
	`upload_id` char(36),
	`file_row` int,
	`visit_id` char(36),
	`by_id` char(36) NOT NULL,
	`created_at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	CONSTRAINT `reading_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `run_verdict` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`run_id` char(36) NOT NULL,
	`kind` varchar(20) NOT NULL,
	`verdict` varchar(20) NOT NULL,
	`readout` varchar(64),
	`answer` json,
	`reason` text,
	`engine_version` varchar(20),
	`by_id` char(36),
	`created_at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	CONSTRAINT `run_verdict_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `upload` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`study_id` char(36) NOT NULL,
	`run_id` char(36) NOT NULL,
	`session_id` char(36),
	`file_name` varchar(255) NOT NULL,
	`bytes` bigint NOT NULL,
	`sha256` char(64) NOT NULL,
	`mapping` json NOT NULL,
	`rows_kept` int NOT NULL,
	`rows_refused` int NOT NULL,
	`problems` json NOT NULL,
	`by_id` char(36) NOT NULL,
	`created_at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	CONSTRAINT `upload_id` PRIMARY KEY(`id`),
	CONSTRAINT `upload_study_content` UNIQUE(`study_id`,`sha256`)
);
--> statement-breakpoint
CREATE TABLE `absence` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`user_id` char(36),
	`from_at` datetime(3) NOT NULL,
	`to_at` datetime(3) NOT NULL,
	`reason` varchar(200) NOT NULL,
	`created_at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	CONSTRAINT `absence_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `lab` (
	`id` char(36) NOT NULL,
	`name` varchar(200) NOT NULL,
	`place` varchar(100) NOT NULL,
	`time_zone` varchar(64) NOT NULL,
	`demo` boolean NOT NULL DEFAULT false,
	`created_at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	CONSTRAINT `lab_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `membership` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`user_id` char(36) NOT NULL,
	`role` varchar(20) NOT NULL,
	`skills` json NOT NULL,
	`max_minutes_per_day` int,
	`min_rest_hours` int,
	`active` boolean NOT NULL DEFAULT true,
	`created_at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	CONSTRAINT `membership_id` PRIMARY KEY(`id`),
	CONSTRAINT `membership_lab_user` UNIQUE(`lab_id`,`user_id`)
);
--> statement-breakpoint
CREATE TABLE `rig` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`name` varchar(120) NOT NULL,
	`place` varchar(120) NOT NULL,
	`capacity` int NOT NULL DEFAULT 1,
	`skills` json NOT NULL,
	`records_itself` boolean NOT NULL DEFAULT false,
	`retired` boolean NOT NULL DEFAULT false,
	`created_at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	CONSTRAINT `rig_id` PRIMARY KEY(`id`),
	CONSTRAINT `rig_lab_name` UNIQUE(`lab_id`,`name`)
);
--> statement-breakpoint
CREATE TABLE `user` (
	`id` char(36) NOT NULL,
	`email` varchar(254) NOT NULL,
	`name` varchar(120) NOT NULL,
	`password_hash` varchar(200) NOT NULL,
	`session_version` int NOT NULL DEFAULT 1,
	`created_at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	CONSTRAINT `user_id` PRIMARY KEY(`id`),
	CONSTRAINT `user_email` UNIQUE(`email`)
);
--> statement-breakpoint
CREATE TABLE `working_hours` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`user_id` char(36),
	`rig_id` char(36),
	`rrule` varchar(500) NOT NULL,
	`from_time` varchar(5) NOT NULL,
	`to_time` varchar(5) NOT NULL,
	`created_at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	CONSTRAINT `working_hours_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `booking` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`rig_id` char(36) NOT NULL,
	`run_id` char(36) NOT NULL,
	`from_at` datetime(3) NOT NULL,
	`to_at` datetime(3) NOT NULL,
	`state` varchar(20) NOT NULL DEFAULT 'held',
	CONSTRAINT `booking_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `preparation` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`study_id` char(36) NOT NULL,
	`code` varchar(40) NOT NULL,
	`parent_id` char(36),
	`ended_at` datetime(3),
	`end_reason` varchar(300),
	`created_at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	CONSTRAINT `preparation_id` PRIMARY KEY(`id`),
	CONSTRAINT `preparation_study_code` UNIQUE(`study_id`,`code`)
);
--> statement-breakpoint
CREATE TABLE `remark` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`study_id` char(36) NOT NULL,
	`run_id` char(36),
	`session_id` char(36),
	`kind` varchar(20) NOT NULL,
	`text` text NOT NULL,
	`by_id` char(36) NOT NULL,
	`created_at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	CONSTRAINT `remark_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `run` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`study_id` char(36) NOT NULL,
	`series_version_id` char(36) NOT NULL,
	`level_id` char(36) NOT NULL,
	`preparation_id` char(36) NOT NULL,
	`pass` int NOT NULL DEFAULT 1,
	`number` int NOT NULL,
	`state` varchar(20) NOT NULL DEFAULT 'planned',
	`dose` double NOT NULL,
	`control` double NOT NULL,
	`direction` varchar(10),
	`planned_start` datetime(3),
	`planned_end` datetime(3),
	`set_at` datetime(3),
	`set_by` char(36),
	`delivered_dose` double,
	`ended_at` datetime(3),
	`end_reason` varchar(300),
	`created_at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	CONSTRAINT `run_id` PRIMARY KEY(`id`),
	CONSTRAINT `run_study_number` UNIQUE(`study_id`,`number`)
);
--> statement-breakpoint
CREATE TABLE `session` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`study_id` char(36) NOT NULL,
	`booking_id` char(36) NOT NULL,
	`rig_id` char(36) NOT NULL,
	`person_id` char(36) NOT NULL,
	`starts_at` datetime(3) NOT NULL,
	`ends_at` datetime(3) NOT NULL,
	`state` varchar(20) NOT NULL DEFAULT 'planned',
	`sequence` int NOT NULL DEFAULT 0,
	`revision` int NOT NULL DEFAULT 1,
	`started_at` datetime(3),
	`done_at` datetime(3),
	`changed_by` char(36),
	`changed_at` datetime(3),
	`created_at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	CONSTRAINT `session_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `session_visit` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`session_id` char(36) NOT NULL,
	`visit_id` char(36) NOT NULL,
	CONSTRAINT `session_visit_id` PRIMARY KEY(`id`),
	CONSTRAINT `session_visit_pair` UNIQUE(`session_id`,`visit_id`)
);
--> statement-breakpoint
CREATE TABLE `stop_order` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`study_id` char(36) NOT NULL,
	`run_id` char(36),
	`session_id` char(36),
	`preparation_id` char(36),
	`dose` double,
	`whole_study` int NOT NULL DEFAULT 0,
	`suspended` json NOT NULL,
	`by_id` char(36) NOT NULL,
	`created_at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	`slipped_at` datetime(3),
	`lifted_at` datetime(3),
	`lifted_by` char(36),
	`lift_reason` varchar(500),
	CONSTRAINT `stop_order_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `visit` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`run_id` char(36) NOT NULL,
	`kind` varchar(20) NOT NULL,
	`label` varchar(200) NOT NULL,
	`at_minutes` double NOT NULL,
	`minutes` double NOT NULL,
	`earliest` datetime(3) NOT NULL,
	`latest` datetime(3) NOT NULL,
	`done_at` datetime(3),
	`done_by` char(36),
	`remark` varchar(500),
	`outcome` varchar(20),
	CONSTRAINT `visit_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `level` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`series_version_id` char(36) NOT NULL,
	`position` int NOT NULL,
	`dose` double NOT NULL,
	`control` double NOT NULL,
	`purpose` varchar(20) NOT NULL,
	`replicates` int NOT NULL,
	`settle_minutes` double NOT NULL,
	`record_minutes` double NOT NULL,
	`interval_minutes` double NOT NULL,
	`notes` json NOT NULL,
	`locked` boolean NOT NULL DEFAULT false,
	CONSTRAINT `level_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `series_version` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`study_id` char(36) NOT NULL,
	`number` int NOT NULL,
	`prediction_id` char(36),
	`state` varchar(20) NOT NULL DEFAULT 'draft',
	`scheme` varchar(20) NOT NULL,
	`series_order` varchar(20) NOT NULL,
	`replicates` int NOT NULL,
	`designs` json NOT NULL,
	`notes` json NOT NULL,
	`reason` varchar(300) NOT NULL DEFAULT '',
	`envelope` json,
	`created_by` char(36) NOT NULL,
	`created_at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	`submitted_at` datetime(3),
	`decided_by` char(36),
	`decided_at` datetime(3),
	`decision` text,
	`inherited_from` char(36),
	`unplaced` json,
	`laid_out_at` datetime(3),
	`revision` int NOT NULL DEFAULT 1,
	CONSTRAINT `series_version_id` PRIMARY KEY(`id`),
	CONSTRAINT `series_version_study_number` UNIQUE(`study_id`,`number`)
);
--> statement-breakpoint
CREATE TABLE `predicted_onset` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`prediction_id` char(36) NOT NULL,
	`ordinal` int NOT NULL,
	`value` double NOT NULL,
	`low` double,
	`high` double,
	`period` double NOT NULL,
	`oscillates` varchar(10) NOT NULL,
	`dose` double,
	CONSTRAINT `predicted_onset_id` PRIMARY KEY(`id`),
	CONSTRAINT `predicted_onset_ordinal` UNIQUE(`prediction_id`,`ordinal`)
);
--> statement-breakpoint
CREATE TABLE `prediction` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`study_id` char(36) NOT NULL,
	`system_version_id` char(36) NOT NULL,
	`job_id` char(36),
	`seed` int NOT NULL,
	`engine_version` varchar(20) NOT NULL,
	`request` json NOT NULL,
	`answer` json NOT NULL,
	`created_at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	CONSTRAINT `prediction_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `study` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`title` varchar(200) NOT NULL,
	`summary` varchar(500) NOT NULL DEFAULT '',
	`perturbs` varchar(30) NOT NULL,
	`library_id` varchar(80),
	`rig_id` char(36),
	`dose_label` varchar(80) NOT NULL,
	`dose_unit` varchar(40) NOT NULL,
	`ceiling_dose` double,
	`largest_step` double,
	`stop_rules` text NOT NULL,
	`approval_reference` varchar(120),
	`approval_expires` datetime(3),
	`simulated` boolean NOT NULL DEFAULT false,
	`created_by` char(36) NOT NULL,
	`created_at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	CONSTRAINT `study_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `system_version` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`study_id` char(36) NOT NULL,
	`number` int NOT NULL,
	`model` json NOT NULL,
	`control` json NOT NULL,
	`reason` varchar(300) NOT NULL DEFAULT '',
	`created_by` char(36) NOT NULL,
	`created_at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	CONSTRAINT `system_version_id` PRIMARY KEY(`id`),
	CONSTRAINT `system_version_study_number` UNIQUE(`study_id`,`number`)
);
--> statement-breakpoint
CREATE TABLE `audit_event` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`study_id` char(36),
	`actor_id` char(36),
	`event` varchar(60) NOT NULL,
	`subject_id` char(36),
	`data` json NOT NULL,
	`at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	CONSTRAINT `audit_event_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
CREATE TABLE `job` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`study_id` char(36) NOT NULL,
	`kind` varchar(20) NOT NULL,
	`input` json NOT NULL,
	`input_hash` varchar(64) NOT NULL,
	`engine_version` varchar(20) NOT NULL,
	`state` varchar(20) NOT NULL DEFAULT 'queued',
	`active_key` varchar(200),
	`done` int NOT NULL DEFAULT 0,
	`total` int NOT NULL DEFAULT 0,
	`stage` varchar(80) NOT NULL DEFAULT '',
	`attempts` int NOT NULL DEFAULT 0,
	`lease_until` datetime(3),
	`lease_owner` varchar(64),
	`error` text,
	`result_id` char(36),
	`asked_by` char(36) NOT NULL,
	`created_at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	`ended_at` datetime(3),
	CONSTRAINT `job_id` PRIMARY KEY(`id`),
	CONSTRAINT `job_active` UNIQUE(`active_key`)
);
--> statement-breakpoint
CREATE TABLE `outbox` (
	`id` char(36) NOT NULL,
	`lab_id` char(36) NOT NULL,
	`kind` varchar(20) NOT NULL,
	`slot` varchar(180) NOT NULL,
	`session_id` char(36),
	`study_id` char(36),
	`recipient_id` char(36) NOT NULL,
	`sequence` int NOT NULL DEFAULT 0,
	`data` json NOT NULL,
	`due_at` datetime(3) NOT NULL,
	`state` varchar(20) NOT NULL DEFAULT 'waiting',
	`attempts` int NOT NULL DEFAULT 0,
	`message_id` varchar(200),
	`error` text,
	`sent_at` datetime(3),
	`created_at` datetime(3) NOT NULL DEFAULT CURRENT_TIMESTAMP(3),
	CONSTRAINT `outbox_id` PRIMARY KEY(`id`),
	CONSTRAINT `outbox_slot` UNIQUE(`slot`)
);
--> statement-breakpoint
CREATE TABLE `rate_count` (
	`rate_key` varchar(160) NOT NULL,
	`window_start` bigint NOT NULL,
	`count` double NOT NULL,
	CONSTRAINT `rate_count_rate_key` PRIMARY KEY(`rate_key`)
);
--> statement-breakpoint
CREATE TABLE `worker_beat` (
	`id` varchar(40) NOT NULL,
	`at` datetime(3) NOT NULL,
	`pid` int NOT NULL,
	CONSTRAINT `worker_beat_id` PRIMARY KEY(`id`)
);
--> statement-breakpoint
ALTER TABLE `onset_estimate` ADD CONSTRAINT `onset_estimate_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `onset_estimate` ADD CONSTRAINT `onset_estimate_study_id_study_id_fk` FOREIGN KEY (`study_id`) REFERENCES `study`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `onset_estimate` ADD CONSTRAINT `onset_estimate_prediction_id_prediction_id_fk` FOREIGN KEY (`prediction_id`) REFERENCES `prediction`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `reading` ADD CONSTRAINT `reading_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `reading` ADD CONSTRAINT `reading_run_id_run_id_fk` FOREIGN KEY (`run_id`) REFERENCES `run`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `reading` ADD CONSTRAINT `reading_upload_id_upload_id_fk` FOREIGN KEY (`upload_id`) REFERENCES `upload`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `reading` ADD CONSTRAINT `reading_by_id_user_id_fk` FOREIGN KEY (`by_id`) REFERENCES `user`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `run_verdict` ADD CONSTRAINT `run_verdict_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `run_verdict` ADD CONSTRAINT `run_verdict_run_id_run_id_fk` FOREIGN KEY (`run_id`) REFERENCES `run`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `run_verdict` ADD CONSTRAINT `run_verdict_by_id_user_id_fk` FOREIGN KEY (`by_id`) REFERENCES `user`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `upload` ADD CONSTRAINT `upload_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `upload` ADD CONSTRAINT `upload_study_id_study_id_fk` FOREIGN KEY (`study_id`) REFERENCES `study`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `upload` ADD CONSTRAINT `upload_run_id_run_id_fk` FOREIGN KEY (`run_id`) REFERENCES `run`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `upload` ADD CONSTRAINT `upload_session_id_session_id_fk` FOREIGN KEY (`session_id`) REFERENCES `session`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `upload` ADD CONSTRAINT `upload_by_id_user_id_fk` FOREIGN KEY (`by_id`) REFERENCES `user`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `absence` ADD CONSTRAINT `absence_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `absence` ADD CONSTRAINT `absence_user_id_user_id_fk` FOREIGN KEY (`user_id`) REFERENCES `user`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `membership` ADD CONSTRAINT `membership_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `membership` ADD CONSTRAINT `membership_user_id_user_id_fk` FOREIGN KEY (`user_id`) REFERENCES `user`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `rig` ADD CONSTRAINT `rig_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `working_hours` ADD CONSTRAINT `working_hours_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `working_hours` ADD CONSTRAINT `working_hours_user_id_user_id_fk` FOREIGN KEY (`user_id`) REFERENCES `user`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `booking` ADD CONSTRAINT `booking_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `booking` ADD CONSTRAINT `booking_rig_id_rig_id_fk` FOREIGN KEY (`rig_id`) REFERENCES `rig`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `booking` ADD CONSTRAINT `booking_run_id_run_id_fk` FOREIGN KEY (`run_id`) REFERENCES `run`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `preparation` ADD CONSTRAINT `preparation_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `preparation` ADD CONSTRAINT `preparation_study_id_study_id_fk` FOREIGN KEY (`study_id`) REFERENCES `study`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `remark` ADD CONSTRAINT `remark_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `remark` ADD CONSTRAINT `remark_study_id_study_id_fk` FOREIGN KEY (`study_id`) REFERENCES `study`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `remark` ADD CONSTRAINT `remark_run_id_run_id_fk` FOREIGN KEY (`run_id`) REFERENCES `run`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `remark` ADD CONSTRAINT `remark_session_id_session_id_fk` FOREIGN KEY (`session_id`) REFERENCES `session`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `remark` ADD CONSTRAINT `remark_by_id_user_id_fk` FOREIGN KEY (`by_id`) REFERENCES `user`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `run` ADD CONSTRAINT `run_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `run` ADD CONSTRAINT `run_study_id_study_id_fk` FOREIGN KEY (`study_id`) REFERENCES `study`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `run` ADD CONSTRAINT `run_series_version_id_series_version_id_fk` FOREIGN KEY (`series_version_id`) REFERENCES `series_version`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `run` ADD CONSTRAINT `run_level_id_level_id_fk` FOREIGN KEY (`level_id`) REFERENCES `level`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `run` ADD CONSTRAINT `run_preparation_id_preparation_id_fk` FOREIGN KEY (`preparation_id`) REFERENCES `preparation`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `run` ADD CONSTRAINT `run_set_by_user_id_fk` FOREIGN KEY (`set_by`) REFERENCES `user`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `session` ADD CONSTRAINT `session_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `session` ADD CONSTRAINT `session_study_id_study_id_fk` FOREIGN KEY (`study_id`) REFERENCES `study`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `session` ADD CONSTRAINT `session_booking_id_booking_id_fk` FOREIGN KEY (`booking_id`) REFERENCES `booking`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `session` ADD CONSTRAINT `session_rig_id_rig_id_fk` FOREIGN KEY (`rig_id`) REFERENCES `rig`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `session` ADD CONSTRAINT `session_person_id_user_id_fk` FOREIGN KEY (`person_id`) REFERENCES `user`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `session` ADD CONSTRAINT `session_changed_by_user_id_fk` FOREIGN KEY (`changed_by`) REFERENCES `user`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `session_visit` ADD CONSTRAINT `session_visit_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `session_visit` ADD CONSTRAINT `session_visit_session_id_session_id_fk` FOREIGN KEY (`session_id`) REFERENCES `session`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `session_visit` ADD CONSTRAINT `session_visit_visit_id_visit_id_fk` FOREIGN KEY (`visit_id`) REFERENCES `visit`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `stop_order` ADD CONSTRAINT `stop_order_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `stop_order` ADD CONSTRAINT `stop_order_study_id_study_id_fk` FOREIGN KEY (`study_id`) REFERENCES `study`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `stop_order` ADD CONSTRAINT `stop_order_run_id_run_id_fk` FOREIGN KEY (`run_id`) REFERENCES `run`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `stop_order` ADD CONSTRAINT `stop_order_session_id_session_id_fk` FOREIGN KEY (`session_id`) REFERENCES `session`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `stop_order` ADD CONSTRAINT `stop_order_preparation_id_preparation_id_fk` FOREIGN KEY (`preparation_id`) REFERENCES `preparation`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `stop_order` ADD CONSTRAINT `stop_order_by_id_user_id_fk` FOREIGN KEY (`by_id`) REFERENCES `user`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `stop_order` ADD CONSTRAINT `stop_order_lifted_by_user_id_fk` FOREIGN KEY (`lifted_by`) REFERENCES `user`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `visit` ADD CONSTRAINT `visit_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `visit` ADD CONSTRAINT `visit_run_id_run_id_fk` FOREIGN KEY (`run_id`) REFERENCES `run`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `visit` ADD CONSTRAINT `visit_done_by_user_id_fk` FOREIGN KEY (`done_by`) REFERENCES `user`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `level` ADD CONSTRAINT `level_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `level` ADD CONSTRAINT `level_series_version_id_series_version_id_fk` FOREIGN KEY (`series_version_id`) REFERENCES `series_version`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `series_version` ADD CONSTRAINT `series_version_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `series_version` ADD CONSTRAINT `series_version_study_id_study_id_fk` FOREIGN KEY (`study_id`) REFERENCES `study`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `series_version` ADD CONSTRAINT `series_version_prediction_id_prediction_id_fk` FOREIGN KEY (`prediction_id`) REFERENCES `prediction`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `series_version` ADD CONSTRAINT `series_version_created_by_user_id_fk` FOREIGN KEY (`created_by`) REFERENCES `user`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `series_version` ADD CONSTRAINT `series_version_decided_by_user_id_fk` FOREIGN KEY (`decided_by`) REFERENCES `user`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `predicted_onset` ADD CONSTRAINT `predicted_onset_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `predicted_onset` ADD CONSTRAINT `predicted_onset_prediction_id_prediction_id_fk` FOREIGN KEY (`prediction_id`) REFERENCES `prediction`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `prediction` ADD CONSTRAINT `prediction_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `prediction` ADD CONSTRAINT `prediction_study_id_study_id_fk` FOREIGN KEY (`study_id`) REFERENCES `study`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `prediction` ADD CONSTRAINT `prediction_system_version_id_system_version_id_fk` FOREIGN KEY (`system_version_id`) REFERENCES `system_version`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `study` ADD CONSTRAINT `study_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `study` ADD CONSTRAINT `study_rig_id_rig_id_fk` FOREIGN KEY (`rig_id`) REFERENCES `rig`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `study` ADD CONSTRAINT `study_created_by_user_id_fk` FOREIGN KEY (`created_by`) REFERENCES `user`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `system_version` ADD CONSTRAINT `system_version_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `system_version` ADD CONSTRAINT `system_version_study_id_study_id_fk` FOREIGN KEY (`study_id`) REFERENCES `study`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `system_version` ADD CONSTRAINT `system_version_created_by_user_id_fk` FOREIGN KEY (`created_by`) REFERENCES `user`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `audit_event` ADD CONSTRAINT `audit_event_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `job` ADD CONSTRAINT `job_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `job` ADD CONSTRAINT `job_asked_by_user_id_fk` FOREIGN KEY (`asked_by`) REFERENCES `user`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `outbox` ADD CONSTRAINT `outbox_lab_id_lab_id_fk` FOREIGN KEY (`lab_id`) REFERENCES `lab`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE `outbox` ADD CONSTRAINT `outbox_recipient_id_user_id_fk` FOREIGN KEY (`recipient_id`) REFERENCES `user`(`id`) ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX `onset_estimate_study` ON `onset_estimate` (`study_id`,`created_at`);--> statement-breakpoint
CREATE INDEX `reading_run_readout` ON `reading` (`run_id`,`readout`,`minutes`);--> statement-breakpoint
CREATE INDEX `run_verdict_run` ON `run_verdict` (`run_id`,`created_at`);--> statement-breakpoint
CREATE INDEX `absence_lab_from` ON `absence` (`lab_id`,`from_at`);--> statement-breakpoint
CREATE INDEX `working_hours_lab` ON `working_hours` (`lab_id`);--> statement-breakpoint
CREATE INDEX `booking_rig_from` ON `booking` (`rig_id`,`from_at`);--> statement-breakpoint
CREATE INDEX `booking_run` ON `booking` (`run_id`);--> statement-breakpoint
CREATE INDEX `remark_study` ON `remark` (`study_id`,`created_at`);--> statement-breakpoint
CREATE INDEX `run_series` ON `run` (`series_version_id`);--> statement-breakpoint
CREATE INDEX `session_lab_starts` ON `session` (`lab_id`,`starts_at`);--> statement-breakpoint
CREATE INDEX `session_person_starts` ON `session` (`person_id`,`starts_at`);--> statement-breakpoint
CREATE INDEX `session_study` ON `session` (`study_id`);--> statement-breakpoint
CREATE INDEX `session_visit_visit` ON `session_visit` (`visit_id`);--> statement-breakpoint
CREATE INDEX `stop_order_study` ON `stop_order` (`study_id`);--> statement-breakpoint
CREATE INDEX `visit_run` ON `visit` (`run_id`);--> statement-breakpoint
CREATE INDEX `level_series` ON `level` (`series_version_id`,`position`);--> statement-breakpoint
CREATE INDEX `prediction_study` ON `prediction` (`study_id`,`created_at`);--> statement-breakpoint
CREATE INDEX `study_lab` ON `study` (`lab_id`);--> statement-breakpoint
CREATE INDEX `audit_lab_at` ON `audit_event` (`lab_id`,`at`);--> statement-breakpoint
CREATE INDEX `job_claim` ON `job` (`state`,`created_at`);--> statement-breakpoint
CREATE INDEX `job_study` ON `job` (`study_id`,`created_at`);--> statement-breakpoint
CREATE INDEX `outbox_claim` ON `outbox` (`state`,`due_at`);--> statement-breakpoint
CREATE INDEX `outbox_session` ON `outbox` (`session_id`);