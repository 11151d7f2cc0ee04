/** Entry of a worker thread. Refusals cross the thread as plain values, since an error loses its class on the way. */
import { AppError } from '../errors.ts';
import work from './worker.ts';

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
