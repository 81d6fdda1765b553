import { type ErrorEntry, entry } from './error-entry.ts';

/** The part of the error table that only the HTTP API answers with; no run ends with one of these. */
export const HTTP_ERRORS = {
  PATH_OUTSIDE: entry(
    78,
    false,
    '{key}: {path} lies outside the folders that this coordinator may use',
    'Move it below a folder of BASINLOOM_ROOTS, or add its folder there and start the coordinator again.',
  ),
  URL_OUTSIDE: entry(
    78,
    false,
    '{key}: {url} is none of the addresses that this coordinator may use',
    'Add how the address begins to BASINLOOM_URLS and start the coordinator again.',
  ),
  REQUEST_SYNTAX: entry(2, false, 'the request cannot be read: {detail}', 'Send JSON as /openapi.json describes it.'),
  REQUEST_KEY: entry(
    2,
    false,
    '{place}: unknown name "{key}"{suggestion}',
    'Remove or rename it; /openapi.json lists all names.',
  ),
  REQUEST_VALUE: entry(2, false, '{place}: {detail}', 'Change the value; /openapi.json lists what is allowed.'),
  REQUEST_SIZE: entry(2, false, 'the body of the request has more than {limit} bytes', 'Send a smaller body.'),
  REQUEST_TYPE: entry(
    2,
    false,
    'the body of the request has a media type that is not read here',
    'Send JSON with the header "Content-Type: application/json".',
  ),
  REQUEST_ADDRESS: entry(2, false, '{path}: there is nothing here', 'Follow the links from / to what there is.'),
  REQUEST_METHOD: entry(2, false, '{path} does not answer {method}', 'Use {allowed}.'),
  REQUEST_HOST: entry(
    2,
    false,
    'the name {host} does not belong to this address',
    'Call localhost, 127.0.0.1 or [::1]; to serve others set BASINLOOM_HTTP_HOST to an address that they reach.',
  ),
  TOKEN_NOT_SET: entry(
    2,
    false,
    'this coordinator has no token, so it changes nothing on request',
    'Set BASINLOOM_TOKEN and start the coordinator again; then send it as "Authorization: Bearer <token>".',
  ),
  TOKEN_WRONG: entry(
    2,
    false,
    'the token of the request is {detail}',
    'Send the header "Authorization: Bearer <token>" with the token of BASINLOOM_TOKEN.',
  ),
  PROCESS_NOT_FOUND: entry(2, false, '{process}: no such process', 'GET /processes lists what there is.'),
  RESULTS_NOT_READY: entry(
    75,
    true,
    'run {run} is still on its way: no results yet',
    'Ask again when its status is "successful", or follow its events.',
  ),
  RESULTS_NONE: entry(
    66,
    false,
    'run {run} was stopped before it had results',
    'Run it again with POST /jobs/{run}/rerun: it goes on where it was.',
  ),
  STREAMS_FULL: entry(
    75,
    true,
    'more than {limit} event streams are open',
    'Close one, or ask for the status now and then instead.',
  ),
} as const satisfies Record<string, ErrorEntry>;
