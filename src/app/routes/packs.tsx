export { PacksPage as Component } from '../../features/packs/components/PacksPage.tsx';
