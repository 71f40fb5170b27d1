import type { Feature } from 'protomaps-leaflet';
import type { RoadClass } from './palette';

export const isKind =
  (...kinds: readonly string[]) =>
  (_zoom: number, { props }: Feature): boolean =>
    kinds.some((kind) => kind === props['kind']);

export const isClass =
  (roadClass: RoadClass) =>
  (_zoom: number, { props }: Feature): boolean =>
    props['class'] === roadClass;

const isBridge = ({ props }: Feature): boolean => props['bridge'] === 'yes';

export const isStreet =
  (roadClass: RoadClass) =>
  (_zoom: number, feature: Feature): boolean =>
    feature.props['class'] === roadClass && !isBridge(feature);

export const isBridgeOf =
  (roadClass: RoadClass) =>
  (_zoom: number, feature: Feature): boolean =>
    feature.props['class'] === roadClass && isBridge(feature);
