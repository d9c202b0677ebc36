import { readdirSync, readFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';
import ts from 'typescript';

const ROUTES = fileURLToPath(new URL('../../src/routes', import.meta.url));
const METHODS = new Set(['GET', 'POST', 'PUT', 'PATCH', 'DELETE', 'HEAD', 'OPTIONS', 'fallback']);
const SERVER_FILE = /^\+(page|layout)\.server\.ts$|^\+server\.ts$/;
/** Exports that configure a page and hand out nothing. */
const SETTINGS = new Set(['prerender', 'ssr', 'csr', 'trailingSlash', 'config', 'entries']);

/** One way into the server: a load, a form action or a method, and whether it is made with guard(…). */
export interface Entrance {
	kind: 'load' | 'action' | 'method';
	name: string;
	guarded: boolean;
}

export interface RouteFile {
	/** As SvelteKit names it, e.g. "/(app)/surveys/[survey]". */
	routeId: string;
	file: string;
	entrances: Entrance[];
}

function isGuardCall(node: ts.Expression | undefined): boolean {
	return (
		node !== undefined &&
		ts.isCallExpression(node) &&
		ts.isIdentifier(node.expression) &&
		node.expression.text === 'guard'
	);
}

function unwrapped(node: ts.Expression | undefined): ts.Expression | undefined {
	return node && (ts.isSatisfiesExpression(node) || ts.isAsExpression(node)) ? node.expression : node;
}

function actionsOf(node: ts.Expression | undefined, file: string): Entrance[] {
	const object = unwrapped(node);
	if (!object || !ts.isObjectLiteralExpression(object))
		throw new Error(`${file}: actions must be an object literal, so that each can be seen`);
	return object.properties.map((property) => ({
		kind: 'action',
		name: property.name?.getText() ?? '(spread)',
		guarded: ts.isPropertyAssignment(property) && isGuardCall(property.initializer)
	}));
}

function entrancesOf(file: string): Entrance[] {
	const source = ts.createSourceFile(file, readFileSync(file, 'utf8'), ts.ScriptTarget.Latest, true);
	return source.statements.flatMap((statement): Entrance[] => {
		const exported =
			ts.canHaveModifiers(statement) &&
			ts.getModifiers(statement)?.some(({ kind }) => kind === ts.SyntaxKind.ExportKeyword);
		if (ts.isExportDeclaration(statement) && !statement.isTypeOnly)
			return [{ kind: 'method', name: statement.getText(), guarded: false }];
		if (!exported) return [];
		if (ts.isFunctionDeclaration(statement))
			return [
				{
					kind: statement.name?.text === 'load' ? 'load' : 'method',
					name: statement.name?.text ?? '',
					guarded: false
				}
			];
		if (!ts.isVariableStatement(statement)) return [];
		return statement.declarationList.declarations.flatMap((declaration): Entrance[] => {
			const name = declaration.name.getText();
			if (SETTINGS.has(name)) return [];
			if (name === 'actions') return actionsOf(declaration.initializer, file);
			const kind = METHODS.has(name) ? 'method' : 'load';
			return [{ kind, name, guarded: isGuardCall(declaration.initializer) }];
		});
	});
}

/** Every server file under src/routes with all its entrances, read from the source itself. */
export function routeFiles(): RouteFile[] {
	return readdirSync(ROUTES, { recursive: true, encoding: 'utf8' })
		.filter((path) => SERVER_FILE.test(path.slice(path.lastIndexOf('/') + 1)))
		.sort()
		.map((path) => ({
			routeId: dirname(path) === '.' ? '/' : `/${dirname(path)}`,
			file: path,
			entrances: entrancesOf(join(ROUTES, path))
		}));
}
