import { aluminiumResponse } from '../dose/aluminium.ts';
import { AppError } from '../errors.ts';
import { shieldKey, stacksOf } from '../shielding/composeShield.ts';
import {
  doneShare,
  finishResponse,
  planRound,
  type ResponseOptions,
  responseKey,
  type ShardTally,
} from '../shielding/response.ts';
import type { ShieldInput, ShieldResponse, StackInput, TargetMaterialId } from '../shielding/types.ts';
import type { Workshop } from './assessment.ts';

export const STANDARD_RESPONSE: ResponseOptions = { effort: 'standard', targetMaterialId: 'Si', seed: 1 };

export interface KeptResponse {
  readonly path: string;
  readonly response: ShieldResponse;
}

/**
 * Response of a stack: from the store, from the tables that ship, or by rounds of shards spread over the pool and merged in
 * their own order, so that any number of workers gives the same.
 */
export async function responseOf(
  shop: Workshop,
  stack: StackInput,
  options: ResponseOptions,
  signal: AbortSignal | undefined,
  onProgress: (share: number) => void,
): Promise<KeptResponse> {
  const key = responseKey(stack, options);
  const known = await shop.artefacts.get<ShieldResponse>(key);
  if (known !== null) return { path: shop.artefacts.path(key)!, response: known };
  const shipped = aluminiumResponse(key);
  if (shipped !== null) return keep(shop, key, shipped);
  const tallies: ShardTally[] = [];
  for (;;) {
    const tasks = planRound(stack, options, tallies);
    if (tasks.length === 0) break;
    const before = doneShare(options, tallies);
    let done = 0;
    const round = await Promise.all(
      tasks.map(async (task) => {
        const tally = await shop.pool.run({ kind: 'shard', task }, signal);
        done += 1;
        onProgress(before + ((1 - before) * 0.9 * done) / tasks.length);
        return tally;
      }),
    );
    tallies.push(...round);
  }
  return keep(shop, key, finishResponse(stack, options, tallies));
}

/** Response of any shield: of its one stack, or put together from those of all its stacks. */
export async function shieldResponseOf(
  shop: Workshop,
  shield: ShieldInput,
  options: ResponseOptions,
  signal: AbortSignal | undefined,
  onProgress: (share: number) => void,
): Promise<KeptResponse> {
  const stacks = stacksOf(shield);
  const key = shieldKey(shield, options);
  const known = await shop.artefacts.get<ShieldResponse>(key);
  if (known !== null) return { path: shop.artefacts.path(key)!, response: known };
  const kept: KeptResponse[] = [];
  for (const [index, stack] of stacks.entries()) {
    kept.push(await responseOf(shop, stack, options, signal, (share) => onProgress((index + share) / stacks.length)));
  }
  if (kept.length === 1 && responseKey(stacks[0], options) === key) return kept[0];
  const responsePaths = kept.map(({ path }) => path);
  return keep(shop, key, await shop.pool.run({ kind: 'composeShield', shield, options, responsePaths }, signal));
}

function keep(shop: Workshop, key: string, response: ShieldResponse): KeptResponse {
  return { path: shop.artefacts.put(key, 'response', response), response };
}

/** A response, or the reason why a shield outside the validity of the transport has none: others are still assessed. */
export async function responseOrReason(
  shop: Workshop,
  shield: ShieldInput,
  targetMaterialId: TargetMaterialId,
  signal: AbortSignal | undefined,
  onProgress: (share: number) => void,
): Promise<KeptResponse | string> {
  try {
    return await shieldResponseOf(shop, shield, { ...STANDARD_RESPONSE, targetMaterialId }, signal, onProgress);
  } catch (error) {
    if (!(error instanceof AppError && error.code === 'RESPONSE_UNSUPPORTED')) throw error;
    return error.message;
  }
}
