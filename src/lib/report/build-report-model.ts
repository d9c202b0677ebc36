import type { Assessment, VerdictRow } from '../assessment/assessment';
import { rollUpVerdicts } from '../assessment/roll-up';
import { engineerSentence, portalSentence } from '../assessment/verdict-sentence';
import { BASIS_WORDS } from '../assessment/wording';
import type { WorkingStep } from '../assessment/working';
import type { LimitSet, LimitTable } from '../limits/limit-set';
import { PHASES } from '../recording/phase';
import { computeDemandCurrent } from '../register/demand-facts';
import type { PointFacts } from '../register/point-facts';
import { computeShortCircuit } from '../register/short-circuit-facts';
import { evidenceText } from './evidence-words';
import { usedLimitRows } from './limit-row-words';
import { plainExplanation } from './plain-words';
import type {
	ReportFigure,
	ReportLineage,
	ReportModel,
	ReportPoint,
	ReportRow,
	ReportRule,
	ReportTable
} from './report-model';
import { statisticText } from './rule-words';
import { tableSpectrum } from './table-spectrum';
import { groupByItem, itemKey, itemLong, overLimit, speakingRow } from './verdict-table';

/** What a report is made from; everything is read before, so that building it is pure. */
export interface ReportSources extends Pick<
	ReportModel,
	| 'document'
	| 'practice'
	| 'client'
	| 'site'
	| 'survey'
	| 'summary'
	| 'findings'
	| 'actions'
	| 'instrument'
	| 'equipment'
	| 'waveform'
	| 'trends'
	| 'quality'
> {
	pointFacts: PointFacts;
	assessment: Assessment;
	assessmentId: string;
	engineVersion: string;
	limitSet: LimitSet;
	limitSetSourceSha256: string;
	limitSetReason: string;
	uncertaintyAtOrders: ReportModel['method']['uncertaintyAtOrders'];
	captures: ReportLineage['captures'];
}

const SHORT_CIRCUIT_ORIGIN: Record<PointFacts['shortCircuit']['method'], string> = {
	unknown: '',
	current: 'as given',
	'fault-level': 'computed from the fault level given',
	transformer: 'computed from transformer data'
};

/** One line of working; symbols stay marked (I_{sc}) for typesetting. */
function workingLine({ what, formula, figures, result }: WorkingStep): string {
	const symbols = formula
		.map((part) => (typeof part === 'string' ? part : `${part.symbol}_{${part.subscript}}`))
		.join('');
	return [`${what}: ${symbols}`, figures, result].filter((part) => part !== '').join(' = ');
}

/** Where a figure came from that was entered and not computed; nothing for one that is not known. */
function originLine(fact: PointFacts['demand'] | PointFacts['shortCircuit']): string[] {
	if (fact.method === 'unknown') return [];
	const computed = fact.method !== 'entered' && fact.method !== 'current';
	const what = computed ? 'Data from' : 'Given as a current by';
	return fact.source === ''
		? computed
			? []
			: ['Given as a current; the source is not recorded.']
		: [`${what}: ${fact.source}`];
}

function pointOf({ pointFacts: facts, assessment, limitSetReason }: ReportSources): ReportPoint {
	const demand = computeDemandCurrent(facts);
	const shortCircuit = computeShortCircuit(facts);
	const { currentTransformer: ct, voltageTransformer: vt } = facts;
	const origin = SHORT_CIRCUIT_ORIGIN[facts.shortCircuit.method];
	const source = facts.shortCircuit.method === 'unknown' ? '' : facts.shortCircuit.source;
	return {
		name: facts.name,
		kind: facts.kind,
		system: facts.system,
		nominalVoltage_V: facts.nominalVoltage_V,
		nominalFrequency_Hz: facts.nominalFrequency_Hz,
		phaseNames: facts.phaseNames,
		demandCurrent_A: demand.current_A,
		shortCircuitCurrent_A: shortCircuit.current_A,
		shortCircuitRatio: assessment.headline.shortCircuitRatio,
		demandWorking: [...originLine(facts.demand), ...demand.working.map(workingLine), ...demand.remarks],
		shortCircuitWorking: [
			...originLine(facts.shortCircuit),
			...shortCircuit.working.map(workingLine),
			...shortCircuit.remarks
		],
		shortCircuitOrigin: source === '' ? origin : `${origin} (${source})`,
		ctRatio: ct && { primary_A: ct.primary, secondary_A: ct.secondary },
		vtRatio: vt && { primary_V: vt.primary, secondary_V: vt.secondary },
		limitSetReason
	};
}

function rowOf(group: { item: VerdictRow['item']; rows: VerdictRow[] }): ReportRow | null {
	const speaking = speakingRow(group.rows);
	if (speaking === null) return null;
	return {
		label: itemKey(group.item),
		order: group.item.kind === 'order' ? group.item.order : null,
		cells: group.rows.map(({ phase, value_pct, verdict }) => ({ phase, value_pct, verdict })),
		limit_pct: speaking.limit_pct,
		comparator: speaking.comparator,
		worstPhase: speaking.phase,
		utilisation: speaking.utilisation,
		uncertainty_pct: speaking.uncertainty_pct,
		verdict: rollUpVerdicts(group.rows.map((row) => row.verdict)),
		reason: speaking.reason,
		limitRowId: speaking.limitRowId,
		intervalCount: speaking.intervalCount,
		flaggedCount: speaking.flaggedCount,
		coverage: speaking.coverage,
		worstPeriod: speaking.worstPeriod
	};
}

function rulesOf(rows: readonly VerdictRow[], table: LimitTable | undefined): ReportRule[] {
	const inSet = table?.statistics.map((rule) => rule.key) ?? [];
	const found = [...new Set(rows.map((row) => row.statisticKey))];
	const keys = [
		...inSet.filter((key) => found.includes(key)),
		...found.filter((key) => !inSet.includes(key))
	];
	return keys.map((statisticKey) => ({
		statisticKey,
		text: statisticText(table, statisticKey),
		rows: groupByItem(rows.filter((row) => row.statisticKey === statisticKey)).flatMap(
			(group) => rowOf(group) ?? []
		)
	}));
}

function tablesOf({ assessment, limitSet }: ReportSources): ReportTable[] {
	return assessment.tables.map((verdict) => {
		const table = limitSet.tables.find((candidate) => candidate.key === verdict.tableKey);
		const rows = assessment.rows.filter((row) => row.tableKey === verdict.tableKey);
		const basis = table?.basis ?? rows[0]?.basis ?? 'fundamental';
		return {
			key: verdict.tableKey,
			title: verdict.title,
			clause: verdict.clause,
			quantity: verdict.quantity,
			basis,
			ofWhat: BASIS_WORDS[basis],
			selection: verdict.selection,
			verdict: verdict.verdict,
			evidence: verdict.evidence,
			phases: PHASES.filter((phase) => rows.some((row) => row.phase === phase)),
			rules: rulesOf(rows, table)
		};
	});
}

function worstFigure({ assessment, limitSet }: ReportSources): ReportFigure | null {
	const { worst } = assessment;
	if (worst === null || worst.value_pct === null || worst.limit_pct === null || worst.utilisation === null)
		return null;
	const table = limitSet.tables.find((candidate) => candidate.key === worst.tableKey);
	return {
		quantity: worst.quantity,
		label: `${itemLong(worst.item)} of ${worst.quantity}`,
		phase: worst.phase,
		basis: worst.basis,
		ofWhat: BASIS_WORDS[worst.basis],
		value_pct: worst.value_pct,
		limit_pct: worst.limit_pct,
		utilisation: worst.utilisation,
		verdict: worst.verdict,
		statistic: statisticText(table, worst.statisticKey)
	};
}

function methodOf({ assessment, limitSet, uncertaintyAtOrders }: ReportSources): ReportModel['method'] {
	const applied = assessment.tables.flatMap((verdict) => {
		const table = limitSet.tables.find((candidate) => candidate.key === verdict.tableKey);
		return table === undefined ? [] : [{ verdict, table }];
	});
	const statistics = new Map<string, ReportModel['method']['statistics'][number]>();
	for (const { table } of applied)
		for (const rule of table.statistics)
			statistics.set(`${table.quantity}/${rule.key}`, {
				quantity: table.quantity,
				key: rule.key,
				text: statisticText(table, rule.key),
				clause: table.clause,
				multiplier: rule.multiplier
			});
	return {
		limitSetTitle: assessment.limitSetTitle,
		standard: limitSet.standard,
		edition: limitSet.edition,
		decisionRule: assessment.decisionRule,
		uncertaintyText: assessment.uncertaintyText,
		uncertaintyAtOrders,
		statistics: [...statistics.values()],
		tables: applied.map(({ verdict, table }) => ({
			title: table.title,
			clause: table.clause,
			basisText: table.basisText,
			selection: verdict.selection,
			provenance: table.provenance
		}))
	};
}

/** Charts with the governing table first: its chart stands on the cover. */
function spectraOf({ assessment, limitSet }: ReportSources): ReportModel['spectra'] {
	const first = assessment.worst?.tableKey;
	return [...assessment.tables]
		.sort((a, b) => Number(b.tableKey === first) - Number(a.tableKey === first))
		.flatMap((verdict) => {
			const rows = assessment.rows.filter((row) => row.tableKey === verdict.tableKey);
			const table = limitSet.tables.find((candidate) => candidate.key === verdict.tableKey);
			return tableSpectrum(rows, table) ?? [];
		});
}

/** The report as data. `dataSha256` stays empty: its hash is taken over the result (measured-data.ts). */
export function buildReportModel(sources: ReportSources): ReportModel {
	const { assessment, limitSet, pointFacts } = sources;
	const names = { phaseNames: pointFacts.phaseNames };
	return {
		schema: 'sinewright-report/1',
		document: sources.document,
		practice: sources.practice,
		client: sources.client,
		site: sources.site,
		point: pointOf(sources),
		survey: sources.survey,
		verdict: {
			verdict: assessment.verdict,
			evidence: assessment.evidence,
			advisory: assessment.advisory,
			sentence: engineerSentence(assessment, names),
			plainSentence: portalSentence(assessment, names),
			plainExplanation: plainExplanation(assessment, pointFacts.phaseNames),
			evidenceText: evidenceText(assessment),
			decisionRule: assessment.decisionRule,
			limitSetTitle: assessment.limitSetTitle,
			worst: worstFigure(sources),
			headline: {
				tdd: assessment.headline.tdd,
				currentThd: assessment.headline.currentThd,
				voltageThd: assessment.headline.voltageThd
			},
			overLimit: overLimit(assessment.rows),
			missing: assessment.missing,
			flaggedCount: assessment.worst?.flaggedCount ?? 0
		},
		summary: sources.summary,
		findings: sources.findings,
		actions: sources.actions,
		instrument: sources.instrument,
		...(sources.equipment && { equipment: sources.equipment }),
		method: methodOf(sources),
		tables: tablesOf(sources),
		spectra: spectraOf(sources),
		waveform: sources.waveform,
		trends: sources.trends,
		quality: sources.quality,
		lineage: {
			engineVersion: sources.engineVersion,
			assessmentId: sources.assessmentId,
			limitSet: {
				id: limitSet.id,
				title: assessment.limitSetTitle,
				sourceSha256: sources.limitSetSourceSha256
			},
			limitRows: usedLimitRows(limitSet, assessment.rows).map(
				({ id, table, clause, what, limit_pct, provenance }) => ({
					id,
					table,
					clause,
					what,
					limit_pct,
					provenance
				})
			),
			captures: sources.captures,
			dataSha256: ''
		}
	};
}
