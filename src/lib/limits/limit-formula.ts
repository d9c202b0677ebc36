import { parse, type MathNode } from 'mathjs/number';
import { err, ok, type Result } from '../result';

/** A table cell that is printed as an expression in the order h, compiled once. */
export interface LimitFormula {
	expression: string;
	/** order → percent of the table's basis. Throws never; a pole gives ±Infinity as arithmetic does. */
	evaluate: (order: number) => number;
}

const ARITHMETIC = new Set(['add', 'subtract', 'multiply', 'divide', 'pow', 'unaryMinus', 'unaryPlus']);

/** Why a node may not stand in a limit formula; null when it may. */
function objectionTo(node: MathNode): string | null {
	switch (node.type) {
		case 'ParenthesisNode':
			return null;
		case 'ConstantNode':
			return typeof (node as MathNode & { value: unknown }).value === 'number'
				? null
				: 'only numbers may stand in it';
		case 'SymbolNode': {
			const name = (node as MathNode & { name: string }).name;
			return name === 'h' ? null : `“${name}” is not known; only h, the harmonic order, may stand in it`;
		}
		case 'OperatorNode': {
			const { fn, op } = node as MathNode & { fn: string; op: string };
			return ARITHMETIC.has(fn) ? null : `the operator “${op}” is not allowed; use + − × / and powers`;
		}
		default:
			return 'only numbers, h, parentheses and + − × / and powers may stand in it';
	}
}

/**
 * Compiles a limit formula, refusing everything beyond arithmetic in h: no assignment, no function call, no
 * property access, so that a data file can never do more than compute a number.
 * expression  mathjs syntax; `**` is accepted for a power, as the data files write it
 */
export function compileLimitFormula(expression: string): Result<LimitFormula, string> {
	let root: MathNode;
	try {
		root = parse(expression.replaceAll('**', '^'));
	} catch {
		return err(`The formula “${expression}” cannot be read. Write it with h, numbers, + − * / and ^.`);
	}
	let objection: string | null = null;
	root.traverse((node) => {
		objection ??= objectionTo(node);
	});
	if (objection !== null) return err(`The formula “${expression}” is refused: ${objection}.`);
	const code = root.compile();
	return ok({ expression, evaluate: (order) => Number(code.evaluate({ h: order })) });
}
