/** Next calls this once when a server starts. */
export async function register(): Promise<void> {
  if (process.env.NEXT_RUNTIME !== 'nodejs' || !process.env.DATABASE_URL) return;
  const { startHousekeeping } = await import('./app/api/housekeeping');
  startHousekeeping();
}
