import type { Knex } from 'knex';

export async function up(knex: Knex): Promise<void> {
	// Blobs by content. Who may see one is decided by the row that refers to it.
	await knex.schema.createTable('stored_files', (t) => {
		t.text('sha256').primary();
		t.bigInteger('size_bytes').notNullable();
		t.text('media_type').notNullable();
		t.text('created_at').notNullable();
	});

	await knex.schema.createTable('captures', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('client_id').notNullable().references('clients.id');
		t.text('survey_id').notNullable().references('surveys.id');
		t.text('name').notNullable();
		t.text('kind').notNullable().checkIn(['waveform', 'trend']);
		t.text('format').notNullable();
		t.text('variant').notNullable();
		t.text('status').notNullable().checkIn(['recognised', 'queued', 'analysing', 'analysed', 'failed']);
		// CaptureFacts of recording/capture-facts.ts, made once at intake.
		t.text('facts_json').notNullable();
		// Mappings as confirmed by the engineer; null until confirmed.
		t.text('mappings_json');
		// Instant of the first sample or interval; null when neither file nor engineer told it.
		t.text('started_at');
		t.double('duration_s').notNullable();
		t.text('problem');
		t.text('uploaded_by').notNullable().references('users.id');
		t.text('created_at').notNullable();
		t.text('updated_at').notNullable();
		t.text('removed_at');
		t.index(['practice_id', 'survey_id', 'created_at']);
	});

	// Files that have arrived but do not belong to a capture yet; cleared away when nothing claims them.
	await knex.schema.createTable('uploads', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('survey_id').notNullable().references('surveys.id');
		t.text('name').notNullable();
		t.text('sha256').notNullable().references('stored_files.sha256');
		t.bigInteger('size_bytes').notNullable();
		t.text('uploaded_by').notNullable().references('users.id');
		t.text('created_at').notNullable();
		t.index(['practice_id', 'survey_id', 'created_at']);
	});

	await knex.schema.createTable('capture_files', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('capture_id').notNullable().references('captures.id').onDelete('CASCADE');
		t.integer('position').notNullable();
		t.text('name').notNullable();
		t.text('sha256').notNullable().references('stored_files.sha256');
		t.bigInteger('size_bytes').notNullable();
		t.index(['capture_id']);
		t.index(['practice_id', 'sha256']);
	});

	await knex.schema.createTable('analyses', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('client_id').notNullable().references('clients.id');
		t.text('capture_id').notNullable().references('captures.id').onDelete('CASCADE');
		t.text('engine_version').notNullable();
		// Mappings, nominal frequency and start instant that the figures rest on.
		t.text('parameters_json').notNullable();
		// Scalars, per-channel means and quality remarks; the long series are in analysis_series.
		t.text('summary_json').notNullable();
		t.boolean('is_current').notNullable().defaultTo(true);
		t.text('created_at').notNullable();
		t.index(['practice_id', 'capture_id', 'is_current']);
	});

	await knex.schema.createTable('analysis_series', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('analysis_id').notNullable().references('analyses.id').onDelete('CASCADE');
		t.integer('channel_index');
		t.text('quantity').notNullable().checkIn(['voltage', 'current']);
		t.text('phase').notNullable();
		t.text('interval').notNullable().checkIn(['window', '3s', '10min']);
		t.integer('interval_count').notNullable();
		// Little-endian float64 arrays, except flagged (one byte each). Shapes: harmonics/intervals.ts.
		t.binary('starts_ms').notNullable();
		t.binary('lengths_s').notNullable();
		t.binary('rms').notNullable();
		t.binary('frequency_hz').notNullable();
		t.binary('subgroups').notNullable();
		t.binary('flagged').notNullable();
		// Only for waveform windows: harmonics/waveform-analysis.ts.
		t.binary('components');
		t.binary('interharmonic_subgroups');
		t.binary('phases_deg');
		t.binary('dc');
		t.binary('peak');
		t.index(['analysis_id', 'interval']);
	});

	await knex.schema.createTable('jobs', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('kind').notNullable();
		t.integer('payload_version').notNullable();
		t.text('payload_json').notNullable();
		t.text('status').notNullable().checkIn(['queued', 'running', 'done', 'failed', 'cancelled']);
		t.integer('progress_done').notNullable().defaultTo(0);
		t.integer('progress_total').notNullable().defaultTo(0);
		t.text('progress_text').notNullable().defaultTo('');
		t.integer('attempts').notNullable().defaultTo(0);
		t.boolean('cancel_requested').notNullable().defaultTo(false);
		t.text('worker_id');
		t.text('lease_until');
		t.text('problem');
		// Asking twice for the same work gives the same job.
		t.text('dedupe_key').unique();
		t.text('created_at').notNullable();
		t.text('started_at');
		t.text('finished_at');
		t.index(['status', 'created_at']);
		t.index(['practice_id', 'created_at']);
	});
}

export async function down(knex: Knex): Promise<void> {
	for (const table of [
		'jobs',
		'analysis_series',
		'analyses',
		'capture_files',
		'uploads',
		'captures',
		'stored_files'
	]) {
		await knex.schema.dropTable(table);
	}
}
