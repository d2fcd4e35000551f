import { v7 } from 'uuid';

/** A new id: UUIDv7, so that ids sort by time of making (RFC 9562). */
export const newId = (): string => v7();

const UUID = /^[0-9a-f]{8}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{4}-[0-9a-f]{12}$/i;

/** Whether a text from outside can be an id at all; PostgreSQL throws on anything else. */
export const isId = (text: string): boolean => UUID.test(text);
