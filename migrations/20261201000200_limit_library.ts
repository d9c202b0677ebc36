import type { Knex } from 'knex';

function ratioAndVoltageClass(t: Knex.CreateTableBuilder): void {
	t.double('ratio_lower');
	t.boolean('ratio_lower_inclusive');
	t.double('ratio_upper');
	t.boolean('ratio_upper_inclusive');
	t.text('ratio_label');
	t.double('voltage_lower_kv');
	t.boolean('voltage_lower_inclusive');
	t.double('voltage_upper_kv');
	t.boolean('voltage_upper_inclusive');
	t.text('voltage_label');
}

export async function up(knex: Knex): Promise<void> {
	await knex.schema.createTable('limit_sets', (t) => {
		t.increments('id');
		t.text('key').notNullable();
		// Null: a published edition, readable by every practice. Otherwise a practice's own set.
		t.text('practice_id').references('practices.id');
		t.text('standard').notNullable();
		t.text('edition').notNullable();
		t.text('title').notNullable();
		t.text('publisher').notNullable();
		t.text('jurisdiction').notNullable();
		t.text('status').notNullable();
		t.text('notes_json').notNullable();
		t.text('source_sha256').notNullable();
		t.text('created_at').notNullable();
	});
	await knex.raw("create unique index limit_sets_key_unique on limit_sets (key, coalesce(practice_id, ''))");

	await knex.schema.createTable('limit_tables', (t) => {
		t.increments('id');
		t.integer('limit_set_id').notNullable().references('limit_sets.id').onDelete('CASCADE');
		t.integer('position').notNullable();
		t.text('key').notNullable();
		t.text('title').notNullable();
		t.text('clause').notNullable();
		t.text('kind').notNullable();
		t.text('quantity').notNullable().checkIn(['voltage', 'current']);
		t.text('basis').notNullable().checkIn(['nominal-voltage', 'fundamental', 'demand-current']);
		t.text('basis_text').notNullable();
		t.double('voltage_lower_kv');
		t.boolean('voltage_lower_inclusive');
		t.double('voltage_upper_kv');
		t.boolean('voltage_upper_inclusive');
		t.integer('order_from').notNullable();
		t.integer('order_to').notNullable();
		t.text('provenance').notNullable();
		t.text('sources_json').notNullable();
		t.text('doubts_json').notNullable();
		t.unique(['limit_set_id', 'key']);
	});

	await knex.schema.createTable('limit_rows', (t) => {
		t.increments('id');
		t.integer('limit_table_id').notNullable().references('limit_tables.id').onDelete('CASCADE');
		t.integer('position').notNullable();
		t.text('orders_json').notNullable();
		ratioAndVoltageClass(t);
		t.double('limit_pct');
		t.text('formula');
		t.text('origin').notNullable().checkIn(['printed', 'derived']);
		t.text('provenance').notNullable();
		t.index(['limit_table_id']);
		t.check('(limit_pct is null) <> (formula is null)', [], 'limit_rows_one_value');
	});

	await knex.schema.createTable('limit_totals', (t) => {
		t.increments('id');
		t.integer('limit_table_id').notNullable().references('limit_tables.id').onDelete('CASCADE');
		t.integer('position').notNullable();
		t.text('index_name').notNullable().checkIn(['THD', 'TDD']);
		ratioAndVoltageClass(t);
		t.double('limit_pct').notNullable();
		t.integer('order_from').notNullable();
		t.integer('order_to').notNullable();
		t.text('provenance').notNullable();
		t.index(['limit_table_id']);
	});

	await knex.schema.createTable('limit_statistics', (t) => {
		t.increments('id');
		t.integer('limit_table_id').notNullable().references('limit_tables.id').onDelete('CASCADE');
		t.integer('position').notNullable();
		t.text('key').notNullable();
		t.double('interval_s').notNullable();
		t.double('percentile').notNullable();
		t.text('period').notNullable().checkIn(['day', 'week']);
		t.double('multiplier').notNullable();
		t.text('comparator').notNullable().checkIn(['<', '<=']);
		t.text('provenance').notNullable();
		t.index(['limit_table_id']);
	});
}

export async function down(knex: Knex): Promise<void> {
	for (const table of ['limit_statistics', 'limit_totals', 'limit_rows', 'limit_tables', 'limit_sets']) {
		await knex.schema.dropTable(table);
	}
}
