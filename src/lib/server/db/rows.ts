/**
 * Rows as SQLite returns them: one type per table, stated here and nowhere else.
 * Booleans are 0 or 1, instants are ISO-8601 UTC text, `*_json` is text, blobs are Buffers.
 */
import type { Role } from '../../access/access';
import type { AssessedPoint, DecisionRule, Evidence, Verdict } from '../../assessment/assessment';
import type { ScalarMeasure, ScalarPhase } from '../../harmonics/engine/scalar-columns';
import type { IntervalKind } from '../../harmonics/intervals';
import type { LimitBasis, Provenance } from '../../limits/limit-set';
import type { Phase } from '../../recording/phase';
import type { RevisionStatus } from '../../report/revision-status';

export interface PracticeRow {
	id: string;
	name: string;
	short_name: string;
	report_prefix: string;
	address: string;
	email: string;
	phone: string;
	time_zone: string;
	paper: 'A4' | 'LETTER';
	phase_names_json: string;
	allow_self_check: 0 | 1;
	reliance_statement: string;
	created_at: string;
	storage_quota_bytes: number | null;
}

export interface UserRow {
	id: string;
	email: string;
	name: string;
	password_hash: string | null;
	email_verified_at: string | null;
	disabled_at: string | null;
	created_at: string;
}

export interface ClientRow {
	id: string;
	practice_id: string;
	name: string;
	contact_name: string;
	contact_email: string;
	contact_phone: string;
	address: string;
	notes: string;
	created_at: string;
	archived_at: string | null;
}

export interface MembershipRow {
	id: string;
	user_id: string;
	practice_id: string;
	role: Role;
	client_id: string | null;
	created_at: string;
	revoked_at: string | null;
}

export interface SessionRow {
	token_hash: string;
	user_id: string;
	membership_id: string | null;
	user_agent: string;
	created_at: string;
	last_seen_at: string;
	expires_at: string;
}

export interface VerificationTokenRow {
	identifier: string;
	token_hash: string;
	expires_at: string;
}

export interface InvitationRow {
	id: string;
	practice_id: string;
	client_id: string | null;
	email: string;
	name: string;
	role: Role;
	token_hash: string;
	invited_by: string;
	created_at: string;
	expires_at: string;
	accepted_at: string | null;
	revoked_at: string | null;
}

export interface PasswordResetRow {
	token_hash: string;
	user_id: string;
	created_at: string;
	expires_at: string;
	used_at: string | null;
}

export interface ApiTokenRow {
	id: string;
	practice_id: string;
	name: string;
	token_hash: string;
	scopes_json: string;
	created_by: string;
	created_at: string;
	last_used_at: string | null;
	revoked_at: string | null;
}

export interface LimitSetRow {
	id: number;
	key: string;
	practice_id: string | null;
	standard: string;
	edition: string;
	title: string;
	publisher: string;
	jurisdiction: string;
	status: string;
	notes_json: string;
	source_sha256: string;
	created_at: string;
}

export interface LimitTableRow {
	id: number;
	limit_set_id: number;
	position: number;
	key: string;
	title: string;
	clause: string;
	kind: string;
	quantity: 'voltage' | 'current';
	basis: LimitBasis;
	basis_text: string;
	voltage_lower_kv: number | null;
	voltage_lower_inclusive: 0 | 1 | null;
	voltage_upper_kv: number | null;
	voltage_upper_inclusive: 0 | 1 | null;
	order_from: number;
	order_to: number;
	provenance: Provenance;
	sources_json: string;
	doubts_json: string;
}

export interface LimitRowRow {
	id: number;
	limit_table_id: number;
	position: number;
	orders_json: string;
	ratio_lower: number | null;
	ratio_lower_inclusive: 0 | 1 | null;
	ratio_upper: number | null;
	ratio_upper_inclusive: 0 | 1 | null;
	ratio_label: string | null;
	voltage_lower_kv: number | null;
	voltage_lower_inclusive: 0 | 1 | null;
	voltage_upper_kv: number | null;
	voltage_upper_inclusive: 0 | 1 | null;
	voltage_label: string | null;
	limit_pct: number | null;
	formula: string | null;
	origin: 'printed' | 'derived';
	provenance: Provenance;
}

export interface LimitTotalRow {
	id: number;
	limit_table_id: number;
	position: number;
	index_name: 'THD' | 'TDD';
	ratio_lower: number | null;
	ratio_lower_inclusive: 0 | 1 | null;
	ratio_upper: number | null;
	ratio_upper_inclusive: 0 | 1 | null;
	ratio_label: string | null;
	voltage_lower_kv: number | null;
	voltage_lower_inclusive: 0 | 1 | null;
	voltage_upper_kv: number | null;
	voltage_upper_inclusive: 0 | 1 | null;
	voltage_label: string | null;
	limit_pct: number;
	order_from: number;
	order_to: number;
	provenance: Provenance;
}

export interface LimitStatisticRow {
	id: number;
	limit_table_id: number;
	position: number;
	key: string;
	interval_s: number;
	percentile: number;
	period: 'day' | 'week';
	multiplier: number;
	comparator: '<' | '<=';
	provenance: Provenance;
}

export interface SiteRow {
	id: string;
	practice_id: string;
	client_id: string;
	name: string;
	address: string;
	utility: string;
	time_zone: string;
	notes: string;
	created_at: string;
	archived_at: string | null;
}

export interface PointRow {
	id: string;
	practice_id: string;
	client_id: string;
	site_id: string;
	name: string;
	kind: AssessedPoint['kind'];
	system: AssessedPoint['system'];
	nominal_voltage_v: number;
	nominal_frequency_hz: 50 | 60;
	demand_json: string;
	short_circuit_json: string;
	phase_names_json: string;
	ct_primary_a: number | null;
	ct_secondary_a: number | null;
	vt_primary_v: number | null;
	vt_secondary_v: number | null;
	limit_set_id: number | null;
	limit_set_reason: string;
	notes: string;
	created_at: string;
	updated_at: string;
	archived_at: string | null;
}

export interface InstrumentRow {
	id: string;
	practice_id: string;
	name: string;
	model: string;
	serial_number: string;
	harmonic_class: 'I' | 'II' | 'unknown';
	channels: string;
	sensors: string;
	current_sensor_error_pct: number | null;
	voltage_sensor_error_pct: number | null;
	notes: string;
	created_at: string;
	archived_at: string | null;
}

export interface SensorRow {
	id: string;
	practice_id: string;
	name: string;
	kind: 'current-transformer' | 'clamp' | 'flexible-coil' | 'shunt' | 'voltage-transformer' | 'voltage-lead';
	serial_number: string;
	ratio_primary: number | null;
	ratio_secondary: number | null;
	secondary_unit: 'A' | 'V' | 'mV';
	accuracy_class: string;
	ratio_error_pct: number | null;
	phase_error_deg: number | null;
	highest_frequency_hz: number | null;
	notes: string;
	created_at: string;
	archived_at: string | null;
}

export interface InstrumentChannelRow {
	id: string;
	practice_id: string;
	instrument_id: string;
	position: number;
	name: string;
	quantity: 'voltage' | 'current';
	range_rms: number | null;
	range_unit: 'A' | 'V';
	resolution_bits: number | null;
	sensor_id: string | null;
}

export interface CalibrationRow {
	id: string;
	practice_id: string;
	/** Exactly one of instrument_id and sensor_id is given. */
	instrument_id: string | null;
	certificate_number: string;
	laboratory: string;
	calibrated_on: string;
	due_on: string;
	created_at: string;
	sensor_id: string | null;
	certificate_sha256: string | null;
	certificate_file_name: string | null;
	note: string;
}

export interface SurveyRow {
	id: string;
	practice_id: string;
	client_id: string;
	site_id: string;
	point_id: string;
	number: string;
	title: string;
	status: 'open' | 'closed';
	engineer_id: string;
	instrument_id: string | null;
	decision_rule: DecisionRule;
	notes: string;
	created_at: string;
	updated_at: string;
}

export interface NumberSequenceRow {
	practice_id: string;
	name: string;
	last_value: number;
}

export interface StoredFileRow {
	sha256: string;
	size_bytes: number;
	media_type: string;
	created_at: string;
}

export interface CaptureRow {
	id: string;
	practice_id: string;
	client_id: string;
	survey_id: string;
	name: string;
	/** "table" while nobody has told what its columns are; the status is then "unread". */
	kind: 'waveform' | 'trend' | 'table';
	format: string;
	variant: string;
	status: 'unread' | 'recognised' | 'queued' | 'analysing' | 'analysed' | 'failed';
	facts_json: string;
	mappings_json: string | null;
	started_at: string | null;
	duration_s: number;
	problem: string | null;
	uploaded_by: string;
	created_at: string;
	updated_at: string;
	removed_at: string | null;
	part_key: string;
	layout_json: string | null;
	layout_template_id: string | null;
	instrument_id: string | null;
	pyramid_sha256: string | null;
	pyramid_json: string | null;
}

export interface UploadRow {
	id: string;
	practice_id: string;
	survey_id: string;
	name: string;
	sha256: string;
	size_bytes: number;
	uploaded_by: string;
	created_at: string;
	from_archive: string | null;
}

export interface UploadSessionRow {
	id: string;
	practice_id: string;
	survey_id: string;
	name: string;
	size_bytes: number;
	received_bytes: number;
	expected_sha256: string | null;
	status: 'receiving' | 'arrived' | 'failed';
	problem: string | null;
	upload_id: string | null;
	uploaded_by: string;
	created_at: string;
	updated_at: string;
}

export interface LayoutTemplateRow {
	id: string;
	practice_id: string;
	name: string;
	headings_json: string;
	layout_json: string;
	created_by: string;
	created_at: string;
	updated_at: string;
	last_used_at: string | null;
	used_count: number;
	archived_at: string | null;
}

export interface CheckOverruleRow {
	id: string;
	practice_id: string;
	survey_id: string;
	capture_id: string | null;
	code: string;
	channel_index: number | null;
	sentence: string;
	reason: string;
	overruled_by: string;
	created_at: string;
	withdrawn_at: string | null;
	withdrawn_by: string | null;
}

export interface CaptureFileRow {
	id: string;
	practice_id: string;
	capture_id: string;
	position: number;
	name: string;
	sha256: string;
	size_bytes: number;
}

export interface AnalysisRow {
	id: string;
	practice_id: string;
	client_id: string;
	capture_id: string;
	engine_version: string;
	parameters_json: string;
	summary_json: string;
	is_current: 0 | 1;
	created_at: string;
	/** 0 while parts of it are still being stored. */
	is_finished: 0 | 1;
}

/** Beside the intervals themselves: the capture as one, flagged windows left out where others are there. */
export type StoredInterval = IntervalKind | 'whole';

export interface AnalysisSeriesRow {
	id: string;
	practice_id: string;
	analysis_id: string;
	channel_index: number | null;
	quantity: 'voltage' | 'current';
	phase: Phase;
	interval: StoredInterval;
	part: number;
	interval_count: number;
	starts_ms: Buffer;
	lengths_s: Buffer;
	rms: Buffer;
	frequency_hz: Buffer;
	subgroups: Buffer;
	flagged: Buffer;
	components: Buffer | null;
	interharmonic_subgroups: Buffer | null;
	phases_deg: Buffer | null;
	dc: Buffer | null;
	peak: Buffer | null;
	harmonic_groups: Buffer | null;
	interharmonic_groups: Buffer | null;
}

export interface AnalysisScalarRow {
	id: string;
	practice_id: string;
	analysis_id: string;
	measure: ScalarMeasure;
	quantity: 'voltage' | 'current' | 'power';
	phase: ScalarPhase;
	unit: string;
	interval: StoredInterval;
	part: number;
	starts_ms: Buffer;
	values: Buffer;
}

export interface JobRow {
	id: string;
	practice_id: string;
	kind: string;
	payload_version: number;
	payload_json: string;
	status: 'queued' | 'running' | 'done' | 'failed' | 'cancelled';
	progress_done: number;
	progress_total: number;
	progress_text: string;
	attempts: number;
	cancel_requested: 0 | 1;
	worker_id: string | null;
	lease_until: string | null;
	problem: string | null;
	dedupe_key: string | null;
	created_at: string;
	started_at: string | null;
	finished_at: string | null;
}

export interface AssessmentRow {
	id: string;
	practice_id: string;
	client_id: string;
	survey_id: string;
	limit_set_id: number;
	verdict: Verdict;
	evidence: Evidence;
	advisory: 0 | 1;
	engine_version: string;
	input_json: string;
	result_json: string;
	is_current: 0 | 1;
	created_by: string | null;
	created_at: string;
}

export interface VerdictRow {
	id: number;
	assessment_id: string;
	practice_id: string;
	table_key: string;
	quantity: 'voltage' | 'current';
	harmonic_order: number | null;
	index_name: 'THD' | 'TDD' | null;
	phase: Phase;
	statistic_key: string;
	basis: LimitBasis;
	value_pct: number | null;
	limit_pct: number | null;
	limit_row_id: number | null;
	comparator: '<' | '<=';
	utilisation: number | null;
	uncertainty_pct: number | null;
	evidence: Evidence;
	coverage: number;
	interval_count: number;
	flagged_count: number;
	worst_period: string | null;
	verdict: Verdict;
	reason: string;
}

export interface ReportRow {
	id: string;
	practice_id: string;
	client_id: string;
	site_id: string;
	survey_id: string;
	number: string | null;
	title: string;
	created_by: string;
	created_at: string;
}

export interface ReportRevisionRow {
	id: string;
	practice_id: string;
	client_id: string;
	report_id: string;
	revision: string;
	status: RevisionStatus;
	assessment_id: string;
	reason: string;
	summary: string;
	findings_json: string;
	prepared_by: string;
	sent_for_check_at: string | null;
	checked_by: string | null;
	check_note: string;
	returned_at: string | null;
	issued_at: string | null;
	withdrawn_at: string | null;
	withdrawn_reason: string | null;
	model_json: string | null;
	model_sha256: string | null;
	data_sha256: string | null;
	pdf_sha256: string | null;
	pdf_pages: number | null;
	edition: number;
	created_at: string;
	updated_at: string;
}

export interface AcknowledgementRow {
	id: string;
	practice_id: string;
	client_id: string;
	revision_id: string;
	user_id: string;
	typed_name: string;
	statement: string;
	pdf_sha256: string;
	acknowledged_at: string;
}

export interface QueryRow {
	id: string;
	practice_id: string;
	client_id: string;
	revision_id: string;
	asked_by: string;
	status: 'open' | 'answered' | 'closed';
	created_at: string;
	updated_at: string;
}

export interface QueryMessageRow {
	id: string;
	practice_id: string;
	query_id: string;
	author_id: string;
	body: string;
	created_at: string;
}

export interface ActionRow {
	id: string;
	practice_id: string;
	client_id: string;
	site_id: string;
	survey_id: string;
	position: number;
	title: string;
	detail: string;
	priority: 'urgent' | 'normal' | 'advice';
	side: 'client' | 'practice';
	responsible: string;
	due_on: string | null;
	status: 'open' | 'done' | 'confirmed';
	published_at: string | null;
	done_at: string | null;
	done_by: string | null;
	done_note: string;
	confirmed_at: string | null;
	confirmed_by: string | null;
	created_at: string;
}

export interface OutboxMailRow {
	id: string;
	practice_id: string | null;
	template: string;
	to_email: string;
	to_name: string;
	subject: string;
	text: string;
	html: string;
	status: 'queued' | 'sent' | 'failed';
	attempts: number;
	next_attempt_at: string;
	last_error: string | null;
	created_at: string;
	sent_at: string | null;
}

export interface AuditEventRow {
	id: number;
	practice_id: string | null;
	actor_user_id: string | null;
	actor_name: string;
	action: string;
	subject_kind: string;
	subject_id: string;
	detail_json: string;
	request_id: string | null;
	at: string;
}

declare module 'knex/types/tables' {
	interface Tables {
		practices: PracticeRow;
		users: UserRow;
		clients: ClientRow;
		memberships: MembershipRow;
		sessions: SessionRow;
		verification_tokens: VerificationTokenRow;
		invitations: InvitationRow;
		password_resets: PasswordResetRow;
		api_tokens: ApiTokenRow;
		limit_sets: LimitSetRow;
		limit_tables: LimitTableRow;
		limit_rows: LimitRowRow;
		limit_totals: LimitTotalRow;
		limit_statistics: LimitStatisticRow;
		sites: SiteRow;
		points: PointRow;
		instruments: InstrumentRow;
		sensors: SensorRow;
		instrument_channels: InstrumentChannelRow;
		calibrations: CalibrationRow;
		surveys: SurveyRow;
		number_sequences: NumberSequenceRow;
		stored_files: StoredFileRow;
		captures: CaptureRow;
		uploads: UploadRow;
		upload_sessions: UploadSessionRow;
		layout_templates: LayoutTemplateRow;
		check_overrules: CheckOverruleRow;
		capture_files: CaptureFileRow;
		analyses: AnalysisRow;
		analysis_series: AnalysisSeriesRow;
		analysis_scalars: AnalysisScalarRow;
		jobs: JobRow;
		assessments: AssessmentRow;
		verdict_rows: VerdictRow;
		reports: ReportRow;
		report_revisions: ReportRevisionRow;
		acknowledgements: AcknowledgementRow;
		queries: QueryRow;
		query_messages: QueryMessageRow;
		actions: ActionRow;
		mail_outbox: OutboxMailRow;
		audit_events: AuditEventRow;
	}
}
