import type { Knex } from 'knex';

/**
 * Long captures arrive in parts, intervals of two hours and the capture as a whole are kept, and figures that are not
 * levels by order are followed over time. SQLite cannot widen a check, so the table of series is made anew.
 */
export async function up(knex: Knex): Promise<void> {
	await knex.schema.alterTable('analyses', (t) => {
		// False while parts of it are still being stored; such an analysis is nobody's result yet.
		t.boolean('is_finished').notNullable().defaultTo(true);
	});
	await knex.schema.renameTable('analysis_series', 'analysis_series_before');
	await createSeries(knex, true);
	await knex.raw(
		`insert into analysis_series (id, practice_id, analysis_id, channel_index, quantity, phase, interval, part,
			interval_count, starts_ms, lengths_s, rms, frequency_hz, subgroups, flagged, components,
			interharmonic_subgroups, phases_deg, dc, peak)
		select id, practice_id, analysis_id, channel_index, quantity, phase, interval, 0,
			interval_count, starts_ms, lengths_s, rms, frequency_hz, subgroups, flagged, components,
			interharmonic_subgroups, phases_deg, dc, peak
		from analysis_series_before`
	);
	await knex.schema.dropTable('analysis_series_before');
	await knex.schema.createTable('analysis_scalars', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('analysis_id').notNullable().references('analyses.id').onDelete('CASCADE');
		t.text('measure').notNullable();
		t.text('quantity').notNullable().checkIn(['voltage', 'current', 'power']);
		// A conductor, or "total".
		t.text('phase').notNullable();
		t.text('unit').notNullable();
		t.text('interval').notNullable().checkIn(['window', '3s', '10min', '2h', 'whole']);
		t.integer('part').notNullable().defaultTo(0);
		// Little-endian float64 arrays of one length; NaN where there is no data.
		t.binary('starts_ms').notNullable();
		t.binary('values').notNullable();
		t.index(['analysis_id', 'interval', 'measure']);
	});
}

async function createSeries(knex: Knex, extended: boolean): Promise<void> {
	const intervals = ['window', '3s', '10min', ...(extended ? ['2h', 'whole'] : [])];
	await knex.schema.createTable('analysis_series', (t) => {
		t.text('id').primary();
		t.text('practice_id').notNullable().references('practices.id');
		t.text('analysis_id').notNullable().references('analyses.id').onDelete('CASCADE');
		t.integer('channel_index');
		t.text('quantity').notNullable().checkIn(['voltage', 'current']);
		t.text('phase').notNullable();
		t.text('interval').notNullable().checkIn(intervals);
		// Parts of one series follow each other in time; windows of a long capture come in several.
		if (extended) t.integer('part').notNullable().defaultTo(0);
		t.integer('interval_count').notNullable();
		// Little-endian float64 arrays, except flagged (one byte each). Shapes: harmonics/intervals.ts.
		t.binary('starts_ms').notNullable();
		t.binary('lengths_s').notNullable();
		t.binary('rms').notNullable();
		t.binary('frequency_hz').notNullable();
		t.binary('subgroups').notNullable();
		t.binary('flagged').notNullable();
		// Only where the capture was a waveform (harmonics/waveform-analysis.ts); float32 or float64, told by their length.
		t.binary('components');
		t.binary('interharmonic_subgroups');
		t.binary('phases_deg');
		t.binary('dc');
		t.binary('peak');
		if (extended) {
			t.binary('harmonic_groups');
			t.binary('interharmonic_groups');
			t.index(['analysis_id', 'interval', 'part']);
		} else t.index(['analysis_id', 'interval']);
	});
}

/** Back to windows, 3 s and 10 min in one part each; what the earlier schema has no place for is dropped. */
export async function down(knex: Knex): Promise<void> {
	await knex.schema.dropTable('analysis_scalars');
	await knex('analyses').where('is_finished', 0).delete();
	await knex('analysis_series').where('part', '>', 0).orWhereIn('interval', ['2h', 'whole']).delete();
	await knex.schema.renameTable('analysis_series', 'analysis_series_extended');
	await createSeries(knex, false);
	const columns = `id, practice_id, analysis_id, channel_index, quantity, phase, interval, interval_count, starts_ms,
		lengths_s, rms, frequency_hz, subgroups, flagged, components, interharmonic_subgroups, phases_deg, dc, peak`;
	await knex.raw(`insert into analysis_series (${columns}) select ${columns} from analysis_series_extended`);
	await knex.schema.dropTable('analysis_series_extended');
	await knex.schema.alterTable('analyses', (t) => t.dropColumn('is_finished'));
}
