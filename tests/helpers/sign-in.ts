import type { LabPerson } from './test-lab';

/** Signs a person in over HTTP, as the form does. @returns the cookies that a browser would send from then on */
export async function signedInCookie(baseUrl: string, { email, password }: LabPerson): Promise<string> {
  const cookies = new Map<string, string>();
  const take = (response: Response) => {
    for (const line of response.headers.getSetCookie()) {
      const [name, value] = line.split(';')[0]!.split(/=(.*)/s);
      cookies.set(name!, value ?? '');
    }
    return response;
  };
  const header = () => [...cookies].map(([name, value]) => `${name}=${value}`).join('; ');
  const { csrfToken } = (await take(await fetch(`${baseUrl}/api/auth/csrf`)).json()) as { csrfToken: string };
  const body = new URLSearchParams({ csrfToken, email, password, json: 'true' });
  const init = { method: 'POST', headers: { cookie: header() }, body, redirect: 'manual' } as const;
  take(await fetch(`${baseUrl}/api/auth/callback/credentials`, init));
  return header();
}
