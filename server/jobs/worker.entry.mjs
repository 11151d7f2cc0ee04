/** Entry of a worker thread: teaches it TypeScript, then answers tasks. Refusals cross the thread as plain values. */
import { register } from 'tsx/esm/api';

register();
const { AppError } = await import('../errors.ts');
const { default: work } = await import('./worker.ts');

export default async function entry(task) {
  try {
    return { answer: await work(task) };
  } catch (error) {
    if (error instanceof AppError) {
      return { refused: { code: error.code, detail: error.message, places: error.places } };
    }
    throw error;
  }
}
