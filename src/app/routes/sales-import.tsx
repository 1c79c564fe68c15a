export { ImportPage as Component } from '../../features/sales/components/ImportPage.tsx';
