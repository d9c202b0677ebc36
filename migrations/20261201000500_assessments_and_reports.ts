import type { Knex } from 'knex';

export async function up(knex: Knex): Promise<void> {
	await knex.schema.createTable('assessments', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('client_id').notNullable().references('clients.id');
		t.text('survey_id').notNullable().references('surveys.id');
		t.integer('limit_set_id').notNullable().references('limit_sets.id');
		t.text('verdict').notNullable();
		t.text('evidence').notNullable();
		t.boolean('advisory').notNullable();
		t.text('engine_version').notNullable();
		// AssessedPoint, decision rule, uncertainty figures and analysis ids that went in.
		t.text('input_json').notNullable();
		// Assessment of assessment/assessment.ts without its rows.
		t.text('result_json').notNullable();
		t.boolean('is_current').notNullable().defaultTo(true);
		t.text('created_by').references('users.id');
		t.text('created_at').notNullable();
		t.index(['practice_id', 'survey_id', 'is_current']);
	});

	await knex.schema.createTable('verdict_rows', (t) => {
		t.increments('id');
		t.text('assessment_id').notNullable().references('assessments.id').onDelete('CASCADE');
		t.text('practice_id').notNullable().references('practices.id');
		t.text('table_key').notNullable();
		t.text('quantity').notNullable();
		// A harmonic order, or null for a total named in index_name.
		t.integer('harmonic_order');
		t.text('index_name');
		t.text('phase').notNullable();
		t.text('statistic_key').notNullable();
		t.text('basis').notNullable();
		t.double('value_pct');
		t.double('limit_pct');
		t.integer('limit_row_id');
		t.text('comparator').notNullable();
		t.double('utilisation');
		t.double('uncertainty_pct');
		t.text('evidence').notNullable();
		t.double('coverage').notNullable();
		t.integer('interval_count').notNullable();
		t.integer('flagged_count').notNullable();
		t.text('worst_period');
		t.text('verdict').notNullable();
		t.text('reason').notNullable();
		t.index(['assessment_id', 'table_key', 'harmonic_order']);
	});

	await knex.schema.createTable('reports', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('client_id').notNullable().references('clients.id');
		t.text('site_id').notNullable().references('sites.id');
		t.text('survey_id').notNullable().references('surveys.id');
		// Given at the first issue; a draft has none.
		t.text('number');
		t.text('title').notNullable();
		t.text('created_by').notNullable().references('users.id');
		t.text('created_at').notNullable();
		t.unique(['practice_id', 'number']);
		t.index(['practice_id', 'client_id', 'created_at']);
	});

	await knex.schema.createTable('report_revisions', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('client_id').notNullable().references('clients.id');
		t.text('report_id').notNullable().references('reports.id');
		t.text('revision').notNullable();
		t.text('status')
			.notNullable()
			.checkIn(['draft', 'in-check', 'returned', 'issued', 'superseded', 'withdrawn']);
		t.text('assessment_id').notNullable().references('assessments.id');
		t.text('reason').notNullable().defaultTo('First issue');
		t.text('summary').notNullable().defaultTo('');
		t.text('findings_json').notNullable();
		t.text('prepared_by').notNullable().references('users.id');
		t.text('sent_for_check_at');
		t.text('checked_by').references('users.id');
		t.text('check_note').notNullable().defaultTo('');
		t.text('returned_at');
		t.text('issued_at');
		t.text('withdrawn_at');
		t.text('withdrawn_reason');
		// Frozen at issue: the report model as data, and the hashes that prove it.
		t.text('model_json');
		t.text('model_sha256');
		t.text('data_sha256');
		t.text('pdf_sha256').references('stored_files.sha256');
		t.integer('pdf_pages');
		// Counts saves, so that two editors cannot overwrite each other unseen.
		t.integer('edition').notNullable().defaultTo(1);
		t.text('created_at').notNullable();
		t.text('updated_at').notNullable();
		t.unique(['report_id', 'revision']);
		t.index(['practice_id', 'status', 'updated_at']);
		t.index(['practice_id', 'client_id', 'status']);
	});

	// What was issued stays as it was issued. Only its standing may change afterwards.
	await knex.raw(`
		create trigger report_revisions_frozen before update on report_revisions
		when old.status in ('issued', 'superseded', 'withdrawn') and (
			new.model_json is not old.model_json or new.model_sha256 is not old.model_sha256
			or new.pdf_sha256 is not old.pdf_sha256 or new.data_sha256 is not old.data_sha256
			or new.summary is not old.summary or new.findings_json is not old.findings_json
			or new.revision is not old.revision or new.issued_at is not old.issued_at
			or new.assessment_id is not old.assessment_id
			or new.status not in ('issued', 'superseded', 'withdrawn')
		)
		begin select raise(abort, 'an issued revision is immutable'); end`);
	await knex.raw(`
		create trigger report_revisions_kept before delete on report_revisions
		when old.status in ('issued', 'superseded', 'withdrawn')
		begin select raise(abort, 'an issued revision is kept'); end`);

	await knex.schema.createTable('acknowledgements', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('client_id').notNullable().references('clients.id');
		t.text('revision_id').notNullable().references('report_revisions.id');
		t.text('user_id').notNullable().references('users.id');
		t.text('typed_name').notNullable();
		t.text('statement').notNullable();
		t.text('pdf_sha256').notNullable();
		t.text('acknowledged_at').notNullable();
		t.unique(['revision_id', 'user_id']);
		t.index(['practice_id', 'client_id']);
	});

	await knex.schema.createTable('queries', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('client_id').notNullable().references('clients.id');
		t.text('revision_id').notNullable().references('report_revisions.id');
		t.text('asked_by').notNullable().references('users.id');
		t.text('status').notNullable().checkIn(['open', 'answered', 'closed']);
		t.text('created_at').notNullable();
		t.text('updated_at').notNullable();
		t.index(['practice_id', 'client_id', 'status']);
		t.index(['revision_id']);
	});

	await knex.schema.createTable('query_messages', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('query_id').notNullable().references('queries.id');
		t.text('author_id').notNullable().references('users.id');
		t.text('body').notNullable();
		t.text('created_at').notNullable();
		t.index(['query_id', 'created_at']);
	});

	await knex.schema.createTable('actions', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('client_id').notNullable().references('clients.id');
		t.text('site_id').notNullable().references('sites.id');
		t.text('survey_id').notNullable().references('surveys.id');
		t.integer('position').notNullable();
		t.text('title').notNullable();
		t.text('detail').notNullable().defaultTo('');
		t.text('priority').notNullable().checkIn(['urgent', 'normal', 'advice']);
		// Who does it: the client's people, or the practice.
		t.text('side').notNullable().checkIn(['client', 'practice']);
		t.text('responsible').notNullable().defaultTo('');
		t.text('due_on');
		t.text('status').notNullable().checkIn(['open', 'done', 'confirmed']);
		// The client sees an action from the issue of the report that carries it.
		t.text('published_at');
		t.text('done_at');
		t.text('done_by').references('users.id');
		t.text('done_note').notNullable().defaultTo('');
		t.text('confirmed_at');
		t.text('confirmed_by').references('users.id');
		t.text('created_at').notNullable();
		t.index(['practice_id', 'client_id', 'status', 'due_on']);
		t.index(['survey_id', 'position']);
	});
}

export async function down(knex: Knex): Promise<void> {
	for (const table of [
		'actions',
		'query_messages',
		'queries',
		'acknowledgements',
		'report_revisions',
		'reports',
		'verdict_rows',
		'assessments'
	]) {
		await knex.schema.dropTable(table);
	}
}
