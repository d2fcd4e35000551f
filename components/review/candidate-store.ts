import { ApiError, api } from '@/components/data/api-client';
import type { CandidateDetailView } from '@/lib/views/review-view';

/** A candidate with the picture of its film, ready to be drawn. */
export interface LoadedCandidate {
  detail: CandidateDetailView;
  film: ImageBitmap | null;
  /** Why there is no film. */
  failure: string | null;
}

/** Candidates held at once: those ahead, the one shown, and some behind. */
const KEPT = 12;

/** Fetches candidates ahead of their reader, each once. */
export class CandidateStore {
  private readonly held = new Map<
    string,
    { promise: Promise<LoadedCandidate>; value: LoadedCandidate | null }
  >();

  /** What is there at once; null while it is on its way. */
  peek(id: string): LoadedCandidate | null {
    return this.held.get(id)?.value ?? null;
  }

  load(id: string): Promise<LoadedCandidate> {
    const known = this.held.get(id);
    if (known) {
      // Put in again at the end: the first is always the one not used for longest.
      this.held.delete(id);
      this.held.set(id, known);
      return known.promise;
    }
    const entry = { promise: fetchCandidate(id), value: null as LoadedCandidate | null };
    this.held.set(id, entry);
    entry.promise.then(
      (value) => {
        entry.value = value;
      },
      // Whoever asks next tries again.
      () => this.held.delete(id),
    );
    while (this.held.size > KEPT) this.drop(this.held.keys().next().value!);
    return entry.promise;
  }

  /** The next ones in their order, so that they are there when they are wanted. */
  ahead(ids: readonly string[]): void {
    for (const id of ids) this.load(id).catch(() => undefined);
  }

  private drop(id: string): void {
    this.held.get(id)?.promise.then(({ film }) => film?.close()).catch(() => undefined); // prettier-ignore
    this.held.delete(id);
  }
}

async function fetchCandidate(id: string): Promise<LoadedCandidate> {
  const path = `/api/v1/candidates/${id}`;
  const film = fetchFilm(`${path}/film`);
  const detail = await api<CandidateDetailView>(path);
  try {
    return { detail, film: await film, failure: null };
  } catch (error) {
    const sentence = error instanceof ApiError ? error.message : 'The frames could not be read.';
    return { detail, film: null, failure: sentence };
  }
}

async function fetchFilm(path: string): Promise<ImageBitmap> {
  const response = await fetch(path, {
    headers: { Accept: 'image/webp,image/png;q=0.9' },
    credentials: 'same-origin',
  });
  if (!response.ok) {
    const problem = (await response.json().catch(() => null)) as { detail?: string } | null;
    throw new ApiError(response.status, 'FILM', problem?.detail ?? 'The frames could not be read.');
  }
  return createImageBitmap(await response.blob());
}
