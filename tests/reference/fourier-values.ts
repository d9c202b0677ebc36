/**
 * Fourier coefficients of closed-form waves: peak amplitude of orders 1 … 25, dc, rms and distortion. Figures only.
 * Each entry names where its series is published; every value was checked against 30-digit quadrature.
 */
export interface SeriesReference {
	source: string;
	dc: number;
	rms: number;
	/** peak amplitude of order 1, 2, … 25 */
	amplitudes: number[];
	/** over all orders, percent of order 1 */
	thdAllOrders_pct: number;
}

export const SERIES: Record<string, SeriesReference> = {
	square: {
		source:
			'Zwillinger, CRC Standard Mathematical Tables and Formulae (Fourier series tables); THD limit: Blagouchine & Moreau, IEEE Trans. Commun. 59(9):2478-2491, 2011',
		dc: 0.0,
		rms: 1.0,
		amplitudes: [
			1.27323954474, 0.0, 0.424413181578, 0.0, 0.254647908947, 0.0, 0.181891363534, 0.0, 0.141471060526, 0.0,
			0.115749049521, 0.0, 0.0979415034412, 0.0, 0.0848826363157, 0.0, 0.074896443808, 0.0, 0.0670126076176,
			0.0, 0.0606304545112, 0.0, 0.0553582410754, 0.0, 0.0509295817894
		],
		thdAllOrders_pct: 48.3425847609
	},
	sawtooth: {
		source:
			'Zwillinger, CRC Standard Mathematical Tables and Formulae (Fourier series tables); THD limit: Blagouchine & Moreau, IEEE Trans. Commun. 59(9):2478-2491, 2011',
		dc: 0.0,
		rms: 0.57735026919,
		amplitudes: [
			0.636619772368, 0.318309886184, 0.212206590789, 0.159154943092, 0.127323954474, 0.106103295395,
			0.0909456817668, 0.0795774715459, 0.0707355302631, 0.0636619772368, 0.0578745247607, 0.0530516476973,
			0.0489707517206, 0.0454728408834, 0.0424413181578, 0.039788735773, 0.037448221904, 0.0353677651315,
			0.0335063038088, 0.0318309886184, 0.0303152272556, 0.0289372623803, 0.0276791205377, 0.0265258238486,
			0.0254647908947
		],
		thdAllOrders_pct: 80.3077870974
	},
	triangle: {
		source:
			'Zwillinger, CRC Standard Mathematical Tables and Formulae (Fourier series tables); THD limit: Blagouchine & Moreau, IEEE Trans. Commun. 59(9):2478-2491, 2011',
		dc: 0.0,
		rms: 0.57735026919,
		amplitudes: [
			0.810569469139, 0.0, 0.0900632743487, 0.0, 0.0324227787655, 0.0, 0.0165422340641, 0.0, 0.0100070304832,
			0.0, 0.00669892123255, 0.0, 0.00479626904816, 0.0, 0.00360253097395, 0.0, 0.00280473864754, 0.0,
			0.00224534478986, 0.0, 0.00183802600712, 0.0, 0.00153226742748, 0.0, 0.00129691115062
		],
		thdAllOrders_pct: 12.1152926519
	},
	trianglePulses8: {
		source:
			'derived from the Fourier integral (product of two sinc functions); same structure as the triangular-pulse model of a capacitor-input rectifier current, common textbook model',
		dc: 0.0,
		rms: 0.408248290464,
		amplitudes: [
			0.474820601776, 0.0, 0.307495252753, 0.0, 0.110698290991, 0.0, 0.00969021636277, 0.0, 0.00586198273797,
			0.0, 0.0228715477254, 0.0, 0.016375486833, 0.0, 0.00211031378567, 0.0, 0.00164297786082, 0.0,
			0.00766608663374, 0.0, 0.00627541332149, 0.0, 0.000897581477837, 0.0, 0.000759712962841
		],
		thdAllOrders_pct: 69.1732781189
	},
	trianglePulses24: {
		source:
			'derived from the Fourier integral (product of two sinc functions); same structure as the triangular-pulse model of a capacitor-input rectifier current, common textbook model',
		dc: 0.0,
		rms: 0.235702260396,
		amplitudes: [
			0.165716909377, 0.0, 0.158273533925, 0.0, 0.144186876755, 0.0, 0.12494207573, 0.0, 0.102498417584, 0.0,
			0.0790174935561, 0.0, 0.0565746551496, 0.0, 0.0368994303304, 0.0, 0.0211839505563, 0.0,
			0.00998524077253, 0.0, 0.00323007212092, 0.0, 0.000313264478974, 0.0, 0.000265147055004
		],
		thdAllOrders_pct: 174.527390766
	},
	parabola: {
		source:
			'Zwillinger, CRC Standard Mathematical Tables and Formulae (Fourier series tables); THD limit: Blagouchine & Moreau, IEEE Trans. Commun. 59(9):2478-2491, 2011',
		dc: 3.2898681337,
		rms: 4.41382127037,
		amplitudes: [
			4.0, 1.0, 0.444444444444, 0.25, 0.16, 0.111111111111, 0.0816326530612, 0.0625, 0.0493827160494, 0.04,
			0.0330578512397, 0.0277777777778, 0.0236686390533, 0.0204081632653, 0.0177777777778, 0.015625,
			0.0138408304498, 0.0123456790123, 0.01108033241, 0.01, 0.00907029478458, 0.00826446280992,
			0.00756143667297, 0.00694444444444, 0.0064
		],
		thdAllOrders_pct: 28.6920256711
	},
	sixPulse: {
		source:
			'derived; 120 degree case is the ideal six-pulse line current (Mohan, Undeland, Robbins, Power Electronics; Arrillaga & Watson) - textbook reference from memory',
		dc: 0.0,
		rms: 0.816496580928,
		amplitudes: [
			1.10265779084, 0.0, 0.0, 0.0, 0.220531558169, 0.0, 0.157522541549, 0.0, 0.0, 0.0, 0.100241617349, 0.0,
			0.0848198300649, 0.0, 0.0, 0.0, 0.0648622229908, 0.0, 0.0580346205707, 0.0, 0.0, 0.0, 0.0479416430802,
			0.0, 0.0441063116337
		],
		thdAllOrders_pct: 31.0841939307
	},
	sixPulseOverlap0_20: {
		source:
			'Kimbark, Direct Current Transmission, vol. 1 (1971) and Arrillaga & Watson, Power System Harmonics - formula from memory, checked numerically',
		dc: 0.0,
		rms: 0.798119240942,
		amplitudes: [
			1.09892322286, 0.0, 0.0, 0.0, 0.202456840832, 0.0, 0.133034587271, 0.0, 0.0, 0.0, 0.0654307083205, 0.0,
			0.0464132148953, 0.0, 0.0, 0.0, 0.0229907466267, 0.0, 0.0164565344276, 0.0, 0.0, 0.0, 0.0104957136543,
			0.0, 0.00948139751199
		],
		thdAllOrders_pct: 23.4408871037
	},
	sixPulseOverlap30_10: {
		source:
			'Kimbark, Direct Current Transmission, vol. 1 (1971) and Arrillaga & Watson, Power System Harmonics - formula from memory, checked numerically',
		dc: 0.0,
		rms: 0.805118097276,
		amplitudes: [
			1.10126746003, 0.0, 0.0, 0.0, 0.213643239092, 0.0, 0.147966803289, 0.0, 0.0, 0.0, 0.0856328095136, 0.0,
			0.0678689685766, 0.0, 0.0, 0.0, 0.0436920783494, 0.0, 0.0350193469537, 0.0, 0.0, 0.0, 0.0218279238482,
			0.0, 0.0167573183821
		],
		thdAllOrders_pct: 26.2612224685
	}
};
