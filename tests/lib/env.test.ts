import { afterEach, describe, expect, it, vi } from 'vitest';
import { baseUrl, databaseUrl, dataDir, limit, port } from '@/lib/env';

afterEach(() => vi.unstubAllEnvs());

describe('settings of the server', () => {
  it('are read when asked for, so that a build needs none of them', () => {
    vi.stubEnv('DATABASE_URL', '');
    expect(() => databaseUrl()).toThrow('DATABASE_URL is not set');
    vi.stubEnv('DATABASE_URL', 'postgres://127.0.0.1/x');
    expect(databaseUrl()).toBe('postgres://127.0.0.1/x');
  });

  it('the data folder is absolute and below the project unless named', () => {
    vi.stubEnv('BEADLINE_ROOT', '/srv/project');
    vi.stubEnv('BEADLINE_DATA', '');
    expect(dataDir()).toBe('/srv/project/.beadline');
    vi.stubEnv('BEADLINE_DATA', '/data/lab');
    expect(dataDir()).toBe('/data/lab');
  });

  it('the address follows the port unless a proxy has another one', () => {
    vi.stubEnv('NEXTAUTH_URL', '');
    vi.stubEnv('PORT', '3456');
    expect([port(), baseUrl()]).toEqual([3456, 'http://127.0.0.1:3456']);
    vi.stubEnv('NEXTAUTH_URL', 'https://lab.test/');
    expect(baseUrl()).toBe('https://lab.test');
  });

  it('a limit can be set by its name, and a slip in it is told, not ignored', () => {
    vi.stubEnv('BEADLINE_LIMIT_UPLOADS_AT_ONCE', '3');
    expect(limit('uploadsAtOnce')).toBe(3);
    vi.stubEnv('BEADLINE_LIMIT_UPLOADS_AT_ONCE', 'many');
    expect(() => limit('uploadsAtOnce')).toThrow(
      "BEADLINE_LIMIT_UPLOADS_AT_ONCE must be a whole number above 0. Received 'many'.",
    );
  });

  it('a limit whose name ends in a unit keeps the unit whole', () => {
    vi.stubEnv('BEADLINE_LIMIT_CHILD_MEMORY_MB', '512');
    expect(limit('childMemoryMB')).toBe(512);
  });
});
