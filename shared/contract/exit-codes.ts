/** Exit codes of the command; errors carry theirs in the error table (sysexits numbers where one fits). */
export const EXIT = {
  ok: 0,
  failure: 1,
  usage: 2,
  completeWithGaps: 3,
  dataError: 65,
  noInput: 66,
  internal: 70,
  ioError: 74,
  tryAgain: 75,
  configuration: 78,
  interrupted: 130,
  terminated: 143,
} as const;

export const EXIT_MEANING: Readonly<Record<number, string>> = {
  0: 'done, nothing missing',
  1: 'failed for a reason not listed here',
  2: 'wrong use of the command line',
  3: 'complete with gaps: some tile, scene or pass was set aside; see failures.json',
  65: 'an input file is wrong',
  66: 'an input file is missing',
  70: 'a defect of the program',
  74: 'reading or writing failed',
  75: 'try again later (another run holds the store)',
  78: 'the basin file is wrong',
  130: 'stopped by Ctrl-C; run again to go on',
  143: 'stopped by SIGTERM; run again to go on',
};
