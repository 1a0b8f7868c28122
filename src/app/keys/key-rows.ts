import type {Key} from '../../../shared/api';
import {ago, dayUtc, fullTime, timeLeft} from '../format/times';

/** A key as a row of the table or of the list. */
export interface KeyRow {
  readonly key: Key;
  readonly isEnded: boolean;
  /** "Successor of …09bd" */
  readonly relation: string;
  readonly stateNote: string;
  readonly lastUsed: {readonly ago: string; readonly operation: string; readonly at: string} | null;
  readonly ends: {readonly day: string; readonly at: string} | null;
  /** Spent part of its own limit, 0 to 1; null where it has none. */
  readonly share: number | null;
}

const isEnded = ({state}: Key): boolean => state === 'revoked' || state === 'expired';

export function keyRows(keys: readonly Key[], now: Date): KeyRow[] {
  const lastFour = new Map(keys.map(key => [key.id, key.lastFour]));
  const named = (id: string | null): string | null =>
    id === null ? null : (lastFour.get(id) ?? id.slice(-4));
  return keys.map(key => {
    const [before, after] = [named(key.predecessor), named(key.successor)];
    const end = key.retiresAt ?? key.expiresAt;
    return {
      key,
      isEnded: isEnded(key),
      relation: after ? `Succeeded by …${after}` : before ? `Successor of …${before}` : '',
      stateNote:
        key.state === 'retiring' && key.retiresAt
          ? timeLeft(key.retiresAt, now)
          : key.revokedAt
            ? dayUtc(key.revokedAt)
            : '',
      lastUsed: key.lastUsed && {
        ago: ago(key.lastUsed.at, now),
        operation: key.lastUsed.operation[0].toUpperCase() + key.lastUsed.operation.slice(1),
        at: fullTime(key.lastUsed.at),
      },
      ends: end === null || key.state === 'revoked' ? null : {day: dayUtc(end), at: fullTime(end)},
      share:
        key.monthlyLimit === null ? null : Math.min(1, key.spent / Math.max(1, key.monthlyLimit)),
    };
  });
}
