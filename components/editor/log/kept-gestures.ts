import type { Gesture } from './gesture';

/** Where gestures wait that the server has not stored yet; outlives the page and the browser. */
export interface GestureStore {
  put(gesture: Gesture): Promise<void>;
  delete(id: string): Promise<void>;
  /** Of one person and one analysis, in the order in which they were made. */
  list(userId: string, analysisId: string): Promise<Gesture[]>;
}

const DATABASE = 'beadline';
const STORE = 'gestures';

/** The browser's own database. Works without a secure origin, which a laboratory's server often lacks. */
export class BrowserGestureStore implements GestureStore {
  private opened: Promise<IDBDatabase> | null = null;

  put(gesture: Gesture): Promise<void> {
    return this.write((store) => store.put(gesture));
  }

  delete(id: string): Promise<void> {
    return this.write((store) => store.delete(id));
  }

  async list(userId: string, analysisId: string): Promise<Gesture[]> {
    const database = await this.open();
    const all = await answerOf<Gesture[]>(database.transaction(STORE).objectStore(STORE).getAll());
    return all
      .filter((gesture) => gesture.userId === userId && gesture.analysisId === analysisId)
      .sort((a, b) => (a.id < b.id ? -1 : 1));
  }

  private async write(act: (store: IDBObjectStore) => IDBRequest): Promise<void> {
    const database = await this.open();
    // A gesture counts as kept once it is on the disk: a power cut must not take it.
    const transaction = database.transaction(STORE, 'readwrite', { durability: 'strict' });
    act(transaction.objectStore(STORE));
    await new Promise<void>((resolve, reject) => {
      transaction.oncomplete = () => resolve();
      transaction.onerror = transaction.onabort = () => reject(transaction.error);
    });
  }

  private open(): Promise<IDBDatabase> {
    this.opened ??= new Promise((resolve, reject) => {
      const request = indexedDB.open(DATABASE, 1);
      request.onupgradeneeded = () => request.result.createObjectStore(STORE, { keyPath: 'id' });
      request.onsuccess = () => resolve(request.result);
      request.onerror = () => reject(request.error);
    });
    return this.opened;
  }
}

function answerOf<T>(request: IDBRequest): Promise<T> {
  return new Promise((resolve, reject) => {
    request.onsuccess = () => resolve(request.result as T);
    request.onerror = () => reject(request.error);
  });
}

const lockOf = (tab: string) => `beadline-tab-${tab}`;

/** Shows other tabs of this browser that this one is there, until it closes. */
export function showTab(tab: string): void {
  // Only secure origins have locks; without them a tab may send another's gestures too, which is done once anyway.
  void navigator.locks?.request(lockOf(tab), () => new Promise(() => undefined));
}

/** Of kept gestures those whose tab is gone. */
export async function orphans(gestures: readonly Gesture[], tab: string): Promise<Gesture[]> {
  const held = (await navigator.locks?.query())?.held ?? [];
  const open = new Set(held.map(({ name }) => name));
  return gestures.filter((gesture) => gesture.tab === tab || !open.has(lockOf(gesture.tab)));
}
