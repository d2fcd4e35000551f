import { LabError } from '@/lib/errors';

/** Someone else changed the thing first: carries what is stored now, beside what was sent. */
export class StaleRevisionError extends LabError {
  constructor(readonly current: { revision: number }) {
    super('CONFLICT', 'Someone has changed this meanwhile. Look at both versions, then save again.', {
      headers: { ETag: `"${current.revision}"` },
    });
    this.name = 'StaleRevisionError';
  }
}
