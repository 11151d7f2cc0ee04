import type { AssessmentResult } from '../margin/index.ts';

/** Names by id, for what a result refers to. */
export function names(result: AssessmentResult) {
  const lookup = (rows: readonly object[], key: string) => {
    const map = new Map(rows.map((row) => [(row as Record<string, string>)[key], (row as { name: string }).name]));
    return (id: string) => map.get(id) ?? id;
  };
  const placeNames = new Map(
    result.options.flatMap((option) =>
      option.places.map((place) => [`${option.optionId}/${place.placeId}`, place.name]),
    ),
  );
  return {
    case: lookup(result.cases, 'caseId'),
    option: lookup(result.options, 'optionId'),
    part: lookup(result.parts, 'partId'),
    trajectory: lookup(result.trajectories, 'trajectoryId'),
    place: (optionId: string, placeId: string) => placeNames.get(`${optionId}/${placeId}`) ?? placeId,
  };
}
