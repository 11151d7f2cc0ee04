import type { ExposureSummary } from '../fluence/summary.ts';
import { three } from './format.ts';
import { decadesRound, Plot } from './plot.ts';
import type { Paint, Scene } from './scene.ts';

const WIDTH = 640;
const HEIGHT = 320;

/** Integral electron fluxes along the path, hours from the peak of the flux above 1 MeV. */
export function fluxHistoryScene(summary: ExposureSummary): Scene {
  const { history, thresholdsMeV } = summary;
  const series = [0.1, 1, 5].map((threshold) => thresholdsMeV.indexOf(threshold)).filter((index) => index >= 0);
  const steer = history.electronAbovePerCm2S[Math.max(0, thresholdsMeV.indexOf(1))];
  const peak = steer.reduce((best, value, i) => (value > steer[best] ? i : best), 0);
  const hours = history.epochTdbS.map((t) => (t - history.epochTdbS[peak]) / 3600);
  const values = series.flatMap((index) => history.electronAbovePerCm2S[index]);
  const y = decadesRound(values, 9);
  const plot = new Plot(
    WIDTH,
    HEIGHT,
    {
      kind: 'linear',
      from: Math.min(...hours),
      to: Math.max(...hours),
      label: `Hours from ${history.utc[peak] ?? ''}`,
    },
    { kind: 'log', from: y[0], to: y[1], label: 'Electron flux above, cm⁻² s⁻¹' },
  );
  series.forEach((index, k) => {
    plot.curve(
      hours.map((hour, i) => [hour, history.electronAbovePerCm2S[index][i]]),
      `series${k as 0 | 1 | 2}`,
      1.8,
    );
  });
  plot.legend(series.map((index, k) => [`series${k}` as Paint, `> ${thresholdsMeV[index]} MeV`]));
  return {
    widthPx: WIDTH,
    heightPx: HEIGHT,
    title: 'Electron flux along the path',
    description: `Highest flux above 1 MeV: ${three(steer[peak])} cm⁻² s⁻¹ at ${history.utc[peak] ?? 'no time'}.`,
    nodes: plot.nodes,
    readOuts: hours.map((hour, i) => ({
      x: plot.x(hour),
      y: plot.y(Math.max(steer[i], y[0])),
      text: `${history.utc[i]}: ${three(steer[i])} cm⁻² s⁻¹ above 1 MeV${history.lShell[i] === null ? '' : `, L ${three(history.lShell[i])}`}`,
    })),
    data: {
      columns: ['utc', 'lShell', ...thresholdsMeV.map((threshold) => `electronsAbove${threshold}MeV_perCm2S`)],
      rows: history.utc.map((utc, i) => [
        utc,
        history.lShell[i],
        ...history.electronAbovePerCm2S.map((values) => values[i]),
      ]),
    },
  };
}

/** Integral fluence spectra of both species, one pass, nominal. */
export function fluenceScene(summary: ExposureSummary): Scene {
  const { electron, proton } = summary.species;
  const y = decadesRound([...electron.integralPerCm2, ...proton.integralPerCm2], 12);
  const plot = new Plot(
    WIDTH,
    HEIGHT,
    { kind: 'log', from: 0.02, to: 100, label: 'Kinetic energy, MeV' },
    { kind: 'log', from: y[0], to: y[1], label: 'Fluence above, cm⁻²' },
  );
  plot.curve(
    electron.energiesMeV.map((energy, i) => [energy, electron.integralPerCm2[i]]),
    'electron',
    2,
  );
  plot.curve(
    proton.energiesMeV.map((energy, i) => [energy, proton.integralPerCm2[i]]),
    'proton',
    2,
  );
  plot.legend([
    ['electron', 'Electrons'],
    ['proton', 'Protons'],
  ]);
  return {
    widthPx: WIDTH,
    heightPx: HEIGHT,
    title: 'Integral fluence, nominal',
    description: `Electrons above 1 MeV: ${three(electron.fluencePerCm2[summary.thresholdsMeV.indexOf(1)])} cm⁻².`,
    nodes: plot.nodes,
    readOuts: electron.energiesMeV.map((energy, i) => ({
      x: plot.x(energy),
      y: plot.y(Math.max(electron.integralPerCm2[i], y[0])),
      text: `${three(energy)} MeV: ${three(electron.integralPerCm2[i])} electrons cm⁻²`,
    })),
    data: {
      columns: ['species', 'energy_MeV', 'differential_perCm2MeV', 'integral_perCm2'],
      rows: (['electron', 'proton'] as const).flatMap((species) =>
        summary.species[species].energiesMeV.map((energy, i) => [
          species,
          energy,
          summary.species[species].differentialPerCm2MeV[i],
          summary.species[species].integralPerCm2[i],
        ]),
      ),
    },
  };
}

/** Electron fluence above 1 MeV against the rotation offset, by field model. */
export function phaseFluenceScene(summary: ExposureSummary): Scene {
  const index = summary.thresholdsMeV.indexOf(1);
  const fields = [...new Set(summary.byPhase.map((entry) => entry.fieldModelId))];
  const y = decadesRound(
    summary.byPhase.map((entry) => entry.electronPerCm2[index]),
    6,
  );
  const offsets = summary.byPhase.map((entry) => entry.offsetDeg);
  const from = Math.min(...offsets);
  const to = Math.max(...offsets);
  const plot = new Plot(
    WIDTH,
    260,
    { kind: 'linear', from, to: to > from ? to : from + 1, label: 'Rotation offset against the model, degrees east' },
    { kind: 'log', from: y[0], to: y[1], label: 'Electrons > 1 MeV, cm⁻²' },
  );
  fields.forEach((field, k) => {
    const points = summary.byPhase
      .filter((entry) => entry.fieldModelId === field)
      .sort((a, b) => a.offsetDeg - b.offsetDeg);
    plot.curve(
      points.map((entry) => [entry.offsetDeg, entry.electronPerCm2[index]]),
      `series${(k % 8) as 0 | 1}`,
      2,
    );
  });
  plot.legend(fields.map((field, k) => [`series${k % 8}` as Paint, field]));
  return {
    widthPx: WIDTH,
    heightPx: 260,
    title: 'Fluence against rotation phase',
    description: `Over the phases: ${three(summary.phaseBand.p05PerCm2)} (5 %), ${three(summary.phaseBand.p50PerCm2)} (50 %), ${three(summary.phaseBand.p95PerCm2)} cm⁻² (95 %).`,
    nodes: plot.nodes,
    readOuts: summary.byPhase.map((entry) => ({
      x: plot.x(entry.offsetDeg),
      y: plot.y(Math.max(entry.electronPerCm2[index], y[0])),
      text: `${entry.fieldModelId}, ${three(entry.offsetDeg)}°: ${three(entry.electronPerCm2[index])} cm⁻²`,
    })),
    data: {
      columns: ['fieldModelId', 'offset_deg', 'electronsAbove1MeV_perCm2'],
      rows: summary.byPhase.map((entry) => [entry.fieldModelId, entry.offsetDeg, entry.electronPerCm2[index]]),
    },
  };
}
