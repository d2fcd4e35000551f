/** A fault that must be survived, and the tests that make it happen: file below `tests` and a piece of the title. */
export interface FaultRow {
  row: string;
  fault: string;
  tests: readonly (readonly [path: string, title: string])[];
  /** Why no test makes it. */
  why?: string;
}

export const FAULT_ROWS: readonly FaultRow[] = [
  {
    row: 'F1',
    fault: 'browser closed in the middle of an upload',
    tests: [
      ['app/api/tus-protocol.test.ts', 'a connection that breaks keeps what had arrived'],
      ['lib/uploads/uploads.test.ts', 'are one row per recording, without those being sent from here'],
    ],
  },
  {
    row: 'F2',
    fault: 'another file chosen to go on with',
    tests: [['lib/uploads/uploads.test.ts', 'refuses another file of the same length']],
  },
  {
    row: 'F3',
    fault: 'web server killed in the middle of a piece',
    tests: [['api/killed-in-the-middle.test.ts', 'an upload goes on after its web server was killed']],
  },
  {
    row: 'F4',
    fault: 'network that comes and goes',
    tests: [
      ['api/whole-road.test.ts', 'a stack sent in three pieces with a broken connection arrives whole'],
    ],
  },
  {
    row: 'F5',
    fault: 'two senders of one upload',
    tests: [
      ['app/api/uploads.test.ts', 'a second sender is told to wait while the first is sending'],
      ['api/two-web-servers.test.ts', 'of senders that race for the same offset one writes at a time'],
    ],
  },
  {
    row: 'F6',
    fault: 'a bit that flips on the way',
    tests: [['api/bad-input.test.ts', 'B38 a whole file whose SHA-256 is not the one that its sender told']],
  },
  {
    row: 'F7',
    fault: 'disk of uploads full',
    tests: [
      ['app/api/broken-disks.test.ts', 'F7 an upload that would not fit is refused before its first byte'],
      ['app/api/broken-disks.test.ts', 'F7 a disk that is full at the first, second, ... page'],
    ],
  },
  {
    row: 'F8',
    fault: 'disk of the database full',
    tests: [['api/killed-database.test.ts', 'F8 a disk of the database that is full']],
  },
  {
    row: 'F9',
    fault: 'PostgreSQL restarted',
    tests: [
      ['jobs/worker.test.ts', 'a database that goes away for a moment does not end the worker'],
      ['api/killed-database.test.ts', 'in the middle of an upload: it goes on'],
      ['api/killed-database.test.ts', 'in the middle of detection: the analysis finishes by itself'],
      ['api/killed-database.test.ts', 'in the middle of a correction: it is stored once'],
      [
        'scripts/private-cluster.test.ts',
        'comes back by itself with every committed row when the server is killed',
      ],
    ],
  },
  {
    row: 'F10',
    fault: 'database down at the start',
    tests: [['api/web-server-alone.test.ts', 'F10 started before its database']],
  },
  {
    row: 'F11',
    fault: 'every connection to the database in use',
    tests: [['app/api/database-pressure.test.ts', 'F11 ']],
  },
  { row: 'F12', fault: 'deadlock', tests: [['app/api/database-pressure.test.ts', 'F12 ']] },
  {
    row: 'F13',
    fault: 'worker killed',
    tests: [
      ['jobs/pipeline.test.ts', 'a worker that is killed in the middle of detection costs one chunk'],
      ['api/killed-in-the-middle.test.ts', 'an analysis goes on after both workers were killed'],
    ],
  },
  { row: 'F14', fault: 'worker that stands still and wakes', tests: [['jobs/pipeline.test.ts', 'F14 ']] },
  {
    row: 'F15',
    fault: 'computation out of memory',
    tests: [['jobs/compute-pool.test.ts', 'a child that eats more memory than allowed']],
  },
  {
    row: 'F16',
    fault: 'endless decoding',
    tests: [['jobs/compute-pool.test.ts', 'a computation without progress is ended after its time']],
  },
  {
    row: 'F17',
    fault: 'work that always fails',
    tests: [['jobs/worker.test.ts', 'work that always fails is given up after three tries']],
  },
  {
    row: 'F18',
    fault: 'analysis stopped while it runs',
    tests: [['jobs/worker.test.ts', 'an analysis that is stopped ends its work within two seconds']],
  },
  {
    row: 'F19',
    fault: 'the same analysis asked for twice',
    tests: [['app/api/database-pressure.test.ts', 'F19 ']],
  },
  {
    row: 'F20',
    fault: 'a new version started in the middle of work',
    tests: [['jobs/worker.test.ts', 'a worker that is told to stop gives its work back']],
  },
  {
    row: 'F21',
    fault: 'migration interrupted',
    tests: [['scripts/migrate.test.ts', 'a migration that fails half-way leaves nothing of itself']],
  },
  {
    row: 'F22',
    fault: 'two people change the same thing',
    tests: [['app/api/changes.test.ts', 'a stale change answers 412 with what is stored now']],
  },
  {
    row: 'F23',
    fault: 'reviewer without a network',
    tests: [
      [
        'components/review/verdict-outbox.test.ts',
        'none is lost or doubled whatever requests and answers are lost',
      ],
      [
        'e2e/support/they-judge.ts',
        'thirty of them by keyboard alone, three while the link is lost, each stored once',
      ],
      ['e2e/support/they-correct.ts', 'what they do while the link is lost is kept and shown, and stored'],
    ],
  },
  {
    row: 'F24',
    fault: 'export killed half-way',
    tests: [
      ['jobs/exports/killed.test.ts', 'F24 a package whose worker was killed at its first, second, ...'],
    ],
  },
  {
    row: 'F25',
    fault: 'stored file damaged later',
    tests: [['jobs/check-files.test.ts', 'sees a flipped bit and a lost file']],
  },
  { row: 'F26', fault: 'clock that jumps', tests: [['app/api/database-pressure.test.ts', 'F26 ']] },
  {
    row: 'F27',
    fault: 'mail server away',
    tests: [['jobs/mail.test.ts', 'one that is away, busy or dies on the way is tried again']],
  },
  {
    row: 'F28',
    fault: 'session that ends in the middle of a form',
    tests: [['e2e/forms.spec.ts', 'F28 a session that ends in the middle of it']],
  },
  {
    row: 'F29',
    fault: 'crash between the move of a file and its commit',
    tests: [
      ['app/api/uploads.test.ts', 'a finished file whose commit was lost after the move is adopted, once'],
    ],
  },
  {
    row: 'F30',
    fault: 'restore from a backup',
    tests: [
      ['scripts/backup-and-restore.test.ts', 'brings back every row and every byte of every file'],
      ['scripts/backup-and-restore.test.ts', 'make the same data packages, byte for byte'],
    ],
  },
  {
    row: 'F31',
    fault: 'store read-only or gone',
    tests: [
      ['app/api/broken-disks.test.ts', 'F31 a store that has become read-only'],
      ['app/api/broken-disks.test.ts', 'F31 a store that is away'],
    ],
  },
  {
    row: 'F32',
    fault: 'no file descriptors left',
    tests: [['api/web-server-alone.test.ts', 'F32 without a descriptor left']],
  },
];
