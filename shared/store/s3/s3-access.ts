import type { S3Client, S3ClientConfig } from '@aws-sdk/client-s3';

/** Attempts of one request, the first included; AWS_MAX_ATTEMPTS changes it. */
const REQUEST_ATTEMPTS = 5;
const CONNECTION_TIMEOUT_MS = 10_000;
/** A connection that moves no byte for so long is dead. */
const SOCKET_TIMEOUT_MS = 60_000;

export interface S3Connection {
  readonly client: S3Client;
  readonly sdk: typeof import('@aws-sdk/client-s3');
}

/** The way to an endpoint, and what it turned out not to support. */
export interface S3Access {
  /** Loads the SDK when first called: it takes time and memory that a run into a folder has no use for. */
  open(): Promise<S3Connection>;
  readonly supports: {
    /** Conditional writes (If-None-Match, If-Match). */
    conditions: boolean;
    /** Checksums of requests in headers of their own. */
    checksums: boolean;
  };
}

/**
 * A client for the endpoint, region and credentials of the environment, as the SDK reads them
 * (AWS_ENDPOINT_URL_S3, AWS_ENDPOINT_URL, AWS_REGION, AWS_ACCESS_KEY_ID, ...). With an endpoint of one's own,
 * buckets are named in the path, and a region that is not given is us-east-1.
 *
 * Every request body is in memory, so its CRC32 goes in a header, never in a trailer of a chunked body, which many
 * endpoints cannot read. An endpoint that refuses the header too gets requests without it from then on
 * (AWS_REQUEST_CHECKSUM_CALCULATION decides instead where it is set).
 */
export function openS3(config: S3ClientConfig = {}): S3Access {
  const { env } = process;
  const supports = { conditions: true, checksums: true };
  const endpoint = env.AWS_ENDPOINT_URL_S3 || env.AWS_ENDPOINT_URL;
  const hasRegion = Boolean(env.AWS_REGION || env.AWS_DEFAULT_REGION || env.AWS_PROFILE);
  const whole: S3ClientConfig = {
    requestHandler: { connectionTimeout: CONNECTION_TIMEOUT_MS, socketTimeout: SOCKET_TIMEOUT_MS },
    ...(endpoint && { endpoint, forcePathStyle: true }),
    ...(endpoint && !hasRegion && { region: 'us-east-1' }),
    ...(!env.AWS_MAX_ATTEMPTS && { maxAttempts: REQUEST_ATTEMPTS }),
    ...(!env.AWS_REQUEST_CHECKSUM_CALCULATION && {
      requestChecksumCalculation: async () => (supports.checksums ? 'WHEN_SUPPORTED' : 'WHEN_REQUIRED'),
    }),
    ...config,
  };
  let opened: Promise<S3Connection> | undefined;
  const open = () => {
    opened ??= import('@aws-sdk/client-s3').then((sdk) => ({ client: new sdk.S3Client(whole), sdk }));
    return opened;
  };
  return { open, supports };
}

let shared: S3Access | undefined;

/** The client of this thread: every store and job uses it, so that connections are kept. */
export function sharedS3(): S3Access {
  shared ??= openS3();
  return shared;
}
