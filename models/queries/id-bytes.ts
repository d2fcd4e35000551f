/** A UUID as its 16 bytes, the way PostgreSQL sends and takes it in binary. */
export const idBytes = (id: string): Buffer => Buffer.from(id.replaceAll('-', ''), 'hex');
