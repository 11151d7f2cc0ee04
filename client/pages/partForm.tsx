import { useState } from 'preact/hooks';
import { call, type PartItem } from '../api.ts';
import { ProblemBox } from '../parts.tsx';
import { studyId } from '../state.ts';

const BASES = [
  ['test', 'test'],
  ['dataSheet', 'data sheet'],
  ['lot', 'lot'],
  ['similarity', 'similarity'],
  ['estimate', 'estimate'],
] as const;

/** One part in all its fields, to be changed; an empty field is left out. */
export function PartForm({ part, onDone }: { part: PartItem; onDone: () => void }) {
  const [error, setError] = useState<unknown>(null);
  const save = async (event: SubmitEvent & { currentTarget: HTMLFormElement }) => {
    event.preventDefault();
    const data = new FormData(event.currentTarget);
    const words = (field: string) => {
      const text = String(data.get(field) ?? '').trim();
      return text === '' ? {} : { [field]: text };
    };
    const number = (field: string) => {
      const text = String(data.get(field) ?? '').trim();
      if (text === '') return {};
      const value = Number(text);
      if (!Number.isFinite(value)) throw new Error(`${field}: "${text}" is no number.`);
      return { [field]: value };
    };
    try {
      const doses = String(data.get('failureDosesKradSi') ?? '').trim();
      await call('PUT', `/api/parts/${part.id}`, {
        studyId: studyId.value,
        partId: data.get('partId'),
        name: data.get('name'),
        placeId: data.get('placeId'),
        ...words('description'),
        ...words('technology'),
        ...words('capabilityBasis'),
        ...number('capabilityKradSi'),
        ...number('sampleSize'),
        ...number('doseRateRadSiPerS'),
        ...number('requiredRdm'),
        ...number('lotConfidence'),
        ...number('lotProbability'),
        ...(doses === '' ? {} : { failureDosesKradSi: doses.split(/[\s;,]+/).map(Number) }),
      });
      onDone();
    } catch (failure) {
      setError(failure);
    }
  };
  const field = (name: string, label: string, value: string | number | undefined, needed = false) => (
    <label>
      {label} <input name={name} required={needed} defaultValue={value === undefined ? '' : String(value)} />
    </label>
  );
  return (
    <form class="grid card" onSubmit={save} aria-label={`Edit ${part.name}`}>
      {field('partId', 'Id', part.partId, true)}
      {field('name', 'Part', part.name, true)}
      {field('description', 'Description', part.description)}
      {field('technology', 'Technology', part.technology)}
      {field('placeId', 'Place', part.placeId, true)}
      {field('capabilityKradSi', 'Capability, krad(Si)', part.capabilityKradSi)}
      <label>
        Basis{' '}
        <select name="capabilityBasis">
          <option value="">not given</option>
          {BASES.map(([basis, words]) => (
            <option key={basis} value={basis} selected={basis === part.capabilityBasis}>
              {words}
            </option>
          ))}
        </select>
      </label>
      {field('sampleSize', 'Sample size', part.sampleSize)}
      {field('doseRateRadSiPerS', 'Dose rate of the test, rad(Si)/s', part.doseRateRadSiPerS)}
      {field('failureDosesKradSi', 'or failure doses of a lot, krad(Si)', part.failureDosesKradSi?.join(' '))}
      {field('lotConfidence', 'Confidence of the lot', part.lotConfidence)}
      {field('lotProbability', 'Probability of the lot', part.lotProbability)}
      {field('requiredRdm', 'Required margin; empty takes the study’s', part.requiredRdm)}
      <p>
        <button type="submit" class="primary">
          Save
        </button>{' '}
        <button type="button" onClick={onDone}>
          Leave unchanged
        </button>
      </p>
      <ProblemBox error={error} />
    </form>
  );
}
