export { CategoryPlanPage as Component } from '../../features/plan/components/CategoryPlanPage.tsx';
