import { createHash } from 'node:crypto';
import { createServer, type IncomingMessage, type ServerResponse } from 'node:http';
import type { AddressInfo } from 'node:net';

/** One request that the bucket has seen. */
export interface BucketRequest {
	/** "PUT", "GET", … and for parts of a multipart upload what of it: "POST uploads", "PUT part". */
	call: string;
	key: string;
}

/**
 * A bucket for tests, in memory: the calls of the S3 REST interface that the store uses (put, get with range, head,
 * multipart). It refuses what a real one would refuse: no signature, a body that is not what its checksum says.
 */
export interface FakeBucket {
	endpoint: string;
	objects: Map<string, Buffer>;
	/** Multipart uploads that were begun and neither completed nor aborted. */
	openUploads(): number;
	requests: BucketRequest[];
	/** The next call of this kind is answered with that status, once (the SDK tries 5xx again: give 403 for a failure that stays). */
	failNext(call: string, status: number): void;
	close(): Promise<void>;
}

interface Multipart {
	key: string;
	parts: Map<number, { body: Buffer; checksum: string }>;
}

const base64Sha256 = (body: Buffer) => createHash('sha256').update(body).digest('base64');

async function bodyOf(request: IncomingMessage): Promise<Buffer> {
	const pieces: Buffer[] = [];
	for await (const piece of request) pieces.push(piece as Buffer);
	return Buffer.concat(pieces);
}

function refuse(response: ServerResponse, status: number, code: string): void {
	response.writeHead(status, { 'content-type': 'application/xml' });
	response.end(`<?xml version="1.0"?><Error><Code>${code}</Code><Message>${code}</Message></Error>`);
}

export async function startFakeBucket(name: string, accessKeyId: string): Promise<FakeBucket> {
	const objects = new Map<string, Buffer>();
	const uploads = new Map<string, Multipart>();
	const requests: BucketRequest[] = [];
	const failures: { call: string; status: number }[] = [];
	let nextUpload = 1;

	function callOf(method: string, query: URLSearchParams): string {
		if (query.has('uploads')) return `${method} uploads`;
		if (query.has('partNumber')) return `${method} part`;
		if (query.has('uploadId')) return `${method} upload`;
		return method;
	}

	async function answer(request: IncomingMessage, response: ServerResponse): Promise<void> {
		const url = new URL(request.url ?? '/', 'http://bucket');
		const body = await bodyOf(request);
		const path = decodeURIComponent(url.pathname);
		const method = request.method ?? '';
		const call = callOf(method, url.searchParams);
		if (!path.startsWith(`/${name}/`)) return refuse(response, 404, 'NoSuchBucket');
		const key = path.slice(name.length + 2);
		requests.push({ call, key });
		if (!request.headers.authorization?.includes(`Credential=${accessKeyId}/`))
			return refuse(response, 403, 'AccessDenied');
		const at = failures.findIndex((failure) => failure.call === call);
		if (at >= 0) return refuse(response, failures.splice(at, 1)[0]!.status, 'Asked');
		const checksum = request.headers['x-amz-checksum-sha256'];
		if ((call === 'PUT' || call === 'PUT part') && checksum !== base64Sha256(body))
			return refuse(response, 400, 'BadDigest');
		const upload = uploads.get(url.searchParams.get('uploadId') ?? '');
		switch (call) {
			case 'PUT':
				objects.set(key, body);
				return void response.writeHead(200, { etag: '"whole"' }).end();
			case 'POST uploads': {
				const id = `upload-${nextUpload++}`;
				uploads.set(id, { key, parts: new Map() });
				response.writeHead(200, { 'content-type': 'application/xml' });
				return void response.end(
					`<?xml version="1.0"?><InitiateMultipartUploadResult><Bucket>${name}</Bucket><Key>${key}</Key><UploadId>${id}</UploadId></InitiateMultipartUploadResult>`
				);
			}
			case 'PUT part': {
				if (!upload) return refuse(response, 404, 'NoSuchUpload');
				const number = Number(url.searchParams.get('partNumber'));
				upload.parts.set(number, { body, checksum: String(checksum) });
				return void response.writeHead(200, { etag: `"part-${number}"` }).end();
			}
			case 'POST upload': {
				if (!upload) return refuse(response, 404, 'NoSuchUpload');
				const listed = [
					...body
						.toString()
						.matchAll(
							/<PartNumber>(\d+)<\/PartNumber>|<ETag>([^<]*)<\/ETag>|<ChecksumSHA256>([^<]*)<\/ChecksumSHA256>/g
						)
				];
				const numbers = listed.flatMap((found) => (found[1] ? [Number(found[1])] : []));
				const sums = listed.flatMap((found) => (found[3] ? [found[3]] : []));
				const parts = numbers.map((number) => upload.parts.get(number));
				if (parts.some((part, i) => !part || part.checksum !== sums[i]))
					return refuse(response, 400, 'InvalidPart');
				objects.set(upload.key, Buffer.concat(parts.map((part) => part!.body)));
				uploads.delete(url.searchParams.get('uploadId') ?? '');
				response.writeHead(200, { 'content-type': 'application/xml' });
				return void response.end(
					`<?xml version="1.0"?><CompleteMultipartUploadResult><Bucket>${name}</Bucket><Key>${key}</Key><ETag>"all"</ETag></CompleteMultipartUploadResult>`
				);
			}
			case 'DELETE upload':
				uploads.delete(url.searchParams.get('uploadId') ?? '');
				return void response.writeHead(204).end();
			case 'HEAD':
			case 'GET': {
				const content = objects.get(key);
				if (!content) return refuse(response, 404, call === 'HEAD' ? 'NotFound' : 'NoSuchKey');
				if (call === 'HEAD') return void response.writeHead(200, { 'content-length': content.length }).end();
				const range = /^bytes=(\d+)-(\d+)$/.exec(request.headers.range ?? '');
				if (!range) return void response.writeHead(200, { 'content-length': content.length }).end(content);
				const from = Number(range[1]);
				if (from >= content.length) return refuse(response, 416, 'InvalidRange');
				const part = content.subarray(from, Number(range[2]) + 1);
				response.writeHead(206, {
					'content-length': part.length,
					'content-range': `bytes ${from}-${from + part.length - 1}/${content.length}`
				});
				return void response.end(part);
			}
			default:
				return refuse(response, 405, 'MethodNotAllowed');
		}
	}

	const server = createServer((request, response) => {
		answer(request, response).catch(() => refuse(response, 500, 'InternalError'));
	});
	await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
	return {
		endpoint: `http://127.0.0.1:${(server.address() as AddressInfo).port}`,
		objects,
		openUploads: () => uploads.size,
		requests,
		failNext: (call, status) => void failures.push({ call, status }),
		close: () =>
			new Promise((resolve) => {
				server.closeAllConnections();
				server.close(() => resolve());
			})
	};
}
