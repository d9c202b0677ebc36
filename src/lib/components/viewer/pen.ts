export interface LineLook {
	color: string;
	width: number;
	/** Empty for a full line. */
	dash: readonly number[];
}
export type Anchor = 'start' | 'middle' | 'end';
export type DotShape = 'circle' | 'rect' | 'triangle' | 'diamond';

/** What the viewer draws with: a canvas on the screen, elements of an SVG file in an export. Pixels, y downwards. */
export interface Pen {
	rect(x: number, y: number, width: number, height: number, color: string, opacity: number): void;
	/** Vertical strokes, one per pixel from x0 on, each from `low` to `high`; NaN leaves one out. */
	bars(x0: number, low: Float32Array, high: Float32Array, color: string, opacity: number): void;
	/** Through all points; NaN breaks the line. */
	line(xs: Float64Array, ys: Float64Array, look: LineLook): void;
	dots(xs: Float64Array, ys: Float64Array, color: string, shape: DotShape): void;
	text(x: number, y: number, text: string, color: string, anchor: Anchor, isStrong?: boolean): void;
	/** What `draw` draws stays inside the rectangle. */
	inside(x: number, y: number, width: number, height: number, draw: () => void): void;
}

const DOT_PX = 2.5;
const FONT = "'IBM Plex Sans', ui-sans-serif, sans-serif";
export const TEXT_PX = 12;

export function canvasPen(context: CanvasRenderingContext2D): Pen {
	const take = (look: LineLook) => {
		context.strokeStyle = look.color;
		context.lineWidth = look.width;
		context.setLineDash([...look.dash]);
	};
	return {
		rect(x, y, width, height, color, opacity) {
			context.globalAlpha = opacity;
			context.fillStyle = color;
			context.fillRect(x, y, width, height);
			context.globalAlpha = 1;
		},
		bars(x0, low, high, color, opacity) {
			context.globalAlpha = opacity;
			take({ color, width: 1, dash: [] });
			context.beginPath();
			for (let i = 0; i < low.length; i++) {
				const y = low[i]!;
				if (y !== y) continue;
				context.moveTo(x0 + i + 0.5, y);
				context.lineTo(x0 + i + 0.5, high[i]!);
			}
			context.stroke();
			context.globalAlpha = 1;
		},
		line(xs, ys, look) {
			take(look);
			context.beginPath();
			let isBroken = true;
			for (let i = 0; i < xs.length; i++) {
				const y = ys[i]!;
				if (y !== y) isBroken = true;
				else if (isBroken) {
					context.moveTo(xs[i]!, y);
					isBroken = false;
				} else context.lineTo(xs[i]!, y);
			}
			context.stroke();
			context.setLineDash([]);
		},
		dots(xs, ys, color, shape) {
			context.fillStyle = color;
			for (let i = 0; i < xs.length; i++) {
				const x = xs[i]!;
				const y = ys[i]!;
				if (y !== y) continue;
				context.beginPath();
				if (shape === 'circle') context.arc(x, y, DOT_PX, 0, 2 * Math.PI);
				else for (const [dx, dy] of CORNERS[shape]) context.lineTo(x + dx * DOT_PX, y + dy * DOT_PX);
				context.fill();
			}
		},
		text(x, y, text, color, anchor, isStrong = false) {
			context.font = `${isStrong ? 600 : 400} ${TEXT_PX}px ${FONT}`;
			context.fillStyle = color;
			context.textAlign = anchor === 'middle' ? 'center' : anchor;
			context.textBaseline = 'middle';
			context.fillText(text, x, y);
		},
		inside(x, y, width, height, draw) {
			context.save();
			context.beginPath();
			context.rect(x, y, width, height);
			context.clip();
			draw();
			context.restore();
		}
	};
}

const CORNERS: Record<Exclude<DotShape, 'circle'>, readonly (readonly [number, number])[]> = {
	rect: [
		[-1, -1],
		[1, -1],
		[1, 1],
		[-1, 1]
	],
	triangle: [
		[0, -1.2],
		[1.2, 1],
		[-1.2, 1]
	],
	diamond: [
		[0, -1.4],
		[1.4, 0],
		[0, 1.4],
		[-1.4, 0]
	]
};

const short = (value: number) => String(Math.round(100 * value) / 100);
const escaped = (text: string) =>
	text.replaceAll('&', '&amp;').replaceAll('<', '&lt;').replaceAll('>', '&gt;').replaceAll('"', '&quot;');

/** Collects what is drawn; `file` gives the whole picture. */
export function svgPen(): Pen & { file: (width: number, height: number, title: string) => string } {
	const parts: string[] = [];
	let clips = 0;
	const stroke = ({ color, width, dash }: LineLook) =>
		`fill="none" stroke="${color}" stroke-width="${width}"${dash.length > 0 ? ` stroke-dasharray="${dash.join(' ')}"` : ''}`;
	return {
		rect(x, y, width, height, color, opacity) {
			parts.push(
				`<rect x="${short(x)}" y="${short(y)}" width="${short(width)}" height="${short(height)}" fill="${color}"${opacity < 1 ? ` fill-opacity="${opacity}"` : ''}/>`
			);
		},
		bars(x0, low, high, color, opacity) {
			let path = '';
			for (let i = 0; i < low.length; i++)
				if (low[i] === low[i]) path += `M${x0 + i + 0.5} ${short(low[i]!)}V${short(high[i]!)}`;
			const look = stroke({ color, width: 1, dash: [] });
			parts.push(`<path d="${path}" ${look}${opacity < 1 ? ` stroke-opacity="${opacity}"` : ''}/>`);
		},
		line(xs, ys, look) {
			let path = '';
			let isBroken = true;
			for (let i = 0; i < xs.length; i++) {
				const y = ys[i]!;
				if (y !== y) isBroken = true;
				else {
					path += `${isBroken ? 'M' : 'L'}${short(xs[i]!)} ${short(y)}`;
					isBroken = false;
				}
			}
			parts.push(`<path d="${path}" ${stroke(look)}/>`);
		},
		dots(xs, ys, color, shape) {
			for (let i = 0; i < xs.length; i++) {
				const x = xs[i]!;
				const y = ys[i]!;
				if (y !== y) continue;
				if (shape === 'circle')
					parts.push(`<circle cx="${short(x)}" cy="${short(y)}" r="${DOT_PX}" fill="${color}"/>`);
				else {
					const points = CORNERS[shape]
						.map(([dx, dy]) => `${short(x + dx * DOT_PX)},${short(y + dy * DOT_PX)}`)
						.join(' ');
					parts.push(`<polygon points="${points}" fill="${color}"/>`);
				}
			}
		},
		text(x, y, text, color, anchor, isStrong = false) {
			parts.push(
				`<text x="${short(x)}" y="${short(y)}" fill="${color}" text-anchor="${anchor}" dominant-baseline="central" font-family="IBM Plex Sans, sans-serif" font-size="${TEXT_PX}"${isStrong ? ' font-weight="600"' : ''}>${escaped(text)}</text>`
			);
		},
		inside(x, y, width, height, draw) {
			const id = `clip${clips++}`;
			parts.push(
				`<clipPath id="${id}"><rect x="${short(x)}" y="${short(y)}" width="${short(width)}" height="${short(height)}"/></clipPath><g clip-path="url(#${id})">`
			);
			draw();
			parts.push('</g>');
		},
		file: (width, height, title) =>
			`<svg xmlns="http://www.w3.org/2000/svg" width="${width}" height="${height}" viewBox="0 0 ${width} ${height}"><title>${escaped(title)}</title>${parts.join('')}</svg>`
	};
}
