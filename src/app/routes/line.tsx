export { LinePage as Component } from '../../features/lines/components/LinePage.tsx';
