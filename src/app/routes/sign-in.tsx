export { SignInPage as Component } from '../../features/accounts/components/SignInPage.tsx';
