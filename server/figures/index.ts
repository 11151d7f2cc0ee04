/** Figures as pure data: what the client draws as SVG and the report as vector paths. */
export { doseDepthScene, marginScene, massScene, phaseScene } from './doseFigures.ts';
export { ENCOUNTER_LOOKS, type EncounterLook, type EncounterView, encounterScene } from './encounterScene.ts';
export { fluenceScene, fluxHistoryScene, phaseFluenceScene } from './fluxFigures.ts';
export { percent, powerOfTen, three } from './format.ts';
export type { Paint, ReadOut, Scene, SceneNode, ScenePath, SceneText } from './scene.ts';
export { fieldComparisonScene, fluenceByLScene } from './shareFigures.ts';
