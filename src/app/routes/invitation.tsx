export { InvitationPage as Component } from '../../features/accounts/components/InvitationPage.tsx';
