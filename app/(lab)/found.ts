import { notFound } from 'next/navigation';
import { LabError } from '@/lib/errors';
import { isId } from '@/lib/ids';

/** Loads what a page is about; the page of things that don't exist answers when it isn't there. */
export async function found<T>(id: string, load: (id: string) => Promise<T>): Promise<T> {
  if (!isId(id)) notFound();
  try {
    return await load(id);
  } catch (error) {
    if (error instanceof LabError && error.code === 'NOT_FOUND') notFound();
    throw error;
  }
}
