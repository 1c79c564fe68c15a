export { LinePlanPage as Component } from '../../features/plan/components/LinePlanPage.tsx';
