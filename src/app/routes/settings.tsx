export { SettingsPage as Component } from '../../features/settings/components/SettingsPage.tsx';
