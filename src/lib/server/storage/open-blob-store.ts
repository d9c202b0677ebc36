import { join } from 'node:path';
import type { Config } from '../config';
import type { BlobStore } from './blob-store';
import { createBucketBlobStore } from './bucket-blob-store';
import { createDiskBlobStore } from './disk-blob-store';

/** The storage that the settings ask for: a folder of the data directory, or a bucket with local copies there. */
export function openBlobStore({ dataDir, bucket, bucketCache_bytes }: Config): BlobStore {
	if (bucket === null) return createDiskBlobStore(join(dataDir, 'blobs'));
	return createBucketBlobStore(bucket, {
		cacheFolder: join(dataDir, 'cache'),
		cacheLimit_bytes: bucketCache_bytes
	});
}
