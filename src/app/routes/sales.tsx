export { SalesPage as Component } from '../../features/sales/components/SalesPage.tsx';
