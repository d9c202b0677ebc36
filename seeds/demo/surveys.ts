import type { Container } from '../../src/lib/server/container';
import * as captures from './captures';
import { localStart, type StoryClock } from './clock';
import { takeIn, workOff } from './intake';
import type { DemoRegister } from './register';

export interface DemoSurveys {
	harrowMain: string;
	harrowPanel: string;
	kestrel: string;
	ostlerBefore: string;
	ostlerAfter: string;
	fennimore: string;
	harrowRepeat: string;
}

const US_EASTERN = -300;
const US_CENTRAL = -360;

/** The surveys, each brought as far as its measurements go; the reports are written in reports.ts. */
export async function measureDemo(
	container: Container,
	story: StoryClock,
	register: DemoRegister,
	today: Date
): Promise<DemoSurveys> {
	const { surveys } = container.services;
	const { adeyemi, brandt } = register.staff;
	const [recorder2 = '', recorder5 = ''] = register.instruments;
	const open = (actor: typeof adeyemi, pointId: string, title: string, instrumentId: string) =>
		surveys.create(actor, { pointId, title, instrumentId, notes: '' });

	story.at(245, 9);
	const ostlerBefore = await open(
		adeyemi,
		register.points.ostlerIntake,
		'Ostler Lane, before the drive rebuild',
		recorder2
	);
	await takeIn(
		container,
		adeyemi,
		ostlerBefore,
		captures.pressWaveform(localStart(today, 246, '10:20:00', US_CENTRAL), true)
	);

	story.at(34, 10);
	const harrowMain = await open(
		adeyemi,
		register.points.harrowMain,
		'Harmonic survey at Harrow Dock 4',
		recorder2
	);
	story.at(25, 14);
	await takeIn(
		container,
		adeyemi,
		harrowMain,
		captures.bellwetherWeek(localStart(today, 33, '00:00:00', US_EASTERN))
	);
	await takeIn(
		container,
		adeyemi,
		harrowMain,
		captures.bellwetherWaveform(localStart(today, 30, '15:05:00', US_EASTERN))
	);

	story.at(24, 9);
	const harrowPanel = await open(
		brandt,
		register.points.harrowPanel,
		'Compressor panel 2, drives alone',
		recorder5
	);
	await takeIn(
		container,
		brandt,
		harrowPanel,
		captures.drivePanelWaveform(localStart(today, 29, '11:40:00', US_EASTERN))
	);

	story.at(22, 11);
	const ostlerAfter = await open(
		adeyemi,
		register.points.ostlerIntake,
		'Ostler Lane, after the drive rebuild',
		recorder2
	);
	await takeIn(
		container,
		adeyemi,
		ostlerAfter,
		captures.pressWaveform(localStart(today, 23, '10:15:00', US_CENTRAL), false)
	);

	story.at(12, 10);
	const kestrel = await open(brandt, register.points.kestrelLv, 'Supply quality at LV board 1', recorder5);
	story.at(4, 15);
	await takeIn(container, brandt, kestrel, captures.dataHallWeek(localStart(today, 12, '00:00:00', 0)));

	story.at(3, 13);
	const fennimore = await open(
		adeyemi,
		register.points.fennimoreIntake,
		'Capacitor bank and the 11th at the intake',
		recorder2
	);
	await takeIn(container, adeyemi, fennimore, captures.hospitalWaveform(localStart(today, 3, '10:30:00', 0)));

	story.at(1, 16);
	const harrowRepeat = await open(
		brandt,
		register.points.harrowMain,
		'Harrow Dock 4, repeat after line reactors',
		recorder5
	);
	await workOff(container);
	return { harrowMain, harrowPanel, kestrel, ostlerBefore, ostlerAfter, fennimore, harrowRepeat };
}
