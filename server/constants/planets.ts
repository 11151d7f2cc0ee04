export type PlanetId = 'uranus' | 'neptune';
