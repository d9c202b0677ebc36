import type { Knex } from 'knex';

// Captures are made anew for wider checks; dropping the old table must not cascade into what refers to it.
export const config = { transaction: false };

/**
 * Tables whose columns a person has to tell, several captures out of one file, resumable uploads, quota, templates of
 * table layouts, overruled checks and the pyramid that the viewer draws from.
 */
export async function up(knex: Knex): Promise<void> {
	await remakeCaptures(knex, true);

	await knex.schema.alterTable('practices', (t) => {
		// Bytes of originals that the practice may keep; null leaves it to the installation's setting.
		t.bigInteger('storage_quota_bytes');
	});

	await knex.schema.alterTable('uploads', (t) => {
		// Name of the archive that the file came in; null for a file sent by itself.
		t.text('from_archive');
	});

	// One row per file on its way in pieces (tus 1.0); it outlives a restart, the bytes lie in the receiving folder.
	await knex.schema.createTable('upload_sessions', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('survey_id').notNullable().references('surveys.id');
		t.text('name').notNullable();
		t.bigInteger('size_bytes').notNullable();
		t.bigInteger('received_bytes').notNullable().defaultTo(0);
		// Computed by the sender; what arrives must have it. Null where the sender could not tell.
		t.text('expected_sha256');
		t.text('status').notNullable().checkIn(['receiving', 'arrived', 'failed']);
		t.text('problem');
		// The upload that it became.
		t.text('upload_id');
		t.text('uploaded_by').notNullable().references('users.id');
		t.text('created_at').notNullable();
		t.text('updated_at').notNullable();
		t.index(['practice_id', 'survey_id', 'status']);
		t.index(['status', 'updated_at']);
	});

	await knex.schema.createTable('layout_templates', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('name').notNullable();
		// Headings that the template was made from, for telling which file it fits.
		t.text('headings_json').notNullable();
		t.text('layout_json').notNullable();
		t.text('created_by').notNullable().references('users.id');
		t.text('created_at').notNullable();
		t.text('updated_at').notNullable();
		t.text('last_used_at');
		t.integer('used_count').notNullable().defaultTo(0);
		t.text('archived_at');
		t.index(['practice_id', 'name']);
	});

	// An engineer's word against a check of the capture. Nothing is deleted: taking it back is an instant of its own.
	await knex.schema.createTable('check_overrules', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('survey_id').notNullable().references('surveys.id');
		// Null for a check of the survey as a whole.
		t.text('capture_id').references('captures.id').onDelete('CASCADE');
		t.text('code').notNullable();
		t.integer('channel_index');
		// The finding as it read: an overrule counts as long as it reads the same.
		t.text('sentence').notNullable();
		t.text('reason').notNullable();
		t.text('overruled_by').notNullable().references('users.id');
		t.text('created_at').notNullable();
		t.text('withdrawn_at');
		t.text('withdrawn_by').references('users.id');
		t.index(['practice_id', 'survey_id', 'withdrawn_at']);
	});
}

async function remakeCaptures(knex: Knex, extended: boolean): Promise<void> {
	const kinds = ['waveform', 'trend', ...(extended ? ['table'] : [])];
	const states = [...(extended ? ['unread'] : []), 'recognised', 'queued', 'analysing', 'analysed', 'failed'];
	await knex.raw('pragma foreign_keys = off');
	try {
		await knex.transaction(async (trx) => {
			await trx.schema.createTable('captures_new', (t) => {
				t.text('id').primary();
				t.text('practice_id').notNullable().references('practices.id');
				t.text('client_id').notNullable().references('clients.id');
				t.text('survey_id').notNullable().references('surveys.id');
				t.text('name').notNullable();
				// "table": rows and columns that nobody has told the meaning of yet; its status is then "unread".
				t.text('kind').notNullable().checkIn(kinds);
				t.text('format').notNullable();
				t.text('variant').notNullable();
				t.text('status').notNullable().checkIn(states);
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
				if (extended) {
					// Which part of the files it is, where one file holds several recordings or trends.
					t.text('part_key').notNullable().defaultTo('');
					// How a table of text is to be read (TableLayout), as guessed or as told; null for other formats.
					t.text('layout_json');
					t.text('layout_template_id').references('layout_templates.id');
					t.text('instrument_id').references('instruments.id');
					// Least and greatest values at every zoom, made at intake.
					t.text('pyramid_sha256').references('stored_files.sha256');
					t.text('pyramid_json');
				}
			});
			const columns = `id, practice_id, client_id, survey_id, name, kind, format, variant, status, facts_json,
				mappings_json, started_at, duration_s, problem, uploaded_by, created_at, updated_at, removed_at`;
			await trx.raw(`insert into captures_new (${columns}) select ${columns} from captures`);
			await trx.schema.dropTable('captures');
			await trx.schema.renameTable('captures_new', 'captures');
			await trx.schema.alterTable('captures', (t) =>
				t.index(['practice_id', 'survey_id', 'created_at'], 'captures_practice_id_survey_id_created_at_index')
			);
		});
	} finally {
		await knex.raw('pragma foreign_keys = on');
	}
}

/** Tables without a told layout have no place in the earlier schema and go. */
export async function down(knex: Knex): Promise<void> {
	await knex.schema.dropTable('check_overrules');
	await knex('captures').where({ kind: 'table' }).delete();
	await remakeCaptures(knex, false);
	await knex.schema.dropTable('layout_templates');
	await knex.schema.dropTable('upload_sessions');
	await knex.schema.alterTable('uploads', (t) => t.dropColumn('from_archive'));
	await knex.schema.alterTable('practices', (t) => t.dropColumn('storage_quota_bytes'));
}
