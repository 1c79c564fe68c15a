export { WaitingPage as Component } from '../../features/waiting/components/WaitingPage.tsx';
