import { openApiDocument } from '@/app/api/openapi';

export const dynamic = 'force-dynamic';

let text: string | undefined;

/** The document says nothing that needs a sign-in. */
export async function GET(): Promise<Response> {
  text ??= JSON.stringify(openApiDocument());
  return new Response(text, {
    headers: { 'Content-Type': 'application/json', 'Cache-Control': 'public, max-age=300' },
  });
}
